// The guided ramp.
import { state, byId, on, send } from "./store.js";
import { label, show, stressStep, withUnit } from "./units.js";
import * as loop from "./loop.js";
import * as sound from "./sound.js";
import { makeSwitch } from "./switch.js";
import { alarmOn, check } from "./alarm.js";

const nextSlack = "let the band go slack and keep still";
const settingNames = { pressure: "Gauge now", torque: "Torque now", turns: "Turns now", spring: "Spring now" };

let spokenNext = "", checkedFor = 0, seenFlash = 0, lastReply = -1, ownPress = 0, beeped = 0, vented = false;

export const here = () => Boolean(state.desk?.run) && state.desk.run.kind !== "bench";

function figures(now, run) {
  const stale = Boolean(state.away);
  byId("ramp").classList.toggle("old", stale);
  byId("settingName").textContent = run.shorter ? "Spring shorter by" : settingNames[run.role] || "Setting now";
  put("setting", stale ? null : now.setting, run.role, 1);
  put("stress", stale ? null : now.stress, "stress", stressStep());
  const known = now.setting != null && !stale, up = known && now.goal != null, down = known && now.low != null;
  byId("togo").dataset.way = up ? "\u2191" : down ? "\u2193" : "";
  put("togo", up ? Math.max(0, now.goal - now.setting) : down ? Math.max(0, now.setting - now.low) : null, run.role, 1);
  const word = !stale && !up && !down && { hold: "hold", rest: "rest" }[now.phase];
  if (word) byId("togo").textContent = word;
  byId("togoName").textContent = up ? "To go, up" : down ? "To go, down" : "To go";
  byId("limit").textContent = "limit " + withUnit(run.limit, run.role);
  byId("target").textContent = run.target ? "target " + withUnit(run.target, "stress", stressStep()) : "no target";
  byId("goal").textContent = up ? "to " + withUnit(now.goal, run.role) : down ? "down, until slack" : "";
}

const downward = (now) => now.low != null;

function put(id, si, role, coarser) {
  byId(id).textContent = show(si, role, coarser);
  byId(id + "Unit").textContent = label(role);
}

function pace(now) {
  const bubble = byId("bubble"), word = state.away ? "" : now.paceWord;
  bubble.dataset.pace = word;
  if (word) {
    // Two thirds of the tube on a scale by ratio, with the bounds a third from either end.
    const span = Math.log(now.fast / now.slow), at = Math.log(Math.max(Math.abs(now.pace), 1e-9) / now.slow) / span;
    bubble.setAttribute("transform", `translate(${Math.min(560, Math.max(40, 200 + 200 * at))} 23)`);
  }
  for (const [id, w] of [["wordSlow", "slow"], ["wordGood", "good"], ["wordFast", "too fast"]]) byId(id).setAttribute("class", w === word ? "on" : "");
  const says = { slow: "too slow", good: "good", "too fast": "too fast" }[word] || "standing still";
  byId("level").setAttribute("aria-label", "pace: " + says);
}

function facts(now, run) {
  const list = [], ill = (text) => list.push([text, true]), well = (text) => list.push([text, false]);
  const cycle = `cycle ${now.cycle}` + (now.planned ? ` of ${now.planned}` : "") + (now.exercise ? ", exercise" : "");
  well(cycle);
  if (now.phase) well(now.phase);
  (now.link || []).forEach((link, i) => { if (link) ill(`board ${i + 1} ${link}`); });
  if (!(now.link || []).some(Boolean)) well("boards and clocks in step");
  (now.lost || now.refused ? ill : well)(`${now.lost} lines lost` + (now.refused ? `, ${now.refused} refused` : ""));
  if (!sound.awake()) ill("mute until you touch the page");
  else if (!state.sound) ill("sound is off");
  const ul = byId("facts"), key = JSON.stringify(list);
  if (ul.dataset.key === key) return;
  ul.dataset.key = key;
  ul.replaceChildren(...list.map(([text, bad]) => {
    const li = document.createElement("li");
    li.textContent = text;
    if (bad) li.className = "ill";
    return li;
  }));
}

