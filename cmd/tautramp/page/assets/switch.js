// The one switch: big button, space bar, and a foot switch that types a space.
// Short: do what the button says. Long: take the last mark back. Held: abort.

const long = 1500, held = 4000; // ms, as for a switch on the board

export function makeSwitch(button, { short, undo, abort }) {
  let since = 0, timers = [], down = false;

  function press() {
    if (down) return;
    down = true;
    since = performance.now();
    timers = [setTimeout(() => (button.dataset.held = "long"), long), setTimeout(stop, held)];
  }
  function stop() {
    button.dataset.held = "stop";
    down = false;
    abort();
  }
  function release() {
    timers.forEach(clearTimeout);
    delete button.dataset.held;
    if (!down) return;
    down = false;
    if (performance.now() - since >= long) undo();
    else short();
  }
  function leave() { // the finger slid off: nothing was meant
    timers.forEach(clearTimeout);
    delete button.dataset.held;
    down = false;
  }

  button.addEventListener("pointerdown", (e) => { if (e.button === 0) press(); });
  button.addEventListener("pointerup", release);
  button.addEventListener("pointerleave", leave);
  button.addEventListener("pointercancel", leave);
  button.addEventListener("contextmenu", (e) => e.preventDefault());
  // A screen reader clicks without a pointer.
  button.addEventListener("click", (e) => { if (e.detail === 0 && !down && performance.now() - since > 400) short(); });

  const mine = (e) => (e.key === " " || (e.key === "Enter" && e.target === button)) && button.offsetParent !== null && !takesKeys(e.target, button);
  document.addEventListener("keydown", (e) => {
    if (!mine(e)) return;
    e.preventDefault();
    if (!e.repeat) press();
  });
  document.addEventListener("keyup", (e) => {
    if (!mine(e)) return;
    e.preventDefault();
    release();
  });
}

// takesKeys tells where a space is meant for something else.
function takesKeys(target, button) {
  return target !== button && target.closest && target.closest("input, select, textarea, button, a, summary") !== null;
}
