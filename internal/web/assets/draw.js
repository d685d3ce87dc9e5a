// Draws a figure, as the server describes it, into the page: curves, maps and bars, with a cursor
// that reads values, zoom, and a logarithmic scale.

const svgSpace = "http://www.w3.org/2000/svg";

// make is an element of the page with attributes and content.
export function make(tag, attributes = {}, ...content) {
  const e = document.createElement(tag);
  set(e, attributes);
  e.append(...content.filter((c) => c !== null && c !== undefined));
  return e;
}

function shape(tag, attributes = {}, text) {
  const e = document.createElementNS(svgSpace, tag);
  set(e, attributes);
  if (text !== undefined) e.textContent = text;
  return e;
}

function set(e, attributes) {
  for (const [name, value] of Object.entries(attributes)) {
    if (value === null || value === undefined || value === false) continue;
    if (name.startsWith("on")) e.addEventListener(name.slice(2), value);
    else e.setAttribute(name, value === true ? "" : value);
  }
}

const raised = { "-": "⁻", 0: "⁰", 1: "¹", 2: "²", 3: "³", 4: "⁴", 5: "⁵", 6: "⁶", 7: "⁷", 8: "⁸", 9: "⁹" };
export const power = (n) => "10" + [...String(n)].map((c) => raised[c]).join("");
export const unitText = (unit) => unit.replace("^-3/2", "^(−3/2)").replaceAll("m2", "m²").replaceAll("m3", "m³");

// number is a value with so many digits.
export function number(v, digits = 4) {
  if (v === null || v === undefined || Number.isNaN(v)) return "–";
  const size = Math.abs(v);
  if (size !== 0 && (size >= 1e5 || size < 1e-3)) {
    const [m, e] = v.toExponential(digits - 1).split("e");
    return `${m.replace("-", "−")} × ${power(Number(e))}`;
  }
  return String(Number(v.toPrecision(digits))).replace("-", "−");
}

const roundStep = (x) => {
  if (!(x > 0) || !Number.isFinite(x)) return 1;
  const unit = 10 ** Math.floor(Math.log10(x));
  for (const m of [1, 2, 5]) if (m * unit >= 0.999999 * x) return m * unit;
  return 10 * unit;
};

export class Scale {
  constructor(low, high, from, to, log = false) {
    Object.assign(this, { low, high, from, to, log });
  }
  at(v) {
    const f = this.log ? (x) => Math.log(Math.max(x, this.low * 1e-3)) : (x) => x;
    return this.from + ((f(v) - f(this.low)) / (f(this.high) - f(this.low))) * (this.to - this.from);
  }
  back(p) {
    const part = (p - this.from) / (this.to - this.from);
    if (this.log) return this.low * (this.high / this.low) ** part;
    return this.low + part * (this.high - this.low);
  }
  // ticks are round values, their labels, and the power of ten that the labels leave out.
  ticks(n) {
    const list = [];
    if (this.log && this.high / this.low > 8) {
      const first = Math.ceil(Math.log10(this.low) - 1e-9);
      const last = Math.floor(Math.log10(this.high) + 1e-9);
      const every = Math.max(1, Math.floor((last - first + n) / n));
      for (let p = first; p <= last; p += every) list.push([10 ** p, power(p)]);
      return { list, shift: 0 };
    }
    const step = roundStep((this.high - this.low) / n);
    const p = Math.floor(Math.log10(Math.max(Math.abs(this.low), Math.abs(this.high))));
    const shift = p >= 4 || p <= -3 ? p : 0;
    const places = Math.max(0, Math.ceil(-Math.log10(step / 10 ** shift) - 1e-9));
    const start = Math.ceil(this.low / step - 1e-9);
    for (let i = 0; i < 100; i++) {
      const k = start + i; // of large k, k + 1 may be no other number
      if (!(k * step <= this.high + 1e-9 * step)) break;
      const text = k === 0 ? "0" : ((k * step) / 10 ** shift).toFixed(places).replace("-", "−");
      list.push([k * step, text]);
    }
    return { list, shift };
  }
}

