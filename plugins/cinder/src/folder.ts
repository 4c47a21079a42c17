// Writes a folder of Arrow files with its artifact.json, as the calls of readers answer with.
import { writeFileSync } from "node:fs";
import { join } from "node:path";
import { Bool, Data, DataType, Field, Float64, Int64, List, RecordBatch, Schema, Struct, Table, Utf8, makeData, tableToIPC, vectorFromArray } from "apache-arrow";

/** A column with its unit, "" for none. */
export type Column =
  | { name: string; unit: string; type: "float"; values: number[] }
  | { name: string; unit: string; type: "int"; values: number[] }
  | { name: string; unit: string; type: "text"; values: string[] }
  | { name: string; unit: string; type: "truth"; values: boolean[] }
  | { name: string; unit: string; type: "float list"; values: ArrayLike<number>[] };

function data(c: Column): Data<DataType> {
  switch (c.type) {
    case "float":
      return makeData({ type: new Float64(), data: Float64Array.from(c.values) });
    case "int":
      return makeData({ type: new Int64(), data: BigInt64Array.from(c.values.map((v) => BigInt(v))) });
    case "text":
      return vectorFromArray(c.values, new Utf8()).data[0] ?? makeData({ type: new Utf8(), length: 0 });
    case "truth":
      return vectorFromArray(c.values, new Bool()).data[0] ?? makeData({ type: new Bool(), length: 0 });
    case "float list": {
      const offsets = new Int32Array(c.values.length + 1);
      c.values.forEach((v, i) => (offsets[i + 1] = offsets[i] + v.length));
      const flat = new Float64Array(offsets[c.values.length]);
      c.values.forEach((v, i) => flat.set(v, offsets[i]));
      const child = makeData({ type: new Float64(), data: flat });
      return makeData({ type: new List(new Field("item", new Float64(), false)), length: c.values.length, nullCount: 0, valueOffsets: offsets, child });
    }
  }
}

export interface Scalar {
  value: number | boolean | string;
  unit?: string;
}

/** Writes all tables of a kind; every table has to be there, also an empty one. */
export function write(folder: string, kind: string, scalars: Record<string, Scalar>, tables: Record<string, Column[]>): void {
  for (const [name, columns] of Object.entries(tables)) {
    const arrays = columns.map(data);
    const schema = new Schema(columns.map((c, i) => new Field(c.name, arrays[i].type, false, new Map(c.unit ? [["unit", c.unit]] : []))));
    const rows = columns[0]?.values.length ?? 0;
    const batch = new RecordBatch(schema, makeData({ type: new Struct(schema.fields), length: rows, nullCount: 0, children: arrays }));
    writeFileSync(join(folder, `${name}.arrow`), tableToIPC(new Table(rows > 0 ? [batch] : schema as never), "file"));
  }
  const manifest = { kind, version: 1, scalars, tables: Object.fromEntries(Object.keys(tables).map((t) => [t, {}])) };
  writeFileSync(join(folder, "artifact.json"), JSON.stringify(manifest, null, 2) + "\n");
}
