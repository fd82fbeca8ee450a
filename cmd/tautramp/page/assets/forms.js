// The mill, written down: one form each for mill, tensioner, band, rig and
// instruments. The program checks every entry; what it says stands at its field.
import { make, get, send, byId, fill } from "./store.js";
import { drawing } from "./drawings.js";

// A field: key, label, what it is, example, and more. number: written without a unit.
const tables = {
  mill: { title: "Mill", one: true, fields: [
    ["name", "Name of the mill", "as it shall stand on the report", ""],
    ["serviced_by", "Who measures", "may be left out", ""],
  ] },
  tensioner: { title: "Tensioner", fields: [
    ["name", "Name", "as on its plate or card", "T-1"],
    ["set_by", "Set by", "what the operator reads", "pressure", { words: ["pressure", "torque", "turns", "spring"] }],
    ["setting_limit", "Limit of the setting", "never to be passed: the maker's limit, or lower. Nothing is measured without it.", "950 psi"],
    ["cylinders", "Cylinders", "how many lift the wheel together", "2", { number: true, only: "pressure" }],
    ["bore", "Bore", "inside diameter of one cylinder", "2.5 in", { draw: "bore", only: "pressure" }],
    ["travel_ratio", "Travel ratio", "cylinder travel / wheel travel; 1 where the cylinders lift the wheel itself", "1", { number: true, only: "pressure", more: true }],
    ["lifted_weight", "Lifted weight", "of wheel, shaft and slide; may be left out", "820 lbf", { only: "pressure", draw: "spans", more: true }],
    ["screw.diameter", "Screw: diameter", "outside its thread", "24 mm", { only: "torque" }],
    ["screw.lead", "Screw: lead", "how far one full turn moves it", "5 mm", { only: "torque" }],
    ["screw.collar_radius", "Screw: collar radius", "mean radius of the washer that the nut turns on", "14 mm", { only: "torque", more: true }],
    ["turns.lead", "Lead", "how far one full turn moves the screw", "5 mm", { only: "turns" }],
    ["spring.under_load", "Under load the spring gets", "pressed together: shorter; drawn apart: longer", "", { words: ["", "shorter", "longer"], only: "spring" }],
    ["spring.free_length", "Spring: free length", "with the wheel let down", "80 mm", { only: "spring" }],
    ["spring.rate", "Spring: rate", "of one spring; may be left out", "1.2 kN/mm", { only: "spring", more: true }],
    ["hold", "While the mill runs, the oil is", "maintained: pump or accumulator keeps the pressure up. locked: a valve shuts it in.", "", { words: ["", "maintained", "locked"], only: "pressure" }],
    ["note", "Remark", "for the report", "", { more: true }],
  ] },
  band: { title: "Band", fields: [
    ["name", "Name", "as in the filing room", "QW-6"],
    ["thickness", "Thickness", "measured at three places; write mm as mm: 1.47 mm, not 1.47 in", "0.058 in", { draw: "thick" }],
    ["net_width", "Net width", "from the back to the gullet bottom: the teeth carry nothing", "5.25 in", { draw: "width" }],
    ["gross_width", "Gross width", "from the back to the tooth tip: only a check on the net width", "6.00 in", { draw: "gross" }],
    ["target", "Band stress wanted", "from the maker of the band, or your own practice", "9500 psi"],
    ["modulus", "Stiffness of the steel (Young's modulus)", "29 to 30 Mpsi, 200 to 207 GPa", "29.0 Mpsi"],
    ["modulus_uncertainty", "Doubt about it", "as a part of it; 0.01 is 1 %", "0.01", { number: true, more: true }],
    ["note", "Remark", "for the report", "", { more: true }],
  ] },
  rig: { title: "Measuring rig", one: true, fields: [
    ["gauge_length", "Gauge length", "between the knife edges of the two clamps", "20.00 in", { draw: "gauge" }],
    ["gauge_length_uncertainty", "Doubt about it", "left out: 0.25 % of it", "0.05 in", { more: true }],
    ["material", "Material of the bar", "it should grow with heat as the band does", "steel"],
    ["note", "Remark", "place on the band, for the report", "", { more: true }],
  ] },
  instrument: { title: "Instrument", fields: [
    ["name", "Name", "as it is called in the shop", "pressure transducer"],
    ["serial", "Serial number", "as engraved", ""],
    ["measures", "Measures", "the setting, or the stretch of the band (extension)", "setting", { words: ["setting", "extension", "reference"] }],
    ["limit", "Largest error", "by its certificate or class", "3.75 psi"],
    ["due", "Next check due", "year-month-day", "2027-03-31"],
    ["range_high", "End of the range", "for a bench test", "1000 psi", { more: true }],
    ["division", "Division of its scale", "for a bench test", "20 psi", { more: true }],
  ] },
};

let draft = null, open = "mill", faults = [], cautions = [], said = "";

export async function millForms(box) {
  if (!draft) {
    try {
      const view = await get("/mill");
      draft = view.tables;
      faults = view.faults;
      cautions = view.cautions;
    } catch (e) {
      fill(box, make("p", { class: "note bad", role: "alert" }, e.message));
      return;
    }
    for (const [key, t] of Object.entries(tables)) draft[key] ||= t.one ? {} : [];
    for (const key of ["tensioner", "band"]) if (!draft[key].length) draft[key].push({});
    draft.tensioner[0].set_by ||= "pressure";
  }
  paint(box);
}