export function axisTitle(axis, shift) {
  let unit = unitText(axis.unit);
  if (shift) unit = `${power(shift)} ${unit}`.trim();
  return unit ? `${axis.label} [${unit}]` : axis.label;
}

// rangeOf is the range of values, with room.
export function rangeOf(axis, values, log, room) {
  if (axis.from !== axis.to && !log) return [axis.from, axis.to];
  let low = Infinity;
  let high = -Infinity;
  for (const v of values) {
    if (v === null || !Number.isFinite(v) || (log && v <= 0)) continue;
    if (v < low) low = v;
    if (v > high) high = v;
  }
  if (low > high) return log ? [0.1, 1] : [0, 1];
  if (log) return [Math.max(low, high / 1e7) / 1.2, high * 1.5];
  if (room) {
    if (low >= 0 && low < 0.6 * high) low = 0;
    if (high <= 0 && high > 0.6 * low) high = 0;
    const margin = 0.05 * (high - low);
    if (low !== 0) low -= margin;
    if (high !== 0) high += margin;
  }
  if (low === high) return [low - 0.5 * Math.max(1, Math.abs(low)), high + 0.5 * Math.max(1, Math.abs(high))];
  return [low, high];
}

// stampText says that a run is not to be used.
export function stampText(runs) {
  const named = (verdict) => runs.filter((r) => r.verdict === verdict).map((r) => r.name);
  const failed = named("fail");
  const parts = [];
  if (failed.length && failed.length === runs.length) parts.push("verdict FAIL: not to be used");
  else if (failed.length) parts.push("verdict FAIL: " + failed.join(", "));
  if (named("unfinished").length) parts.push("unfinished");
  return parts.join("; ");
}

const curves = 7;

// Plot is a figure in the page.
export class Plot {
  constructor(figure, colors) {
    this.f = figure;
    this.colors = colors;
    this.logY = figure.y.log;
    this.view = null;
    this.cursor = null;
    this.host = make("div", {
      class: "plot", tabindex: "0", role: "application",
      "aria-label": `${figure.title}. ${figure.alt} Arrow keys read values, plus and minus zoom, 0 shows all, L changes the scale.`,
      onkeydown: (e) => this.key(e),
    });
    this.readout = make("output", { class: "readout" });
    this.size = new ResizeObserver(() => this.draw());
    this.size.observe(this.host);
  }

  name(label, run) {
    const r = this.f.runs[run];
    if (!r) return label;
    let text = this.f.runs.length > 1 ? `${r.name}: ${label}` : label;
    if (r.verdict !== "ok") text += ` (${r.verdict.toUpperCase()})`;
    return text;
  }

  // styles gives each curve a colour and dashes; a law goes with the curve before it.
  styles() {
    const labels = new Map();
    let last = [0, 0];
    return (this.f.series || []).map((s) => {
      if (s.law) return last;
      if (!labels.has(s.label)) labels.set(s.label, labels.size);
      const k = labels.get(s.label);
      last = [this.f.runs.length > 1 && s.run >= 0 ? s.run : k, k + Math.floor(k / curves)];
      return last;
    });
  }

  draw() {
    const width = Math.max(260, Math.round(this.host.clientWidth));
    if (!this.host.isConnected || this.host.clientWidth === 0) return;
    this.width = width;
    this.height = Math.round(Math.min(420, Math.max(240, width * 0.5)));
    this.svg = shape("svg", { class: "figure", "aria-hidden": "true" });
    this.left = 66;
    this.right = width - 12;
    this.top = 10;
    if (this.f.map) this.drawMap();
    else if (this.f.bars) this.drawBars();
    else this.drawCurves();
    this.stamp();
    this.svg.setAttribute("viewBox", `0 0 ${width} ${this.height}`);
    if (!this.f.bars) this.pointer();
    this.mark = shape("path", { class: "cursor" });
    this.svg.append(this.mark);
    this.host.replaceChildren(this.svg);
    if (this.cursor !== null) this.show();
  }

