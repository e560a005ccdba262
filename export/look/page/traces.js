// Traces of channels over time: one panel for each channel group and take.
import { colour, digits, el, make, named, short } from "./words.js";

const perPage = 6; // channel groups shown at once
const dashes = [[], [7, 3], [3, 2], [9, 3, 2, 3]];
const quantities = { accel: "acceleration", gyro: "angular rate", pos: "position", ornt: "orientation", vel: "velocity", magn: "magnetic field", angacc: "angular acceleration", jntang: "joint angle", misc: "unknown quantity" };
const margin = { left: 52, right: 8, top: 18, bottom: 20 };

/** Traces draws the channels of one take or two on one clock. */
export class Traces {
  constructor(set) {
    this.set = set;
    this.panels = [];
    const groups = el("groups");
    for (let i = 0; i < set.groups.length; i += perPage) {
      const last = Math.min(i + perPage, set.groups.length);
      groups.append(make("option", { value: i }, `${i + 1} to ${last} of ${set.groups.length}: ${short(set.groups[i].name, 30)} …`));
    }
    groups.parentElement.hidden = set.groups.length <= perPage;
    groups.addEventListener("change", () => this.show(this.takes));
    el("ghost").addEventListener("change", () => this.redraw());
    new ResizeObserver(() => this.redraw()).observe(el("traces"));
  }

  /** show shows the takes, the source first: each {name, made, motion}. */
  show(takes) {
    this.takes = takes;
    this.end = Math.max(...takes.map((t) => t.motion.end));
    const from = Number(el("groups").value) || 0;
    this.panels = [];
    el("trace-tools").lastElementChild.hidden = takes.length < 2;
    el("traces").replaceChildren(...this.set.groups.slice(from, from + perPage).map((g) => this.section(g)));
    this.redraw();
  }

  section(group) {
    const parts = group.channels.map((c) => this.set.channels[c]);
    const what = [...new Set(parts.map((c) => `${quantities[c.quantity] ?? c.quantity}, ${unitWord(c.unit)}`))].slice(0, 3).join("; ");
    const head = make("h4", {}, named(group.name), ` (${what})`);
    const legend = make("ul", { class: "legend" }, ...parts.slice(0, 12).map((c, i) => this.sample(c, i)));
    if (parts.length > 12) legend.append(make("li", {}, `and ${parts.length - 12} more`));
    const range = rangeOf(this.takes.map((t) => t.motion), group.channels);
    const pair = make("div", { class: this.takes.length > 1 ? "pair two" : "pair" });
    for (const t of this.takes) {
      const canvas = make("canvas", { class: "trace", role: "img", "aria-label": this.describe(t, group, range) });
      pair.append(canvas);
      this.panels.push({ canvas, take: t, group, range, still: null });
    }
    return make("div", {}, head, legend, pair);
  }

  sample(channel, i) {
    const canvas = make("canvas", { width: 28, height: 8, "aria-hidden": "true", class: "sample" });
    canvas.style.cssText = "display:inline-block;width:28px;height:8px;border:0;background:none;vertical-align:middle";
    canvas.dataset.part = i;
    return make("li", {}, canvas, " ", named(short(channel.component || channel.name, 30)));
  }

  describe(t, group, range) {
    const parts = group.channels.slice(0, 6).map((c) => {
      const { low, high } = extremes([t.motion], [c]), ch = this.set.channels[c];
      return `${short(ch.component || ch.name, 30)} from ${digits(low)} to ${digits(high)}`;
    });
    const unit = this.set.channels[group.channels[0]].unit;
    return `${t.name}: traces of ${short(group.name)} over ${digits(t.motion.end)} s${unit ? ` in ${unit}` : ""}: ${parts.join("; ")}${group.channels.length > 6 ? "; …" : ""}`;
  }

  redraw() {
    for (const s of document.querySelectorAll("canvas.sample")) drawSample(s);
    for (const p of this.panels) p.still = null;
    this.cursor(this.at ?? 0);
  }

  /** cursor draws the panels with a line at an instant of the clock. */
  cursor(at) {
    this.at = at;
    for (const p of this.panels) {
      const { pen, width, height, scale } = fitted(p.canvas);
      if (!width) continue;
      p.still ??= this.still(p, width, height, scale);
      pen.clearRect(0, 0, width, height);
      pen.drawImage(p.still, 0, 0, width, height);
      const x = this.x(at, width);
      pen.strokeStyle = colour("ink");
      pen.lineWidth = 1;
      line(pen, x, margin.top, x, height - margin.bottom);
    }
  }

  x(at, width) { return margin.left + (width - margin.left - margin.right) * (this.end > 0 ? at / this.end : 0); }

  /** still draws all of a panel that does not move. */
  still(p, width, height, scale) {
    const canvas = make("canvas", { width: Math.round(width * scale), height: Math.round(height * scale) }), pen = canvas.getContext("2d");
    pen.scale(scale, scale);
    const y = (v) => height - margin.bottom - (height - margin.top - margin.bottom) * (v - p.range.low) / (p.range.high - p.range.low);
    this.axes(pen, p, width, height, y);
    if (p.take.made && el("ghost").checked && this.takes.length > 1) {
      pen.globalAlpha = 0.35;
      pen.lineWidth = 3;
      this.lines(pen, this.takes[0].motion, p.group, width, y);
      pen.globalAlpha = 1;
    }
    pen.lineWidth = 1.8;
    this.lines(pen, p.take.motion, p.group, width, y);
    pen.textAlign = "right";
    pen.textBaseline = "top";
    pen.fillStyle = colour(p.take.made ? "made" : "recorded");
    pen.fillText(p.take.made ? "synthetic" : "recorded", width - margin.right, 4);
    return canvas;
  }

