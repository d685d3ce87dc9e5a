// The page of a scan: a map of its points over two inputs, or a curve over one, and their table.
import { make, number, unitText, Scale, rangeOf, axisTitle, colorBar, Plot } from "/draw.js";
import { api, state, markOf, runLink } from "/app.js";

const radius = 7;

// ScanMap is the points of a scan on two axes, coloured by a result, or on one with errors.
class ScanMap extends Plot {
  constructor(scan, x, y, z, points) {
    super({
      id: "scan", title: `${z.doc || z.name} over ${x.name}${y ? " and " + y.name : ""}`,
      alt: `${points.length} points; the table below holds them all.`, runs: [],
      x: { name: x.name, label: x.name, unit: "", from: 0, to: 0 },
      y: y ? { name: y.name, label: y.name, unit: "", from: 0, to: 0 } : { name: z.name, label: z.name, unit: "", from: 0, to: 0 },
      series: [],
    }, state.session.colors);
    Object.assign(this, { scan, xs0: x, ys0: y, zs: z, points, at: -1 });
  }

  drawCurves() {
    const { xs0, ys0, zs, points } = this;
    const up = ys0 || zs;
    const pad = ([a, b]) => [a - 0.06 * (b - a), b + 0.06 * (b - a)];
    this.right = this.width - (ys0 ? 92 : 14);
    const x = this.view ? this.view.x : pad(rangeOf(this.f.x, points.map((i) => xs0.values[i]), false, false));
    const y = this.view && this.view.y ? this.view.y : pad(rangeOf(this.f.y, points.map((i) => up.values[i]), false, false));
    this.x = new Scale(...x, this.left, this.right);
    this.y = new Scale(...y, this.height - 46, this.top);
    this.axes(this.f.x, this.f.y);
    const values = points.map((i) => zs.values[i]).filter((v) => v !== null);
    this.zLimits = values.length ? rangeOf({ from: 0, to: 0 }, values, false, false) : [0, 1];
    this.colorScale = new Scale(...this.zLimits, 0, this.colors.length - 1);
    if (ys0) colorBar(this, { label: zs.name, unit: "", log: false }, this.zLimits);
    const bad = points.filter((i) => this.scan.points[i].verdict === "fail").length;
    if (bad) this.add("text", { class: "note", x: this.left + 5, y: this.top + 14 }, `✗ marks ${bad} with verdict FAIL: not to be used`);
  }

  pointer() {
    super.pointer();
    this.points.forEach((i, k) => this.dot(i, k));
  }

  dot(i, k) {
    const up = this.ys0 || this.zs;
    const [xv, yv, z] = [this.xs0.values[i], up.values[i], this.zs.values[i]];
    if (xv === null || yv === null || xv < this.x.low || xv > this.x.high || yv < this.y.low || yv > this.y.high) return;
    const [x, y] = [this.x.at(xv), this.y.at(yv)];
    const color = z === null ? "none" : this.colors[Math.round(Math.min(this.colors.length - 1, Math.max(0, this.colorScale.at(z))))];
    if (!this.ys0 && this.zs.se && this.zs.se[i] > 0) {
      this.add("path", { class: "er", d: `M${x} ${this.y.at(yv + this.zs.se[i])}V${this.y.at(yv - this.zs.se[i])}` });
    }
    const circle = document.createElementNS("http://www.w3.org/2000/svg", "circle");
    for (const [n, v] of Object.entries({ class: "point", cx: x, cy: y, r: radius, fill: this.ys0 ? color : "var(--c0)" })) circle.setAttribute(n, v);
    circle.addEventListener("pointerenter", () => this.read(k));
    circle.addEventListener("click", () => this.open(k));
    this.svg.append(circle);
    if (this.scan.points[i].verdict === "fail") {
      this.add("path", { class: "cross", d: `M${x - 8} ${y - 8}l16 16m0 -16l-16 16` });
    }
    if (k === this.at) this.add("circle", { class: "ring", cx: x, cy: y, r: radius + 4 });
  }

  text(k) {
    const i = this.points[k];
    const p = this.scan.points[i];
    const value = (c) => `${c.name} ${number(c.values[i])}${c.se && c.se[i] !== null ? ` ± ${number(c.se[i], 2)}` : ""}`;
    const parts = [this.xs0, this.ys0, this.zs].filter(Boolean).map(value);
    return `point ${p.number}: ${parts.join(", ")} ${markOf(p.verdict)}`;
  }

  read(k) {
    this.readout.textContent = this.text(k);
  }

  open(k) {
    const p = this.scan.points[this.points[k]];
    if (p.id) location.hash = runLink(p.id);
  }

