/** The steps of a check as a technician and a reviewer take them, through HTTP. */
import fs from "node:fs";
import path from "node:path";
import type { Check } from "@wavekeep/api/contract/checks";
import type { Client } from "./app.ts";
import { password } from "./factories.ts";

const captureDir = path.resolve(import.meta.dirname, "../fixtures/captures");

/** A recorded capture, as received. */
export const realCapture = (name: string) => ({
  name: path.basename(name),
  bytes: fs.readFileSync(path.join(captureDir, name)),
});

/** A neon capture of the one Raman bench that was recorded on nine dates. */
export const neonCapture = (date: string) => realCapture(`neon-series/${date}.csv`);

export async function beginCheck(
  client: Client,
  configurationId: string,
  condition: "as-found" | "as-left" = "as-found",
): Promise<Check> {
  return (await client.post("/checks", { configurationId, condition, followsCheckId: null }).expect(200)).body as Check;
}

/** Keep the working copy with something changed in it. */
export async function saveDraft(client: Client, check: Check, change: Partial<Check["draft"]>): Promise<Check> {
  return (await client.put(`/checks/${check.summary.id}/draft`, { ...check.draft, ...change }).expect(200))
    .body as Check;
}

export async function analyse(client: Client, check: Check): Promise<Check> {
  const reply = await client.post(`/checks/${check.summary.id}/analyses`, { version: check.draft.version });
  if (reply.status !== 200) throw new Error(`analyse answered ${reply.status}: ${JSON.stringify(reply.body)}`);
  return reply.body as Check;
}

export async function submit(client: Client, check: Check): Promise<Check> {
  const reply = await client.post(`/checks/${check.summary.id}/submit`, { password, version: check.draft.version });
  if (reply.status !== 200) throw new Error(`submit answered ${reply.status}: ${JSON.stringify(reply.body)}`);
  return reply.body as Check;
}

export const seenAll = { attempts: true, leftOut: true, settings: true, tolerance: true } as const;

export async function approve(client: Client, check: Check): Promise<Check> {
  const reply = await client.post(`/checks/${check.summary.id}/approve`, {
    password,
    revision: check.revision,
    seen: seenAll,
  });
  if (reply.status !== 200) throw new Error(`approve answered ${reply.status}: ${JSON.stringify(reply.body)}`);
  return reply.body as Check;
}

/** A check from its beginning to its last analysis. */
export async function measure(
  client: Client,
  configurationId: string,
  given: {
    captures: { name: string; bytes: Uint8Array }[];
    sourceId: string;
    condition?: "as-found" | "as-left";
    change?: Partial<Check["draft"]>;
  },
): Promise<Check> {
  const begun = await beginCheck(client, configurationId, given.condition);
  await client.upload(`/checks/${begun.summary.id}/captures`, "files", given.captures, { part: "lamp" }).expect(200);
  const drafted = await saveDraft(client, begun, {
    sourceIds: [given.sourceId],
    temperatureC: 21.4,
    minutesSinceSwitchOn: 20,
    ...given.change,
  });
  return analyse(client, drafted);
}

/** A reply that is bytes. */
export async function getBytes(
  client: Client,
  route: string,
): Promise<{ status: number; type: string; bytes: Buffer }> {
  const reply = await client
    .get(route)
    .buffer(true)
    .parse((res, done) => {
      const parts: Buffer[] = [];
      res.on("data", (part: Buffer) => parts.push(part));
      res.on("end", () => done(null, Buffer.concat(parts)));
    });
  return { status: reply.status, type: String(reply.headers["content-type"]), bytes: reply.body as Buffer };
}

/** The argon capture with its axis moved, as an instrument out of tolerance would have written it. */
export function movedArgon(shiftNm: number, name = "moved.csv"): { name: string; bytes: Buffer }[] {
  const [heading, ...lines] = realCapture("ar-arc-angstrom.csv").bytes.toString("utf8").trim().split("\n");
  const moved = lines.map((line) => {
    const [angstrom, value] = line.split(",");
    return `${Number(angstrom) + shiftNm * 10},${value}`;
  });
  return [{ name, bytes: Buffer.from([heading, ...moved].join("\n")) }];
}
