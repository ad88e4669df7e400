/** Files on their way: each is sent to the server first, drawn here meanwhile, and analysed when its receipt is in. */
import type { Check } from "@wavekeep/api/contract";
import { useQueryClient } from "@tanstack/react-query";
import { useCallback, useRef, useState } from "react";
import { ApiProblem, formatBytes } from "../ui/index.ts";
import { addCaptures } from "./queries.ts";
import type { DraftKeeper } from "./use-draft.ts";
import type { DrawReply } from "./draw-worker.ts";

/** What the server takes: 50 MB a file, 40 files at once. */
const mostBytes = 50 * 1024 * 1024;
const mostFiles = 40;

export interface TravellingFile {
  key: number;
  name: string;
  sizeBytes: number;
  /** Share sent, 0 to 1. */
  sent: number;
  /** Why it was not stored; null while it travels. */
  problem: unknown;
}

export interface Uploads {
  travelling: readonly TravellingFile[];
  isBusy: boolean;
  add: (files: readonly File[], part: "lamp" | "dark") => void;
  dismiss: (key: number) => void;
}

const tooLarge = (file: File) =>
  new ApiProblem({
    type: "/problems/too-large",
    title: "Too large",
    status: 413,
    detail: `${file.name} has ${formatBytes(file.size)}; files up to 50 MB are taken. It was not sent; the other files go on.`,
  });

export function useUploads(
  check: Check,
  keeper: DraftKeeper,
  local: { draw: (file: File) => void; drawn: DrawReply | null; forget: () => void },
): Uploads {
  const client = useQueryClient();
  const [travelling, setTravelling] = useState<readonly TravellingFile[]>([]);
  const [busy, setBusy] = useState(0);
  const next = useRef(1);
  const checkId = check.summary.id;
  const { draw, forget } = local;
  const { analyseNow, flush } = keeper;
  const hasSource = keeper.draft.sourceIds.length > 0;

  const update = useCallback(
    (key: number, change: Partial<TravellingFile>) =>
      setTravelling((files) => files.map((file) => (file.key === key ? { ...file, ...change } : file))),
    [],
  );
  const dismiss = useCallback((key: number) => setTravelling((files) => files.filter((file) => file.key !== key)), []);

  const send = useCallback(
    async (batch: { file: File; key: number }[], part: "lamp" | "dark") => {
      setBusy((count) => count + 1);
      let stored = 0;
      try {
        // One after the other: each has its receipt as soon as it is in, and one that is refused keeps no other back.
        for (const { file, key } of batch) {
          try {
            await addCaptures(checkId, [file], part, (sent) => update(key, { sent }));
            stored += 1;
            await client.invalidateQueries({ queryKey: ["checks", checkId] });
            dismiss(key);
          } catch (problem) {
            update(key, { problem });
          }
        }
        if (stored > 0) {
          await flush().catch(() => undefined);
          if (hasSource) await analyseNow();
          forget();
        }
      } finally {
        setBusy((count) => count - 1);
      }
    },
    [checkId, client, update, dismiss, flush, hasSource, analyseNow, forget],
  );

  const add = useCallback(
    (files: readonly File[], part: "lamp" | "dark") => {
      const listed = files.slice(0, mostFiles).map((file) => ({ file, key: next.current++ }));
      if (listed.length === 0) return;
      setTravelling((before) => [
        ...before,
        ...listed.map(({ file, key }) => ({
          key,
          name: file.name,
          sizeBytes: file.size,
          sent: 0,
          problem: file.size > mostBytes ? tooLarge(file) : null,
        })),
      ]);
      const going = listed.filter(({ file }) => file.size <= mostBytes);
      const last = going.at(-1);
      if (last === undefined) return;
      if (part === "lamp") draw(last.file);
      void send(going, part);
    },
    [draw, send],
  );

  return { travelling, isBusy: busy > 0, add, dismiss };
}