  add(tag, attributes, text) {
    this.svg.append(shape(tag, attributes, text));
  }

  legend() {
    let x = this.left;
    let row = 0;
    const shared = new Set();
    this.styles().forEach(([color, dash], i) => {
      const s = this.f.series[i];
      const name = unitText(s.key || this.name(s.label, s.run));
      if (s.key) {
        if (shared.has(name)) return;
        shared.add(name);
      }
      const width = 48 + 6.8 * name.length;
      if (x > this.left && x + width > this.right) {
        x = this.left;
        row++;
      }
      const y = 6 + 18 * (row + 0.5);
      this.add("path", { class: this.lineClass(s, color, dash), d: `M${x} ${y}h26` });
      this.add("text", { x: x + 32, y: y + 4 }, name);
      x += width;
    });
    return row + 1;
  }

  lineClass(s, color, dash) {
    return `ln c${color % curves} ` + (s.law ? "law" : `d${dash % curves}`);
  }

  *xs() {
    for (const s of this.f.series) {
      yield* s.x;
      if (s.steps && s.width && s.x.length) yield Math.max(0, s.x[0] - s.width[0] / 2);
    }
  }

  *ys() {
    for (const s of this.f.series) {
      for (let i = 0; i < s.y.length; i++) {
        yield s.y[i];
        if (s.se && s.se[i] !== null && !this.logY) {
          yield s.y[i] + s.se[i];
          yield s.y[i] - s.se[i];
        }
      }
    }
  }

  drawCurves() {
    this.top = 8 + 18 * this.legend();
    this.height += this.top;
    const x = this.view ? this.view.x : rangeOf(this.f.x, this.xs(), false, false);
    const y = this.view && this.view.y ? this.view.y : rangeOf(this.f.y, this.ys(), this.logY, true);
    this.x = new Scale(...x, this.left, this.right);
    this.y = new Scale(...y, this.height - 46, this.top, this.logY && y[0] > 0);
    for (const b of this.f.bands || []) {
      const from = this.x.at(Math.max(b.from, this.x.low));
      const to = this.x.at(Math.min(b.to, this.x.high));
      if (to <= from) continue;
      this.add("rect", { class: "band", x: from, y: this.top, width: to - from, height: this.y.from - this.top });
      this.add("text", { class: "note", x: from + 5, y: this.top + 14 }, b.label);
    }
    this.axes(this.f.x, this.f.y);
    const clip = `clip-${this.f.id}`;
    const defs = shape("clipPath", { id: clip });
    defs.append(shape("rect", { x: this.left, y: this.top, width: this.right - this.left, height: this.y.from - this.top }));
    const group = shape("g", { "clip-path": `url(#${clip})` });
    this.svg.append(defs, group);
    this.styles().forEach(([color, dash], i) => {
      const s = this.f.series[i];
      const [band, line] = this.paths(s);
      if (band) group.append(shape("path", { class: `eb f${color % curves}`, d: band }));
      group.append(shape("path", { class: this.lineClass(s, color, dash), d: line }));
    });
  }

