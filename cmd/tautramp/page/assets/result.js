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
  const checks = state.desk.papers.filter((p) => p.kind === "verify" && p.of === papers.seal), proof = checks[checks.length - 1];
  const faces = state.desk.papers.filter((p) => p.kind === "face" && p.of === papers.seal);
  const sheet = `/papers/${id}/sheet?units=${system()}`;
  fill(box,
    make("h1", {}, figures ? `${figures.setup.tensioner} with ${figures.setup.band}` : papers.name),
    figures && make("p", {}, papers.name),
    papers.alarm && make("p", { class: "note bad" }, "An alarm was raised: " + papers.alarm),
    papers.verdict && make("div", { class: "aim" }, make("p", { class: "big word" }, papers.verdict), make("p", {}, papers.says.replaceAll("+/-", "\u00b1"))),
    fault && !papers.verdict && make("p", { class: "note bad", role: "alert" }, "No result: " + (state.desk.fault || fault)),
    figures && numbers(figures),
    figures && causes(figures.findings),
    figures && papers.kind !== "face" && make("div", { class: "after" },
      make("h2", {}, "What is left to do"),
      make("ol", {},
        make("li", {}, faces.length ? make("a", { href: "#result/" + faces[0].id }, "The other face is measured.") : "Curl of the band reverses with the face: measure the other one too, else the card says that one face was measured. ",
          !faces.length && make("button", { type: "button", onclick: () => go("face") }, "Measure the other face")),
        make("li", {}, proof ? `Checked once: ${proof.verdict}; ${proof.says.replaceAll("+/-", "\u00b1")}. ` : "Set to the number once, from below, and read: outside its interval there is no card. ",
          make("button", { type: "button", id: "verify", onclick: () => go("verify") }, proof ? "Check again" : "Check the number once")),
        make("li", {}, make("a", { class: "button", id: "to-card", href: `#card/${id}` }, "The card for the mill")))),
    make("p", { class: "row" }, (figures || papers.kind === "bench") && make("a", { class: "button", href: sheet, target: "_blank", rel: "noopener" }, "Report to print"), make("a", { href: "#home" }, "Back to the beginning")),
    (figures || papers.kind === "bench") && make("iframe", { class: "sheet", src: sheet, title: "the report" }));

  function go(kind) {
    again(kind, papers, figures.setup);
    location.hash = "before";
  }
}

// causes are the findings, the gravest first, each with what to do.
function causes(found) {
  if (!found?.looked) return null;
  if (!found.found.length) return make("p", {}, make("strong", {}, "Findings: "), "nothing stands out.");
  return make("div", { class: "after" }, make("h2", {}, "Findings"), make("ul", {}, found.found.map((f) => make("li", {},
    make("strong", {}, f.name), f.certainty_word && ` (${f.certainty_word})`, f.next && `: ${f.next}`))));
}

// card asks what the card needs, and shows it.
export async function card(box, [id]) {
  const papers = state.desk?.papers.find((p) => p.id === id);
  if (!papers) {
    location.hash = "home";
    return;
  }
  const checks = state.desk.papers.filter((p) => p.kind === "verify" && p.of === papers.seal), proof = checks[checks.length - 1];
  const figures = await get(`/papers/${id}/figures`), view = await get("/mill").catch(() => ({ tables: {} }));
  const others = (view.tables.band || []).map((b) => b.name).filter((n) => n && n !== figures.setup.band);
  const says = make("p", { role: "alert" }), place = make("div", {});
  const radio = (name, value, text, checked) => make("label", { class: "check" }, make("input", { type: "radio", name, value, checked }), make("span", {}, text));
  const tick = (name, value, text) => make("label", { class: "check" }, make("input", { type: "checkbox", name, value }), make("span", {}, text));
  const form = make("form", { onsubmit: (e) => { e.preventDefault(); print(new FormData(e.target)); } },
    make("fieldset", { class: "checks" }, make("legend", {}, "Approach"), radio("from", "below", "from below: come up and stop on the number", true), radio("from", "above", "from above: only after a rise past a printed amount")),
    figures.setup.set_by === "pressure" && make("fieldset", { class: "checks" }, make("legend", {}, "While the mill runs, the pressure is"),
      radio("hold", "maintained", "maintained by pump or accumulator", figures.setup.hold === "maintained"), radio("hold", "locked", "locked in by a valve", figures.setup.hold === "locked")),
    others.length > 0 && make("fieldset", { class: "checks" }, make("legend", {}, "Further bands, worked out from this one"), others.map((n) => tick("band", n, n)),
      tick("same", "yes", "With them the same weight is moved, and the wheel stands where it stood.")),
    make("p", {}, make("button", { class: "main", type: "submit", id: "print-card", disabled: !proof || !proof.rigOff }, "Make the card")));
  fill(box, make("h1", {}, "The card"),
    !proof && make("p", { class: "note bad" }, "No card yet: check the number once. ", make("a", { href: "#result/" + id }, "Back to the result")),
    proof && make("p", { class: "note" }, `Checked: ${proof.verdict}; ${proof.says.replaceAll("+/-", "\u00b1")}.`),
    proof && !proof.rigOff && make("p", { class: "note bad" }, "No card yet: nobody has confirmed that the rig is off the band."),
    form, says, place);

  async function print(asked) {
    const query = new URLSearchParams(asked);
    query.set("proof", proof.id);
    query.set("units", system());
    const address = `/papers/${id}/card?${query}`, answer = await fetch(address);
    if (!answer.ok) {
      says.textContent = (await answer.text()).trim();
      fill(place);
      return;
    }
    says.textContent = "";
    fill(place, make("p", {}, make("a", { class: "button", id: "open-card", href: address, target: "_blank", rel: "noopener" }, "Open the card to print")), make("iframe", { class: "sheet card", id: "card-frame", src: address, title: "the card" }));
    place.scrollIntoView();
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
