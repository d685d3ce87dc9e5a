// The viewer: lists results, shows one, lays several over each other, and follows what runs.
import { Plot, make, csvOf, number } from "/draw.js";
import { showScan } from "/scan.js";
import { showStart } from "/start.js";

const main = document.getElementById("main");
const live = document.getElementById("live");
export const state = { key: "", session: null, items: [], chosen: new Set(), more: false, single: "" };
let page = 0; // counts pages, so that late answers to an older one are dropped
let single = true;

export async function api(path, body) {
  const options = { headers: { Authorization: `Bearer ${state.key}` } };
  if (body) {
    options.method = "POST";
    options.headers["Content-Type"] = "application/json";
    options.body = JSON.stringify(body);
  }
  const response = await fetch(path, options);
  const answer = await response.json();
  if (!response.ok) throw Object.assign(new Error(answer.error), { status: response.status });
  return answer;
}

// enter trades the token of the address for a key, or takes up the key of this window.
async function enter() {
  const token = new URLSearchParams(location.hash.slice(1)).get("token");
  if (token) {
    history.replaceState(null, "", "/#/");
    state.session = await api("/api/session", { token });
    state.key = state.session.key;
    sessionStorage.setItem("session", JSON.stringify(state.session));
    return;
  }
  const kept = sessionStorage.getItem("session");
  if (!kept) throw new Error("Open the address that ionfall view printed; it works once.");
  state.session = JSON.parse(kept);
  state.key = state.session.key;
}

// follow reads the server-sent events; fetch is used, as an EventSource can send no key.
async function follow() {
  for (;;) {
    try {
      const response = await fetch("/api/events", { headers: { Authorization: `Bearer ${state.key}` } });
      if (!response.ok) throw new Error((await response.json()).error);
      live.textContent = "watching";
      const reader = response.body.pipeThrough(new TextDecoderStream()).getReader();
      let text = "";
      for (;;) {
        const { value, done } = await reader.read();
        if (done) break;
        text += value;
        let end;
        while ((end = text.indexOf("\n\n")) >= 0) {
          receive(text.slice(0, end));
          text = text.slice(end + 2);
        }
      }
    } catch {
      // the server is gone or restarts; said below, tried again
    }
    live.textContent = "the viewer has stopped: start ionfall view again";
    await new Promise((done) => setTimeout(done, 3000));
  }
}

function receive(message) {
  const event = /^event: (.*)$/m.exec(message);
  const data = /^data: (.*)$/m.exec(message);
  if (!event || !data || event[1] !== "list") return;
  const list = JSON.parse(data[1]);
  const before = new Map(state.items.map((i) => [i.id, i]));
  Object.assign(state, { items: list.items || [], more: list.more, single: list.single });
  const running = state.items.filter((i) => i.running).length;
  live.textContent = running ? `${running} running` : "watching; nothing runs";
  if (single) {
    single = false;
    const only = state.items.find((i) => i.id === state.single);
    if (only && location.hash.length < 3) {
      location.hash = `#/${only.kind}/${encodeURIComponent(only.id)}`;
      return;
    }
  }
  const [where, id] = route();
  const now = state.items.find((i) => i.id === id);
  if (where === "") showList(true);
  else if (now && !before.has(id)) show(); // it has begun
  else if (where === "run" && now) {
    const was = before.get(id);
    if (was && (was.running !== now.running || was.stopped !== now.stopped)) show();
    else if (now.running) document.dispatchEvent(new CustomEvent("progress", { detail: now }));
  } else if (where === "scan" && now && before.get(id)) show(true);
}

const route = () => {
  const [, where = "", ids = ""] = /^#\/([a-z]*)\/?(.*)$/.exec(location.hash) || [];
  return [where, ...ids.split("&").filter(Boolean).map(decodeURIComponent)];
};

export const markOf = (verdict) => ({ ok: "✓ ok", warn: "! warn", fail: "✗ FAIL", unfinished: "… running", stopped: "‖ stopped" })[verdict] || (verdict ? `? ${verdict}` : "");
export const runLink = (id) => `#/run/${encodeURIComponent(id)}`;

function title(text) {
  document.title = `${text} – ionfall viewer`;
  return make("h1", {}, text);
}

