// One take, beside its source when it has one, on one clock.
import { about, motion } from "./ask.js";
import { Figure, Poses, Turntable, stageOf } from "./figure.js";
import { Traces, extremes, unitWord } from "./traces.js";
import { colour, count, digits, el, make, named, say, short } from "./words.js";

const axes = { x: [1, 0, 0], y: [0, 1, 0], z: [0, 0, 1], "-x": [-1, 0, 0], "-y": [0, -1, 0], "-z": [0, 0, -1] };

/** Bench shows a take and plays it. */
export class Bench {
  constructor(set) {
    this.set = set;
    this.traces = new Traces(set);
    this.table = new Turntable();
    this.figures = ["left", "right"].map((side) => new Figure(el(side).querySelector("canvas"), this.table));
    for (const f of this.figures) f.redrawAll = () => this.draw();
    this.takes = [];
    this.at = 0;
    this.end = 0;
    this.playing = false;
    this.moved = false; // whether the clock was moved since the take was opened
    this.calm = matchMedia("(prefers-reduced-motion: reduce)");
    this.calm.addEventListener("change", () => this.draw());
    matchMedia("(prefers-color-scheme: dark)").addEventListener("change", () => { this.traces.redraw(); this.draw(); });
    new ResizeObserver(() => this.draw()).observe(el("left"));
    el("play").addEventListener("click", () => this.play(!this.playing));
    el("time").addEventListener("input", () => { this.play(false); this.to(Number(el("time").value)); });
    el("up").addEventListener("change", () => { this.stand(); this.draw(); });
    el("face").addEventListener("click", () => { this.table.front(); this.draw(); });
  }

  /** open shows the take of a number. It throws what people should read. */
  async open(n) {
    this.asking?.abort();
    const { signal } = this.asking = new AbortController();
    const take = await about("/take", { n }, signal);
    const both = take.source >= 0 ? [await about("/take", { n: take.source }, signal), take] : [take];
    const motions = await Promise.all(both.map((t) => motion(t.n, this.set.channels.length, signal)));
    this.play(false);
    this.take = take;
    this.takes = both.map((t, i) => ({ about: t, motion: motions[i], made: t.origin === "synthetic", name: t.origin === "synthetic" ? "Synthetic take" : both.length > 1 ? "Recorded source" : "Recorded take" }));
    this.end = Math.max(...motions.map((m) => m.end));
    this.moved = false;
    this.names();
    this.traces.show(this.takes);
    this.stand();
    this.numbers();
    this.making();
    el("time").max = this.end || 1;
    this.to(0);
    return take;
  }

  names() {
    const t = this.take, long = t.id.length > 60 ? "long" : "";
    el("take-name").replaceChildren("Take ", named(t.id, long));
    const facts = [make("span", {}, "label ", named(t.label, t.label.length > 60 ? "long" : "")), make("span", {}, "subject ", named(t.subject)), make("span", {}, "session ", named(t.session)),
      `${t.origin}, split ${t.split}`];
    if (t.rank >= 0) facts.push(`rank ${t.rank} of its source's draws`);
    if (t.source < 0 && t.source_id) facts.push(make("span", {}, "its source ", named(t.source_id), " is not in the set"));
    if (t.step > 1) facts.push(`long: only every ${t.step}th frame of ${t.frames.toLocaleString("en")} is shown`);
    el("take-facts").replaceChildren(...facts.flatMap((f, i) => (i ? [" · ", f] : [f])));
    const two = this.takes.length > 1;
    el("right").hidden = !two;
    el("left").parentElement.classList.toggle("two", two);
    ["left", "right"].forEach((side, i) => {
      const shown = this.takes[i];
      if (!shown) return;
      el(`${side}-name`).textContent = `${shown.name}, ${count(shown.about.frames, "frame")} in ${digits(shown.motion.end)} s`;
      el(`${side}-name`).classList.toggle("made", shown.made);
    });
  }

  /** stand puts the figures on their stage. */
  stand() {
    const f = this.take?.figure, up = axes[el("up").value];
    el("figure-tools").hidden = !f || f.plane;
    if (!f) {
      el("figure-note").textContent = "No channel of this set is a position, so there is no figure to see: read the traces.";
      for (const g of this.figures) g.show(null);
      return;
    }
    const poses = this.takes.map((t) => new Poses(t.about.figure ?? f, t.motion, up));
    this.stage = stageOf(poses);
    this.figures.forEach((g, i) => g.show(poses[i] ?? null, this.takes[i]?.name));
    const way = f.up.map((v, k) => (Math.abs(v) > 0.5 ? (v < 0 ? "-" : "") + "xyz"[k] : "")).join("") || "y";
    el("figure-note").textContent = f.plane ? "Places in the plane, in metres." : `Drag a figure to turn it. ${up ? "" : `Up is ${way}${f.points.length < 6 ? ", which is only assumed" : ""}. `}${f.bones.length ? "" : f.points.length > 1 ? "No two points keep their distance, so none are joined. " : ""}`;
  }