  // paths are the outline of value plus and minus error, and the line.
  paths(s) {
    let line = "";
    let band = "";
    let upper = [];
    let lower = [];
    let open = false;
    const close = () => {
      if (upper.length > 1) band += "M" + upper.concat(lower.reverse()).join("L") + "Z";
      upper = [];
      lower = [];
      open = false;
    };
    const floor = this.y.log ? this.y.low : -Infinity;
    for (let i = 0; i < s.x.length; i++) {
      const v = s.y[i];
      if (v === null || (this.y.log && v <= 0)) {
        close();
        continue;
      }
      const half = s.steps && s.width ? s.width[i] / 2 : 0;
      const from = this.x.at(s.x[i] - half).toFixed(1);
      const to = this.x.at(s.x[i] + half).toFixed(1);
      const y = this.y.at(v).toFixed(1);
      line += `${open ? "L" : "M"}${from} ${y}` + (half ? `H${to}` : "");
      open = true;
      if (!s.se || s.se[i] === null || s.se[i] === undefined) continue;
      const up = this.y.at(v + s.se[i]).toFixed(1);
      const down = this.y.at(Math.max(v - s.se[i], floor)).toFixed(1);
      upper.push(`${from} ${up}`);
      lower.push(`${from} ${down}`);
      if (half) {
        upper.push(`${to} ${up}`);
        lower.push(`${to} ${down}`);
      }
    }
    close();
    return [band, line];
  }

  axes(x, y) {
    const tx = this.x.ticks(Math.max(3, Math.floor((this.right - this.left) / 80)));
    for (const [v, text] of tx.list) {
      const at = this.x.at(v);
      this.add("path", { class: "gr", d: `M${at} ${this.top}V${this.y.from}` });
      this.add("text", { class: "nx", x: at, y: this.y.from + 16 }, text);
    }
    const ty = this.y.ticks(5);
    for (const [v, text] of ty.list) {
      const at = this.y.at(v);
      this.add("path", { class: "gr", d: `M${this.left} ${at}H${this.right}` });
      this.add("text", { class: "ny", x: this.left - 6, y: at + 4 }, text);
    }
    this.add("rect", { class: "fr", x: this.left, y: this.top, width: this.right - this.left, height: this.y.from - this.top });
    this.add("text", { class: "nx", x: (this.left + this.right) / 2, y: this.y.from + 36 }, axisTitle(x, tx.shift));
    this.add("text", { class: "nx", transform: `translate(13 ${(this.top + this.y.from) / 2}) rotate(-90)` }, axisTitle(y, ty.shift));
  }

  limits() {
    const m = this.f.map;
    let low = Infinity;
    let high = -Infinity;
    for (const z of m.z) {
      if (z === null || (m.value.log && z <= 0)) continue;
      low = Math.min(low, z);
      high = Math.max(high, z);
    }
    if (low > high) return [0, 1];
    if (m.value.log) low = Math.max(low, high / 1e3);
    else if (m.signed) {
      high = Math.max(Math.abs(low), Math.abs(high));
      low = -high;
    } else if (low >= 0 && !m.close) low = 0;
    if (low >= high) return m.value.log ? [high / 10, high] : [low, low + 1];
    return [low, high];
  }

  drawMap() {
    const m = this.f.map;
    this.right = this.width - 84;
    const ends = (e) => [e[0], e[e.length - 1]];
    this.x = new Scale(...(this.view ? this.view.x : ends(m.xEdges)), this.left, this.right);
    this.y = new Scale(...(this.view && this.view.y ? this.view.y : ends(m.yEdges)), this.height - 46, this.top);
    const limits = this.limits();
    const w = Math.round(this.right - this.left);
    const h = Math.round(this.y.from - this.top);
    const color = new Scale(...limits, 0, this.colors.length - 1, m.value.log);
    this.add("image", { href: this.picture(m, w, h, color), x: this.left, y: this.top, width: w, height: h, preserveAspectRatio: "none" });
    this.axes(this.f.x, this.f.y);
    for (const p of m.marks || []) {
      const shape = p.failed ? "l9 9m0 -9l-9 9" : "h9v9h-9z";
      this.add("path", { class: p.failed ? "cross" : "open", d: `M${this.x.at(p.x) - 4.5} ${this.y.at(p.y) - 4.5}${shape}` });
    }
    colorBar(this, m.value, limits);
  }

