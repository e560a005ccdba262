// Texts and elements. What recordings say is only ever put in as text.

/** el returns the element of an id. */
export const el = (id) => document.getElementById(id);

/** make returns a new element with attributes and children, which are elements or texts. */
export function make(name, attributes = {}, ...children) {
  const e = document.createElement(name);
  for (const [k, v] of Object.entries(attributes)) e.setAttribute(k, v);
  e.append(...children);
  return e;
}

/** named returns a text from a recording, kept apart from the direction of what stands around it. */
export function named(text, kind = "") {
  const e = make("bdi", kind ? { class: kind } : {});
  e.textContent = text === "" ? "(none)" : text;
  return e;
}

/** short returns a text of bounded length, for places that hold text alone. */
export const short = (text, most = 60) => {
  const signs = [...text.slice(0, 4 * most)];
  return signs.length > most ? `${signs.slice(0, most).join("")}…` : text || "(none)";
};

/** ends returns the two ends of a long text: of an id, the last signs tell takes apart. */
export function ends(text, most = 20) {
  if (text.length <= most) return text;
  const signs = [...text.slice(0, 4 * most), ...text.slice(-4 * most)], half = Math.floor(most / 2);
  return `${signs.slice(0, half - 2).join("")}…${signs.slice(-half - 1).join("")}`;
}

/** digits returns a number in a few digits. */
export function digits(v, places = 3) {
  if (!Number.isFinite(v)) return "none";
  if (v !== 0 && (Math.abs(v) < 1e-3 || Math.abs(v) >= 1e6)) return v.toExponential(places - 1);
  return String(Number(v.toPrecision(places)));
}

/** count returns a number of things: "1 take", "12,000 takes". */
export const count = (n, thing) => `${n.toLocaleString("en")} ${thing}${n === 1 ? "" : "s"}`;

/** say tells those who listen rather than look. */
export function say(text) { el("news").textContent = text; }

/** trouble shows an error in words until it is closed. */
export function trouble(fault) {
  if (fault.name === "AbortError") return;
  el("trouble-text").textContent = fault.message;
  el("trouble").hidden = false;
}

/** calm hides the last error. */
export function calm() { el("trouble").hidden = true; }

/** colour returns a colour of the theme in use. */
export const colour = (name) => getComputedStyle(document.documentElement).getPropertyValue(`--${name}`).trim();

/** markWord returns a mark as it is shown: by a sign and a word, not by colour alone. */
export function markWord(mark) {
  if (mark === "none") return make("span", { class: "unseen" }, "none");
  return make("span", { class: `mark-${mark}` }, mark === "drop" ? "✕ drop" : "✓ keep");
}
