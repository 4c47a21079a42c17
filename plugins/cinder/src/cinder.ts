// The format of Cinder loggers; the README describes it.
import { createReadStream } from "node:fs";
import { Fault } from "./serve";

export interface Channel {
  name: string;
  unit: string;
}

export interface Header {
  rate: number;
  channels: Channel[];
}

/** A stretch of rows: one array per channel. */
export interface Batch {
  first: number;
  values: number[][];
}

/** The lines of a file, each without its line feed; whole tells whether it had one. */
async function* lines(path: string): AsyncGenerator<{ text: string; whole: boolean }> {
  let rest = "";
  for await (const part of createReadStream(path, { encoding: "utf8", highWaterMark: 1 << 20 })) {
    const pieces = (rest + part).split("\n");
    rest = pieces.pop() ?? "";
    for (const text of pieces) yield { text, whole: true };
  }
  if (rest !== "") yield { text: rest, whole: false };
}

function header(text: string): Header {
  const bad = (why: string) => new Fault("input", why, "copy the recording again from the logger", "line 1");
  let h: unknown;
  try {
    h = JSON.parse(text);
  } catch {
    throw bad("this is no recording of a Cinder logger: its first line is not a header");
  }
  const { cinder, rate, channels } = (h ?? {}) as { cinder?: unknown; rate?: unknown; channels?: unknown };
  if (cinder !== 1) throw bad("this is no recording of a Cinder logger of version 1");
  if (typeof rate !== "number" || !(rate > 0 && rate < 1e9)) throw bad("the header states no rate");
  const seen = new Set<string>();
  const out: Channel[] = [];
  for (const c of Array.isArray(channels) ? channels : []) {
    const { name, unit } = (c ?? {}) as { name?: unknown; unit?: unknown };
    if (typeof name !== "string" || name === "" || seen.has(name)) throw bad(`the channel name ${JSON.stringify(name)} is empty or there twice`);
    seen.add(name);
    out.push({ name, unit: typeof unit === "string" ? unit : "" });
  }
  if (out.length === 0) throw bad("the header states no channels");
  return { rate, channels: out };
}

/** Reads header and rows. Rows come in batches; each waits until the caller has taken it. */
export async function read(
  path: string,
  cancelled: () => boolean,
  start: (h: Header) => boolean, // false ends the reading
  batch: (b: Batch) => void,
): Promise<{ rows: number; notes: string[] }> {
  const size = 4096;
  let h: Header | undefined;
  let row = 0;
  let held: number[][] = [];
  const notes: string[] = [];
  for await (const { text, whole } of lines(path)) {
    if (!h) {
      h = header(text);
      if (!start(h)) return { rows: 0, notes };
      held = h.channels.map(() => []);
      continue;
    }
    if (!whole) {
      notes.push("the last row is cut short and left out");
      break;
    }
    let values: unknown;
    try {
      values = JSON.parse(text);
    } catch {
      values = undefined;
    }
    const width = h.channels.length;
    if (!Array.isArray(values) || values.length !== width || !values.every((v) => v === null || typeof v === "number")) {
      throw new Fault("input", `the row is no list of ${width} numbers`, "mend the row, or copy the recording again", `line ${row + 2}, row ${row + 1}`);
    }
    values.forEach((v, i) => held[i].push(v === null ? NaN : (v as number)));
    row++;
    if (row % size === 0) {
      batch({ first: row - size + 1, values: held });
      held = h.channels.map(() => []);
      await new Promise((go) => setImmediate(go)); // so that a request to cancel is heard
      if (cancelled()) throw new Fault("cancelled", "stopped on request");
    }
  }
  if (!h) throw new Fault("input", "the file is empty", "give a recording");
  if (row % size > 0) batch({ first: row - (row % size) + 1, values: held });
  if (row === 0) throw new Fault("input", "the recording holds no whole row", "give a recording of at least one row", "line 2");
  return { rows: row, notes };
}
