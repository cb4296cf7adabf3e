"use strict";
// Replaces each drawn figure by one that can be read: hover or arrow keys show the numbers, which are those of results.json.
// Without scripts the drawn figure stays.

const SVG = "http://www.w3.org/2000/svg";
const SIZE = { left: 66, right: 13, top: 12, bottom: 46 };

function element(parent, name, attributes = {}, text = null) {
  const space = parent.namespaceURI === SVG || name === "svg" ? SVG : "http://www.w3.org/1999/xhtml";
  const made = document.createElementNS(space, name);
  for (const [key, value] of Object.entries(attributes)) made.setAttribute(key, value);
  if (text !== null) made.textContent = text;
  parent.append(made);
  return made;
}

const superscript = (power) => String(power).replace(/./g, (c) => "⁰¹²³⁴⁵⁶⁷⁸⁹"[c] ?? "⁻");

// As the page rounds numbers: five digits, with a power of ten outside 0.001 to 100000.
function typeset(value, digits = 5) {
  if (value === 0) return "0";
  const [mantissa, power] = value.toExponential(digits - 1).split("e");
  const exponent = Number(power);
  const text = exponent >= -3 && exponent <= 4
    ? value.toFixed(Math.max(digits - 1 - exponent, 0))
    : `${mantissa}×10${superscript(exponent)}`;
  return text.replace("-", "−");
}

const place = (axis, value) => {
  const [low, high] = axis.range;
  return axis.scale === "log" ? Math.log(value / low) / Math.log(high / low) : (value - low) / (high - low);
};

function linearTicks([low, high]) {
  const rough = (high - low) / 5;
  const size = 10 ** Math.floor(Math.log10(rough));
  const nice = [1, 2, 2.5, 5, 10].find((n) => n * size >= rough * 0.999);
  const step = nice * size;
  const decimals = Math.max(-Math.floor(Math.log10(step)), 0) + (nice === 2.5 ? 1 : 0);
  const ticks = [];
  for (let i = Math.ceil(low / step - 1e-9); i <= high / step + 1e-9; i++) {
    ticks.push([i * step, (i * step).toFixed(Math.min(decimals, 12)).replace("-", "−")]);
  }
  return ticks;
}

function logTicks([low, high]) {
  const first = Math.floor(Math.log10(low)), last = Math.ceil(Math.log10(high));
  const within = (factors) => {
    const ticks = [];
    for (let power = first; power <= last; power++) {
      for (const factor of factors) {
        const value = factor * 10 ** power;
        if (value >= low && value <= high) ticks.push([value, typeset(value, 1)]);
      }
    }
    return ticks;
  };
  const decades = within([1]);
  if (decades.length < 3) return within([1, 2, 5]).length > 1 ? within([1, 2, 5]) : within([1, 1.5, 2, 3, 4, 5, 6, 7, 8, 9]);
  const every = Math.ceil(decades.length / 6);
  return decades.filter((_, i) => i % every === 0).map(([value]) => [value, `10${superscript(Math.round(Math.log10(value)))}`]);
}

function piTicks([low, high]) {
  let parts = 1;
  while (((high - low) * parts) / Math.PI < 3.5) parts *= 2;
  const ticks = [];
  for (let i = Math.ceil((low * parts) / Math.PI - 1e-9); i <= (high * parts) / Math.PI + 1e-9; i++) {
    let top = Math.abs(i), bottom = parts;
    while (top % 2 === 0 && bottom > 1) { top /= 2; bottom /= 2; }
    const label = i === 0 ? "0" : `${i < 0 ? "−" : ""}${top === 1 ? "" : top}π${bottom === 1 ? "" : `/${bottom}`}`;
    ticks.push([(i * Math.PI) / parts, label]);
  }
  return ticks;
}

const ticksOf = (axis) =>
  axis.scale === "log" ? logTicks(axis.range) : axis.ticks === "pi" ? piTicks(axis.range) : linearTicks(axis.range);

const colour = (series) =>
  series.role === "measured" ? `var(--series-${(series.slot % 6) + 1})` : series.role === "exact" ? "var(--faint)" : "var(--ink)";

const dashes = { exact: "7 3.5", guide: "2 3" };