function paint(box) {
  fill(box,
    make("h1", {}, "The mill"),
    make("p", {}, "Every measure is a number with its unit: 5.25 in, 5 1/4 in, 133 mm, 950 psi, 65 bar."),
    cautions.length > 0 && make("div", { class: "note" }, make("strong", {}, "Look again:"), make("ul", {}, cautions.map((c) => make("li", {}, c)))),
    make("form", { novalidate: true, onsubmit: (e) => { e.preventDefault(); save(box); } },
      Object.entries(tables).map(([key, t]) => section(box, key, t)),
      make("p", { class: "row" }, make("button", { class: "main", type: "submit", id: "save" }, "Save the mill"), make("a", { class: "button", href: "#before", id: "measure" }, "Measure")),
      make("p", { role: "status", id: "saved" }, said)));
}

function section(box, key, t) {
  const list = t.one ? [draft[key]] : draft[key];
  return make("section", { class: "table" }, make("h2", {}, t.title + (t.one ? "" : "s")),
    list.map((values, i) => entry(box, key, t, values, t.one ? key : `${key}.${i}`, i)),
    !t.one && make("button", { type: "button", onclick: () => { draft[key].push(key === "tensioner" ? { set_by: "pressure" } : key === "instrument" ? { measures: "setting" } : {}); open = `${key}.${draft[key].length - 1}`; paint(box); } }, `Add a${key === "instrument" ? "n" : ""} ${t.title.toLowerCase()}`));
}

function entry(box, key, t, values, path, i) {
  const bad = faults.some((f) => f.path === path || f.path.startsWith(path + "."));
  const fields = t.fields.filter(([, , , , more]) => !more?.only || more.only === values.set_by);
  const own = faults.filter((f) => f.path === path).map((f) => make("p", { class: "fault" }, f.says));
  return make("details", { open: bad || open === path || t.one || !values.name, class: bad ? "bad" : "" },
    make("summary", {}, values.name || (t.one ? t.title : "new " + t.title.toLowerCase())),
    own,
    fields.filter((f) => !f[4]?.more).map((f) => field(box, values, path, f)),
    fields.some((f) => f[4]?.more) && make("details", { class: "more", open: fields.some((f) => f[4]?.more && f[0].split(".").reduce((v, k) => v?.[k], values)) }, make("summary", {}, "more, if it is known"), fields.filter((f) => f[4]?.more).map((f) => field(box, values, path, f))),
    !t.one && draft[key].length > 1 && make("button", { type: "button", class: "minor", onclick: () => { draft[key].splice(i, 1); faults = []; paint(box); } }, `Take ${values.name || "this one"} out`));
}

function field(box, values, path, [key, label, about, example, more = {}]) {
  const id = (path + "." + key).replaceAll(".", "-"), wrong = faults.filter((f) => f.path === path + "." + key || (key.includes(".") && f.path === path + "." + key.split(".")[0]));
  const [table, leaf] = key.includes(".") ? key.split(".") : ["", key];
  const holds = table ? values[table] || {} : values;
  const set = (text) => {
    if (table) values[table] = holds;
    if (text === "") delete holds[leaf];
    else holds[leaf] = more.number && text.trim() !== "" && !Number.isNaN(Number(text)) ? Number(text) : text;
    if (table && !Object.keys(holds).length) delete values[table];
    said = "";
  };
  const common = { id, "aria-describedby": `${id}-about ${id}-fault`, "aria-invalid": wrong.length ? "true" : null };
  const input = more.words
    ? make("select", { ...common, onchange: (e) => { set(e.target.value); if (key === "set_by") paint(box); } }, more.words.map((w) => make("option", { value: w, selected: (holds[leaf] ?? "") === w }, w || "not known")))
    : make("input", { ...common, type: "text", value: holds[leaf] ?? "", placeholder: example && `such as ${example}`, autocomplete: "off", oninput: (e) => set(e.target.value) });
  return make("div", { class: "field" + (more.draw ? " drawn-field" : "") },
    make("label", { for: id }, label), input, more.draw && drawing(more.draw),
    make("p", { class: "about", id: id + "-about" }, about),
    make("p", { class: "fault", id: id + "-fault" }, wrong.map((f) => f.says).join(" ")));
}

// emptied leaves out tables in which nothing is written.
function emptied(t) {
  const out = {};
  for (const [key, v] of Object.entries(t)) {
    if (Array.isArray(v)) {
      const kept = v.filter((e) => typeof e !== "object" || Object.keys(e).length > (key === "instrument" ? 1 : 0));
      if (kept.length) out[key] = kept;
    } else if (Object.keys(v).length) out[key] = v;
  }
  return out;
}

async function save(box) {
  try {
    const view = await send("/mill", emptied(draft));
    faults = view.faults;
    cautions = view.cautions;
    said = view.exists ? "Saved as mill.toml in the program's folder." : "Not saved: mend what is marked.";
    const loose = faults.filter((f) => f.path === "");
    if (loose.length) said += " " + loose.map((f) => f.says).join(" ");
  } catch (e) {
    said = e.message;
  }
  paint(box);
  const wrong = box.querySelector("[aria-invalid=true]");
  if (wrong) wrong.focus();
  else byId("saved").scrollIntoView({ block: "nearest" });
}
