// A self-signed certificate on P-256, written as DER by hand (ITU-T X.690, RFC 5280): node makes keys and signatures, but
// no certificates.
import { generateKeyPairSync, randomBytes, sign } from "node:crypto";

function der(tag: number, ...parts: Buffer[]): Buffer {
  const body = Buffer.concat(parts);
  if (body.length < 0x80) return Buffer.concat([Buffer.from([tag, body.length]), body]);
  const size: number[] = [];
  for (let n = body.length; n > 0; n >>= 8) size.unshift(n & 0xff);
  return Buffer.concat([Buffer.from([tag, 0x80 | size.length, ...size]), body]);
}

const sequence = (...parts: Buffer[]) => der(0x30, ...parts);
const object = (hex: string) => der(0x06, Buffer.from(hex, "hex"));
const truth = der(0x01, Buffer.from([0xff]));

const ecdsaWithSha256 = sequence(object("2a8648ce3d040302"));

function time(at: Date): Buffer {
  const text = at.toISOString().replace(/[-:T]/g, "").slice(2, 14) + "Z"; // UTCTime, good until 2049
  return der(0x17, Buffer.from(text));
}

function extension(id: string, critical: boolean, value: Buffer): Buffer {
  return sequence(object(id), ...(critical ? [truth] : []), der(0x04, value));
}

/** An identity for one process: key and certificate in PEM, the certificate in DER. */
export function newIdentity(): { key: string; certificate: string; der: Buffer } {
  const { privateKey, publicKey } = generateKeyPairSync("ec", { namedCurve: "P-256" });
  const name = sequence(der(0x31, sequence(object("550403"), der(0x0c, Buffer.from("localhost")))));
  const serial = randomBytes(16);
  serial[0] = (serial[0] & 0x7f) | 0x01; // positive
  const hour = 3600_000;
  const extensions = sequence(
    extension("551d0f", true, der(0x03, Buffer.from([2, 0x84]))), // digital signature, certificate signing
    extension("551d25", false, sequence(object("2b06010505070301"), object("2b06010505070302"))), // server, client
    extension("551d13", true, sequence(truth)), // may sign: itself
    extension("551d11", false, sequence(der(0x82, Buffer.from("localhost")))),
  );
  const body = sequence(
    der(0xa0, der(0x02, Buffer.from([2]))), // version 3
    der(0x02, serial),
    ecdsaWithSha256,
    name,
    sequence(time(new Date(Date.now() - hour)), time(new Date(Date.now() + 365 * 24 * hour))),
    name,
    publicKey.export({ type: "spki", format: "der" }),
    der(0xa3, extensions),
  );
  const signature = sign("sha256", body, privateKey);
  const all = sequence(body, ecdsaWithSha256, der(0x03, Buffer.from([0]), signature));
  const pem = all.toString("base64").replace(/.{1,64}/g, "$&\n");
  return {
    key: privateKey.export({ type: "pkcs8", format: "pem" }) as string,
    certificate: `-----BEGIN CERTIFICATE-----\n${pem}-----END CERTIFICATE-----\n`,
    der: all,
  };
}