function marker(parent, slot, x, y, fill) {
  const at = (points) => points.map(([dx, dy]) => `${x + dx},${y + dy}`).join(" ");
  const shapes = [
    () => element(parent, "circle", { cx: x, cy: y, r: 3.2, fill }),
    () => element(parent, "rect", { x: x - 2.9, y: y - 2.9, width: 5.8, height: 5.8, fill }),
    () => element(parent, "polygon", { points: at([[0, -3.9], [3.7, 2.8], [-3.7, 2.8]]), fill }),
    () => element(parent, "polygon", { points: at([[0, -4.2], [4.2, 0], [0, 4.2], [-4.2, 0]]), fill }),
    () => element(parent, "circle", { cx: x, cy: y, r: 3, fill: "none", stroke: fill, "stroke-width": 1.4 }),
    () => element(parent, "path", { d: `M${x - 3} ${y - 3}l6 6m0-6l-6 6`, fill: "none", stroke: fill, "stroke-width": 1.6 }),
  ];
  shapes[slot % 6]();
}

class Chart {
  constructor(figure) {
    this.data = JSON.parse(figure.querySelector("script").textContent);
    this.figure = figure;
    this.hidden = new Set();
    this.zoom = null;
    this.scale = { x: this.data.x.scale, y: this.data.y.scale };
    this.at = null;
    this.labels = this.data.marks.filter((mark) => mark.axis === "x");
    this.top = SIZE.top + 18 * this.labels.length;
    this.drawing = figure.querySelector(".drawing");
    this.names = element(figure, "div", { class: "controls names" });
    this.drawing.before(this.names);
    this.controls = document.createElement("div");
    this.controls.className = "controls";
    figure.querySelector(".files").prepend(this.controls);
    this.readout = document.createElement("p");
    this.readout.className = "readout";
    this.drawing.after(this.readout);
    this.legend();
    this.buttons();
    this.listen();
    // As wide as its place, so that letters have their size on a phone too; again when the place changes or is unfolded.
    new ResizeObserver(() => this.fit()).observe(this.drawing);
    this.fit();
  }

  fit() {
    const width = Math.min(Math.max(this.drawing.clientWidth || 460, 280), 620);
    if (width === this.width) return;
    this.width = width;
    this.height = Math.round(width * 0.52 + 62);
    this.draw();
  }

  legend() {
    this.data.series.forEach((series, index) => {
      const button = element(this.names, "button", { type: "button", class: "series", "aria-pressed": "true" });
      const sample = element(button, "svg", { viewBox: "0 0 32 12", "aria-hidden": "true" });
      element(sample, "path", { d: "M1 6h30", stroke: colour(series), "stroke-width": 1.7, "stroke-dasharray": dashes[series.role] ?? "none" });
      if (series.role === "measured") marker(sample, series.slot, 16, 6, colour(series));
      button.append(series.name);
      button.addEventListener("click", () => {
        const shown = this.hidden.has(index);
        if (shown) this.hidden.delete(index); else this.hidden.add(index);
        button.setAttribute("aria-pressed", String(shown));
        this.draw();
      });
    });
  }

  buttons() {
    if (this.data.x.ticks === "pi") {
      const choices = [[null, "all θ"], [2, "θ ≤ π/2"], [8, "θ ≤ π/8"]].map(([parts, name]) => {
        const button = element(this.controls, "button", { type: "button", "aria-pressed": String(parts === null) }, name);
        button.addEventListener("click", () => {
          this.zoom = parts === null ? null : Math.PI / parts;
          choices.forEach((other) => other.setAttribute("aria-pressed", String(other === button)));
          this.draw();
        });
        return button;
      });
    }
    for (const name of ["x", "y"]) {
      const index = name === "x" ? 0 : 1;
      const values = this.data.series.flatMap((series) => series.points.map((point) => point[index]));
      const spread = Math.max(...values) / Math.min(...values);
      // A logarithm of values that hardly differ, or are not positive, shows nothing.
      const useful = (values.every((value) => value > 0) && spread > 20) || this.scale[name] === "log" || this.data[name].ticks === "pi";
      if (!useful) continue;
      const button = element(this.controls, "button", { type: "button", "aria-pressed": String(this.scale[name] === "log") }, `log ${name}`);
      button.addEventListener("click", () => {
        this.scale[name] = this.scale[name] === "log" ? "linear" : "log";
        button.setAttribute("aria-pressed", String(this.scale[name] === "log"));
        this.draw();
      });
    }
  }

