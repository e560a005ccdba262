// Finds the facts of an Arrow IPC stream on standard input with Apache Arrow
// JavaScript: node stream.mjs < stream. With a number as argument it stops after
// so many record batches, as a reader that has enough does.
import { RecordBatchReader, Type } from "apache-arrow";
import { newTable, count } from "./facts.mjs";

const most = Number(process.argv[2] ?? Infinity);
const reader = await RecordBatchReader.from(process.stdin);
await reader.open();
const schema = reader.schema; // which is gone when the stream has ended
const table = newTable();
let batches = 0;
for await (const batch of reader) {
  add(batch);
  if (++batches >= most) break;
}
const metadata = Object.fromEntries(
  ["strandwise.layout", "strandwise.run"].map((key) => [key, schema.metadata.get(key)]),
);
console.log(JSON.stringify({ reader: "Apache Arrow JavaScript", batches, tables: { takes: table }, metadata: { takes: metadata } }));
process.exit(0);

function add(batch) {
  table.rows += batch.numRows;
  const text = (name, row) => batch.getChild(name).get(row);
  for (let row = 0; row < batch.numRows; row++) {
    count(table.counts, [text("split", row) || "train", text("label", row), text("origin", row)].join("|"));
  }
  for (const field of batch.schema.fields) {
    table.types[field.name] = String(field.type);
    if (field.typeId === Type.Utf8) continue;
    const column = batch.getChild(field.name);
    for (let row = 0; row < batch.numRows; row++) {
      const value = column.get(row);
      if (value === null) continue;
      const values = field.typeId === Type.List ? value.toArray() : [value];
      let sum = 0;
      for (const v of values) sum += v;
      count(table.numbers, field.name, values.length);
      count(table.sums, field.name, sum);
    }
  }
}