async function show(keep = false) {
  const [where, ...ids] = route();
  const mine = ++page;
  const fresh = () => mine === page;
  try {
    if (where === "run") await showRun(ids[0], fresh);
    else if (where === "compare") await showCompare(ids, fresh);
    else if (where === "scan") await showScan(main, ids[0], fresh, title);
    else if (where === "new") showStart(main, ids[0], title);
    else showList();
    if (!keep && fresh()) {
      main.focus({ preventScroll: true });
      scrollTo(0, 0);
    }
  } catch (e) {
    if (fresh()) main.replaceChildren(title("This cannot be shown"), make("p", { class: "problem" }, e.message));
  }
  document.body.dataset.ready = String(mine);
}

// stateText says how far a run is.
export function stateText(s) {
  if (!s) return "";
  const energy = s.ion_mean_energy_eV === null || s.ion_mean_energy_eV === undefined ? "" :
    `, ion energy ${number(s.ion_mean_energy_eV)}${s.ion_mean_energy_eV_se ? ` ± ${number(s.ion_mean_energy_eV_se, 2)}` : ""} eV`;
  const left = s.remaining_s > 0 ? `, about ${s.remaining_s > 90 ? Math.round(s.remaining_s / 60) + " min" : Math.round(s.remaining_s) + " s"} left` : "";
  return `${s.stage}, period ${s.periods}${energy}${left}`;
}

function showList(update = false) {
  const focus = update && document.activeElement && document.activeElement.id;
  const filter = update ? document.getElementById("filter")?.value || "" : "";
  const compare = make("button", { type: "button", id: "compare", onclick: () => { location.hash = "#/compare/" + [...state.chosen].map(encodeURIComponent).join("&"); } }, "Compare the chosen");
  const body = make("tbody");
  const fill = () => {
    const word = box.value.toLowerCase();
    body.replaceChildren(...state.items.filter((i) => `${i.id} ${i.title || ""} ${i.verdict || ""}`.toLowerCase().includes(word)).map(itemRow));
    compare.disabled = state.chosen.size < 2;
  };
  const box = make("input", { type: "search", id: "filter", oninput: fill });
  box.value = filter;
  const choose = (item) => {
    const check = make("input", { type: "checkbox", id: `choose-${item.id}`, "aria-label": `choose ${item.id}`, onchange: () => {
      if (check.checked) state.chosen.add(item.id);
      else state.chosen.delete(item.id);
      compare.disabled = state.chosen.size < 2;
    } });
    check.checked = state.chosen.has(item.id);
    return check;
  };
  const itemRow = (item) => make("tr", { class: `v-${item.verdict || "none"}` },
    make("td", {}, item.kind === "run" ? choose(item) : ""),
    make("th", { scope: "row" }, make("a", { href: `#/${item.kind}/${encodeURIComponent(item.id)}` }, item.id)),
    make("td", {}, item.kind === "scan" ? `scan, ${item.points || 0} points` : item.title || ""),
    make("td", {}, make("span", { class: "pill" }, item.kind === "scan" ? "" : markOf(item.verdict))),
    make("td", {}, item.running || item.stopped ? stateText(item.state) : ""));
  const empty = state.items.length ? null : make("p", {}, "No results here yet. They appear by themselves.");
  main.replaceChildren(...[
    title("Results"),
    make("div", { class: "choose" }, make("label", {}, "Find ", box), compare),
    state.more ? make("p", { class: "problem" }, "There are more results than are listed: view a folder further down.") : null,
    make("div", { class: "scroll", tabindex: "0", role: "region", "aria-label": "results" },
      make("table", { class: "list" },
        make("caption", { class: "hidden" }, "results in this folder"),
        make("thead", {}, make("tr", {}, ...["choose", "name", "what", "verdict", "progress"].map((t) => make("th", { scope: "col" }, t)))), body)),
    empty].filter(Boolean));
  fill();
  if (focus) document.getElementById(focus)?.focus();
}

function save(text, name, type) {
  const link = make("a", { href: URL.createObjectURL(new Blob([text], { type })), download: name });
  link.click();
  setTimeout(() => URL.revokeObjectURL(link.href), 1000);
}

const failedMark = () => make("span", { class: "failmark" }, " ✗ FAIL");

