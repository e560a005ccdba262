// The page: what is chosen, which take is open, and its mark.
import { about, keepSecret, tell } from "./ask.js";
import { Bench } from "./bench.js";
import { bind } from "./keys.js";
import { List } from "./list.js";
import { calm, count, el, make, named, say, short, trouble } from "./words.js";

let set, list, bench, take;

/** begin reads the set and shows what the address names. */
async function begin() {
  set = await about("/set");
  keepSecret(set.secret);
  bench = new Bench(set);
  list = new List(set, open);
  bench.onfamily = (n) => { list.familyName = short(take.origin === "recorded" ? take.id : take.source_id); el("choose").open = true; return list.family(n); };
  list.onshow = remember;
  for (const c of set.cautions) el("cautions").lastElementChild.append(make("li", {}, c));
  tally(set.marked);
  el("choose").open = matchMedia("(min-width: 68rem)").matches;
  const { take: n, from, ...keys } = Object.fromEntries(new URLSearchParams(location.hash.slice(1)));
  list.choose(keys);
  await list.load(Number(from) || 0);
  if (/^\d+$/.test(n ?? "") && Number(n) < set.takes) await open(Number(n));
  else await list.step(1);
}

/** tally shows how many takes there are and how many are marked. */
function tally(marked) {
  el("about").replaceChildren("Set ", named(short(set.title || set.name)), `: ${count(set.recorded, "recorded take")}, ${set.synthetic.toLocaleString("en")} synthetic. Marked: ${marked.drop} to drop, ${marked.keep} to keep.`);
  el("undo").disabled = marked.undo === 0;
}

/** open shows the take of a number. */
async function open(n) {
  try {
    take = await bench.open(n);
    calm();
    list.select(n);
    pressed(take.mark);
    remember();
    document.title = `${short(take.id, 40)} - Strandwise`;
    say(`${take.origin} take ${short(take.id)}, label ${short(take.label)}${take.mark === "none" ? "" : `, marked ${take.mark}`}`);
  } catch (fault) {
    trouble(fault);
  }
}

/** pressed shows the mark of the take that is open. */
function pressed(mark) {
  take.mark = mark;
  el("keep").setAttribute("aria-pressed", mark === "keep");
  el("drop").setAttribute("aria-pressed", mark === "drop");
  el("clear").disabled = mark === "none";
}

/** mark marks the take that is open. It counts when the server has written it. */
async function mark(as) {
  if (take) await told(() => tell("/mark", { n: take.n, mark: as }));
}

/** takeBack takes back the last mark, and opens the take it was of. */
async function takeBack() {
  const done = await told(() => tell("/undo", {}));
  if (done && done.n >= 0 && done.n !== take?.n) await open(done.n);
}

async function told(ask) {
  try {
    const done = await ask();
    calm();
    tally(done.marked);
    list.marked(done.n, done.mark);
    if (take && done.n === take.n) pressed(done.mark);
    say(done.mark === "none" ? `No mark on take ${short(done.id)}` : `Take ${short(done.id)} marked ${done.mark}, saved`);
    return done;
  } catch (fault) {
    trouble(fault);
    return null;
  }
}

/** remember puts what is shown into the address, so that it is there after a reload. */
function remember() {
  const keys = Object.entries({ ...list.chosen(), from: list.page.from || "", take: take?.n ?? "" }).filter(([, v]) => v !== "");
  history.replaceState(null, "", `#${new URLSearchParams(keys)}`);
}

async function step(by) {
  if (!await list.step(by)) say(by > 0 ? "That was the last take of the list." : "That was the first take of the list.");
}

function go(id) {
  if (id === "choose") { el("choose").open = true; el("wanted").elements.label.focus(); return; }
  (el(id).querySelector("tr[aria-current] button") ?? el(id).querySelector("tbody button") ?? el(id)).focus();
}

el("keep").addEventListener("click", () => mark("keep"));
el("drop").addEventListener("click", () => mark("drop"));
el("clear").addEventListener("click", () => mark("none"));
el("undo").addEventListener("click", takeBack);
el("before").addEventListener("click", () => step(-1));
el("after").addEventListener("click", () => step(1));
el("trouble-close").addEventListener("click", calm);
bind({
  k: () => mark("keep"), d: () => mark("drop"), c: () => mark("none"), u: takeBack,
  n: () => step(1), p: () => step(-1), " ": () => bench.play(!bench.playing),
  ",": () => bench.frame(-1), ".": () => bench.frame(1), "[": () => bench.turn(-0.15), "]": () => bench.turn(0.15),
  g: () => { if (!el("ghost").closest("label").hidden) el("ghost").click(); }, f: () => go("choose"), l: () => go("found"),
});
begin().catch(trouble);
