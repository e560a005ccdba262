// The choice of takes, and the list of those found.
import { about } from "./ask.js";
import { calm, count, digits, el, ends, make, markWord, named, short, trouble } from "./words.js";

const most = 1000; // options of one choice; of more texts the rest is found by the text field
const onePage = 50;

/** List holds what is chosen, the page of takes at hand and the take that is open. */
export class List {
  constructor(set, open) {
    this.set = set;
    this.open = open; // called with the number of a take
    this.page = { total: 0, from: 0, takes: [] };
    this.source = "";
    this.current = -1;
    this.asking = null;
    this.form = el("wanted");
    this.fill("label", set.labels);
    this.fill("subject", set.subjects);
    this.fill("session", set.sessions);
    set.gates.forEach((g, i) => this.form.elements.gate.append(make("option", { value: i }, g)));
    this.form.addEventListener("submit", (e) => e.preventDefault());
    this.form.addEventListener("change", () => this.changed());
    let later;
    this.form.elements.holds.addEventListener("input", () => { clearTimeout(later); later = setTimeout(() => this.changed(), 300); });
    el("family-off").addEventListener("click", () => this.family(""));
    el("page-before").addEventListener("click", () => this.load(this.page.from - onePage));
    el("page-after").addEventListener("click", () => this.load(this.page.from + onePage));
  }

  fill(name, texts) {
    const choice = this.form.elements[name];
    const order = texts.map((t, i) => i).sort((a, b) => texts[a].text.localeCompare(texts[b].text)).slice(0, most);
    for (const i of order) choice.append(make("option", { value: i, dir: "auto" }, `${short(texts[i].text, 40)} (${texts[i].takes})`));
    if (texts.length > most) choice.append(make("option", { disabled: "" }, `${texts.length - most} more: use the text below`));
  }

  /** chosen returns the query, without the place in the list. */
  chosen() {
    const out = Object.fromEntries(new FormData(this.form).entries());
    if (this.source !== "") out.source = this.source;
    return out;
  }

  /** choose puts a query into the form. */
  choose(keys) {
    for (const [k, v] of Object.entries(keys)) if (this.form.elements[k]) this.form.elements[k].value = v;
    this.source = keys.source ?? "";
  }

  changed() {
    const f = this.form.elements;
    if (f.gate.value === "" && (f.order.value === "high" || f.order.value === "low")) f.gate.selectedIndex = Math.min(1, f.gate.options.length - 1);
    return this.load(0);
  }

  /** family shows a source take and those made from it, or all again. */
  family(n) {
    this.source = String(n);
    return this.load(0);
  }

  /** load asks for the page of the list that begins at a place. */
  async load(from) {
    this.asking?.abort();
    const asking = this.asking = new AbortController();
    try {
      this.page = await about("/takes", { ...this.chosen(), from: Math.max(0, from), count: onePage }, asking.signal);
      calm();
      this.show();
    } catch (fault) {
      trouble(fault);
    }
  }

  show() {
    const { total, from, takes } = this.page, gate = this.form.elements.gate;
    el("found-count").textContent = total ? `${(from + 1).toLocaleString("en")} to ${(from + takes.length).toLocaleString("en")} of ${count(total, "take")}` : "No take is like that; choose less.";
    const said = [...this.form.elements].filter((e) => e.name && e.value && e.value !== "set" && e.name !== "gate").map((e) => (e.options ? e.selectedOptions[0].textContent : `“${e.value}”`));
    el("chosen").textContent = said.length ? said.join(", ") : "all of them";
    el("family").hidden = this.source === "";
    el("family-id").textContent = this.source === "" ? "" : this.familyName ?? `number ${this.source}`;
    el("gate-head").hidden = gate.value === "";
    el("gate-head").textContent = gate.value === "" ? "" : gate.selectedOptions[0].textContent;
    el("gate-note").hidden = gate.value === "";
    if (gate.value !== "") el("gate-note").textContent = gateNote(gate.selectedOptions[0].textContent);
    el("takes").tBodies[0].replaceChildren(...takes.map((t) => this.row(t)));
    el("page-before").disabled = from === 0;
    el("page-after").disabled = from + takes.length >= total;
    this.onshow?.();
  }

  row(t) {
    const open = make("button", { type: "button", title: short(t.id, 200) }, t.origin === "recorded" ? "● " : "○ ", named(ends(t.id)));
    open.addEventListener("click", () => this.open(t.n));
    const cells = [make("td", {}, markWord(t.mark)), make("td", {}, open)];
    if (this.form.elements.gate.value !== "") cells.push(make("td", { class: "number gate" }, t.gate === null ? "" : digits(t.gate)));
    cells.push(make("td", {}, named(short(t.label, 80))), make("td", {}, named(short(t.subject, 80))),
      make("td", { class: "number" }, t.rank < 0 ? "" : String(t.rank)));
    const tr = make("tr", { "data-n": t.n }, ...cells);
    if (t.n === this.current) tr.setAttribute("aria-current", "true");
    return tr;
  }

  rowOf(n) { return el("takes").querySelector(`tr[data-n="${n}"]`); }

  /** select shows which take is open. */
  select(n) {
    this.rowOf(this.current)?.removeAttribute("aria-current");
    this.current = n;
    const tr = this.rowOf(n);
    tr?.setAttribute("aria-current", "true");
  }

  /** marked shows the mark that a take has now. */
  marked(n, mark) {
    const t = this.page.takes.find((t) => t.n === n);
    if (t) t.mark = mark;
    this.rowOf(n)?.cells[0].replaceChildren(markWord(mark));
  }

  /** step opens the take so many places on in the list, turning the page when need be. */
  async step(by) {
    let at = this.page.takes.findIndex((t) => t.n === this.current) + by;
    if (this.current >= 0 && !this.page.takes.some((t) => t.n === this.current)) at = 0;
    if (at < 0 && this.page.from > 0) {
      await this.load(this.page.from - onePage);
      at = this.page.takes.length - 1;
    } else if (at >= this.page.takes.length && this.page.from + this.page.takes.length < this.page.total) {
      await this.load(this.page.from + onePage);
      at = 0;
    }
    const t = this.page.takes[at];
    if (t) await this.open(t.n);
    return Boolean(t);
  }
}

/** gateNote says how to read the values of a gate. */
function gateNote(gate) {
  const high = "The higher the value, the nearer the take came to being refused.";
  return {
    copy: "copy: distance to the source as a share of the source's distance to its nearest neighbour. The lower, the more the take is a mere copy.",
    stray: `stray: distance to the nearest recorded take of the label, over that to the nearest of another label. ${high}`,
    jerk: `jerk: as a multiple of what recorded takes show. ${high}`,
    bandwidth: `bandwidth: fast trembling, as a multiple of what recorded takes show. ${high}`,
    range: `range: how far values leave what was recorded, as a share of that range. ${high}`,
    bones: `bones: how much bones change their length. ${high}`,
  }[gate] ?? `${gate}: the value that the gate measured.`;
}