// figureBox is a figure with its tools.
function figureBox(f) {
  const failed = f.runs.some((r) => r.verdict === "fail");
  const plot = new Plot(f, state.session.colors);
  const log = make("button", { type: "button", "aria-pressed": String(plot.logY), onclick: () => {
    plot.toggleLog();
    log.setAttribute("aria-pressed", String(plot.logY));
  } }, "Log scale");
  const named = (text) => [text, make("span", { class: "hidden" }, ` of ${f.title}`)];
  const lines = csvOf(f).trimEnd().split("\n").length - 1;
  const place = make("div", { class: "scroll", tabindex: "0", role: "region", "aria-label": `data of ${f.title}` });
  const details = make("details", { ontoggle: () => { if (details.open && !place.firstChild) place.append(dataTable(f)); } },
    make("summary", {}, ...named(`Data table (${lines} rows)`)), place);
  return make("figure", { id: `f-${f.id}`, class: failed ? "failed" : null, "data-drawn": "1" },
    make("h3", {}, f.title, failed ? failedMark() : null), plot.host, plot.readout, make("figcaption", {}, f.about),
    make("div", { class: "tools" },
      f.map || f.bars ? null : log,
      f.bars ? null : make("button", { type: "button", onclick: () => plot.zoom(0.5) }, ...named("Zoom in")),
      f.bars ? null : make("button", { type: "button", onclick: () => plot.reset() }, ...named("Show all")),
      make("button", { type: "button", onclick: () => save(csvOf(f), `${f.id}.csv`, "text/csv") }, ...named("CSV")), details));
}

function dataTable(f) {
  const rows = csvOf(f).trimEnd().split("\n").slice(0, 401).map((l) => l.split(","));
  const table = make("table", {}, make("caption", {}, "at most 400 rows; the CSV holds all"));
  rows.forEach((cells, i) => table.append(make("tr", {}, ...cells.map((c) => i ? make("td", { class: cells[1] === "fail" ? "failed" : null }, c) : make("th", { scope: "col" }, c)))));
  return table;
}

// figureSections makes places for all figures and fills each when it comes near.
function figureSections(ids, fresh) {
  const query = ids.map((id) => `id=${encodeURIComponent(id)}`).join("&");
  const missing = make("p", { class: "absent" });
  const absent = [];
  const load = async (place, kind) => {
    try {
      const figures = await api(`/api/figures?kind=${kind.id}&${query}`);
      if (fresh()) place.replaceWith(...figures.map(figureBox));
    } catch (e) {
      place.remove();
      if (e.status !== 404) missing.append(make("span", { class: "problem" }, `${kind.title}: ${e.message}`));
      else if (kind.id !== "measurements") {
        absent.push(kind.title);
        missing.textContent = `Not recorded, so not shown: ${absent.join("; ")}.`;
      }
    }
  };
  const near = new IntersectionObserver((entries) => {
    for (const e of entries) {
      if (!e.isIntersecting) continue;
      near.unobserve(e.target);
      load(e.target, state.session.kinds.find((k) => k.id === e.target.dataset.kind));
    }
  }, { rootMargin: "900px" });
  const groups = new Map();
  for (const kind of state.session.kinds) {
    if (!groups.has(kind.group)) groups.set(kind.group, []);
    const place = make("div", { class: "waiting", "data-kind": kind.id }, `${kind.title} …`);
    groups.get(kind.group).push(place);
    near.observe(place);
  }
  const sections = [...groups].map(([name, places]) => make("section", {}, make("h2", {}, name), make("div", { class: "figures" }, ...places)));
  return [...sections, missing];
}

function definition(list) {
  return make("dl", { class: "asked" }, ...(list || []).map((p) => make("div", {}, make("dt", {}, p.Name), make("dd", {}, p.Text))));
}

function verdictBox(r, several) {
  const bad = (r.Checks || []).filter((c) => c.Verdict !== "ok");
  return make("section", { class: `verdict v-${r.Verdict}`, "aria-label": `verdict on ${r.Name}` },
    make("p", { class: "mark" }, markOf(r.Verdict)),
    make("div", {}, make("p", { class: "judged" }, several ? make("strong", {}, `${r.Name}: `) : null, r.Judgement),
      bad.length ? make("ul", {}, ...bad.map((c) => make("li", {}, `${markOf(c.Verdict)}: ${c.Name} is ${c.Number}, bound ${c.Limit} (${c.Text})`))) : null));
}

function region(label, table) {
  return make("div", { class: "scroll", tabindex: "0", role: "region", "aria-label": label }, table);
}

