// The list of ports to choose boards from; visit and bench test share it.
import { make, get, fill } from "./store.js";

const chosen = new Set();
let typed = "";

export function portList() {
  const list = make("fieldset", { class: "checks" }, make("legend", {}, "Boards"));
  const other = make("label", { class: "line" }, "Or a name that is not in the list",
    make("input", { type: "text", id: "other-port", value: typed, placeholder: "such as COM5, /dev/ttyUSB0", autocomplete: "off", oninput: (e) => (typed = e.target.value.trim()) }));

  async function look() {
    let ports = [], fault = "";
    try {
      ports = await get("/ports");
    } catch (e) {
      fault = e.message;
    }
    for (const gone of [...chosen].filter((c) => !ports.some((p) => p.path === c))) chosen.delete(gone);
    if (!chosen.size) for (const p of ports) if (p.named || ports.length === 1) chosen.add(p.path);
    fill(list, make("legend", {}, "Boards"),
      ports.map((p) => make("label", { class: "check" },
        make("input", { type: "checkbox", value: p.path, checked: chosen.has(p.path), onchange: (e) => (e.target.checked ? chosen.add(p.path) : chosen.delete(p.path)) }),
        make("span", {}, make("strong", {}, p.path), " " + p.about))),
      !ports.length && make("p", {}, fault || "No serial port is found: plug the board in, and see that its cable carries data."));
  }
  return { list, other, look, chosen: () => [...chosen, ...(typed ? [typed] : [])] };
}
