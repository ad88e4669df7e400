/** Valid labs, people, instruments and sources, made through the API as people would; what matters to a test is given. */
import type { Role } from "@wavekeep/api/contract/common";
import type { createInstrumentInput, Instrument } from "@wavekeep/api/contract/instruments";
import type { Source, sourceInput } from "@wavekeep/api/contract/sources";
import { openDatabase } from "@wavekeep/api/db/connection";
import { openLab } from "@wavekeep/api/labs/new-lab";
import type { Client, TestApp } from "./app.ts";

/** Everybody's password in the tests. */
export const password = "correct horse battery";

export interface TestPerson {
  id: string;
  name: string;
  email: string;
  /** Signed in, in the lab. */
  client: Client;
}

export interface TestLab {
  id: string;
  manager: TestPerson;
  /** Invite somebody and sign them in. */
  add(name: string, roles: Role[]): Promise<TestPerson>;
}

let madeCount = 0;
const nextAddress = (name: string) =>
  `${name.toLowerCase().replaceAll(/[^a-z]+/g, ".")}.${(madeCount += 1)}@lab.example`;

/** A lab with its first manager, as `npm run new-lab` and the link it prints make it. */
export async function buildLab(wavekeep: TestApp, name = "Test lab"): Promise<TestLab> {
  const owner = openDatabase(wavekeep.database.ownerUrl, { max: 1 });
  const email = nextAddress("manager");
  const { labId, token } = await openLab(owner, { name, zone: "Europe/Berlin", email });
  await owner.close();
  const manager = await acceptInvitation(wavekeep, token, "Mara Manager", email);
  return {
    id: labId,
    manager,
    add: async (personName, roles) => {
      const address = nextAddress(personName);
      await manager.client.post("/invitations", { email: address, roles }).expect(200);
      return acceptInvitation(wavekeep, await mailedToken(wavekeep, address), personName, address);
    },
  };
}

async function acceptInvitation(wavekeep: TestApp, token: string, name: string, email: string): Promise<TestPerson> {
  const client = await wavekeep.visit();
  const { body } = await client.post(`/invitations/${token}/accept`, { name, password }).expect(200);
  // Whoever accepts is signed in under a new session, with a token of its own.
  await client.readSession();
  return { id: body.person.id as string, name, email, client };
}

/** The one-time token in the newest mail to an address. */
export async function mailedToken(wavekeep: TestApp, address: string): Promise<string> {
  const { rows } = await wavekeep.database.owner.query<{ text: string }>(
    "select text from mail_outbox where to_address = $1 order by queued_at desc limit 1",
    [address],
  );
  const token = /https?:\/\/\S+?(?:\/invitation\/|token=)([\w-]+)/.exec(rows[0]?.text ?? "")?.[1];
  if (token === undefined) throw new Error(`No mail with a link went to ${address}.`);
  return token;
}

type InstrumentInput = (typeof createInstrumentInput)["_zod"]["input"];
type SourceInput = (typeof sourceInput)["_zod"]["input"];

/** What a manager types to register a plain array spectrometer that writes wavelengths. */
export function instrumentInput(ownerId: string, given: Partial<InstrumentInput> = {}): InstrumentInput {
  return {
    name: "Bench 1",
    kind: "array",
    maker: "Own build",
    model: "A",
    serial: "0001",
    ownerId,
    place: "Room 1",
    altitudeM: 100,
    purchasedOn: null,
    configuration: {
      name: null,
      axisKind: "wavelength",
      axisMeaning: "standard-air",
      rangeFirstNm: 350,
      rangeLastNm: 850,
      nominalFwhmNm: 1.2,
      optics: {
        pixels: 2048,
        pixelPitchUm: 14,
        groovesPerMm: 600,
        focalLengthMm: 75,
        includedAngleDeg: 30,
        slitUm: 25,
        laserNm: null,
        fullScaleCounts: 65535,
        adjustmentNote: null,
      },
      intervalDays: 90,
      graceDays: 7,
      setupReproducibilityNm: 0.02,
      decisionRule: { kind: "guarded", r: 1 },
      warningShare: 0.75,
      axisCoefficients: null,
    },
    tolerance: [{ fromNm: 350, toNm: 850, toleranceNm: 0.5 }],
    firstDueOn: "2030-01-01",
    ...given,
  };
}

export async function buildInstrument(manager: TestPerson, given: Partial<InstrumentInput> = {}): Promise<Instrument> {
  const { body } = await manager.client.post("/instruments", instrumentInput(manager.id, given)).expect(200);
  return body as Instrument;
}

export async function buildSource(manager: TestPerson, given: Partial<SourceInput> = {}): Promise<Source> {
  const { body } = await manager.client
    .post("/sources", {
      label: "HA-1",
      name: "Mercury argon lamp",
      kind: "low-pressure-lamp",
      elements: ["Hg", "Ar"],
      laserLineNm: null,
      maker: "",
      serial: "",
      builtIntoInstrumentId: null,
      warmUpMinutes: 10,
      reviewDueOn: null,
      note: "",
      ...given,
    })
    .expect(200);
  return body as Source;
}