function answersTable(sheet) {
  const a = sheet.Answers;
  return region("table of answers", make("table", { class: "answers" },
    make("caption", {}, "Values with their standard errors." + (sheet.Failed ? " ✗ marks values of a run whose verdict is FAIL: they are not to be used." : "")),
    make("thead", {}, make("tr", {}, make("th", { scope: "col" }, "result"), ...(a.Heads || []).map((h) => make("th", { scope: "col", class: `v-${h.Verdict}` },
      `${sheet.Several ? h.Run + ", " : ""}${h.Electrode}${h.Substrate ? " (substrate)" : ""}`, make("span", { class: "tag" }, markOf(h.Verdict)))))),
    make("tbody", {}, ...(a.Rows || []).map((r) => make("tr", {}, make("th", { scope: "row" }, r.Label),
      ...r.Cells.map((c) => make("td", { class: c.Failed ? "failed" : null }, (c.Failed ? "✗ " : "") + c.Text)))))));
}

// besideOf is what measurements say of a run.
function besideOf(r) {
  if (!r.Beside && !r.BesideLost) return [];
  const failed = r.Verdict === "fail";
  const tables = (r.Beside || []).flatMap((b) => [make("h3", {}, b.Name), make("p", {}, failed ? failedMark() : null, make("strong", {}, b.Verdict)),
    region(`comparison with ${b.Name}`, make("table", { class: "answers" },
      make("caption", {}, `${b.Sweeps}, ${b.Where}. Difference: simulated less measured, in joint standard errors.`),
      make("thead", {}, make("tr", {}, ...["quantity", "measured", "simulated", "difference"].map((t) => make("th", { scope: "col" }, t)))),
      make("tbody", {}, ...b.Rows.map((c) => make("tr", {}, make("th", { scope: "row" }, c.Label), make("td", {}, c.Measured),
        make("td", { class: failed ? "failed" : null }, (failed ? "✗ " : "") + c.Simulated), make("td", { class: "n" }, c.Sigma)))))),
    make("ul", {}, ...(b.Cautions || []).map((c) => make("li", {}, c)))]);
  return [make("section", {}, make("h2", {}, "Does it agree with what was measured?"), r.BesideLost ? make("p", {}, r.BesideLost) : null, ...tables)];
}

function wordsOf(r) {
  const checks = make("table", { class: "checks" }, make("caption", {}, `${r.Name}: ${r.Judgement}`),
    make("thead", {}, make("tr", {}, ...["verdict", "check", "value", "bound", "what it means"].map((t) => make("th", { scope: "col" }, t)))),
    make("tbody", {}, ...(r.Checks || []).map((c) => make("tr", { class: `v-${c.Verdict}` }, make("td", {}, markOf(c.Verdict)), make("th", { scope: "row" }, c.Name),
      make("td", { class: "n" }, c.Number), make("td", { class: "n" }, c.Limit), make("td", {}, c.Text)))));
  const film = make("table", { class: "film" }, make("caption", {}, "Published indicators, each for the material and reactor of its authors; no prediction of a property of your film."),
    make("thead", {}, make("tr", {}, ...["indicator", "value", "what was published", "source"].map((t) => make("th", { scope: "col" }, t)))),
    make("tbody", {}, ...(r.Indicators || []).map((i) => make("tr", {}, make("th", { scope: "row" }, i.Name),
      make("td", { class: r.Verdict === "fail" ? "failed" : null }, (r.Verdict === "fail" ? "✗ " : "") + i.Value), make("td", {}, i.Says), make("td", {}, i.Source)))));
  return make("section", {},
    make("h2", {}, "Checks, sources and provenance"), region(`checks of ${r.Name}`, checks),
    r.Indicators ? make("h3", {}, "What the ions may mean for a film") : null, r.Indicators ? region("indicators", film) : null,
    make("details", {}, make("summary", {}, "Methods and data"), make("ol", { class: "refs" }, ...(r.References || []).map((x) => make("li", {}, `${x.citation} (${x.why})`)))),
    make("details", {}, make("summary", {}, "Every result, under its name in the files"), definition(r.Results)),
    make("details", {}, make("summary", {}, "Provenance"), definition(r.Provenance)),
    make("details", {}, make("summary", {}, "Input, as given"), make("pre", { tabindex: "0", "aria-label": "input" }, r.Input)));
}