  /** to sets the clock to an instant. */
  to(at) {
    if (at > 0) this.moved = true;
    this.at = Math.min(Math.max(0, at), this.end);
    el("time").value = this.at;
    const text = `${this.at.toFixed(2)} s of ${this.end.toFixed(2)} s`;
    el("time-text").textContent = text;
    el("time").setAttribute("aria-valuetext", text);
    this.draw();
  }

  draw() {
    if (!this.takes.length) return;
    const still = this.calm.matches && !this.moved && !this.playing;
    this.figures.forEach((f, i) => f.draw(this.at, this.stage, still, colour(this.takes[i]?.made ? "made" : "recorded")));
    this.traces.cursor(this.at);
  }

  /** play plays from where the clock is, from the start when it is at the end, or pauses. */
  play(on) {
    if (on && !this.takes.length) return;
    this.playing = on;
    el("play").firstChild.textContent = on ? "Pause " : "Play ";
    cancelAnimationFrame(this.tick);
    if (!on) return;
    if (this.at >= this.end) this.to(0);
    let last;
    const step = (now) => {
      const pace = Number(el("pace").value);
      if (last !== undefined) this.to(this.at + pace * (now - last) / 1000);
      last = now;
      if (this.at >= this.end) { this.play(false); say("The take has ended."); return; }
      this.tick = requestAnimationFrame(step);
    };
    this.tick = requestAnimationFrame(step);
  }

  /** frame goes so many frames on. */
  frame(by) {
    if (!this.takes.length) return;
    this.play(false);
    const m = this.takes.at(-1).motion;
    this.to(this.at + by * (m.frames > 1 ? m.end / (m.frames - 1) : 0));
  }

  /** turn turns the figures. */
  turn(by) { this.table.by(by, 0); this.draw(); }

  numbers() {
    const head = make("tr", {}, make("th", { scope: "col" }, "Channel"), ...this.takes.flatMap((t) => ["lowest", "mean", "highest"].map((w) => make("th", { scope: "col", class: "number" }, `${t.made ? "synthetic" : "recorded"} ${w}`))), make("th", { scope: "col" }, "unit"));
    const rows = this.set.channels.slice(0, 300).map((c, i) => make("tr", {}, make("th", { scope: "row" }, named(short(c.name))),
      ...this.takes.flatMap((t) => { const { low, high } = extremes([t.motion], [i]); return [low, mean(t.motion.channels[i]), high].map((v) => make("td", { class: "number" }, digits(v))); }), make("td", {}, unitWord(c.unit))));
    el("numbers").replaceChildren(make("thead", {}, head), make("tbody", {}, ...rows));
    if (this.set.channels.length > 300) el("numbers").append(make("caption", {}, `The first 300 of ${this.set.channels.length} channels.`));
  }

  making() {
    const t = this.take, out = [];
    const listOf = (pairs) => make("dl", {}, ...pairs.map(([k, v]) => make("div", {}, make("dt", {}, k), make("dd", {}, v))));
    if (t.origin === "recorded") {
      out.push(make("p", {}, t.made ? `A recorded take. ${count(t.made, "synthetic take")} of the set ${t.made === 1 ? "was" : "were"} made from it. ` : "A recorded take. No take of the set was made from it."));
    } else {
      out.push(listOf([["method", named(t.method)], ["source", named(t.source_id)], ["draw", String(t.draw)]]), make("p", {}, "What was drawn:"), listOf(t.parameters.map((p) => [named(p.name), digits(p.value, 5)])));
      if (t.gates.length) out.push(make("p", {}, "What the gates measured:"), listOf(t.gates.map((p) => [named(p.name), digits(p.value, 4)])));
    }
    const root = t.origin === "recorded" ? (t.made ? t.n : -1) : t.source;
    if (root >= 0) {
      const b = make("button", { type: "button", id: "relatives" }, "List the source and all takes made from it");
      b.addEventListener("click", () => this.onfamily?.(root));
      out.push(b);
    }
    el("making").replaceChildren(...out);
  }
}

function mean(values) {
  let sum = 0, n = 0;
  for (const v of values) if (Number.isFinite(v)) { sum += v; n++; }
  return n ? sum / n : NaN;
}
