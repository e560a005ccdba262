// A moving figure on a turntable: tracked points, the bones between them, and
// the way they took.
import { colour, digits, short } from "./words.js";
import { fitted, roundStep, ticks } from "./traces.js";

const few = 8; // tracked points up to which the whole way of each is drawn

/** Turntable is how figures are seen: turned about the upright and tilted, in radians. */
export class Turntable {
  constructor() { this.front(); }

  front() { this.turn = 0.5; this.tilt = 0.25; }

  by(turn, tilt) {
    this.turn += turn;
    this.tilt = Math.min(1.5, Math.max(-0.2, this.tilt + tilt));
  }
}

/** Figure draws one take on a canvas. Figures that are compared share a stage and a turntable. */
export class Figure {
  constructor(canvas, table) {
    this.canvas = canvas;
    this.table = table;
    this.redrawAll = () => {};
    this.poses = null;
    canvas.addEventListener("pointerdown", (e) => this.drag(e));
    canvas.addEventListener("keydown", (e) => this.key(e));
  }

  drag(e) {
    if (!this.poses || this.poses.plane) return;
    let { clientX: x, clientY: y } = e;
    const move = (m) => {
      this.table.by((m.clientX - x) / 120, (m.clientY - y) / 160);
      ({ clientX: x, clientY: y } = m);
      this.redrawAll();
    };
    const end = () => {
      this.canvas.removeEventListener("pointermove", move);
      this.canvas.removeEventListener("pointerup", end);
      this.canvas.removeEventListener("pointercancel", end);
    };
    this.canvas.setPointerCapture(e.pointerId);
    this.canvas.addEventListener("pointermove", move);
    this.canvas.addEventListener("pointerup", end);
    this.canvas.addEventListener("pointercancel", end);
  }

  key(e) {
    const by = { ArrowLeft: [-0.15, 0], ArrowRight: [0.15, 0], ArrowUp: [0, 0.1], ArrowDown: [0, -0.1] }[e.key];
    if (!by || e.ctrlKey || e.metaKey || e.altKey) return;
    e.preventDefault();
    this.table.by(...by);
    this.redrawAll();
  }

  /** show takes up the poses of a take, null for none. */
  show(poses, name) {
    this.poses = poses;
    this.canvas.hidden = !poses;
    if (poses) this.canvas.setAttribute("aria-label", `${name}: ${poses.words}`);
  }

  /** draw draws the pose at an instant, or a still picture of the whole take. */
  draw(at, stage, still, tint) {
    if (!this.poses) return;
    const { pen, width, height } = fitted(this.canvas);
    if (!width) return;
    pen.clearRect(0, 0, width, height);
    const eye = new Eye(this.table, stage, width, height, this.poses.plane);
    if (this.poses.plane) drawPlane(pen, eye, stage); else drawPlatter(pen, eye, stage);
    const now = this.poses.frameAt(at);
    pen.strokeStyle = pen.fillStyle = tint;
    pen.lineCap = pen.lineJoin = "round";
    if (this.poses.count <= few) this.ways(pen, eye, 0, this.poses.frames - 1, still ? 0.9 : 0.3);
    if (still) {
      for (let k = 0; k < 5; k++) this.pose(pen, eye, Math.round((this.poses.frames - 1) * k / 4), 0.25 + 0.15 * k);
      return;
    }
    const tail = this.poses.count <= few ? 0 : this.poses.frameAt(at - 0.5);
    this.ways(pen, eye, tail, now, 0.75);
    this.pose(pen, eye, now, 1);
  }

  /** ways draws the way of the points from a frame to another; of many points, only of those at the ends of limbs. */
  ways(pen, eye, from, to, alpha) {
    const p = this.poses;
    pen.globalAlpha = alpha;
    pen.lineWidth = 1.4;
    for (const i of p.count <= few ? p.all : p.tips) {
      pen.beginPath();
      let pause = true;
      for (let f = from; f <= to; f++) {
        const at = eye.see(p.place(f, i));
        if (!at) { pause = true; continue; }
        if (pause) pen.moveTo(...at); else pen.lineTo(...at);
        pause = false;
      }
      pen.stroke();
    }
    pen.globalAlpha = 1;
  }