// progressBox follows a run that is not finished.
function progressBox(id, first, fresh) {
  const text = make("p", { role: "status" }, stateText(first) || "waiting for its first report");
  const figure = {
    id: "live", title: "Ion energy so far", alt: "Mean ion energy over the RF periods since this page was opened.", about: "", runs: [{ name: id, verdict: "unfinished" }],
    x: { name: "period", label: "RF period", unit: "", from: 0, to: 0 }, y: { name: "ion_mean_energy_eV", label: "mean ion energy", unit: "eV", from: 0, to: 0 },
    series: [{ label: "ions at the substrate", run: 0, x: [], y: [], se: [] }],
  };
  const plot = new Plot(figure, state.session.colors);
  const take = (s) => {
    if (!s) return;
    const c = figure.series[0];
    if (c.x[c.x.length - 1] === s.periods) return;
    c.x.push(s.periods);
    c.y.push(s.ion_mean_energy_eV ?? null);
    c.se.push(s.ion_mean_energy_eV_se ?? null);
    text.textContent = stateText(s);
    plot.draw();
  };
  take(first);
  const listen = (e) => {
    if (!fresh()) document.removeEventListener("progress", listen);
    else if (e.detail.id === id) take(e.detail.state);
  };
  document.addEventListener("progress", listen);
  return make("section", { class: "progress", "aria-label": "progress" }, text, plot.host, plot.readout);
}

async function showRun(id, fresh) {
  const v = await api(`/api/run?id=${encodeURIComponent(id)}`);
  if (!fresh()) return;
  const r = v.sheet.Runs[0];
  const tools = make("div", { class: "choose" },
    make("button", { type: "button", onclick: () => { state.chosen.add(id); location.hash = "#/"; } }, "Compare with others"),
    v.running ? null : make("button", { type: "button", onclick: async () => save((await api(`/api/report?id=${encodeURIComponent(id)}`)).page, `${r.Name}.html`, "text/html") }, "Save the report"),
    state.session.runs ? make("a", { href: `#/new/${encodeURIComponent(id)}` }, "Start another like it") : null);
  if (v.stopped) r.Verdict = "stopped";
  const head = [title(r.Title), verdictBox(r), tools];
  if (v.running) {
    const stopped = v.stopped ? make("p", { class: "problem" }, `This run stopped before its end: ${stateText(v.state)}. Nobody works on it; continue it with: ionfall resume ${id}`) : null;
    main.replaceChildren(...head, stopped || progressBox(id, v.state, fresh), definition(r.Asked), make("p", {}, "Figures appear when the run is finished."));
    return;
  }
  const failed = r.Verdict === "fail";
  main.replaceChildren(...head,
    make("dl", { class: "headline" }, ...(r.Headline || []).map((h) => make("div", {}, make("dt", {}, `${h.Name}, ${h.Where} electrode (substrate)`), make("dd", {}, h.Text, failed ? failedMark() : null)))),
    make("section", {}, make("h2", {}, "Answers"), answersTable(v.sheet), definition(r.Asked)),
    ...besideOf(r), ...figureSections([id], fresh), wordsOf(r));
}

async function showCompare(ids, fresh) {
  const sheet = await api("/api/compare?" + ids.map((id) => `id=${encodeURIComponent(id)}`).join("&"));
  if (!fresh()) return;
  main.replaceChildren(title(sheet.Title), ...sheet.Runs.map((r) => verdictBox(r, true)),
    make("section", {}, make("h2", {}, "Answers"), answersTable(sheet)), ...figureSections(ids, fresh));
}

document.getElementById("theme").addEventListener("click", () => {
  const dark = matchMedia("(prefers-color-scheme: dark)").matches;
  const now = document.documentElement.dataset.theme || (dark ? "dark" : "light");
  document.documentElement.dataset.theme = now === "dark" ? "light" : "dark";
  sessionStorage.setItem("theme", document.documentElement.dataset.theme);
});
document.getElementById("invite").addEventListener("click", async () => {
  const { address } = await api("/api/invite", {});
  open(address, "_blank", "noopener");
});
if (sessionStorage.getItem("theme")) document.documentElement.dataset.theme = sessionStorage.getItem("theme");

try {
  await enter();
  document.getElementById("nav-new").hidden = !state.session.runs;
  document.getElementById("cautions").append(...state.session.cautions.map((c) => make("li", {}, c)));
  Object.assign(state, await api("/api/list"));
  state.items ??= [];
  addEventListener("hashchange", () => show());
  await show();
  follow();
} catch (e) {
  main.replaceChildren(title("Not open to this window"), make("p", { class: "problem" }, e.message));
  document.body.dataset.ready = "locked";
}
