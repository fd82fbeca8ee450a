// Tones and speech. A browser stays mute until it is touched.
import { state } from "./store.js";

let audio = null;

export function unlock() {
  if (!audio && window.AudioContext) audio = new AudioContext();
  if (audio && audio.state === "suspended") audio.resume();
}

export const awake = () => audio !== null && audio.state === "running";

// beep plays one tone: Hz, start and length in s, loudness, shape of the wave.
function beep(hz, at, length, loud = 0.3, shape = "sine") {
  if (!awake() || !state.sound) return;
  const t = audio.currentTime + at, tone = audio.createOscillator(), level = audio.createGain();
  tone.type = shape;
  tone.frequency.value = hz;
  level.gain.setValueAtTime(0, t);
  level.gain.linearRampToValueAtTime(loud, t + 0.01);
  level.gain.setValueAtTime(loud, t + length - 0.02);
  level.gain.linearRampToValueAtTime(0, t + length);
  tone.connect(level).connect(audio.destination);
  tone.start(t);
  tone.stop(t + length);
}

export const tooFast = () => { beep(1400, 0, 0.08); beep(1400, 0.14, 0.08); };
export const tooSlow = () => beep(330, 0, 0.25);
export const target = () => { beep(523, 0, 0.18); beep(659, 0.2, 0.18); beep(784, 0.4, 0.4); };
export const pressed = () => beep(900, 0, 0.05, 0.2);
export const away = () => { beep(440, 0, 0.3); beep(330, 0.35, 0.5); };

// stop is one round of the alarm, 0.9 s: two harsh tones that nothing else has.
export function stop() {
  for (const at of [0, 0.45]) {
    beep(960, at, 0.22, 0.9, "square");
    beep(1340, at + 0.22, 0.22, 0.9, "square");
  }
}

let spoken = "";

// speak says a sentence where the browser can, and drops what it was saying.
export function speak(text, again = false) {
  if (!state.sound || !("speechSynthesis" in window) || (text === spoken && !again)) return;
  spoken = text;
  speechSynthesis.cancel();
  const say = new SpeechSynthesisUtterance(text);
  say.lang = "en";
  say.rate = 0.95;
  speechSynthesis.speak(say);
}