  axes(pen, p, width, height, y) {
    pen.font = "12px system-ui, 'DejaVu Sans', sans-serif";
    pen.fillStyle = colour("quiet");
    pen.strokeStyle = colour("faint");
    pen.lineWidth = 1;
    pen.textAlign = "right";
    pen.textBaseline = "middle";
    for (const v of ticks(p.range.low, p.range.high, 6)) {
      line(pen, margin.left, y(v), width - margin.right, y(v));
      pen.fillText(digits(v), margin.left - 5, y(v));
    }
    pen.textBaseline = "top";
    pen.textAlign = "center";
    const list = ticks(0, this.end, Math.max(2, Math.floor(width / 110)));
    list.forEach((v, i) => {
      const x = this.x(v, width);
      line(pen, x, margin.top, x, height - margin.bottom);
      pen.fillText(digits(v) + (i === list.length - 1 ? " s" : ""), Math.min(x, width - 16), height - margin.bottom + 4);
    });
  }

  lines(pen, motion, group, width, y) {
    group.channels.forEach((c, i) => {
      pen.strokeStyle = colour(`part${i % 4}`);
      pen.setLineDash(dashes[i % 4]);
      pen.beginPath();
      if (motion.frames > 4 * width) this.dense(pen, motion, c, width, y);
      else this.sparse(pen, motion, c, width, y);
      pen.stroke();
    });
    pen.setLineDash([]);
  }

  sparse(pen, motion, c, width, y) {
    let pause = true;
    for (let i = 0; i < motion.frames; i++) {
      const v = motion.channels[c][i];
      if (!Number.isFinite(v)) { pause = true; continue; }
      const x = this.x(motion.time[i], width);
      if (pause) pen.moveTo(x, y(v)); else pen.lineTo(x, y(v));
      pause = false;
    }
  }

  /** dense draws the lowest and highest value of each column of pixels, so that no peak is lost. */
  dense(pen, motion, c, width, y) {
    let column = -1, low = 0, high = 0;
    const flush = () => { if (column >= 0) { pen.moveTo(column, y(low)); pen.lineTo(column, y(high) - 0.5); } };
    for (let i = 0; i < motion.frames; i++) {
      const v = motion.channels[c][i];
      if (!Number.isFinite(v)) continue;
      const x = Math.round(this.x(motion.time[i], width));
      if (x !== column) { flush(); column = x; low = high = v; }
      low = Math.min(low, v);
      high = Math.max(high, v);
    }
    flush();
  }
}

/** unitWord returns a unit as people write it. */
export const unitWord = (unit) => ({ "": "no unit known", 1: "parts of a quaternion" }[unit] ?? unit.replace("^2", "²"));

/** extremes returns the lowest and highest value of channels in several takes, NaN where there is none. */
export function extremes(motions, channels) {
  let low = NaN, high = NaN;
  for (const m of motions) for (const c of channels) for (const v of m.channels[c]) {
    if (!Number.isFinite(v)) continue;
    if (!(v >= low)) low = v;
    if (!(v <= high)) high = v;
  }
  return { low, high };
}

/** rangeOf returns the range in which channels of several takes are drawn, which is never empty. */
export function rangeOf(motions, channels) {
  const { low, high } = extremes(motions, channels);
  if (Number.isNaN(low)) return { low: 0, high: 1 };
  const room = high > low ? 0 : Math.abs(low) / 2 || 0.5;
  return { low: low - room, high: high + room };
}

/** ticks returns round numbers between two, about n of them. */
export function ticks(low, high, n) {
  const step = roundStep((high - low) / n), out = [];
  if (!(step > 0)) return out;
  for (let k = Math.ceil(low / step - 1e-9); k * step <= high + 1e-9 * step && out.length < 50; k++) out.push(k * step);
  return out;
}

/** roundStep returns 1, 2 or 5 times a power of ten, at least as large as a number. */
export function roundStep(least) {
  const power = 10 ** Math.floor(Math.log10(least));
  return [1, 2, 5, 10].map((f) => f * power).find((s) => s >= least * (1 - 1e-9));
}

/** fitted returns a pen that draws in CSS pixels on a canvas as large as it is shown. */
export function fitted(canvas) {
  const scale = window.devicePixelRatio || 1, width = canvas.clientWidth, height = canvas.clientHeight, pen = canvas.getContext("2d");
  if (canvas.width !== Math.round(width * scale) || canvas.height !== Math.round(height * scale)) {
    canvas.width = Math.round(width * scale);
    canvas.height = Math.round(height * scale);
  }
  pen.setTransform(scale, 0, 0, scale, 0, 0);
  return { pen, width, height, scale };
}

function line(pen, x0, y0, x1, y1) {
  pen.beginPath();
  pen.moveTo(x0, y0);
  pen.lineTo(x1, y1);
  pen.stroke();
}

function drawSample(canvas) {
  const { pen, width, height } = fitted(canvas), i = Number(canvas.dataset.part);
  pen.clearRect(0, 0, width, height);
  pen.strokeStyle = colour(`part${i % 4}`);
  pen.setLineDash(dashes[i % 4]);
  pen.lineWidth = 2;
  line(pen, 0, height / 2, width, height / 2);
}
