/** The story's deeds, one by one, through the services. */
import { and, eq, isNull, like } from "drizzle-orm";
import { acknowledgeCheck, approveCheck } from "../checks/review-check.ts";
import { addCaptures } from "../captures/service.ts";
import { analyseCheck } from "../checks/analyse-check.ts";
import type { Analyser } from "../checks/analyser.ts";
import { beginCheck } from "../checks/begin-check.ts";
import { newAttempt, saveDraft } from "../checks/draft.ts";
import { submitCheck } from "../checks/submit-check.ts";
import type { CheckWork } from "../checks/work.ts";
import type { Config } from "../config.ts";
import { seedingProof } from "../auth/confirm-password.ts";
import { loadContext } from "../auth/context.ts";
import type { Check, DraftInput } from "../contract/checks.ts";
import type { Database } from "../db/connection.ts";
import { mailOutbox } from "../db/schema/index.ts";
import { asWavekeep, inLab, type Context } from "../db/tenancy.ts";
import { logEvent } from "../events/service.ts";
import { changeTolerance } from "../instruments/configurations.ts";
import { addDays, dateIn } from "../instruments/dates.ts";
import { createInstrument, readLabInstrument } from "../instruments/service.ts";
import type { Jobs } from "../jobs/jobs.ts";
import { openLab } from "../labs/new-lab.ts";
import { acceptInvitation } from "../people/invitations.ts";
import { changeRoles, invite, listPeople } from "../people/service.ts";
import type { HeadSigner } from "../records/signing.ts";
import type { Services } from "../services.ts";
import { createSource } from "../sources/service.ts";
import { bentAxis, roomOn, simulateRepeats } from "./simulate.ts";
import { DEMO_PASSWORD, lab, people, sources, type PersonKey } from "./cast.ts";
import type { DemoCheck, DemoInstrument } from "./story.ts";
import { CHECK_MINUTES, moment, timeline, type Step } from "./timeline.ts";

export interface StoryServices {
  db: Database;
  analyser: Analyser;
  signer: HeadSigner;
  config: Config;
}

/** First day of the story, before anything is registered. */
const OPENED_DAYS_AGO = 545;
/** Mail of the last days goes out when the server starts; what is older was read long ago in the story. */
const MAIL_IS_LIVE_DAYS = 2;
const DAY_MS = 86_400_000;

export async function tellStory(services: StoryServices, today: string, say: (line: string) => void): Promise<void> {
  const teller = new Teller(services, today);
  await teller.openTheLab();
  await teller.registerSources();
  const steps = timeline(today);
  let told = 0;
  for (const step of steps) {
    await teller.tell(step);
    told += 1;
    if (told % 40 === 0 || told === steps.length) say(`${told} of ${steps.length} deeds of 18 months`);
  }
  await teller.setOldMailAside();
}

class Teller {
  private readonly jobs: Jobs = { send: () => Promise.resolve() };
  private labId = "";
  private readonly personIds = new Map<PersonKey, string>();
  private readonly contexts = new Map<PersonKey, Context>();
  private readonly sourceIds = new Map<string, string>();
  private readonly instrumentIds = new Map<string, { id: string; configurationId: string }>();
  private readonly checkIds = new Map<DemoCheck, { id: string; revision: number }>();

  constructor(
    private readonly services: StoryServices,
    private readonly today: string,
  ) {}

  private get full(): Services {
    return { ...this.services, jobs: this.jobs } as Services;
  }
  private get work(): CheckWork {
    return { ...this.services, jobs: this.jobs };
  }

  /** A person's context at an instant of the story; asked anew only after roles or owners have changed. */
  private async as(key: PersonKey, at: Date): Promise<Context> {
    let ctx = this.contexts.get(key) ?? null;
    ctx ??= await loadContext(this.services.db, this.personIds.get(key)!, this.labId);
    if (ctx === null) throw new Error(`${people[key].name} is no member of the demo lab.`);
    this.contexts.set(key, ctx);
    return { ...ctx, statedNow: at };
  }

  async openTheLab(): Promise<void> {
    const { db } = this.services;
    const at = moment(this.today, OPENED_DAYS_AGO, "09:00");
    const opened = await openLab(db, { ...lab, email: people.ida.email, isDemo: true, statedNow: at });
    this.labId = opened.labId;
    await this.join("ida", opened.token, at);
    for (const key of Object.keys(people).filter((one) => one !== "ida") as PersonKey[]) {
      const { email, roles, isApprover } = people[key];
      const ida = await this.as("ida", at);
      const invitation = await invite(this.full, ida, { email, roles });
      await this.join(key, await this.mailedToken(invitation.id), at);
      if (isApprover) {
        const { people: members } = await listPeople(this.full, ida);
        const member = members.find((one) => one.id === this.personIds.get(key))!;
        await changeRoles(this.full, await this.as("ida", at), member.id, {
          roles,
          isApprover,
          version: member.version,
        });
        this.contexts.clear();
      }
    }
  }

