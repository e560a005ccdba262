// What a reader found in one table; see facts.go.
export function newTable() {
  return { rows: 0, counts: {}, numbers: {}, sums: {}, types: {} };
}

export function count(counts, key, n = 1) {
  counts[key] = (counts[key] ?? 0) + n;
}
