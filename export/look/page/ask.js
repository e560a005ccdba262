// What the page asks of the server.

let secret = "";

/** keep remembers what requests that mark must carry. */
export function keepSecret(text) { secret = text; }

const silence = "The server does not answer. If 'strandwise look' was ended, start it again and open the address it prints. Marks made before are saved.";

/** ask fetches and returns the answer, or throws an error whose message is for people. */
async function ask(path, options) {
  let answer;
  try {
    answer = await fetch(path, { credentials: "same-origin", ...options });
  } catch (fault) {
    if (fault.name === "AbortError") throw fault;
    throw new Error(silence);
  }
  if (answer.ok) return answer;
  const text = (await answer.text()).trim();
  let words = text;
  try { words = JSON.parse(text).error; } catch { /* plain words */ }
  throw new Error(words || `The server answers with status ${answer.status}.`);
}

/** about returns a JSON answer; keys with empty values are left out of the query. */
export async function about(path, keys = {}, signal) {
  const query = new URLSearchParams(Object.entries(keys).filter(([, v]) => v !== "" && v !== undefined)).toString();
  return (await ask(query ? `${path}?${query}` : path, { signal })).json();
}

/** motion returns the signals of a take: its clock and channels, each of as many numbers as frames are sent. */
export async function motion(n, channels, signal) {
  const data = await (await ask(`/motion?n=${n}`, { signal })).arrayBuffer();
  const view = new DataView(data), all = new Float32Array(data.byteLength / 4);
  for (let i = 0; i < all.length; i++) all[i] = view.getFloat32(4 * i, true);
  const frames = all.length / (channels + 1), list = [];
  for (let c = 0; c <= channels; c++) list.push(all.subarray(c * frames, (c + 1) * frames));
  return { time: list[0], channels: list.slice(1), frames, end: frames ? list[0][frames - 1] : 0 };
}

/** tell sends a mark, or takes one back. */
export async function tell(path, body) {
  const headers = { "Content-Type": "application/json", "Strandwise-Secret": secret };
  return (await ask(path, { method: "POST", headers, body: JSON.stringify(body) })).json();
}
