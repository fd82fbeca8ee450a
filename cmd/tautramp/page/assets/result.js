// What came of a recording: the two numbers, then the whole report.
import { state, make, get, byId, fill } from "./store.js";
import { show, label, system, withUnit } from "./units.js";
import { again } from "./before.js";

// A rehearsal says so on every screen.
function mark(rehearsal) { byId("rehearsal").hidden = !rehearsal; }

const roles = { pressure: "pressure", torque: "torque", turns: "turns", spring: "spring" };

export async function result(box, [id]) {
  const papers = state.desk?.papers.find((p) => p.id === id);
  if (!papers) {
    fill(box, make("h1", {}, "That recording is not here any more"), make("p", {}, make("a", { href: "#home" }, "Back")));
    return;
  }
  let figures = null, fault = "";
  try {
    figures = await get(`/papers/${id}/figures`);
  } catch (e) {
    fault = e.message;
  }
  mark(Boolean(figures?.recording.rehearsal));
  fill(box,
    make("h1", {}, figures ? `${figures.setup.tensioner} with ${figures.setup.band}` : papers.name),
    figures && make("p", {}, papers.name),
    papers.alarm && make("p", { class: "note bad" }, "An alarm was raised: " + papers.alarm),
    fault && make("p", { class: "note bad", role: "alert" }, "No result: " + (state.desk.fault || fault)),
    figures && numbers(figures),
    figures && make("p", { class: "row" },
      make("a", { class: "button", href: `/papers/${id}/sheet?units=${system()}`, target: "_blank", rel: "noopener" }, "Report to print"),
      make("button", { type: "button", onclick: () => go("face") }, "Measure the other face"),
      make("button", { type: "button", onclick: () => go("verify") }, "Check the number once")),
    figures && make("iframe", { class: "sheet", src: `/papers/${id}/sheet?units=${system()}`, title: "the report" }),
    make("p", {}, make("a", { href: "#home" }, "Back to the beginning")));

  function go(kind) {
    again(kind, papers);
    location.hash = "before";
  }
}

function numbers(f) {
  const role = roles[f.setup.set_by] || "pressure", target = f.target;
  if (!target) return make("p", { class: "note" }, "The band has no target stress: the report has the curves.");
  const one = (way, name, how) => {
    const t = target[way]?.true_stress, q = t && Object.values(t)[0];
    if (!q || q.value == null) return make("div", { class: "aim " + way }, make("h2", {}, name), make("p", {}, "not known: " + (q?.unknown || t?.unknown || "see the report")));
    return make("div", { class: "aim " + way }, make("h2", {}, name),
      make("p", { class: "big" }, show(q.value, role), make("small", {}, " " + label(role))),
      make("p", {}, how),
      make("p", {}, `95 %: ${show(q.interval95_low, role)} to ${withUnit(q.interval95_high, role)}`));
  };
  const reset = target.reset_after_overshoot && Object.values(target.reset_after_overshoot)[0];
  return make("div", {},
    make("p", {}, "Setting for " + withUnit(target.stress_pa, "stress", 1) + ":"),
    make("div", { class: "aims" },
      one("rising", "\u2191 Approach from below", "Stop on the number; never come back down to it."),
      one("falling", "\u2193 Approach from above", "Only after a rise well past the target, within the limit.")),
    reset?.value != null && make("p", { class: "note" }, `Gone past it going up? Drop to ${withUnit(reset.value, role)}, then come up again.`),
    make("p", {}, make("strong", {}, "Friction: "), f.grade_says || f.grade));
}
