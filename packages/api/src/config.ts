/** Configuration: environment variables, read and validated once at start. The README lists them. */
import { randomBytes } from "node:crypto";
import fs from "node:fs";
import path from "node:path";
import { z } from "zod";

const flag = z
  .enum(["0", "1", "true", "false", ""])
  .optional()
  .transform((text) => text === "1" || text === "true");

const environment = z.object({
  PORT: z.coerce.number().int().min(0).max(65535).default(4310),
  HOST: z.string().min(1).default("127.0.0.1"),
  DATABASE_URL: z.string().regex(/^postgres(ql)?:\/\//, "DATABASE_URL must begin with postgres://"),
  SMTP_URL: z
    .string()
    .regex(/^smtps?:\/\//, "SMTP_URL must begin with smtp:// or smtps://")
    .optional(),
  MAIL_FROM: z.string().min(3).default("Wavekeep <wavekeep@localhost>"),
  ROLE: z.enum(["all", "web", "worker"]).default("all"),
  WAVEKEEP_DATA_DIR: z.string().min(1).default(".wavekeep"),
  WAVEKEEP_DEMO: flag,
  /** Address people open, as it stands in mails; behind a TLS proxy it begins with https://. */
  PUBLIC_URL: z.url().optional(),
  /** How many proxies stand before the server: whose X-Forwarded-For is believed. */
  TRUST_PROXY: z.coerce.number().int().min(0).max(5).default(0),
  WAVEKEEP_SESSION_KEY: z.string().min(32, "needs at least 32 characters").optional(),
  WAVEKEEP_SESSION_KEY_FILE: z.string().min(1).optional(),
  WAVEKEEP_SIGNING_KEY_FILE: z.string().min(1).optional(),
  LOG_LEVEL: z.enum(["silent", "error", "warn", "info", "debug"]).default("info"),
  WAVEKEEP_WEB_DIR: z.string().optional(),
  NODE_ENV: z.string().default("production"),
});

export interface Config {
  port: number;
  host: string;
  databaseUrl: string;
  /** Null: mail goes to the local catcher (demo) or waits in the outbox. */
  smtpUrl: string | null;
  mailFrom: string;
  role: "all" | "web" | "worker";
  dataDir: string;
  /** A demo: sign-ins are named on the sign-in page, mail is read at /dev/mail. On loopback, or where WAVEKEEP_DEMO=1 asks for it. */
  demo: boolean;
  publicUrl: string;
  secureCookies: boolean;
  trustProxy: number;
  sessionKey: string;
  /** PEM file of the Ed25519 key that signs the heads of the trail; made at the first start. */
  signingKeyFile: string;
  /** Written by the start that seeded the demo lab. */
  demoSignInsFile: string;
  logLevel: string;
  /** Folder of the built client; null: the API alone. */
  webDir: string | null;
  test: boolean;
  version: string;
}

/** Version of the product, as in the package's manifest. */
export const VERSION = "0.1.0";

/** The environment is not as it must be: told in plain words at start. */
export class ConfigError extends Error {}

/**
 * Read and validate the environment.
 *
 * @throws {ConfigError} with every problem at once
 */
export function loadConfig(env: NodeJS.ProcessEnv): Config {
  const given = Object.fromEntries(Object.entries(env).filter(([, value]) => value !== undefined && value !== ""));
  const parsed = environment.safeParse(given);
  if (!parsed.success) {
    const lines = parsed.error.issues.map((issue) => `  ${issue.path.join(".")}: ${issue.message}`);
    throw new ConfigError(`The environment needs another look:\n${lines.join("\n")}`);
  }
  if (given["DATABASE_OWNER_URL"] !== undefined) {
    throw new ConfigError(
      "The server was given DATABASE_OWNER_URL. The owner's address belongs to the migrating step alone: start the server without it.",
    );
  }
  const e = parsed.data;
  const dataDir = path.resolve(e.WAVEKEEP_DATA_DIR);
  const publicUrl = (e.PUBLIC_URL ?? `http://${e.HOST === "0.0.0.0" ? "127.0.0.1" : e.HOST}:${e.PORT}`).replace(
    /\/$/,
    "",
  );
  return {
    port: e.PORT,
    host: e.HOST,
    databaseUrl: e.DATABASE_URL,
    smtpUrl: e.SMTP_URL ?? null,
    mailFrom: e.MAIL_FROM,
    role: e.ROLE,
    dataDir,
    demo: e.WAVEKEEP_DEMO,
    publicUrl,
    secureCookies: publicUrl.startsWith("https://"),
    trustProxy: e.TRUST_PROXY,
    sessionKey: e.WAVEKEEP_SESSION_KEY ?? keptSecret(e.WAVEKEEP_SESSION_KEY_FILE ?? path.join(dataDir, "session.key")),
    signingKeyFile: e.WAVEKEEP_SIGNING_KEY_FILE ?? path.join(dataDir, "signing.key"),
    demoSignInsFile: path.join(dataDir, "demo-sign-ins.json"),
    logLevel: e.LOG_LEVEL,
    webDir: e.WAVEKEEP_WEB_DIR === undefined ? null : path.resolve(e.WAVEKEEP_WEB_DIR),
    test: e.NODE_ENV === "test",
    version: VERSION,
  };
}

/** A random secret kept in a file that only its owner reads; made at the first start. */
function keptSecret(file: string): string {
  if (!fs.existsSync(file)) {
    fs.mkdirSync(path.dirname(file), { recursive: true, mode: 0o700 });
    try {
      fs.writeFileSync(file, randomBytes(48).toString("base64url"), { mode: 0o600, flag: "wx" });
    } catch (error) {
      if ((error as NodeJS.ErrnoException).code !== "EEXIST") throw error;
    }
  }
  return fs.readFileSync(file, "utf8").trim();
}
