/**
 * Signing heads of the chain: Ed25519 (RFC 8032) with a key that the database does not hold. Who recomputes a chain from
 * the start can make its hashes fit, but not these signatures.
 */
import {
  createHash,
  createPrivateKey,
  createPublicKey,
  generateKeyPairSync,
  sign,
  verify,
  type KeyObject,
} from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import { canonicalText } from "./canonical.ts";

export interface HeadSigner {
  /** SHA-256 of the public key (SubjectPublicKeyInfo, DER), hex: printed on reports. */
  fingerprint: string;
  /** SubjectPublicKeyInfo, PEM. */
  publicKey: string;
  /** Base64 signature over lab, number and hash. */
  sign(labId: string, number: number, hash: string): string;
}

const signedBytes = (labId: string, number: number, hash: string): Buffer =>
  Buffer.from(canonicalText({ form: 1, hash, lab: labId, number }), "utf8");

const fingerprintOf = (key: KeyObject): string =>
  createHash("sha256")
    .update(key.export({ type: "spki", format: "der" }))
    .digest("hex");

/** A signer from a PEM private key (PKCS 8). @throws when it is no Ed25519 key */
export function signerFromPem(pem: string): HeadSigner {
  const privateKey = createPrivateKey(pem);
  if (privateKey.asymmetricKeyType !== "ed25519")
    throw new Error("The signing key must be an Ed25519 private key in PEM form.");
  const publicKey = createPublicKey(privateKey);
  return {
    fingerprint: fingerprintOf(publicKey),
    publicKey: publicKey.export({ type: "spki", format: "pem" }) as string,
    sign: (labId, number, hash) => sign(null, signedBytes(labId, number, hash), privateKey).toString("base64"),
  };
}

/**
 * The signing key of this installation, made at the first start. Readable by its owner alone.
 *
 * @param file path of the PEM file, outside the database
 */
export function openSigningKey(file: string): HeadSigner {
  if (!fs.existsSync(file)) {
    fs.mkdirSync(path.dirname(file), { recursive: true, mode: 0o700 });
    const { privateKey } = generateKeyPairSync("ed25519");
    const pem = privateKey.export({ type: "pkcs8", format: "pem" }) as string;
    try {
      fs.writeFileSync(file, pem, { mode: 0o600, flag: "wx" });
    } catch (error) {
      // Another process of the same installation was faster: its key is the one.
      if ((error as NodeJS.ErrnoException).code !== "EEXIST") throw error;
    }
  }
  return signerFromPem(fs.readFileSync(file, "utf8"));
}

/** Whether a stored signature fits its head and the key's fingerprint fits the key. */
export function isSignedHeadValid(head: {
  labId: string;
  number: number;
  hash: string;
  publicKey: string;
  keyFingerprint: string;
  signature: string;
}): boolean {
  try {
    const key = createPublicKey(head.publicKey);
    return (
      fingerprintOf(key) === head.keyFingerprint &&
      verify(null, signedBytes(head.labId, head.number, head.hash), key, Buffer.from(head.signature, "base64"))
    );
  } catch {
    return false;
  }
}