  private async join(key: PersonKey, token: string, at: Date): Promise<void> {
    const accepted = await acceptInvitation(
      this.services,
      token,
      { name: people[key].name, password: DEMO_PASSWORD, host: "demo" },
      { labId: this.labId, statedNow: at },
    );
    this.personIds.set(key, accepted.personId);
  }

  /** The link in the mail, as the invited person would follow it. */
  private async mailedToken(invitationId: string): Promise<string> {
    const rows = await inLab(this.services.db, asWavekeep({ labId: this.labId, isDemo: true, zone: lab.zone }), (tx) =>
      tx
        .select({ text: mailOutbox.text })
        .from(mailOutbox)
        .where(like(mailOutbox.causeKey, `invitation:${invitationId}%`)),
    );
    const token = /\/invitation\/([\w-]+)/.exec(rows[0]?.text ?? "")?.[1];
    if (token === undefined) throw new Error("The invitation's mail holds no link.");
    return token;
  }

  async registerSources(): Promise<void> {
    for (const source of sources.filter(({ builtInto }) => builtInto === null)) await this.registerSource(source, null);
  }

  private async registerSource(source: (typeof sources)[number], builtIntoInstrumentId: string | null): Promise<void> {
    const ctx = await this.as("ida", moment(this.today, OPENED_DAYS_AGO - 4, "10:00"));
    const { reviewInDays, builtInto: _, ...stated } = source;
    const stored = await createSource(this.services.db, ctx, {
      ...stated,
      laserLineNm: null,
      builtIntoInstrumentId,
      reviewDueOn: addDays(this.today, reviewInDays),
    });
    this.sourceIds.set(source.label, stored.id);
  }

  async tell(step: Step): Promise<void> {
    if (step.kind === "register") return this.register(step.instrument, step.at);
    const { id, configurationId } = this.instrumentIds.get(step.instrument.name)!;
    if (step.kind === "event") {
      const { kind, title, note, breaksDrift, by, daysAgo } = step.event;
      await logEvent(this.services.db, await this.as(by, step.at), {
        configurationId,
        kind,
        title,
        note,
        breaksDrift,
        happenedOn: addDays(this.today, -daysAgo),
      });
      return;
    }
    if (step.kind === "tolerance") {
      const ctx = await this.as("ida", step.at);
      const stored = (await readLabInstrument(this.services.db, ctx, id)).configurations.find(
        (one) => one.id === configurationId,
      )!;
      await changeTolerance(this.services.db, ctx, configurationId, {
        segments: segmentsOf(step.instrument, step.instrument.toleranceNm),
        reason: step.instrument.earlierTolerance!.reason,
        version: stored.version,
      });
      return;
    }
    if (step.kind === "check") return this.makeCheck(step.instrument, step.check, step.at, step.ordinal);
    return this.approve(step.check, step.at);
  }

  private async register(instrument: DemoInstrument, at: Date): Promise<void> {
    const { name, kind, maker, model, serial, place } = instrument;
    const earlier = instrument.earlierTolerance;
    const stored = await createInstrument(this.services.db, await this.as("ida", at), {
      name,
      kind,
      maker,
      model,
      serial,
      place,
      ownerId: this.personIds.get(instrument.owner)!,
      altitudeM: null,
      purchasedOn: addDays(this.today, -instrument.purchasedDaysAgo),
      firstDueOn: addDays(this.today, -instrument.firstDueDaysAgo),
      tolerance: segmentsOf(instrument, earlier?.toleranceNm ?? instrument.toleranceNm),
      configuration: {
        name: null,
        axisKind: instrument.axisKind,
        axisMeaning: "standard-air",
        rangeFirstNm: instrument.firstNm,
        rangeLastNm: instrument.lastNm,
        nominalFwhmNm: instrument.fwhmNm,
        optics: {
          pixels: instrument.pixelPitchUm === null ? null : instrument.samples,
          pixelPitchUm: instrument.pixelPitchUm,
          groovesPerMm: instrument.groovesPerMm,
          focalLengthMm: instrument.focalLengthMm,
          includedAngleDeg: null,
          slitUm: null,
          laserNm: instrument.laserNm,
          fullScaleCounts: instrument.fullScaleCounts,
          adjustmentNote: null,
        },
        intervalDays: instrument.intervalDays,
        graceDays: instrument.graceDays,
        setupReproducibilityNm: instrument.statedReproducibilityNm,
        decisionRule: { kind: "guarded", r: 1 },
        warningShare: 0.75,
        axisCoefficients:
          instrument.axisKind === "pixel" ? bentAxis(instrument.firstNm, instrument.lastNm, instrument.samples) : null,
      },
    });
    this.contexts.clear();
    this.instrumentIds.set(name, { id: stored.id, configurationId: stored.currentConfigurationId });
    for (const source of sources.filter(({ builtInto }) => builtInto === name))
      await this.registerSource(source, stored.id);
  }

