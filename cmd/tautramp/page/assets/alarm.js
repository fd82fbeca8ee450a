// The alarm: a shape that fills the screen, a tone, and words. Ear muffs are
// assumed: it must be enough to look.
import { state, byId, on } from "./store.js";
import { inUnit, label, show, withUnit } from "./units.js";
import * as sound from "./sound.js";

const box = byId("alarm");
let ringing = 0, before = null, checking = false;

const shapes = { limit: "LIMIT", "under-reading": "STOP", abort: "ABORT", "no reading": "BLIND" };

export const alarmOn = () => Boolean(state.now?.alarm);

function update() {
  const now = state.now, run = state.desk?.run;
  if (!now?.alarm || !run) {
    if (!checking) hide();
    return;
  }
  checking = false;
  const [word, what] = now.bench ? ["STOP", "let it down slowly"] : now.next.split(" - ");
  byId("alarmShape").textContent = shapes[now.alarm] || "STOP";
  byId("alarmWord").textContent = word;
  byId("alarmDo").textContent = what || "release slowly";
  byId("alarmNow").textContent = now.bench ? inUnit(now.now, now.unit) : show(now.setting, run.role);
  byId("alarmLimit").textContent = now.bench ? `${now.unit.name} now` : `${label(run.role)} now; limit ${withUnit(run.limit, run.role)}`;
  byId("alarmSays").textContent = now.alarmText;
  if (box.hidden || box.classList.contains("trial")) {
    open(false);
    sound.speak(`Stop. ${what || "Release slowly"}.`, true);
  }
}

function open(check) {
  box.classList.toggle("trial", check);
  if (box.hidden) before = document.activeElement;
  box.hidden = false;
  box.focus();
  ring();
}

function ring() {
  clearInterval(ringing);
  sound.stop();
  ringing = setInterval(sound.stop, 1000);
}

function hide() {
  if (box.hidden) return;
  clearInterval(ringing);
  box.hidden = true;
  if (before && before.isConnected) before.focus();
}

// check shows and sounds what an alarm is like, for a moment.
export function check() {
  if (alarmOn()) return;
  checking = true;
  byId("alarmShape").textContent = "CHECK";
  byId("alarmWord").textContent = "This is what STOP looks like";
  byId("alarmDo").textContent = "With ear muffs on, where you pump: do you see it, and hear it?";
  byId("alarmNow").textContent = "";
  byId("alarmLimit").textContent = "";
  byId("alarmSays").textContent = "The computer sounds its bell too.";
  open(true);
  setTimeout(() => {
    if (!checking) return;
    checking = false;
    hide();
    update();
  }, 1600);
}

on("now", update);
on("desk", update);
