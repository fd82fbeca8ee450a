// What shall be tested, against what, and by which plan.
import { state, make, get, send, byId, fill } from "./store.js";
import { portList } from "./boards.js";

const wish = { plan: "", tested: "", reference: "", range: "", place: "", by: "", anyway: false };

export async function bench(box) {
  const view = await get("/mill").catch((e) => ({ error: e.message, tables: {} }));
  const instruments = (view.tables.instrument || []).map((i) => i.name).filter(Boolean);
  if (instruments.length < 2) {
    fill(box, make("h1", {}, "Test an instrument"), make("p", {}, "A test needs two instruments written down with the mill: the one to be tested, and a reference."),
      make("p", {}, make("a", { class: "button", href: "#mill" }, "Write them down")));
    return;
  }
  const plans = state.desk?.plans || [];
  wish.plan ||= plans[0]?.name || "";
  wish.tested ||= instruments.find((n) => view.tables.instrument.find((i) => i.name === n).measures !== "reference") || instruments[0];
  wish.reference ||= instruments.find((n) => view.tables.instrument.find((i) => i.name === n).measures === "reference") || instruments[1];
  const says = make("p", { role: "alert" });
  const ports = portList();
  const pick = (key, label, items, about) => make("label", {}, label, make("select", { id: "bench-" + key, onchange: (e) => (wish[key] = e.target.value) },
    items.map(([value, text]) => make("option", { value, selected: value === wish[key] }, text))), about && make("small", {}, about));
  const write = (key, label, about, example) => make("label", {}, label, make("input", { type: "text", id: "bench-" + key, value: wish[key], placeholder: example, autocomplete: "off", oninput: (e) => (wish[key] = e.target.value.trim()) }), make("small", {}, about));
  fill(box,
    make("h1", {}, "Test an instrument"),
    make("p", {}, "On the bench: nothing to type between start and end. Go to each point, hold, press the switch; what is pressed too early or from the wrong side is refused, with what to do."),
    state.desk?.fault && make("p", { class: "note bad", role: "alert" }, state.desk.fault),
    make("div", { class: "pick" },
      pick("plan", "Plan", plans.map((p) => [p.name, p.about || p.name])),
      pick("tested", "Tested", instruments.map((n) => [n, n])),
      pick("reference", "Reference", instruments.map((n) => [n, n]), "its largest error should be a quarter of the limit at most"),
      write("range", "End of the range", "left out: as written down with the instrument", "such as 1000 psi"),
      write("place", "Place", "for the report", ""),
      write("by", "Who tests", "for the report", "")),
    make("label", { class: "check" }, make("input", { type: "checkbox", id: "bench-anyway", checked: wish.anyway, onchange: (e) => (wish.anyway = e.target.checked) }), make("span", {}, "Start although the reference is too poor for the limit: there will be no verdict better than that.")),
    make("p", { class: "note" }, "Never above the end of either instrument. Release the pressure before a joint is opened. Look for leaks with card, never with a hand."),
    ports.list, ports.other,
    make("p", {}, make("button", { type: "button", onclick: ports.look }, "Look again")),
    make("p", {}, make("button", { class: "main", type: "button", id: "bench-start", onclick: begin }, "Start the test")),
    says);
  await ports.look();

  async function begin() {
    says.textContent = "";
    try {
      await send("/start", { kind: "bench", tensioner: "", band: "", ports: ports.chosen(), exercise: 0, ramps: 0, vent: false, continues: "", confirmed: [], bench: { ...wish }, presses: {} });
    } catch (e) {
      says.textContent = e.message;
    }
  }
}