  listen() {
    const drawing = this.drawing;
    for (const [key, value] of Object.entries({ tabindex: 0, role: "slider", "aria-label": this.data.title, "aria-orientation": "horizontal" })) {
      drawing.setAttribute(key, value);
    }
    const point = (event) => {
      const box = drawing.getBoundingClientRect();
      const x = ((event.clientX - box.left) / box.width) * this.width;
      const stops = this.stops();
      let best = null;
      stops.forEach((value, index) => {
        const distance = Math.abs(this.across(value) - x);
        if (best === null || distance < best[0]) best = [distance, index];
      });
      this.show(best && best[1]);
    };
    drawing.addEventListener("pointermove", point);
    drawing.addEventListener("pointerdown", point);
    drawing.addEventListener("pointerleave", () => { if (document.activeElement !== drawing) this.show(null); });
    drawing.addEventListener("keydown", (event) => {
      const last = this.stops().length - 1;
      const at = this.at ?? -1;
      const to = { ArrowRight: at + 1, ArrowUp: at + 1, ArrowLeft: at - 1, ArrowDown: at - 1, Home: 0, End: last, PageUp: at + 8, PageDown: at - 8 }[event.key];
      if (event.key === "Escape") this.show(null);
      if (to === undefined) return;
      event.preventDefault();
      this.show(Math.min(Math.max(to, 0), last));
    });
  }

  visible() { return this.data.series.filter((_, index) => !this.hidden.has(index)); }

  inside(value) { const p = place(this.axes.x, value); return p >= -1e-9 && p <= 1 + 1e-9; }

  // Where a read-out can stand: every x of the visible measured curves.
  stops() {
    const values = this.visible().filter((series) => series.role !== "guide").flatMap((series) => series.points.map(([x]) => x));
    return [...new Set(values)].filter((x) => this.inside(x)).sort((a, b) => a - b);
  }

  // The axes as they are now: zoomed, linear or logarithmic.
  currentAxes() {
    const axes = { x: { ...this.data.x, scale: this.scale.x }, y: { ...this.data.y, scale: this.scale.y } };
    const all = this.data.series.flatMap((series) => series.points);
    if (this.zoom !== null) axes.x.range = [Math.max(axes.x.range[0], -this.zoom), this.zoom];
    if (axes.x.scale === "log" && !(axes.x.range[0] > 0)) {
      axes.x.range = [Math.min(...all.map(([x]) => x).filter((x) => x > 0)), axes.x.range[1]];
    }
    if (axes.x.scale !== this.data.x.scale && axes.x.scale === "linear") axes.x.range = [0, axes.x.range[1]];
    const [low, high] = axes.x.range;
    const within = this.visible().flatMap((series) => series.points).filter(([x]) => x >= low && x <= high).map(([, y]) => y);
    if (within.length && (this.zoom !== null || axes.y.scale !== this.data.y.scale)) {
      const least = Math.min(...within), most = Math.max(...within);
      const margin = (most - least || Math.abs(most) || 1) * 0.06;
      axes.y.range = axes.y.scale === "log" ? [least / 1.15, most * 1.15] : [least - margin, most + margin];
      if (axes.y.scale === "linear" && this.data.y.scale === "log") axes.y.range = [0, most * 1.05];
    }
    return axes;
  }

  across(value) { return SIZE.left + place(this.axes.x, value) * (this.width - SIZE.left - SIZE.right); }

  down(value) { return this.height - SIZE.bottom - place(this.axes.y, value) * (this.height - this.top - SIZE.bottom); }

  draw() {
    this.axes = this.currentAxes();
    const svg = document.createElementNS(SVG, "svg");
    svg.setAttribute("viewBox", `0 0 ${this.width} ${this.height}`);
    svg.setAttribute("class", "plot");
    svg.setAttribute("aria-hidden", "true");
    const [left, right, top, bottom] = [SIZE.left, this.width - SIZE.right, this.top, this.height - SIZE.bottom];
    const clip = element(element(svg, "defs"), "clipPath", { id: `clip-${this.data.id}` });
    element(clip, "rect", { x: left, y: top - 4, width: right - left + 4, height: bottom - top + 8 });
    for (const band of this.data.bands) {
      const [from, to] = band.map((value) => Math.min(Math.max(this.across(Math.max(value, this.axes.x.range[0])), left), right));
      element(svg, "rect", { x: from, y: top, width: to - from, height: bottom - top, fill: "var(--band)" });
    }
    for (const [value, label] of ticksOf(this.axes.x)) {
      const x = this.across(value);
      element(svg, "path", { class: "grid", d: `M${x} ${top}V${bottom}` });
      element(svg, "text", { x, y: bottom + 18, "text-anchor": "middle" }, label);
    }
    for (const [value, label] of ticksOf(this.axes.y)) {
      const y = this.down(value);
      element(svg, "path", { class: "grid", d: `M${left} ${y}H${right}` });
      element(svg, "text", { x: left - 8, y: y + 4.5, "text-anchor": "end" }, label);
    }
    element(svg, "path", { class: "axis", d: `M${left} ${top}V${bottom}H${right}` });
    element(svg, "text", { class: "title", x: (left + right) / 2, y: this.height - 6, "text-anchor": "middle" }, this.data.x.label);
    const middle = (top + bottom) / 2;
    element(svg, "text", { x: 13, y: middle, "text-anchor": "middle", transform: `rotate(-90 13 ${middle})` }, this.data.y.label);
    const inner = element(svg, "g", { "clip-path": `url(#clip-${this.data.id})` });
    this.marks(svg, inner, { left, right, top, bottom });
    for (const series of this.visible()) this.curve(inner, series);
    this.cursor = element(svg, "g");
    this.drawing.replaceChildren(svg);
    this.show(null);
  }

