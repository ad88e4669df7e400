/**
 * The working copy of a check: kept on this device with each key, on the server when the hand rests, analysed again when
 * something changed that a result depends on. What is typed is never replaced by an answer.
 */
import type { Check, DraftInput } from "@wavekeep/api/contract";
import { useCallback, useEffect, useRef, useState } from "react";
import { isStale } from "../shared/form.tsx";
import { analyse, readCheck, saveDraft, useKeepCheck } from "./queries.ts";

export type DraftValues = Omit<DraftInput, "version">;

const restMs = 700;
const deviceKey = (checkId: string) => `wavekeep.draft.${checkId}`;

const valuesOf = (check: Check): DraftValues => {
  const { version: _, ...values } = check.draft;
  return values;
};

/** What a result depends on: notes and the lamp's minutes are told, not reckoned with. */
const inputsOf = ({ note: _note, minutesSinceSwitchOn: _minutes, ...inputs }: DraftValues): string =>
  JSON.stringify(inputs);

/** A number that cannot be read yet is not sent as one. */
const withoutUnread = (values: DraftValues): DraftValues =>
  Object.fromEntries(
    Object.entries(values).map(([key, value]) => [
      key,
      typeof value === "number" && Number.isNaN(value) ? null : value,
    ]),
  ) as DraftValues;

/** What this device kept of a draft that the server never got; null when there is none or it does not fit. */
function readDevice(check: Check): DraftValues | null {
  try {
    const text = localStorage.getItem(deviceKey(check.summary.id));
    if (text === null) return null;
    const kept = JSON.parse(text) as { version: number; values: DraftValues };
    // Kept against an older version: the server's copy moved on, by this person's other window or by somebody else.
    return kept.version === check.draft.version ? { ...valuesOf(check), ...kept.values } : null;
  } catch {
    return null;
  }
}

function writeDevice(checkId: string, kept: { version: number; values: DraftValues } | null): void {
  try {
    if (kept === null) localStorage.removeItem(deviceKey(checkId));
    else localStorage.setItem(deviceKey(checkId), JSON.stringify(kept));
  } catch {
    // A private window may refuse: the server's copy stands.
  }
}

export interface DraftKeeper {
  draft: DraftValues;
  change: (patch: Partial<DraftValues>) => void;
  /** Changes and waits for the server's word; what it refuses is taken back and thrown. */
  apply: (patch: Partial<DraftValues>) => Promise<void>;
  /** Sends what is not kept yet. @returns the version that stands on the server */
  flush: () => Promise<number>;
  /** Analyses the current attempt, e.g. when captures have arrived. */
  analyseNow: () => Promise<void>;
  keptAt: Date | null;
  isSaving: boolean;
  isAnalysing: boolean;
  isUnsaved: boolean;
  saveError: unknown;
  analysisError: unknown;
  /** After a stale answer: send what stands here over it. */
  keepMine: () => void;
  /** After a stale answer: show what stands on the server. */
  takeTheirs: () => void;
}