  pose(pen, eye, f, alpha) {
    const p = this.poses, at = p.all.map((i) => eye.see(p.place(f, i)));
    pen.globalAlpha = alpha;
    pen.lineWidth = 3;
    pen.beginPath();
    for (const [a, b] of p.bones) if (at[a] && at[b]) { pen.moveTo(...at[a]); pen.lineTo(...at[b]); }
    pen.stroke();
    const size = p.count <= few ? 6 : p.bones.length ? 2.6 : 3.5;
    for (const q of at) if (q) { pen.beginPath(); pen.arc(q[0], q[1], size, 0, 7); pen.fill(); }
    pen.globalAlpha = 1;
  }
}

/** Poses are the places of the tracked points of a take, seen with the upright along the third axis. */
export class Poses {
  constructor(figure, motion, up) {
    this.motion = motion;
    this.frames = motion.frames;
    this.plane = figure.plane;
    this.count = figure.points.length;
    this.all = figure.points.map((_, i) => i);
    this.bones = figure.bones;
    this.columns = figure.points.map((p) => p.channels.map((c) => motion.channels[c]));
    this.basis = basisOf(up ?? figure.up);
    const joined = new Array(this.count).fill(0);
    for (const [a, b] of this.bones) { joined[a]++; joined[b]++; }
    this.tips = this.all.filter((i) => joined[i] <= 1);
    if (!this.bones.length) this.tips = this.all;
    this.words = this.describe(figure);
  }

  /** place returns where a point is in a frame, in metres; null where that is not known. */
  place(f, i) {
    const [x, y, z] = this.columns[i].map((c) => c[f]);
    if (this.plane) return Number.isFinite(x + y) ? [x, 0, y] : null;
    if (!Number.isFinite(x + y + z)) return null;
    return this.basis.map((b) => b[0] * x + b[1] * y + b[2] * z);
  }

  /** frameAt returns the last frame at or before an instant. */
  frameAt(at) {
    const t = this.motion.time;
    let low = 0, high = this.frames - 1;
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (t[middle] <= at + 1e-6) low = middle; else high = middle - 1;
    }
    return low;
  }

  /** box returns the lowest and highest coordinates, over at most a few hundred frames. */
  box() {
    const low = [Infinity, Infinity, Infinity], high = [-Infinity, -Infinity, -Infinity], step = Math.max(1, Math.floor(this.frames / 300));
    for (let f = 0; f < this.frames; f += step) for (const i of this.all) this.place(f, i)?.forEach((v, k) => { low[k] = Math.min(low[k], v); high[k] = Math.max(high[k], v); });
    return { low, high };
  }

  describe(figure) {
    let farthest = 0, way = -1;
    const step = Math.max(1, Math.floor(this.frames / 600));
    for (const i of this.all) {
      let sum = 0, last = null;
      for (let f = 0; f < this.frames; f += step) {
        const p = this.place(f, i);
        if (p && last) sum += Math.hypot(...p.map((v, k) => v - last[k]));
        last = p ?? last;
      }
      if (sum > way) { way = sum; farthest = i; }
    }
    const { low, high } = this.box(), size = low.map((v, k) => digits(high[k] - v, 2)).filter((_, k) => !this.plane || k !== 1);
    const points = this.count === 1 ? "one tracked point" : `${this.count} tracked points`;
    return `${points} over ${digits(this.motion.end)} s, within ${size.join(" by ")} m. ${short(figure.points[farthest].name || "The point")} goes farthest, ${digits(way)} m in all.`;
  }
}

/** stageOf returns the space that several takes move in. */
export function stageOf(list) {
  const boxes = list.map((p) => p.box()), low = [0, 1, 2].map((k) => Math.min(...boxes.map((b) => b.low[k]))), high = [0, 1, 2].map((k) => Math.max(...boxes.map((b) => b.high[k])));
  if (!low.every(Number.isFinite)) return { centre: [0, 0, 0], floor: 0, height: 1, step: 0.5, rim: 1, low: [0, 0, 0], high: [1, 1, 1] };
  const span = low.map((v, k) => high[k] - v), size = Math.hypot(...span) || 1, radius = Math.max(Math.hypot(span[0], span[1]) / 2, size / 4);
  const step = roundStep(radius / 3);
  return { centre: low.map((v, k) => (v + high[k]) / 2), floor: low[2], height: span[2], step, rim: Math.ceil(radius / step - 1e-9) * step, low, high };
}

