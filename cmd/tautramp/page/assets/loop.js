// The loop: band stress over setting, the ramp going on over the earlier ones.
import { state, byId, get, on } from "./store.js";
import { label, unit } from "./units.js";

let ways = []; // {cycle, exercise, points: [[setting, stress]]}, SI

export async function fetchTrail() {
  try {
    ways = (await get("/trail")).cycles;
    draw();
  } catch { /* the next connection asks again */ }
}

export function clear() { ways = []; }

// add takes a status; points closer than a screen shows are left out.
export function add(now) {
  if (now.setting == null || now.stress == null || now.done) return;
  let last = ways[ways.length - 1];
  if (!last || last.cycle !== now.cycle) {
    last = { cycle: now.cycle, exercise: now.exercise, points: [] };
    ways.push(last);
  }
  const p = last.points[last.points.length - 1];
  if (!p || Math.abs(p[0] - now.setting) >= 0.003 * (state.desk?.run?.limit || 1)) last.points.push([now.setting, now.stress]);
}

function ticks(high) {
  const rough = high / 4, power = 10 ** Math.floor(Math.log10(rough));
  const step = [1, 2, 2.5, 5, 10].map((m) => m * power).find((s) => s >= rough);
  const all = [];
  for (let v = 0; v <= high; v += step) all.push(v);
  return all;
}

export function draw() {
  const canvas = byId("loop"), run = state.desk?.run, now = state.now;
  const box = canvas.getBoundingClientRect();
  if (!run || box.width < 40 || box.height < 40) return;
  const dense = window.devicePixelRatio || 1;
  if (canvas.width !== Math.round(box.width * dense) || canvas.height !== Math.round(box.height * dense)) {
    canvas.width = Math.round(box.width * dense);
    canvas.height = Math.round(box.height * dense);
  }
  const c = canvas.getContext("2d"), css = getComputedStyle(document.documentElement);
  const colour = (name) => css.getPropertyValue("--" + name).trim();
  c.setTransform(dense, 0, 0, dense, 0, 0);
  c.clearRect(0, 0, box.width, box.height);

  const su = unit(run.role), tu = unit("stress");
  const top = Math.max(run.target ? run.target * 1.3 : 0, ...ways.flatMap((w) => w.points.map((p) => p[1] * 1.05)), tu.si);
  const right = (run.limit || Math.max(...ways.flatMap((w) => w.points.map((p) => p[0])), su.si)) * 1.06;
  const small = box.width < 420, letters = small ? 12 : 15;
  const plot = { left: letters * 4.4, top: letters * 1.6, right: box.width - 10, bottom: box.height - letters * 2.7 };
  const x = (p) => plot.left + (p / right) * (plot.right - plot.left);
  const y = (s) => plot.bottom - (Math.max(s, 0) / top) * (plot.bottom - plot.top);

  c.font = `${letters}px "Liberation Sans", Arial, sans-serif`;
  c.fillStyle = colour("soft");
  c.strokeStyle = colour("line");
  c.lineWidth = 1;
  c.textAlign = "center";
  for (const v of ticks((right / su.si) * 0.97)) {
    line(c, [[x(v * su.si), plot.top], [x(v * su.si), plot.bottom]]);
    c.fillText(v.toLocaleString("en-US"), x(v * su.si), plot.bottom + letters * 1.15);
  }
  c.textAlign = "right";
  for (const v of ticks(top / tu.si)) {
    line(c, [[plot.left, y(v * tu.si)], [plot.right, y(v * tu.si)]]);
    c.fillText(v.toLocaleString("en-US"), plot.left - 5, y(v * tu.si) + letters * 0.35);
  }
  c.fillText(label(run.role), plot.right, box.height - letters * 0.4);
  c.textAlign = "left";
  c.fillText(label("stress"), 4, letters * 1.1);

  if (run.limit) {
    // the limit: a hatched wall, with its word
    c.save();
    c.beginPath();
    c.rect(x(run.limit), plot.top, plot.right - x(run.limit), plot.bottom - plot.top);
    c.clip();
    c.strokeStyle = colour("vermillion");
    c.lineWidth = 3;
    for (let at = plot.top - 60; at < plot.bottom + 60; at += 9) line(c, [[x(run.limit) - 5, at + 30], [plot.right + 5, at]]);
    c.restore();
    c.strokeStyle = colour("ink");
    c.lineWidth = 3;
    line(c, [[x(run.limit), plot.top], [x(run.limit), plot.bottom]]);
    c.fillStyle = colour("ink");
    c.textAlign = "right";
    c.fillText("limit", x(run.limit) - 6, plot.top + letters);
  }
  if (run.target) {
    c.strokeStyle = colour("ink");
    c.setLineDash([9, 6]);
    c.lineWidth = 2;
    line(c, [[plot.left, y(run.target)], [plot.right, y(run.target)]]);
    c.setLineDash([]);
    c.fillStyle = colour("ink");
    c.textAlign = "left";
    c.fillText("target", plot.left + 6, y(run.target) - 6);
  }
  const current = ways[ways.length - 1];
  for (const w of ways) {
    const latest = w === current;
    way(c, w.points, x, y, latest ? 5 : 2, latest ? colour("blue") : colour("line"), latest ? colour("vermillion") : colour("line"));
  }
  if (now && now.setting != null && now.stress != null) {
    c.beginPath();
    c.arc(x(now.setting), y(now.stress), small ? 7 : 10, 0, 7);
    c.fillStyle = colour("paper");
    c.fill();
    c.strokeStyle = colour("ink");
    c.lineWidth = 4;
    c.stroke();
  }
  canvas.setAttribute("aria-label", `loop of band stress over ${label(run.role)}: ${ways.length} ramps so far`);
}

function line(c, points) {
  c.beginPath();
  points.forEach(([px, py], i) => (i ? c.lineTo(px, py) : c.moveTo(px, py)));
  c.stroke();
}

// way draws the rise whole and the fall dashed, so that colour is not needed.
function way(c, points, x, y, width, up, down) {
  let peak = 0;
  points.forEach((p, i) => { if (p[0] > points[peak][0]) peak = i; });
  const place = (list) => list.map((p) => [x(p[0]), y(p[1])]);
  c.lineWidth = width;
  c.lineJoin = "round";
  c.strokeStyle = up;
  line(c, place(points.slice(0, peak + 1)));
  c.setLineDash([width * 2.4, width * 1.6]);
  c.strokeStyle = down;
  line(c, place(points.slice(peak)));
  c.setLineDash([]);
}

on("look", draw);
window.addEventListener("resize", draw);
