// The line to the program: what is new comes by itself, and after a break it
// is taken up again by itself.
import { state, tell } from "./store.js";

const patience = 2500; // ms without any word before the program counts as away

let heard = 0;
let source = null;

export function listen() {
  source = new EventSource("/live");
  source.addEventListener("desk", (e) => { word(); take("desk", e.data); });
  source.addEventListener("now", (e) => { word(); take("now", e.data); });
  source.addEventListener("beat", word);
  source.addEventListener("error", () => {
    setAway("The program on the computer does not answer.");
    if (source.readyState === EventSource.CLOSED) setTimeout(listen, 1000); // it will not try again by itself
  });
  heard = performance.now();
}

function take(topic, text) {
  state[topic] = JSON.parse(text);
  tell(topic);
}

function word() {
  heard = performance.now();
  setAway("");
}

function setAway(why) {
  if (state.away === why) return;
  state.away = why;
  tell("away");
}

setInterval(() => {
  if (performance.now() - heard > patience) setAway("Nothing comes from the computer any more.");
}, 500);
