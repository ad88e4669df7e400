/** Status: a shape, then a word, then colour; nothing that is in order is coloured. */
import type { CheckSummary, ShownState } from "@wavekeep/api/contract";
import type { ReactNode } from "react";

/** What can be shown beyond a configuration's own state: a line that was left out or is saturated. */
export type StatusState = ShownState | "left-out" | "saturated";

const RING = "M6 1a5 5 0 1 1 0 10A5 5 0 0 1 6 1zm0 1.5a3.5 3.5 0 1 0 0 7 3.5 3.5 0 0 0 0-7z";
const DISC = "M6 1a5 5 0 1 1 0 10A5 5 0 0 1 6 1z";
const BARRED = `${RING}M1.9 9l7.1-7.1 1.1 1.1L3 10.1z`;

interface Shape {
  path: string;
  fill: string;
  word: string;
  /** Colour of the word, where the word carries it too. */
  ink: string;
}

const SHAPES: Record<StatusState, Shape> = {
  "in-tolerance": { path: DISC, fill: "var(--ink)", word: "in tolerance", ink: "" },
  "near-limit": {
    path: "M6 1a5 5 0 1 1 0 10A5 5 0 0 1 6 1zm0 1.5v7a3.5 3.5 0 0 0 0-7z",
    fill: "var(--near)",
    word: "near limit",
    ink: "text-near",
  },
  "out-of-tolerance": { path: "M1 1h10v10H1z", fill: "var(--out)", word: "out of tolerance", ink: "text-out" },
  inconclusive: {
    path: "M6 1 11 11H1zm0 3.2L3.3 9.6h5.4z",
    fill: "var(--near)",
    word: "inconclusive",
    ink: "text-near",
  },
  "not-judged": { path: RING, fill: "var(--quiet)", word: "not judged", ink: "" },
  "left-out": { path: RING, fill: "var(--quiet)", word: "left out", ink: "text-quiet" },
  saturated: { path: RING, fill: "var(--quiet)", word: "saturated", ink: "text-quiet" },
  "on-hold": { path: BARRED, fill: "var(--ink)", word: "on hold", ink: "" },
  restricted: { path: BARRED, fill: "var(--ink)", word: "restricted", ink: "" },
  "out-of-service": { path: BARRED, fill: "var(--ink)", word: "out of service", ink: "" },
  quarantined: { path: BARRED, fill: "var(--ink)", word: "quarantined", ink: "" },
  retired: { path: RING, fill: "var(--quiet)", word: "retired", ink: "text-quiet" },
};

/** The state that a verdict is shown as. */
export function verdictState(
  verdict: "pass" | "inconclusive" | "fail" | null | undefined,
  nearLimit = false,
): StatusState {
  if (verdict === "fail") return "out-of-tolerance";
  if (verdict === "inconclusive") return "inconclusive";
  if (verdict === "pass") return nearLimit ? "near-limit" : "in-tolerance";
  return "not-judged";
}

/** The state of a check's result in lists. */
export const resultState = (result: CheckSummary["result"]): StatusState =>
  verdictState(result?.verdict, result?.nearLimit ?? false);

export const statusWord = (state: StatusState): string => SHAPES[state].word;
export const statusColour = (state: StatusState): string => SHAPES[state].fill;

/** The shape alone, 12 x 12; larger beside a title. Its word must stand near it, or be given as `label`. */
export function StatusShape({
  state,
  size = 12,
  label,
  className,
}: {
  state: StatusState;
  size?: number;
  label?: string;
  className?: string;
}) {
  const shape = SHAPES[state];
  return (
    <svg
      width={size}
      height={size}
      viewBox="0 0 12 12"
      className={`inline-block flex-none ${className ?? ""}`}
      role={label === undefined ? undefined : "img"}
      aria-hidden={label === undefined ? true : undefined}
      aria-label={label}
    >
      <path d={shape.path} fill={shape.fill} fillRule="evenodd" />
    </svg>
  );
}

/** Shape and word. `word` says more where there is more to say: `restricted to 300–700 nm`, a reason. */
export function Status({ state, word, className }: { state: StatusState; word?: ReactNode; className?: string }) {
  const shape = SHAPES[state];
  return (
    <span className={`inline-flex items-baseline gap-2 ${shape.ink} ${className ?? ""}`}>
      <StatusShape state={state} className="translate-y-[1px]" />
      <span>{word ?? shape.word}</span>
    </span>
  );
}