  marks(svg, parent, { left, right, top, bottom }) {
    let row = 0;
    for (const mark of this.data.marks) {
      if (mark.axis === "y") {
        if (this.axes.y.scale === "log" && !(mark.value > 0)) continue;
        const y = this.down(mark.value);
        element(parent, "path", { d: `M${left} ${y}H${right}`, stroke: "var(--faint)", "stroke-width": 1.1, "stroke-dasharray": "5 3" });
        element(parent, "text", { class: "label", x: right - 3, y: y - 6, "text-anchor": "end" }, mark.label);
      } else if (this.inside(mark.value)) {
        const x = this.across(mark.value), leftwards = x > (left + right) / 2;
        const y = top - 18 * row++ - 6;
        element(svg, "path", { d: `M${x} ${y + 3}V${bottom}`, stroke: "var(--ink)", "stroke-width": 1.6 });
        element(svg, "text", { x: leftwards ? x + 2 : x - 2, y, "text-anchor": leftwards ? "end" : "start" }, mark.label);
      }
    }
  }

  curve(parent, series) {
    const drawable = ([x, y]) => (this.axes.x.scale !== "log" || x > 0) && (this.axes.y.scale !== "log" || y > 0);
    const places = series.points.filter(drawable).map(([x, y]) => [this.across(x), this.down(y)]);
    const path = places.map(([x, y], i) => `${i ? "L" : "M"}${x.toFixed(2)} ${y.toFixed(2)}`).join("");
    element(parent, "path", { d: path, fill: "none", stroke: colour(series), "stroke-width": series.role === "measured" ? 1.8 : 1.5, "stroke-dasharray": dashes[series.role] ?? "none", "stroke-linejoin": "round" });
    if (series.role !== "measured") return;
    const shown = places.filter(([x]) => x >= SIZE.left - 1 && x <= this.width - SIZE.right + 1);
    const every = Math.max(Math.ceil(shown.length / 20), 1);
    const first = every > 1 ? Math.floor((series.slot * every) / 3) : 0;
    for (let i = first; i < shown.length; i += every) marker(parent, series.slot, ...shown[i], colour(series));
  }

  // Shows the numbers at one place of the x axis, or the hint.
  show(index) {
    this.at = index;
    this.cursor.replaceChildren();
    const stops = this.stops();
    this.drawing.setAttribute("aria-valuemin", 0);
    this.drawing.setAttribute("aria-valuemax", Math.max(stops.length - 1, 0));
    this.drawing.setAttribute("aria-valuenow", index ?? 0);
    this.readout.replaceChildren();
    if (index === null || stops[index] === undefined) {
      this.drawing.setAttribute("aria-valuetext", "no place chosen");
      element(this.readout, "span", { class: "hint" }, "Point at the chart, or focus it and use the arrow keys, to read values.");
      return;
    }
    const x = stops[index], across = this.across(x);
    element(this.cursor, "path", { class: "cursor", d: `M${across} ${this.top}V${this.height - SIZE.bottom}` });
    const say = (name, value) => {
      const span = element(this.readout, "span", {}, `${name} `);
      element(span, "data", { value: String(value) }, typeset(value));
    };
    say(this.data.x.symbol, x);
    for (const series of this.visible()) {
      const point = series.role === "guide" ? undefined : series.points.find(([other]) => other === x);
      if (point === undefined) continue;
      say(series.name, point[1]);
      const y = this.down(point[1]);
      if (y >= this.top - 1 && y <= this.height - SIZE.bottom + 1) {
        element(this.cursor, "circle", { cx: across, cy: y, r: 5.5, fill: "none", stroke: colour(series), "stroke-width": 1.6 });
      }
    }
    this.drawing.setAttribute("aria-valuetext", this.readout.textContent);
  }
}
