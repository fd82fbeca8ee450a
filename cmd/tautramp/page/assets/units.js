// Figures come in SI; here they get the unit that the reader chose.
import { state } from "./store.js";

const steps = {
  // the last digit that a screen shows, by unit
  psi: 1, bar: 0.1, MPa: 0.1, "lbf ft": 0.1, "N m": 0.1, turn: 0.01, in: 0.00001, mm: 0.0001, lbf: 1, kN: 0.01,
};

export const system = () => state.system || state.desk?.system || "us";

export function unit(role) {
  return state.desk?.units[system()]?.[role] || { name: "", si: 1 };
}

// label names a unit so that gauge pressure and band stress cannot be mixed up.
export function label(role) {
  const name = unit(role).name;
  if (role === "pressure") return "gauge " + name;
  if (role === "stress") return "band " + name;
  return name;
}

export function decimals(step) {
  return Math.max(0, Math.ceil(-Math.log10(step) - 1e-9));
}

// show writes one figure; "--" for one that is not known.
export function show(si, role, coarser = 1) {
  if (si == null || Number.isNaN(si)) return "--";
  const u = unit(role);
  const step = (steps[u.name] || 0.1) * coarser;
  const value = Math.round(si / u.si / step) * step;
  return (Object.is(value, -0) ? 0 : value).toLocaleString("en-US", { minimumFractionDigits: decimals(step), maximumFractionDigits: decimals(step) });
}

export const withUnit = (si, role, coarser) => show(si, role, coarser) + " " + label(role);

// stressStep keeps the last digit of a band stress from dancing.
export const stressStep = () => (unit("stress").name === "psi" ? 10 : 1);

// inUnit writes a figure of a bench test, to a thousandth of a hundred.
export function inUnit(si, unit) {
  if (si == null || !unit.si) return "--";
  const v = si / unit.si, a = Math.abs(v);
  const text = v.toFixed(a >= 100 ? 1 : a >= 10 ? 2 : 3);
  return Number(text) === 0 ? text.replace("-", "") : text;
}
