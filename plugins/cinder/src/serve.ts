// Meets the host: handshake, mutual TLS, the services it calls. Nothing here knows the format of a recording.
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import * as grpc from "@grpc/grpc-js";
import { fromJSON } from "@grpc/proto-loader";
import protobuf from "protobufjs";
import { newIdentity } from "./certificate";
import hushframeProto from "../../wire/hushframe.proto";
import pluginProto from "./plugin.proto";
import healthProto from "./health.proto";

/** What went wrong, in the JSON form of the host's faults. */
export class Fault extends Error {
  constructor(
    readonly kind: "input" | "missing" | "protocol" | "cancelled",
    readonly text: string,
    readonly remedy = "",
    readonly place = "",
  ) {
    super(text);
  }
  json(): Buffer {
    return Buffer.from(JSON.stringify({ kind: this.kind, place: this.place || undefined, text: this.text, remedy: this.remedy || undefined }));
  }
}

/** A call of a tool, as the host sends it. */
export interface Request {
  method: string;
  arguments: Record<string, unknown>;
  request: Record<string, unknown>;
  in: string;
  out: string;
}

/** An element type or reader. */
export interface Tool {
  describe(): { kind: "element" | "reader"; name: string; about: string; version: string; arguments: object[] };
  call(request: Request, cancelled: () => boolean): Promise<void>;
}

const limit = 32 << 20; // the largest message either side accepts

function service(text: string, name: string): grpc.ServiceDefinition {
  const root = protobuf.parse(text, { keepCase: true }).root;
  const loaded = fromJSON(root.toJSON(), { keepCase: true, longs: Number, defaults: true, oneofs: true });
  let at: unknown = grpc.loadPackageDefinition(loaded);
  for (const part of name.split(".")) at = (at as Record<string, unknown>)[part];
  return (at as grpc.ServiceClientConstructor).service;
}

/** Serves tools to the host that started this process, until it says so or goes away. */
export function serve(tools: Tool[]): void {
  if (process.env.HUSHFRAME_EXTENSION !== "a5cf7d23-one-step-of-a-job") {
    process.stderr.write("cinder is an extension for hushframe and does nothing on its own.\nIt offers\n");
    for (const t of tools) process.stderr.write(`  the ${t.describe().kind} "${t.describe().name}": ${t.describe().about}\n`);
    process.exit(2);
  }
  const folder = mkdtempSync(join(tmpdir(), "cinder-"));
  const end = (code: number) => {
    rmSync(folder, { recursive: true, force: true });
    process.exit(code);
  };
  if (process.env.HUSHFRAME_WATCH_STDIN === "1") {
    process.stdin.on("end", () => end(3)).on("error", () => end(3)).resume();
  }
  process.on("SIGTERM", () => end(0));

  const identity = newIdentity();
  const credentials = grpc.ServerCredentials.createSsl(
    Buffer.from(process.env.PLUGIN_CLIENT_CERT ?? ""),
    [{ private_key: Buffer.from(identity.key), cert_chain: Buffer.from(identity.certificate) }],
    true,
  );
  const server = new grpc.Server({ "grpc.max_receive_message_length": limit, "grpc.max_send_message_length": limit });
  const running = new Map<string, { cancelled: boolean }>();

  server.addService(service(hushframeProto, "hushframe.v1.Extension"), {
    Attach: (_: unknown, done: grpc.sendUnaryData<object>) => done(null, {}), // tools need no service of the host
    Describe: (_: unknown, done: grpc.sendUnaryData<object>) =>
      done(null, { stages_json: [], tools_json: tools.map((t) => Buffer.from(JSON.stringify(t.describe()))) }),
    Cancel: (call: { request: { call: string } }, done: grpc.sendUnaryData<object>) => {
      const state = running.get(call.request.call);
      if (state) state.cancelled = true;
      done(null, {});
    },
    Relay: async (call: { request: { call: string; kind: string; name: string; request_json: Buffer } }, done: grpc.sendUnaryData<object>) => {
      const { call: id, kind, name, request_json } = call.request;
      const state = { cancelled: false };
      running.set(id, state);
      try {
        const tool = tools.find((t) => t.describe().kind === kind && t.describe().name === name);
        if (!tool) throw new Fault("protocol", `this process has no ${kind} "${name}"`);
        await tool.call(JSON.parse(request_json.toString()) as Request, () => state.cancelled);
        done(null, {});
      } catch (e) {
        const fault = e instanceof Fault ? e : new Fault("protocol", `a mistake in the program: ${(e as Error).stack ?? e}`);
        done(null, { fault_json: fault.json() });
      } finally {
        running.delete(id);
      }
    },
  });
  server.addService(service(healthProto, "grpc.health.v1.Health"), {
    Check: (_: unknown, done: grpc.sendUnaryData<object>) => done(null, { status: "SERVING" }),
  });
  server.addService(service(pluginProto, "plugin.GRPCBroker"), {
    StartStream: (call: grpc.ServerDuplexStream<object, object>) => {
      call.on("data", () => {}).on("end", () => call.end()).on("error", () => {});
    },
  });
  server.addService(service(pluginProto, "plugin.GRPCController"), {
    Shutdown: (_: unknown, done: grpc.sendUnaryData<object>) => {
      done(null, {});
      setTimeout(() => end(0), 10);
    },
  });
  const socket = join(folder, "s");
  server.bindAsync(`unix:${socket}`, credentials, (err) => {
    if (err) {
      process.stderr.write(`cannot serve: ${err.message}\n`);
      end(1);
    }
    process.stdout.write(`1|1|unix|${socket}|grpc|${identity.der.toString("base64").replace(/=+$/, "")}\n`);
  });
}