  private async makeCheck(instrument: DemoInstrument, story: DemoCheck, at: Date, ordinal: number): Promise<void> {
    const { db, analyser } = this.services;
    const { configurationId } = this.instrumentIds.get(instrument.name)!;
    const source = sources.find(({ label }) => label === instrument.sourceOn(story.daysAgo))!;
    const on = dateIn(lab.zone, at);
    const temperatureC = roomOn(dayOfYear(on), story.daysAgo);
    const later = (minutes: number) => this.as(story.by, new Date(at.getTime() + minutes * 60_000));

    let check = await beginCheck(db, await later(0), {
      configurationId,
      condition: story.condition,
      followsCheckId: null,
    });
    const id = check.summary.id;
    const keep = async (minutes: number, change: Partial<DraftInput>): Promise<Check> =>
      saveDraft(db, await later(minutes), id, { ...check.draft, ...change });
    check = await keep(1, {
      sourceIds: [this.sourceIds.get(source.label)!],
      minutesSinceSwitchOn: source.warmUpMinutes + 5 + (ordinal % 4) * 5,
      temperatureC,
      pressureHpa: null,
      fullScaleCounts: instrument.fullScaleCounts,
      note: story.note ?? "",
    });

    const attempt = async (minutes: number, number: number, isOverexposed: boolean): Promise<Check> => {
      const files = simulateRepeats(instrument, source, {
        daysAgo: story.daysAgo,
        on,
        temperatureC,
        attempt: number,
        isOverexposed,
        ordinal,
        condition: story.condition,
      });
      await addCaptures({ db, analyser }, await later(minutes), id, { part: "lamp", files });
      return analyseCheck({ db, analyser }, await later(minutes + 1), id, { version: check.draft.version });
    };
    if (story.badFirstAttempt) {
      check = await attempt(2, 1, true);
      check = await newAttempt(db, await later(8), id, {
        reason: "Exposure too long: strong lines are flat at the ceiling.",
        version: check.draft.version,
      });
    }
    check = await attempt(15, story.badFirstAttempt ? 2 : 1, false);
    if (story.leaveOut) {
      check = await keep(30, { leftOut: story.leaveOut });
      check = await analyseCheck({ db, analyser }, await later(31), id, { version: check.draft.version });
    }
    const ctx = await later(CHECK_MINUTES);
    check = await submitCheck(this.work, ctx, id, { version: check.draft.version }, seedingProof(ctx.personId!));
    this.checkIds.set(story, { id, revision: check.revision });
  }

  private async approve(story: DemoCheck, at: Date): Promise<void> {
    const ctx = await this.as(story.reviewedBy, at);
    const { id, revision } = this.checkIds.get(story)!;
    const check = await approveCheck(
      this.work,
      ctx,
      id,
      { revision, seen: { attempts: true, leftOut: true, settings: true, tolerance: true } },
      seedingProof(ctx.personId!),
    );
    if (story.ownerNote === undefined) return;
    const instrument = [...this.instrumentIds].find(
      ([, { id: instrumentId }]) => instrumentId === check.summary.instrumentId,
    )!;
    const owner = (await readLabInstrument(this.services.db, ctx, instrument[1].id)).owner;
    const key = [...this.personIds].find(([, personId]) => personId === owner.id)![0];
    await acknowledgeCheck(this.work, await this.as(key, new Date(at.getTime() + 20 * 60_000)), id, {
      note: story.ownerNote,
    });
  }

  /** Mail of the story's past was handed over in its own time; that of the last days is left for the server to send. */
  async setOldMailAside(): Promise<void> {
    const bare = asWavekeep({ labId: this.labId, isDemo: true, zone: lab.zone });
    await inLab(this.services.db, bare, async (tx) => {
      const waiting = await tx
        .select()
        .from(mailOutbox)
        .where(and(eq(mailOutbox.labId, this.labId), isNull(mailOutbox.sentAt)));
      const liveFrom = moment(this.today, MAIL_IS_LIVE_DAYS, "00:00");
      for (const mail of waiting.filter(({ queuedAt }) => queuedAt < liveFrom)) {
        await tx.update(mailOutbox).set({ sentAt: mail.queuedAt, attempts: 1 }).where(eq(mailOutbox.id, mail.id));
      }
    });
  }
}

const segmentsOf = (instrument: DemoInstrument, toleranceNm: number) => [
  { fromNm: instrument.firstNm, toNm: instrument.lastNm, toleranceNm },
];

function dayOfYear(date: string): number {
  return Math.floor((Date.parse(`${date}T12:00:00Z`) - Date.parse(`${date.slice(0, 4)}-01-01T12:00:00Z`)) / DAY_MS);
}