  picture(m, w, h, color) {
    const canvas = make("canvas", { width: w, height: h });
    const ctx = canvas.getContext("2d");
    const image = ctx.createImageData(w, h);
    const rgb = this.colors.map((c) => [1, 3, 5].map((k) => parseInt(c.slice(k, k + 2), 16)));
    const nx = m.xEdges.length - 1;
    const columns = Array.from({ length: w }, (_, i) => bin(m.xEdges, this.x.back(this.left + i + 0.5)));
    for (let j = 0; j < h; j++) {
      const row = bin(m.yEdges, this.y.back(this.top + j + 0.5));
      for (let i = 0; i < w; i++) {
        const z = m.z[row * nx + columns[i]];
        if (z === null || (m.value.log && z <= 0)) continue;
        const k = Math.round(Math.min(rgb.length - 1, Math.max(0, color.at(z))));
        image.data.set([...rgb[k], 255], 4 * (j * w + i));
      }
    }
    ctx.putImageData(image, 0, 0);
    return canvas.toDataURL();
  }

  drawBars() {
    const row = 30;
    const labels = Math.min(240, this.width * 0.45);
    const bars = this.f.bars;
    this.left = labels;
    this.height = this.top + row * bars.length + 46;
    let low = 0;
    let high = 0;
    for (const { pair: [v, se] } of bars) {
      if (v === null) continue;
      low = Math.min(low, v - (se || 0));
      high = Math.max(high, v + (se || 0));
    }
    this.x = new Scale(low, high === low ? 1 : high * 1.02, labels, this.right);
    this.y = new Scale(0, 1, this.height - 46, this.top);
    const t = this.x.ticks(Math.max(2, Math.floor((this.right - labels) / 80)));
    for (const [v, text] of t.list) {
      this.add("path", { class: "gr", d: `M${this.x.at(v)} ${this.top}V${this.y.from}` });
      this.add("text", { class: "nx", x: this.x.at(v), y: this.y.from + 16 }, text);
    }
    this.add("text", { class: "nx", x: (labels + this.right) / 2, y: this.y.from + 36 }, axisTitle(this.f.y, t.shift));
    bars.forEach((b, i) => {
      const [v, se] = b.pair;
      const y = this.top + row * i;
      this.add("text", { class: "ny", x: labels - 6, y: y + row / 2 + 4 }, this.name(b.label, b.run));
      if (v === null) return;
      const [from, to] = [this.x.at(Math.min(0, v)), this.x.at(Math.max(0, v))];
      const color = this.f.runs.length > 1 ? b.run : 0;
      const bar = shape("rect", { class: `f${color % curves}`, x: from, y: y + 6, width: to - from, height: row - 12, opacity: 0.75 });
      bar.append(shape("title", {}, `${this.name(b.label, b.run)}: ${number(v)} ± ${number(se, 2)} ${unitText(this.f.y.unit)}`));
      this.svg.append(bar);
      if (se > 0) this.add("path", { class: "er", d: `M${this.x.at(v - se)} ${y + row / 2}H${this.x.at(v + se)}m0 -5v10M${this.x.at(v - se)} ${y + row / 2 - 5}v10` });
    });
    this.add("path", { class: "ax", d: `M${this.x.at(0)} ${this.top}V${this.y.from}` });
  }

  stamp() {
    const text = stampText(this.f.runs);
    if (!text) return;
    const width = this.right - this.left;
    this.add("rect", { class: "bad", x: this.left, y: this.top, width, height: this.y.from - this.top });
    this.add("text", {
      class: "stamp", "font-size": Math.min(34, (1.6 * width) / text.length),
      transform: `translate(${(this.left + this.right) / 2} ${(this.top + this.y.from) / 2}) rotate(-14)`,
    }, text);
  }

