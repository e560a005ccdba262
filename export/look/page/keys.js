// Single keys. They can be switched off, and do nothing while a field has the focus.
import { el } from "./words.js";

/** bind lets each key do something anywhere on the page. */
export function bind(actions) {
  const on = el("keys-on");
  on.checked = localStorage.getItem("strandwise-keys") !== "off";
  on.addEventListener("change", () => localStorage.setItem("strandwise-keys", on.checked ? "on" : "off"));
  document.addEventListener("keydown", (e) => {
    if (!on.checked || e.ctrlKey || e.metaKey || e.altKey || e.defaultPrevented) return;
    const at = e.target, key = e.key.length === 1 ? e.key.toLowerCase() : e.key;
    if (at.matches("select, textarea, input:not([type=checkbox], [type=range])")) return;
    if (key === " " && at.closest("button, summary, a, input")) return; // the key's own use
    const act = actions[key];
    if (!act) return;
    e.preventDefault();
    act();
  });
}
