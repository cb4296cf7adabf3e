// What the page does beyond being read: themes, folding, filters, tables that sort and copy.

function button(parent, name, action) {
  const made = element(parent, "button", { type: "button" }, name);
  made.addEventListener("click", () => action(made));
  return made;
}

// A theme that was chosen is kept where the browser lets pages from files keep anything.
const remembered = {
  get() { try { return localStorage.getItem("gridassay-theme"); } catch { return null; } },
  set(theme) { try { localStorage.setItem("gridassay-theme", theme); } catch { /* it is forgotten when the page is closed */ } },
};

function themes() {
  const names = { auto: "Theme: automatic", light: "Theme: light", dark: "Theme: dark" };
  const order = Object.keys(names);
  const apply = (theme) => { document.documentElement.dataset.theme = theme; };
  let theme = order.includes(remembered.get()) ? remembered.get() : "auto";
  apply(theme);
  button(document.getElementById("tools"), names[theme], (made) => {
    theme = order[(order.indexOf(theme) + 1) % order.length];
    apply(theme);
    remembered.set(theme);
    made.textContent = names[theme];
  });
}

// A link to something folded away unfolds it.
function reveal() {
  const target = location.hash.length > 1 && document.getElementById(decodeURIComponent(location.hash.slice(1)));
  if (!target) return;
  for (let folded = target.closest("details"); folded; folded = folded.parentElement.closest("details")) folded.open = true;
  target.scrollIntoView();
}

function folding() {
  const studies = document.getElementById("studies");
  const all = [...studies.querySelectorAll("details.study")];
  if (all.length > 1) {
    const controls = document.createElement("div");
    controls.className = "controls";
    studies.querySelector("h2").after(controls);
    button(controls, "Unfold all", () => all.forEach((study) => { study.open = true; }));
    button(controls, "Fold all", () => all.forEach((study) => { study.open = false; }));
  }
  let folded = [];
  addEventListener("beforeprint", () => {
    folded = [...document.querySelectorAll("details:not([open])")].filter((item) => !item.matches(".contents *"));
    folded.forEach((item) => { item.open = true; });
  });
  addEventListener("afterprint", () => folded.forEach((item) => { item.open = false; }));
  addEventListener("hashchange", reveal);
  reveal();
  if (matchMedia("(max-width: 68rem)").matches) document.querySelector(".contents details").open = false;
}

function filters() {
  const claims = [...document.querySelectorAll(".claim")];
  const kinds = ["upheld", "refuted", "undecided"].filter((kind) => claims.some((claim) => claim.classList.contains(kind)));
  if (claims.length < 4 || kinds.length < 2) return;
  const controls = document.createElement("div");
  controls.className = "controls";
  controls.setAttribute("role", "group");
  controls.setAttribute("aria-label", "Show claims");
  document.querySelector("#verdicts h2").after(controls);
  const buttons = ["all", ...kinds].map((kind) => button(controls, kind, (chosen) => {
    claims.forEach((claim) => { claim.hidden = kind !== "all" && !claim.classList.contains(kind); });
    document.querySelectorAll(".group").forEach((group) => {
      const shown = group.querySelector(".claim:not([hidden])") !== null;
      group.hidden = kind !== "all" && !shown;
      if (kind !== "all") group.open = shown;
    });
    buttons.forEach((other) => other.setAttribute("aria-pressed", String(other === chosen)));
  }));
  buttons.forEach((made, index) => made.setAttribute("aria-pressed", String(index === 0)));
}

// The value of a cell as a machine reads it: a number with all its digits.
const valueOf = (cell) => cell.querySelector("data")?.value ?? (cell.querySelector(".none") ? "" : cell.textContent.trim());

function sortable(table) {
  const body = table.tBodies[0];
  if (body.rows.length < 3) return;
  [...table.tHead.rows[0].cells].forEach((head, column) => {
    const name = head.textContent;
    head.textContent = "";
    button(head, name, () => {
      const descending = head.getAttribute("aria-sort") === "ascending";
      [...table.tHead.rows[0].cells].forEach((other) => other.removeAttribute("aria-sort"));
      head.setAttribute("aria-sort", descending ? "descending" : "ascending");
      const compare = (a, b) => {
        const [left, right] = [a, b].map((row) => valueOf(row.cells[column]));
        if (left === "" || right === "") return (left === "") - (right === "");
        const order = Number(left) - Number(right);
        return (Number.isNaN(order) ? left.localeCompare(right) : order) * (descending ? -1 : 1);
      };
      body.append(...[...body.rows].sort(compare));
    });
  });
}

async function copy(table, made) {
  const name = (head) => head.textContent;
  const rows = [[...table.tHead.rows[0].cells].map(name), ...[...table.tBodies[0].rows].map((row) => [...row.cells].map(valueOf))];
  const text = rows.map((row) => row.join("\t")).join("\n") + "\n";
  const label = made.textContent;
  try {
    await navigator.clipboard.writeText(text);
    made.textContent = "Copied";
  } catch {
    made.textContent = "The browser does not allow copying";
  }
  setTimeout(() => { made.textContent = label; }, 1800);
}

function tables() {
  for (const table of document.querySelectorAll("table[data-name]")) {
    sortable(table);
    button(table.caption, "Copy", (made) => copy(table, made)).className = "copy";
  }
}

themes();
filters();
folding();
tables();
for (const figure of document.querySelectorAll("figure.chart")) new Chart(figure);