  show() {} // the cursor of curves is not used here

  key(e) {
    const step = { ArrowRight: 1, ArrowDown: 1, ArrowLeft: -1, ArrowUp: -1 }[e.key];
    if (step && this.points.length) {
      this.at = (this.at + step + this.points.length) % this.points.length;
      this.readout.setAttribute("aria-live", "polite");
      this.draw();
      this.read(this.at);
      e.preventDefault();
    } else if (e.key === "Enter" && this.at >= 0) this.open(this.at);
    else super.key(e);
  }
}

const picked = {}; // the choices on the page of each scan

export async function showScan(main, id, fresh, title) {
  const scan = await api(`/api/scan?id=${encodeURIComponent(id)}`);
  if (!fresh()) return;
  scan.points ??= [];
  const inputs = (scan.inputs || []).filter((c) => c.values && c.values.some((v) => v !== c.values[0]));
  const results = scan.results || [];
  const head = title(`Scan ${id}`);
  if (!scan.points.length || !inputs.length || !results.length) {
    main.replaceChildren(head, make("p", {}, `${scan.points.length} points so far; nothing to draw yet.`));
    return;
  }
  const first = results.find((c) => c.name === "ion_mean_energy_eV.grounded.all") || results[0];
  const now = (picked[id] ??= { x: inputs[0].name, y: inputs[1] ? inputs[1].name : "", z: first.name, held: {} });
  const place = make("div", { class: "scanmap" });
  const tableBody = make("tbody");
  const tableHead = make("tr");
  const held = make("div", { class: "choose" });
  const column = (name) => [...inputs, ...results].find((c) => c.name === name);

  const draw = () => {
    const others = inputs.filter((c) => c.name !== now.x && c.name !== now.y);
    held.replaceChildren(...others.map((c) => {
      const values = [...new Set(c.values)].sort((a, b) => a - b);
      const pick = make("select", { onchange: () => { now.held[c.name] = pick.value; draw(); } },
        make("option", { value: "" }, "any"), ...values.slice(0, 200).map((v) => make("option", { value: String(v) }, number(v))));
      pick.value = now.held[c.name] || "";
      return make("label", {}, c.name, pick);
    }));
    const shown = scan.points.map((_, i) => i).filter((i) => others.every((c) => !now.held[c.name] || String(c.values[i]) === now.held[c.name]));
    const [x, y, z] = [column(now.x), now.y ? column(now.y) : null, column(now.z)];
    const map = new ScanMap(scan, x, y, z, shown);
    place.replaceChildren(map.host, map.readout);
    map.draw();
    tableHead.replaceChildren(...["point", "verdict", ...inputs.map((c) => c.name), z.name, "standard error"].map((t) => make("th", { scope: "col" }, t)));
    tableBody.replaceChildren(...shown.map((i) => {
      const p = scan.points[i];
      const mark = p.verdict === "fail" ? "✗ " : "";
      return make("tr", { class: `v-${p.verdict}` },
        make("th", { scope: "row" }, p.id ? make("a", { href: runLink(p.id) }, `point ${p.number}`) : `point ${p.number}`),
        make("td", {}, make("span", { class: "pill" }, markOf(p.verdict) || p.status)),
        ...inputs.map((c) => make("td", { class: "n" }, number(c.values[i]))),
        make("td", { class: "n value" }, mark + number(z.values[i])), make("td", { class: "n value" }, mark + number(z.se ? z.se[i] : null, 2)));
    }));
  };
  const select = (label, key, columns, none) => {
    const pick = make("select", { onchange: () => { now[key] = pick.value; draw(); } },
      none ? make("option", { value: "" }, none) : null, ...columns.map((c) => make("option", { value: c.name }, c.name)));
    pick.value = now[key];
    return make("label", {}, label, pick);
  };
  const failed = scan.points.filter((p) => p.verdict === "fail").length;
  main.replaceChildren(head,
    make("p", {}, `${scan.points.length} points${failed ? `, ${failed} of them with verdict FAIL, which are not to be used` : ""}. Choose a point to see its run.`),
    make("div", { class: "choose" }, select("Result", "z", results), select("Across", "x", inputs), select("Up", "y", inputs, "the result itself")),
    held, make("figure", {}, place),
    make("h2", {}, "Points"),
    make("div", { class: "scroll", tabindex: "0", role: "region", "aria-label": "points" },
      make("table", { class: "list" }, make("caption", { class: "hidden" }, "points of the scan"), make("thead", {}, tableHead), tableBody)));
  draw();
}
