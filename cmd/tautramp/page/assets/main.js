// What is shown: one screen at a time, by the address behind #.
import { state, byId, on, tell } from "./store.js";
import { system } from "./units.js";
import { listen } from "./line.js";
import * as sound from "./sound.js";
import * as ramp from "./ramp.js";
import * as station from "./station.js";
import { screens } from "./screens.js";

const names = ["home", "mill", "before", "boards", "ramp", "result", "card", "bench", "station"];

function place() {
  const [name, ...rest] = location.hash.slice(1).split("/");
  return names.includes(name) ? [name, rest] : ["home", []];
}

function go() {
  let [name, rest] = place();
  if (name === "ramp" && state.desk && !ramp.here()) name = "home";
  if (name === "station" && state.desk && !station.here()) name = "home";
  for (const n of names) {
    byId(n).hidden = n !== name;
    if (n !== name && screens[n]) byId(n).replaceChildren(); // it is made afresh when it is shown
  }
  document.body.dataset.screen = name;
  if (name !== "result" && name !== "ramp") byId("rehearsal").hidden = true;
  screens[name]?.(byId(name), rest);
  if (name === "ramp") ramp.refresh();
  if (name === "station") station.refresh();
}

const narrow = matchMedia("(max-width: 640px)");
narrow.addEventListener("change", () => switches());
let running = false, papers = 0;

on("desk", () => {
  const desk = state.desk, run = desk.run;
  byId("where").textContent = run ? [run.mill, run.tensioner, run.band, run.tested].filter(Boolean).join(" \u00b7 ") : "";
  switches();
  if (run && !running) {
    running = true;
    state.now = null;
    if (run.kind === "bench") station.start();
    else ramp.start();
    location.hash = run.kind === "bench" ? "station" : "ramp";
  }
  if (!run && running) {
    running = false;
    const last = desk.papers[desk.papers.length - 1];
    location.hash = desk.papers.length > papers && last ? "result/" + last.id : "home";
  }
  papers = run ? papers : desk.papers.length;
  go();
});

on("away", () => {
  byId("away").textContent = state.away && state.away + (state.desk?.run ? " Stop pumping and hold. The picture comes back by itself." : " It is looked for again and again.");
  byId("away").hidden = !state.away;
});

on("now", () => { if (ramp.here()) byId("rehearsal").hidden = !state.now?.simulated; });

function switches() {
  const si = system() === "si";
  byId("units").textContent = narrow.matches ? (si ? "SI" : "US") : si ? "SI units" : "US units";
  byId("units").setAttribute("aria-label", `${si ? "SI units" : "US units"}; press for ${si ? "US" : "SI"}`);
  byId("sound").textContent = narrow.matches ? (state.sound ? "\u266a" : "mute") : state.sound ? "sound on" : "sound off";
  byId("sound").setAttribute("aria-pressed", String(state.sound));
  const dark = document.documentElement.dataset.light === "dark";
  byId("light").textContent = dark ? "light" : "dark";
  byId("light").setAttribute("aria-label", `change to the ${dark ? "light" : "dark"} page`);
}

byId("units").addEventListener("click", () => {
  state.system = system() === "si" ? "us" : "si";
  localStorage.setItem("units", state.system);
  switches();
  tell("look");
  go();
});
byId("sound").addEventListener("click", () => {
  state.sound = !state.sound;
  localStorage.setItem("sound", state.sound ? "on" : "off");
  switches();
});

function light(which) {
  document.documentElement.dataset.light = which;
  switches();
  tell("look");
}
const dark = matchMedia("(prefers-color-scheme: dark)");
light(localStorage.getItem("light") || (dark.matches ? "dark" : "light"));
dark.addEventListener("change", () => { if (!localStorage.getItem("light")) light(dark.matches ? "dark" : "light"); });
byId("light").addEventListener("click", () => {
  const other = document.documentElement.dataset.light === "dark" ? "light" : "dark";
  localStorage.setItem("light", other);
  light(other);
});

for (const event of ["pointerdown", "keydown"]) document.addEventListener(event, sound.unlock, { capture: true });
window.addEventListener("hashchange", () => { go(); byId("main").focus(); scrollTo(0, 0); });
go();
listen();
