// The reader "cinder": answers inspect and read with the tables that stages/kinds/KINDS.md describes.
import { Batch, Channel, read } from "./cinder";
import { write } from "./folder";
import { Fault, Request, serve } from "./serve";

async function inspect(r: Request): Promise<void> {
  let rate = 0;
  let channels: Channel[] = [];
  await read(r.in, () => false, (h) => {
    rate = h.rate;
    channels = h.channels;
    return false;
  }, () => {});
  if (rate === 0) throw new Fault("input", "the file is empty", "give a recording");
  write(r.out, "recording-header", { rate: { value: rate, unit: "Hz" }, timed: { value: false } }, {
    columns: [
      { name: "name", unit: "", type: "text", values: channels.map((c) => c.name) },
      { name: "unit", unit: "", type: "text", values: channels.map((c) => c.unit) },
      { name: "text", unit: "", type: "truth", values: channels.map(() => false) },
    ],
    notes: [{ name: "text", unit: "", type: "text", values: [] }],
  });
}

async function samples(r: Request, cancelled: () => boolean): Promise<void> {
  const columns = r.request.columns as string[];
  let at: number[] = [];
  const batches: Batch[] = [];
  const rows: number[] = [];
  const { notes } = await read(r.in, cancelled, (h) => {
    at = columns.map((name) => {
      const i = h.channels.findIndex((c) => c.name === name);
      if (i < 0) throw new Fault("input", "there is no such channel", "name one that the recording has", `column "${name}"`);
      return i;
    });
    return true;
  }, (b) => {
    rows.push(b.values[0].length);
    batches.push({ first: b.first, values: at.map((i) => b.values[i]) });
  });
  write(r.out, "recording-samples", {}, {
    batches: [
      { name: "first", unit: "", type: "int", values: batches.map((b) => b.first) },
      { name: "rows", unit: "", type: "int", values: rows },
      { name: "origin", unit: "s", type: "float", values: batches.map(() => 0) },
      { name: "time", unit: "s", type: "float list", values: batches.map(() => []) },
    ],
    values: [
      { name: "batch", unit: "", type: "int", values: batches.flatMap((b, i) => b.values.map(() => i)) },
      { name: "column", unit: "", type: "int", values: batches.flatMap((b) => b.values.map((_, c) => c)) },
      { name: "values", unit: "", type: "float list", values: batches.flatMap((b) => b.values) },
    ],
    notes: [{ name: "text", unit: "", type: "text", values: notes }],
    findings: ["what", "where", "extent", "consequence"].map((name) => ({ name, unit: "", type: "text", values: [] })),
  });
}

serve([{
  describe: () => ({
    kind: "reader", name: "cinder", about: "recordings of Cinder loggers", version: "1.0.0", arguments: [],
  }),
  call: async (r, cancelled) => {
    switch (r.method) {
      case "inspect":
        return inspect(r);
      case "read":
        return samples(r, cancelled);
    }
    throw new Fault("protocol", `a reader has no method "${r.method}"`, "the program may be newer than this extension");
  },
}]);
