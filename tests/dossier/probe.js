// Run in the page by the browser tests: uses it as a person would, and leaves what it found as JSON.
"use strict";
(async () => {
  const found = {};
  const all = (selector, root = document) => [...root.querySelectorAll(selector)];
  const named = (name, root = document) => all("button", root).find((made) => made.textContent === name);
  const numbers = (root) => all(".readout data", root).map((shown) => Number(shown.value));
  found.charts = { live: all("svg.plot").length, drawn: all(".drawing svg:not(.plot)").length };

  const figure = document.querySelector("#modes-1-amplification");
  if (figure) {
    const drawing = figure.querySelector(".drawing");
    const press = (key) => drawing.dispatchEvent(new KeyboardEvent("keydown", { key, bubbles: true }));
    press("Home"); found.first = numbers(figure);
    press("ArrowRight"); found.second = numbers(figure);
    press("End"); found.last = numbers(figure);
    const box = drawing.getBoundingClientRect();
    drawing.dispatchEvent(new PointerEvent("pointermove", { clientX: box.left + box.width * 0.6, clientY: box.top + 40, bubbles: true }));
    found.pointed = numbers(figure);
    named("θ ≤ π/8", figure).click();
    found.zoomed = Number(drawing.getAttribute("aria-valuemax")) + 1;
    named("all θ", figure).click();
    named("exact", figure).click();
    press("Home"); found.hidden = numbers(figure);
  }

  found.themes = [1, 2, 3].map(() => { document.querySelector("#tools button").click(); return document.documentElement.dataset.theme; });

  const shown = () => all(".claim:not([hidden])").length;
  if (named("refuted")) {
    named("refuted").click();
    found.filtered = { refuted: shown() };
    named("all").click();
    found.filtered.all = shown();
  }

  const table = document.querySelector('table[data-name="order-1-levels"]');
  if (table) {
    const head = table.querySelector("th button");
    head.click(); head.click();
    found.sorted = all("tbody tr", table).map((row) => row.cells[0].textContent);
  }

  named("Fold all")?.click();
  found.folded = all("details.study[open]").length;
  const target = document.querySelector(".evidence a");
  target.click();
  await new Promise((done) => setTimeout(done, 100));
  found.revealed = document.querySelector(target.getAttribute("href")).closest("details").open;

  // The page in a narrow frame, everything unfolded: what is wider than it, other than in a place that scrolls by itself?
  named("Unfold all")?.click();
  const frame = document.createElement("iframe");
  frame.style.cssText = "width:360px;height:800px;border:0";
  document.body.append(frame);
  const copy = document.documentElement.cloneNode(true);
  copy.querySelectorAll("script, iframe").forEach((node) => node.remove());
  copy.querySelectorAll("details").forEach((node) => { node.open = true; });
  frame.contentDocument.replaceChild(frame.contentDocument.adoptNode(copy), frame.contentDocument.documentElement);
  await new Promise((done) => setTimeout(done, 300));
  const wide = (node) => node.getBoundingClientRect().right > 361 && !node.closest(".table, .skip, .marks, iframe");
  found.narrow = all("body *", frame.contentDocument).filter(wide).map((node) => `${node.tagName}.${node.getAttribute("class")}: ${node.textContent.slice(0, 60)}`);

  found.requests = performance.getEntriesByType("resource").length;
  found.faults = window.faults;
  const out = document.createElement("pre");
  out.id = "findings";
  out.textContent = JSON.stringify(found);
  document.body.append(out);
})();
