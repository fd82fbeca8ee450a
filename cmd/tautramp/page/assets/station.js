// A bench test while it happens: where to go, what became of the last press.
import { state, byId, on, send } from "./store.js";
import { inUnit } from "./units.js";
import * as sound from "./sound.js";
import { makeSwitch } from "./switch.js";

let spoken = "", answered = "";

export const here = () => state.desk?.run?.kind === "bench";

export function start() {
  spoken = answered = "";
  byId("benchSaid").textContent = "";
}

export function refresh() {
  const now = state.now;
  if (!now?.bench || byId("station").hidden) return;
  const u = now.unit, stale = Boolean(state.away);
  const next = stale ? "hold: these figures are old" : now.next;
  if (byId("benchNext").textContent !== next) byId("benchNext").textContent = next;
  byId("station").classList.toggle("old", stale);
  byId("benchUnit").textContent = u.name;
  byId("benchNow").textContent = stale ? "--" : inUnit(now.now, u);
  byId("benchShows").textContent = now.tested == null ? "" : `tested instrument shows ${inUnit(now.tested, u)}`;
  const go = !stale && now.go != null && now.now != null ? now.go - now.now : null;
  byId("benchGo").dataset.way = go == null ? "" : go > 0 ? "\u2191" : "\u2193";
  byId("benchGo").textContent = go == null ? (now.wait > 0 ? "wait" : "--") : Math.abs(go) / u.si >= 10 ? Math.round(Math.abs(go) / u.si) : inUnit(Math.abs(go), u);
  byId("benchGoName").textContent = now.back ? "Go back first" : "To go";
  byId("benchGoal").textContent = now.target && now.way ? `${now.way} to ${now.target}` : now.step;
  byId("benchWait").textContent = now.wait > 0 ? `hold ${Math.ceil(now.wait)} s` : now.step === "point" ? "at rest" : "";
  byId("benchTaken").textContent = `${now.taken}/${now.planned}`;
  byId("benchSeries").textContent = now.series || "";
  byId("benchStep").textContent = now.step === "exercise" ? `exercise ${now.cycle} of ${now.cycles}` : now.step;
  const facts = [];
  (now.link || []).forEach((l, i) => { if (l) facts.push(`board ${i + 1} ${l}`); });
  facts.push(`${now.lost} lines lost`);
  if (!sound.awake()) facts.push("mute until you touch the page");
  byId("benchFacts").replaceChildren(...facts.map((text) => Object.assign(document.createElement("li"), { textContent: text })));
}

on("now", () => {
  const now = state.now;
  if (!here() || !now?.bench) return;
  refresh();
  if (now.answer && now.answer !== answered) {
    answered = now.answer;
    const said = byId("benchSaid");
    said.textContent = (now.refused ? "Not taken: " : "") + now.answer;
    said.classList.toggle("bad", now.refused);
    if (now.refused) sound.tooSlow();
    else sound.pressed();
    if (now.refused) sound.speak("Not taken. " + now.answer);
  }
  if (now.next !== spoken) {
    spoken = now.next;
    if (!now.alarm && !now.refused) sound.speak(now.next);
  }
});
on("look", refresh);
on("away", refresh);

const deed = (name) => send("/do", { deed: name, text: "" }).catch((e) => { byId("benchSaid").textContent = e.message; });

makeSwitch(byId("benchBig"), { short: () => here() && deed("mark"), undo: () => deed("undo"), abort: () => {} });
byId("benchUndo").addEventListener("click", () => deed("undo"));
byId("benchEnd").addEventListener("click", () => { if (confirm("End this test? What was recorded is kept.")) deed("end"); });