/** Eye projects places onto a canvas, without perspective. */
class Eye {
  constructor(table, stage, width, height, plane) {
    this.stage = stage;
    this.plane = plane;
    this.x = width / 2;
    this.y = height / 2;
    this.zoom = Math.min((width - 16) / (2 * stage.rim), (height - 40) / (stage.height + 2 * stage.rim * Math.abs(Math.sin(table.tilt))));
    if (plane) this.zoom = Math.min((width - 90) / (stage.high[0] - stage.low[0] || 1), (height - 60) / (stage.high[2] - stage.low[2] || 1));
    this.cos = Math.cos(plane ? 0 : table.turn);
    this.sin = Math.sin(plane ? 0 : table.turn);
    this.up = Math.cos(plane ? 0 : table.tilt);
    this.away = Math.sin(plane ? 0 : table.tilt);
  }

  see(p) {
    if (!p) return null;
    const [a, b, c] = p.map((v, k) => v - this.stage.centre[k]), deep = a * this.sin + b * this.cos;
    return [this.x + this.zoom * (a * this.cos - b * this.sin), this.y - this.zoom * (c * this.up + deep * this.away)];
  }
}

/** drawPlatter draws the turntable under a figure, with a rim of known size. */
function drawPlatter(pen, eye, stage) {
  const { step, rim } = stage;
  const at = (r, angle) => eye.see([stage.centre[0] + r * Math.cos(angle), stage.centre[1] + r * Math.sin(angle), stage.floor]);
  pen.strokeStyle = colour("faint");
  pen.lineWidth = 1;
  for (let r = step; r < rim + step / 2; r += step) ring(pen, (a) => at(r, a));
  pen.beginPath();
  for (let k = 0; k < 24; k++) {
    const a = k * Math.PI / 12;
    pen.moveTo(...at(rim, a));
    pen.lineTo(...at(rim * (k % 6 ? 0.96 : 0.88), a));
  }
  pen.stroke();
  pen.font = "12px system-ui, 'DejaVu Sans', sans-serif";
  pen.fillStyle = colour("quiet");
  pen.textAlign = "left";
  pen.fillText(`rim ${digits(2 * rim)} m across`, 8, eye.y * 2 - 8);
}

function ring(pen, at) {
  pen.beginPath();
  for (let k = 0; k <= 72; k++) pen[k ? "lineTo" : "moveTo"](...at(k * Math.PI / 36));
  pen.stroke();
}

/** drawPlane draws the axes of figures that move in a plane. */
function drawPlane(pen, eye, stage) {
  pen.font = "12px system-ui, 'DejaVu Sans', sans-serif";
  pen.fillStyle = colour("quiet");
  pen.strokeStyle = colour("faint");
  pen.lineWidth = 1;
  const edge = (k, v) => eye.see(k ? [stage.low[0], 0, v] : [v, 0, stage.low[2]]), end = (k, v) => eye.see(k ? [stage.high[0], 0, v] : [v, 0, stage.high[2]]);
  for (const k of [0, 1]) {
    for (const v of ticks(stage.low[2 * k], stage.high[2 * k], 4)) {
      const a = edge(k, v), b = end(k, v);
      pen.beginPath();
      pen.moveTo(...a);
      pen.lineTo(...b);
      pen.stroke();
      pen.textAlign = k ? "right" : "center";
      pen.fillText(`${digits(v)}`, a[0] - (k ? 6 : 0), a[1] + (k ? 4 : 16));
    }
  }
}

/** basisOf returns three directions, the last of which is the upright. */
function basisOf(up) {
  const k = [0, 1, 2].reduce((best, i) => (Math.abs(up[i]) > Math.abs(up[best]) ? i : best), 0), sign = up[k] < 0 ? -1 : 1;
  const unit = (i, s = 1) => [0, 1, 2].map((j) => (j === i ? s : 0));
  return [unit((k + 1) % 3), unit((k + 2) % 3, sign), unit(k, sign)];
}
