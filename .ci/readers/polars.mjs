// Finds the facts of a set with Polars: node polars.mjs SET
import { readdirSync } from "node:fs";
import { join } from "node:path";
import { newTable, count } from "./facts.mjs";
import polars from "nodejs-polars";

const set = process.argv[2];
const facts = { reader: `Polars (nodejs-polars ${polars.version})`, tables: {}, metadata: {} };
for (const name of ["takes", "frames", "windows"]) {
  const table = (facts.tables[name] = newTable());
  for (const folder of readdirSync(join(set, name)).sort()) {
    for (const part of readdirSync(join(set, name, folder)).sort()) {
      add(table, polars.readParquet(join(set, name, folder, part)), folder.replace("split=", ""));
    }
  }
}
console.log(JSON.stringify(facts));

function add(table, frame, split) {
  table.rows += frame.height;
  const keys = Array.from({ length: frame.height }, () => split);
  for (const column of frame.getColumns()) {
    table.types[column.name] = String(column.dtype);
    if (column.name === "label" || column.name === "origin") {
      column.toArray().forEach((text, i) => (keys[i] += "|" + text));
    }
    if (column.dtype.equals(polars.Utf8)) continue;
    let values = column;
    while (values.dtype.variant === "List" || values.dtype.variant === "FixedSizeList") values = values.explode();
    const numbers = values.cast(polars.Float64).dropNulls();
    if (numbers.length === 0) continue;
    table.numbers[column.name] = (table.numbers[column.name] ?? 0) + numbers.length;
    table.sums[column.name] = (table.sums[column.name] ?? 0) + numbers.sum();
  }
  keys.forEach((key) => count(table.counts, key));
}
