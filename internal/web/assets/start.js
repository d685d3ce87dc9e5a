// The page that checks an input and starts a run with it.
import { make } from "/draw.js";
import { api, state, runLink } from "/app.js";

export async function showStart(main, like, title) {
  const said = make("div", { role: "status", "aria-live": "polite" });
  const input = make("textarea", { id: "input", spellcheck: "false", "aria-describedby": "input-help" });
  const name = make("input", { id: "name", pattern: "[A-Za-z0-9_][A-Za-z0-9_\\-]*", maxlength: "60", required: true });
  const tell = (problem, good) => said.replaceChildren(make("p", { class: problem ? "problem" : "fine" }, problem || good));
  const attempt = (f) => async () => {
    try {
      await f();
    } catch (e) {
      tell(e.message);
    }
  };
  const check = attempt(async () => {
    tell((await api("/api/check", { input: input.value, name: "" })).problem, "The input is right.");
  });
  const start = attempt(async () => {
    const answer = await api("/api/start", { input: input.value, name: name.value });
    if (answer.problem) tell(answer.problem);
    else {
      tell("", "Started.");
      location.hash = /^base:/m.test(input.value) ? `#/scan/${encodeURIComponent(answer.id)}` : runLink(answer.id);
    }
  });
  main.replaceChildren(title("Start a run or a scan"),
    make("p", { id: "input-help" }, "Edit the input of a run, or the plan of a scan; it is checked as on the command line. What is started goes on when this page or the viewer is closed."),
    make("label", { for: "input" }, "Input"), input,
    make("div", { class: "choose" }, make("label", {}, "Name of the results folder ", name),
      make("button", { type: "button", onclick: check }, "Check"), make("button", { type: "button", onclick: start }, "Start")), said);
  const from = like || state.items.find((i) => i.kind === "run")?.id;
  if (from) {
    try {
      input.value = (await api(`/api/run?id=${encodeURIComponent(from)}`)).sheet.Runs[0].Input;
    } catch {
      input.value = ""; // one starts from nothing then
    }
  }
}