  // pointer lets the mouse read values and drag out a part to look at.
  pointer() {
    const hit = shape("rect", { class: "hit", x: this.left, y: this.top, width: this.right - this.left, height: this.y.from - this.top });
    const box = shape("rect", { class: "box" });
    let from = null;
    const place = (e) => {
      const r = this.svg.getBoundingClientRect();
      return [((e.clientX - r.left) * this.width) / r.width, ((e.clientY - r.top) * this.height) / r.height];
    };
    hit.addEventListener("pointerdown", (e) => {
      from = place(e);
      hit.setPointerCapture(e.pointerId);
    });
    hit.addEventListener("pointermove", (e) => {
      const [x, y] = place(e);
      this.readout.setAttribute("aria-live", "off");
      this.cursor = [this.x.back(x), this.y.back(y)];
      this.show();
      if (!from) return;
      const tall = Math.abs(y - from[1]) > 12;
      set(box, {
        x: Math.min(x, from[0]), width: Math.abs(x - from[0]),
        y: tall ? Math.min(y, from[1]) : this.top, height: tall ? Math.abs(y - from[1]) : this.y.from - this.top,
      });
      this.svg.insertBefore(box, hit);
    });
    hit.addEventListener("pointerup", (e) => {
      if (!from) return;
      const [x, y] = place(e);
      const start = from;
      from = null;
      box.remove();
      if (Math.abs(x - start[0]) < 6) return;
      const span = (scale, a, b) => [scale.back(a), scale.back(b)].sort((p, q) => p - q);
      this.view = {
        x: span(this.x, x, start[0]),
        y: Math.abs(y - start[1]) > 12 ? span(this.y, y, start[1]) : this.view && this.view.y,
      };
      this.draw();
    });
    hit.addEventListener("pointercancel", () => {
      from = null;
      box.remove();
    });
    hit.addEventListener("dblclick", () => this.reset());
    this.svg.append(hit);
  }

  reset() {
    this.view = null;
    this.draw();
  }

  zoom(factor) {
    if (this.f.bars) return;
    const middle = this.cursor && this.cursor[0] >= this.x.low && this.cursor[0] <= this.x.high ? this.cursor[0] : (this.x.low + this.x.high) / 2;
    this.view = {
      x: [middle + (this.x.low - middle) * factor, middle + (this.x.high - middle) * factor],
      y: this.view && this.view.y,
    };
    this.draw();
  }

  toggleLog() {
    if (this.f.map || this.f.bars) return;
    this.logY = !this.logY;
    if (this.view) this.view.y = null;
    this.draw();
  }

  key(e) {
    if (e.ctrlKey || e.metaKey || e.altKey || this.f.bars) return;
    const step = (this.x.high - this.x.low) / 60;
    const rise = (this.y.high - this.y.low) / 40;
    const [x, y] = this.cursor || [(this.x.low + this.x.high) / 2, (this.y.low + this.y.high) / 2];
    const moves = { ArrowLeft: [-step, 0], ArrowRight: [step, 0] };
    if (this.f.map) Object.assign(moves, { ArrowUp: [0, rise], ArrowDown: [0, -rise] });
    const actions = { "+": () => this.zoom(0.5), "=": () => this.zoom(0.5), "-": () => this.zoom(2), 0: () => this.reset(), l: () => this.toggleLog(), L: () => this.toggleLog() };
    if (moves[e.key]) {
      const within = (v, s) => Math.min(s.high, Math.max(s.low, v));
      this.cursor = [within(x + moves[e.key][0], this.x), within(y + moves[e.key][1], this.y)];
      this.readout.setAttribute("aria-live", "polite");
      this.show();
    } else if (actions[e.key]) actions[e.key]();
    else return;
    e.preventDefault();
  }

