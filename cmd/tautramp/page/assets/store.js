// What the page knows, and who wants to hear of changes.

export const state = {
  desk: null, // what is going on, as the program tells it
  now: null, // the newest status
  away: "", // why nothing newer comes; "" while all is well
  system: localStorage.getItem("units") || "",
  sound: localStorage.getItem("sound") !== "off",
};

const hearers = new Map();

export function on(topic, hear) {
  if (!hearers.has(topic)) hearers.set(topic, []);
  hearers.get(topic).push(hear);
}

export function tell(topic) {
  for (const hear of hearers.get(topic) || []) hear(state);
}

// send posts JSON and gives the answer, or throws what the program says.
export async function send(address, body) {
  let answer;
  try {
    answer = await fetch(address, { method: "POST", headers: { "Content-Type": "application/json" }, body: JSON.stringify(body) });
  } catch {
    throw new Error("the program does not answer");
  }
  if (!answer.ok) throw new Error((await answer.text()).trim());
  return answer.status === 200 ? answer.json() : null;
}

export async function get(address) {
  const answer = await fetch(address);
  if (!answer.ok) throw new Error((await answer.text()).trim());
  return answer.json();
}

const shown = (children) => children.flat().filter((c) => c != null && c !== false && c !== "");

// fill puts children in the place of what an element held.
export const fill = (e, ...children) => e.replaceChildren(...shown(children));

// make builds an element: make("p", {class: "note"}, "text", child).
export function make(name, attributes = {}, ...children) {
  const e = document.createElement(name);
  for (const [key, value] of Object.entries(attributes)) {
    if (key.startsWith("on")) e.addEventListener(key.slice(2), value);
    else if (value === true) e.setAttribute(key, "");
    else if (value !== false && value != null) e.setAttribute(key, value);
  }
  e.append(...shown(children));
  return e;
}

export const byId = (id) => document.getElementById(id);
