/** Canonical bytes and hashes: RFC 8785 text, UTF-8, SHA-256 as lower-case hex. */
import { createHash, createHmac } from "node:crypto";
import canonicalize from "canonicalize";

/**
 * RFC 8785 text of a JSON value.
 *
 * @throws {TypeError} for what JSON cannot hold (undefined, NaN, infinity)
 */
export function canonicalText(value: unknown): string {
  const text = canonicalize(value);
  if (text === undefined) throw new TypeError("This value has no JSON form.");
  return text;
}

/** SHA-256, hex, of text (as UTF-8) or bytes. */
export const sha256Hex = (content: string | Uint8Array): string => createHash("sha256").update(content).digest("hex");

/** What an entry holds in place of a name or an address: HMAC-SHA-256 with the entry's own salt, hex. */
export const personalHash = (salt: string, value: string): string =>
  createHmac("sha256", salt).update(value).digest("hex");
