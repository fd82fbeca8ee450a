// What must be so before anybody pumps, and which boards read it. What is
// confirmed goes into the recording, and so does what is not.
import { make, get, send, byId, fill } from "./store.js";
import { portList } from "./boards.js";
import { drawing } from "./drawings.js";

const job = { kind: "ramps", continues: "", tensioner: "", band: "", confirmed: [], face: "outer", vent: "vent", presses: {} };

// again sets up an order that goes on from a recording.
export function again(kind, papers, setup) {
  job.tensioner = setup.tensioner;
  job.band = setup.band;
  job.kind = kind;
  job.continues = papers.id;
  if (kind === "face") job.face = job.face === "outer" ? "inner" : "outer";
}

const always = [
  ["lock", "Drive and both wheels are locked out by the site's procedure, and tried. The tensioner's own pump may need power meanwhile: the site's procedure says how."],
  ["energy", "Stored energy is known and relieved or restrained: springs, weights, air, oil. It is checked again whenever it can build up."],
  ["plane", "Nobody stands in the plane of the band. Gloves and eye protection are on."],
  ["band", "The band is sound: a cracked or suspect band is not a test band."],
];
const oil = [
  ["tee", "The pressure transducer sits on the cylinder side of every valve (its tee is between valve and cylinder)."],
  ["air", "The oil is bled of air."],
];
const rig = [
  ["place", "The rig sits at mid net width, on a straight span, well away from weld, guides and wheels, its feet on clean steel. Tapped, it does not move."],
];

export async function before(box) {
  const view = await get("/mill").catch((e) => ({ error: e.message }));
  const tensioners = view.tables?.tensioner || [], bands = view.tables?.band || [];
  if (!view.exists || view.faults.length || !tensioners.length) {
    fill(box, make("h1", {}, "First, the mill"), make("p", {}, "Nothing is written down of the mill yet, or something in it is wrong."),
      make("p", {}, make("a", { class: "button", href: "#mill" }, "Write down the mill")));
    return;
  }
  job.tensioner ||= tensioners[0].name;
  job.band ||= bands[0].name;
  const measures = make("div", { class: "measures" });
  const list = make("div", {});
  const what = { ramps: "Before you measure", face: "The other face of the band", verify: "Check the number on the card" }[job.kind];
  fill(box,
    make("h1", {}, what),
    make("div", { class: "pick" }, choice("Tensioner", "tensioner", tensioners), choice("Band", "band", bands)),
    measures, list);
  refill();

  function choice(label, key, items) {
    const select = make("select", { id: "pick-" + key, onchange: (e) => { job[key] = e.target.value; refill(); } },
      items.map((i) => make("option", { value: i.name, selected: i.name === job[key] }, i.name)));
    return make("label", {}, label, select);
  }

  function refill() {
    const t = tensioners.find((x) => x.name === job.tensioner) || tensioners[0], b = bands.find((x) => x.name === job.band) || bands[0];
    const bySet = (t.set_by || "pressure") === "pressure";
    const checks = [...always, ...(bySet ? oil : []), ...rig, ["inputs", `These measures are the band's own: ${b.thickness} thick, ${b.net_width} from the back to the gullet bottom (not to the tooth tip), ${view.tables.rig?.gauge_length} between the knife edges.`]];
    measures.replaceChildren(drawing("width"), drawing("gauge"), make("ul", {}, view.cautions.map((c) => make("li", { class: "doubt" }, c))));
    list.replaceChildren(
      make("fieldset", { class: "checks" }, make("legend", {}, "It is so"), checks.map(([id, text]) => tick(id, text))),
      make("fieldset", { class: "checks" }, make("legend", {}, "Face of the band under the rig"), radio("face", "outer", "outer face"), radio("face", "inner", "inner face")),
      make("fieldset", { class: "checks" }, make("legend", {}, bySet ? "Zero of the pressure transducer" : "Zero of the setting's sensor"),
        radio("vent", "vent", bySet ? "I close it off and vent it before the first ramp; the page asks." : "I take the load off it before the first ramp; the page asks."),
        radio("vent", "unknown", "That cannot be done: its zero is not known, and the report says so.")),
      make("p", {}, make("button", { class: "main", type: "button", id: "onward", onclick: onward }, "Go on to the boards")),
      make("p", { role: "alert", id: "hold-up" }));
    function onward() {
      const open = checks.filter(([id]) => !byId("check-" + id).checked);
      const must = open.filter(([id]) => id === "lock" || id === "energy" || id === "plane");
      if (must.length) {
        byId("hold-up").textContent = "Lock-out, stored energy and the plane of the band must be settled first.";
        byId("check-" + must[0][0]).focus();
        return;
      }
      job.confirmed = [
        ...checks.map(([id, text]) => (byId("check-" + id).checked ? "" : "not confirmed: ") + text),
        "face of the band: " + job.face,
        ...(job.vent === "unknown" ? ["not confirmed: zero of the setting's sensor; it could not be vented"] : []),
      ];
      location.hash = "boards";
    }
  }
}