// asks is what the one button is for now.
function asks(now, run) {
  if (now.setting == null) return { word: "Mark", says: "hold 1.5 s: undo \u00b7 4 s: abort", act: () => deed("mark") };
  if (run.kind === "verify" && now.resting && now.cycle > 1) {
    return { word: "The rig is off the band", says: "release all, take the rig off, then press: the check ends", ask: true, act: async () => { await deed("confirm", "rig removed"); deed("end"); } };
  }
  if (now.done) return { word: "The visit ends", says: "wait for the result", act: () => {} };
  if (seenFlash && performance.now() - seenFlash < 60000) {
    return { word: "Seen and heard", says: "press only if both are true, with ear muffs on", ask: true, act: () => {
      seenFlash = 0;
      checkedFor = now.cycle;
      deed("confirm", `alarm seen and heard before cycle ${now.cycle}`);
    } };
  }
  if (run.vent && !vented && atRest(now) && now.cycle === 1) {
    return { word: run.screw ? "Load is off the sensor" : "Transducer is vented", says: "closed off, and open to the air: takes its zero", ask: true, act: () => { vented = true; deed("vent"); } };
  }
  if (atRest(now) && now.next === nextSlack) return { word: "Band is slack now", says: "takes the zero of the stretch; it is found by itself too", ask: true, act: () => deed("slack") };
  if (atRest(now) && checkedFor !== now.cycle && !now.alarm) {
    return { word: "Check light and sound", says: `before ${now.exercise ? "the exercise cycle" : "this ramp"}: put your ear muffs on`, ask: true, act: flash };
  }
  if (run.screw && downward(now)) return { word: "Lower turn here", says: "closes the cycle where the screw stays under load", act: () => deed("turn") };
  return { word: { step: "Step reached", dial: "Pointer on the mark" }[run.press] || "Mark", says: "hold 1.5 s: undo \u00b7 4 s: abort", act: () => deed("mark") };
}

const atRest = (now) => now.resting;

function flash() {
  seenFlash = performance.now();
  send("/do", { deed: "bell" }).catch(() => {});
  check();
  refresh();
}

export async function deed(name, text = "") {
  ownPress = performance.now();
  sound.pressed();
  try {
    await send("/do", { deed: name, text });
  } catch (e) {
    byId("said").textContent = e.message;
  }
}

function buttons(now, run) {
  const a = asks(now, run), big = byId("big");
  if (byId("bigWord").textContent !== a.word) byId("bigWord").textContent = a.word;
  if (byId("bigSays").textContent !== a.says) byId("bigSays").textContent = a.says;
  big.dataset.asks = a.ask ? "yes" : "no";
}

// reply says what became of a press, also of one on the board's own switch.
function reply(now) {
  if (now.replyAt === lastReply) return;
  const first = lastReply < 0;
  lastReply = now.replyAt;
  if (now.reply === "vented zero noted") vented = true;
  if (!now.reply || first || (now.reply === "noted" && performance.now() - ownPress > 1500)) return;
  const text = now.reply === "mark taken" ? `mark ${now.marks} taken` : now.reply;
  byId("said").textContent = `${text}, at ${withUnit(now.setting, state.desk.run.role)}`;
  const a = asks(now, state.desk.run);
  if (now.reply === "mark taken" && a.ask && performance.now() - ownPress > 1000) a.act(); // the switch on the board
}

function voices(now) {
  if (now.next !== spokenNext) {
    if (now.next === "hold" || now.next.startsWith("all planned")) sound.target();
    spokenNext = now.next;
    if (!now.alarm) sound.speak(now.next);
  }
  const t = performance.now();
  if (now.alarm || state.away) return;
  if (now.paceWord === "too fast" && t - beeped > 1300) { beeped = t; sound.tooFast(); }
  if (now.paceWord === "slow" && t - beeped > 3500) { beeped = t; sound.tooSlow(); }
}

export function refresh() {
  const now = state.now, run = state.desk?.run;
  if (!now || !run || byId("ramp").hidden) return;
  const next = state.away ? "hold: these figures are old" : now.next;
  if (byId("next").textContent !== next) byId("next").textContent = next;
  figures(now, run);
  pace(now);
  facts(now, run);
  buttons(now, run);
  byId("slack").hidden = !atRest(now);
  loop.draw();
}

on("now", () => {
  if (!here() || !state.now) return;
  loop.add(state.now);
  refresh();
  reply(state.now);
  voices(state.now);
});
on("look", refresh);
on("away", () => {
  if (state.away && here()) sound.away();
  if (!state.away) loop.fetchTrail();
  refresh();
});

// start is a new visit: nothing of the last one holds.
export function start() {
  spokenNext = ""; checkedFor = 0; seenFlash = 0; lastReply = -1; vented = false;
  state.now = null;
  byId("said").textContent = "";
  byId("next").textContent = "wait for the boards";
  loop.clear();
  loop.fetchTrail();
  wake();
}

// wake asks that the screen stays on, where the browser lets a page ask.
async function wake() {
  try {
    await navigator.wakeLock?.request("screen");
  } catch { /* phones on plain HTTP refuse: the check before each ramp says to look */ }
}
document.addEventListener("visibilitychange", () => { if (here() && document.visibilityState === "visible") wake(); });

makeSwitch(byId("big"), {
  short: () => { if (state.now && here() && !alarmOn()) asks(state.now, state.desk.run).act(); refresh(); },
  undo: () => deed("undo"),
  abort: () => deed("abort", "held switch on the page"),
});
byId("undo").addEventListener("click", () => deed("undo"));
byId("slack").addEventListener("click", () => deed("slack"));
byId("abort").addEventListener("click", () => deed("abort", "button on the page"));
byId("end").addEventListener("click", () => {
  if (confirm("End this visit? What was recorded is kept.")) deed("end");
});