export function useDraft(check: Check): DraftKeeper {
  const checkId = check.summary.id;
  const keep = useKeepCheck(checkId);
  const [draft, setDraft] = useState<DraftValues>(() => readDevice(check) ?? valuesOf(check));
  const [isUnsaved, setUnsaved] = useState(() => readDevice(check) !== null);
  const [keptAt, setKeptAt] = useState<Date | null>(null);
  const [isSaving, setSaving] = useState(false);
  const [isAnalysing, setAnalysing] = useState(false);
  const [saveError, setSaveError] = useState<unknown>(null);
  const [analysisError, setAnalysisError] = useState<unknown>(null);
  const latest = useRef(draft);
  const version = useRef(check.draft.version);
  const unsent = useRef(isUnsaved);
  const analysed = useRef(inputsOf(valuesOf(check)));
  const hasCaptures = useRef(false);
  const queue = useRef<Promise<unknown>>(Promise.resolve());
  const timer = useRef<ReturnType<typeof setTimeout> | undefined>(undefined);

  useEffect(() => {
    hasCaptures.current = check.attempts.some(
      (attempt) =>
        attempt.number === check.currentAttempt && attempt.captures.some((capture) => capture.refusal === null),
    );
    // Nothing of this page's is waiting, and the server's copy moved on: it is shown. Otherwise the refusal tells of it.
    if (unsent.current || check.draft.version <= version.current) return;
    version.current = check.draft.version;
    latest.current = valuesOf(check);
    setDraft(latest.current);
  }, [check]);

  const receive = useCallback(
    (reply: Check) => {
      version.current = reply.draft.version;
      keep(reply);
    },
    [keep],
  );

  /** One request at a time, in the order asked: each is sent with the version that the one before brought. */
  const inTurn = useCallback(<T>(job: () => Promise<T>): Promise<T> => {
    const run = queue.current.then(job, job);
    queue.current = run.catch(() => undefined);
    return run;
  }, []);

  const save = useCallback(
    () =>
      inTurn(async () => {
        clearTimeout(timer.current);
        if (!unsent.current) return;
        unsent.current = false;
        setSaving(true);
        setSaveError(null);
        try {
          receive(await saveDraft(checkId, { ...withoutUnread(latest.current), version: version.current }));
          setKeptAt(new Date());
          if (!unsent.current) {
            setUnsaved(false);
            writeDevice(checkId, null);
          }
        } catch (error) {
          unsent.current = true;
          setSaveError(error);
          throw error;
        } finally {
          setSaving(false);
        }
      }),
    [checkId, inTurn, receive],
  );

  const analyseNow = useCallback(
    () =>
      inTurn(async () => {
        const inputs = inputsOf(latest.current);
        setAnalysing(true);
        setAnalysisError(null);
        try {
          receive(await analyse(checkId, version.current));
          analysed.current = inputs;
        } catch (error) {
          setAnalysisError(error);
        } finally {
          setAnalysing(false);
        }
      }),
    [checkId, inTurn, receive],
  );

  const saveAndAnalyse = useCallback(async () => {
    await save();
    if (hasCaptures.current && latest.current.sourceIds.length > 0 && analysed.current !== inputsOf(latest.current))
      await analyseNow();
  }, [save, analyseNow]);

  const put = useCallback(
    (patch: Partial<DraftValues>) => {
      latest.current = { ...latest.current, ...patch };
      unsent.current = true;
      setDraft(latest.current);
      setUnsaved(true);
      writeDevice(checkId, { version: version.current, values: latest.current });
    },
    [checkId],
  );

  const change = useCallback(
    (patch: Partial<DraftValues>) => {
      put(patch);
      clearTimeout(timer.current);
      timer.current = setTimeout(() => void saveAndAnalyse().catch(() => undefined), restMs);
    },
    [put, saveAndAnalyse],
  );

  const apply = useCallback(
    async (patch: Partial<DraftValues>) => {
      const before = latest.current;
      put(patch);
      try {
        await save();
      } catch (error) {
        put(Object.fromEntries(Object.keys(patch).map((key) => [key, before[key as keyof DraftValues]])));
        if (!isStale(error)) setSaveError(null);
        throw error;
      }
      if (hasCaptures.current) await analyseNow();
    },
    [put, save, analyseNow],
  );

  const flush = useCallback(async () => {
    await save();
    return version.current;
  }, [save]);

  const takeServer = useCallback(async () => {
    const current = await readCheck(checkId);
    version.current = current.draft.version;
    return current;
  }, [checkId]);

  const keepMine = useCallback(() => {
    void inTurn(async () => keep(await takeServer()))
      .then(saveAndAnalyse)
      .catch(() => undefined);
  }, [inTurn, keep, takeServer, saveAndAnalyse]);

  const takeTheirs = useCallback(() => {
    void inTurn(async () => {
      const current = await takeServer();
      latest.current = valuesOf(current);
      unsent.current = false;
      setDraft(latest.current);
      setUnsaved(false);
      setSaveError(null);
      writeDevice(checkId, null);
      keep(current);
    }).catch(setSaveError);
  }, [checkId, inTurn, keep, takeServer]);

  // A draft found on this device is sent as soon as the page is open again.
  useEffect(() => {
    if (unsent.current) timer.current = setTimeout(() => void saveAndAnalyse().catch(() => undefined), restMs);
    return () => clearTimeout(timer.current);
  }, [saveAndAnalyse]);

  return {
    draft,
    change,
    apply,
    flush,
    analyseNow,
    keptAt,
    isSaving,
    isAnalysing,
    isUnsaved,
    saveError,
    analysisError,
    keepMine,
    takeTheirs,
  };
}
