// Where everything begins.
import { state, make, fill } from "./store.js";
import { upload } from "./open.js";

export function home(box) {
  const desk = state.desk;
  if (!desk) {
    fill(box, make("h1", {}, "Looking for the program"));
    return;
  }
  if (desk.oneVisit) {
    fill(box, make("h1", {}, "The capture has ended"), make("p", {}, "Its result stands where it was started, and in the files that were asked for."));
    return;
  }
  const kinds = { ramps: "ramps", face: "other face", verify: "check of the number", bench: "bench test", opened: "opened" };
  const says = make("p", { role: "status" });
  const file = make("input", { type: "file", accept: ".ramp", id: "file", onchange: (e) => upload(e.target.files[0], says) });
  fill(box,
    make("h1", {}, "What does the setting do to the band?"),
    desk.fault && make("p", { class: "note bad", role: "alert" }, desk.fault),
    make("ol", { class: "ways" },
      way("#mill", "1", "The mill", "Its tensioners and bands, and the measuring rig. Once for each mill."),
      way("#before", "2", "Measure", "Lock-out, boards, exercise cycle, ramps. About half an hour."),
      way("#bench", "3", "Test an instrument", "A dial, a transducer, an indicator or the whole rig, against a reference on the bench."),
      make("li", {}, make("label", { class: "way", for: "file" }, make("b", {}, "4"), make("span", {}, make("strong", {}, "Open a recording"), "A .ramp file of another day.", file, says))),
    ),
    desk.papers.length > 0 && make("h2", {}, "Recordings at hand"),
    desk.papers.length > 0 && make("ul", { class: "papers" }, desk.papers.map((p) => make("li", {}, make("a", { href: "#result/" + p.id, "data-kind": p.kind }, p.name), ` (${kinds[p.kind] || p.kind})`, p.verdict && `: ${p.verdict}`, p.alarm ? make("strong", {}, " alarm raised") : null))),
  );
}

function way(href, number, title, about) {
  return make("li", {}, make("a", { class: "way", href }, make("b", {}, number), make("span", {}, make("strong", {}, title), about)));
}