  // show reads the values at the cursor.
  show() {
    const [x, y] = this.cursor;
    const at = this.x.at(x);
    this.mark.setAttribute("d", `M${at} ${this.top}V${this.y.from}` + (this.f.map ? `M${this.left} ${this.y.at(y)}H${this.right}` : ""));
    const unit = (a) => (a.unit ? " " + unitText(a.unit) : "");
    if (this.f.map) {
      const m = this.f.map;
      const k = bin(m.yEdges, y) * (m.xEdges.length - 1) + bin(m.xEdges, x);
      const se = m.se && m.se[k] !== null ? ` ± ${number(m.se[k], 2)}` : "";
      this.readout.textContent = `${this.f.x.label} ${number(x, 3)}${unit(this.f.x)}, ${this.f.y.label} ${number(y, 3)}${unit(this.f.y)}: ${this.name(m.value.label, m.run)} ${number(m.z[k])}${se}${unit(m.value)}`;
      return;
    }
    const parts = this.f.series.map((s) => {
      const i = nearest(s.x, x);
      if (i < 0 || s.y[i] === null) return null;
      const se = s.se && s.se[i] !== null && s.se[i] !== undefined ? ` ± ${number(s.se[i], 2)}` : "";
      return `${this.name(s.label, s.run)} ${number(s.y[i])}${se}`;
    });
    this.readout.textContent = `${this.f.x.label} ${number(x, 3)}${unit(this.f.x)}: ${parts.filter(Boolean).join("; ")}${unit(this.f.y)}`;
  }
}

// colorBar shows which colour is which value, right of a plot.
export function colorBar(p, axis, limits) {
  const x = p.right + 12;
  const s = new Scale(...limits, p.y.from, p.top, axis.log);
  const n = 48;
  const h = (p.y.from - p.top) / n;
  for (let i = 0; i < n; i++) {
    const c = p.colors[Math.round(((i + 0.5) / n) * (p.colors.length - 1))];
    p.add("rect", { x, y: p.y.from - h * (i + 1), width: 13, height: h + 0.4, fill: c });
  }
  const t = s.ticks(5);
  for (const [v, text] of t.list) p.add("text", { x: x + 17, y: s.at(v) + 4 }, text);
  p.add("text", { class: "nx", transform: `translate(${p.width - 4} ${(p.top + p.y.from) / 2}) rotate(-90)` }, axisTitle(axis, t.shift));
}

function bin(edges, v) {
  let low = 0;
  let high = edges.length - 2;
  while (low < high) {
    const mid = (low + high + 1) >> 1;
    if (edges[mid] <= v) low = mid;
    else high = mid - 1;
  }
  return low;
}

function nearest(xs, v) {
  let best = -1;
  for (let i = 0; i < xs.length; i++) {
    if (best < 0 || Math.abs(xs[i] - v) < Math.abs(xs[best] - v)) best = i;
  }
  return best;
}

// csvOf is the data behind a figure, with run and verdict in every row.
export function csvOf(f) {
  const quote = (v) => (/[",\n]/.test(v) ? `"${String(v).replaceAll('"', '""')}"` : v ?? "");
  const run = (k) => (f.runs[k] ? [f.runs[k].name, f.runs[k].verdict] : ["", ""]);
  const rows = [];
  if (f.map) {
    const m = f.map;
    const nx = m.xEdges.length - 1;
    const middle = (e, i) => (e[i] + e[i + 1]) / 2;
    rows.push(["run", "verdict", f.x.name, f.y.name, m.value.name, m.value.name + "_se"]);
    m.z.forEach((z, i) => rows.push([...run(m.run), middle(m.xEdges, i % nx), middle(m.yEdges, Math.floor(i / nx)), z, m.se && m.se[i]]));
  } else if (f.bars) {
    rows.push(["run", "verdict", "part", f.y.name, f.y.name + "_se"]);
    for (const b of f.bars) rows.push([...run(b.run), b.label, ...b.pair]);
  } else {
    rows.push(["run", "verdict", "curve", f.x.name, f.y.name, f.y.name + "_se"]);
    for (const s of f.series) s.x.forEach((x, i) => rows.push([...run(s.run), s.label, x, s.y[i], s.se && s.se[i]]));
  }
  return rows.map((r) => r.map(quote).join(",")).join("\n") + "\n";
}
