/** Passwords and PINs: argon2id (RFC 9106), hashed on the library's own threads. */
import { hash, verify } from "@node-rs/argon2";
import { createHash, randomBytes } from "node:crypto";

/** 19 MiB, 2 passes, 1 lane: the smaller of the two settings that OWASP's password storage cheat sheet recommends. */
const cost = { memoryCost: 19_456, timeCost: 2, parallelism: 1 };

export const hashSecret = (secret: string): Promise<string> => hash(secret, cost);

/** Held against when there is nobody of that name, so that the answer takes as long. */
let nobodysHash: Promise<string> | undefined;

/** Whether the secret fits; with no stored hash it takes the same time and does not fit. */
export async function secretFits(stored: string | null, secret: string): Promise<boolean> {
  if (stored !== null) return verify(stored, secret);
  nobodysHash ??= hashSecret(randomBytes(16).toString("hex"));
  await verify(await nobodysHash, secret);
  return false;
}

/** A random token for a link or a cookie; the database keeps its hash alone. */
export const newToken = (): string => randomBytes(32).toString("base64url");
export const tokenHash = (token: string): string => createHash("sha256").update(token).digest("hex");