const ticked = new Set();

function tick(id, text) {
  return make("label", { class: "check" }, make("input", { type: "checkbox", id: "check-" + id, checked: ticked.has(id), onchange: (e) => (e.target.checked ? ticked.add(id) : ticked.delete(id)) }), make("span", {}, text));
}

function radio(key, value, text) {
  return make("label", { class: "check" }, make("input", { type: "radio", name: key, value, checked: job[key] === value, onchange: () => (job[key] = value) }), make("span", {}, text));
}

export async function boards(box) {
  if (!job.confirmed.length) {
    location.hash = "before";
    return;
  }
  const says = make("p", { role: "alert" }), ports = portList();
  const plan = job.kind === "ramps" ? [1, 3] : job.kind === "face" ? [0, 1] : [0, 0];
  const number = (id, label, value, about) => make("label", {}, label, make("input", { type: "number", id, min: 0, max: 50, value, inputmode: "numeric" }), make("small", {}, about));
  const press = (key, label, about, example) => make("label", {}, label, make("input", { type: "text", id: "press-" + key, value: job.presses[key] || "", placeholder: example && "such as " + example, autocomplete: "off", oninput: (e) => (job.presses[key] = e.target.value.trim()) }), make("small", {}, about));
  fill(box,
    make("h1", {}, "Find the boards"),
    make("p", {}, "One board with both sensors, or one each. Plug them in; what is found stands here."),
    ports.list, ports.other,
    make("p", {}, make("button", { type: "button", onclick: ports.look }, "Look again")),
    job.kind === "ramps" && make("div", { class: "pick" },
      number("exercise", "Exercise cycles", plan[0], "first, to half of the target; never fitted"),
      number("ramps", "Ramps", plan[1], "three show how well a setting repeats")),
    make("details", { open: Object.values(job.presses).some(Boolean) }, make("summary", {}, "What a press stands for, if it is more than a mark"),
      make("div", { class: "pick" },
        press("dial", "Marks of the mill's own gauge", "with the transducer on: a press each time the pointer stands on the next", "600 psi, 700 psi, 800 psi"),
        press("step", "No sensor reads the setting: size of a step", "hold still, press, go on", "1/4 turn, or 2 lbf ft"),
        press("top", "Highest step", "from there the steps lead down again", "16 lbf ft"),
        press("doubt", "Doubt about a step", "left out: a twentieth of one", ""))),
    make("p", { class: "note" }, "Let the band go slack now, and keep still until the page says to pump."),
    make("p", {}, make("button", { class: "main", type: "button", id: "start", onclick: begin }, "Start")),
    says);
  await ports.look();

  async function begin() {
    says.textContent = "";
    const value = (id, otherwise) => (byId(id) ? Number(byId(id).value) : otherwise);
    try {
      await send("/start", { kind: job.kind, tensioner: job.tensioner, band: job.band, ports: ports.chosen(), exercise: value("exercise", plan[0]),
        ramps: value("ramps", plan[1]), vent: job.vent === "vent", continues: job.continues, confirmed: job.confirmed, bench: {}, presses: job.presses });
      job.kind = "ramps";
      job.continues = "";
    } catch (e) {
      says.textContent = e.message;
    }
  }
}
