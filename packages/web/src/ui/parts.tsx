/** Small parts that many screens share. */
import { useId, type KeyboardEvent, type ReactNode } from "react";
import { NavLink } from "react-router";
import { useZone } from "../shared/session.ts";
import { formatAgo, formatDate, formatDay, formatInstant, formatShortDay, formatTime, dueWords } from "./format.ts";

/** A caution: text with an ink rule at its left, no colour. */
export function Caution({ title, text, className }: { title: string; text: string; className?: string }) {
  return (
    <p className={`caution ${className ?? ""}`}>
      <b>{title.replace(/[.]?$/, ".")}</b> {text}
    </p>
  );
}

/** Tabs that are addresses: back works, each can be sent as a link. */
export function Tabs({
  label,
  items,
}: {
  label: string;
  items: readonly { to: string; label: ReactNode; end?: boolean }[];
}) {
  return (
    <nav aria-label={label} className="border-hairline no-print flex gap-7 overflow-x-auto overflow-y-hidden border-b">
      {items.map((item) => (
        <NavLink key={item.to} to={item.to} end={item.end ?? true} className="tab">
          {item.label}
        </NavLink>
      ))}
    </nav>
  );
}

interface SwitchesProps<Value extends string> {
  /** What is switched, for screen readers. */
  label: string;
  value: Value;
  onChange: (value: Value) => void;
  choices: readonly { value: Value; label: ReactNode }[];
}

/** Switches of the margin: one of a few, by a tick. One tab stop; arrows choose. */
export function Switches<Value extends string>({ label, value, onChange, choices }: SwitchesProps<Value>) {
  const id = useId();
  const move = (event: KeyboardEvent<HTMLDivElement>) => {
    const step =
      event.key === "ArrowDown" || event.key === "ArrowRight"
        ? 1
        : event.key === "ArrowUp" || event.key === "ArrowLeft"
          ? -1
          : 0;
    if (step === 0) return;
    event.preventDefault();
    const at = choices.findIndex((choice) => choice.value === value);
    const next = choices[(at + step + choices.length) % choices.length];
    if (next === undefined) return;
    onChange(next.value);
    document.getElementById(`${id}-${next.value}`)?.focus();
  };
  return (
    <div role="radiogroup" aria-label={label} className="type-note flex flex-wrap gap-x-4 book:block" onKeyDown={move}>
      {choices.map((choice) => (
        <button
          key={choice.value}
          id={`${id}-${choice.value}`}
          type="button"
          role="radio"
          aria-checked={choice.value === value}
          tabIndex={choice.value === value ? 0 : -1}
          className="switch py-1"
          onClick={() => onChange(choice.value)}
        >
          {choice.label}
        </button>
      ))}
    </div>
  );
}

/** Rows that are still hairlines while the data comes. */
export function Skeleton({ rows = 5, label = "Loading" }: { rows?: number; label?: string }) {
  return (
    <div role="status" aria-label={label}>
      {Array.from({ length: rows }, (_, index) => (
        <div key={index} className="skeleton-row" />
      ))}
    </div>
  );
}

/** An empty place says what goes here and gives the one button that starts it. */
export function Empty({ text, action }: { text: ReactNode; action?: ReactNode }) {
  return (
    <div className="border-hairline border-b py-4">
      <p className="text-quiet max-w-[720px]">{text}</p>
      {action !== undefined && <div className="mt-4">{action}</div>}
    </div>
  );
}

interface WhenProps {
  /** ISO 8601 UTC. */
  at: string;
  /** `instant` 8 Mar 2027, 16:20 CET · `day` 8 Mar 2027 · `short` 8 Mar · `time` 16:20 CET */
  as?: "instant" | "day" | "short" | "time";
  seconds?: boolean;
}

/** An instant in the lab's zone; the whole of it in the title. */
export function When({ at, as = "instant", seconds = false }: WhenProps) {
  const zone = useZone();
  const text =
    as === "instant"
      ? formatInstant(at, zone, seconds)
      : as === "day"
        ? formatDay(at, zone)
        : as === "short"
          ? formatShortDay(at, zone)
          : formatTime(at, zone, seconds);
  return (
    <time dateTime={at} title={formatInstant(at, zone, true)} className="whitespace-nowrap">
      {text}
    </time>
  );
}

/** `3 minutes ago`, with the absolute time in its title. */
export function TimeAgo({ at }: { at: string }) {
  const zone = useZone();
  return (
    <time dateTime={at} title={formatInstant(at, zone, true)} className="whitespace-nowrap">
      {formatAgo(at)}
    </time>
  );
}

/** A due state in words: `due in 6 days`; overdue in near. Beyond `nearDays` the date itself. */
export function Due({ on, days, nearDays = 14 }: { on: string; days: number; nearDays?: number }) {
  const words = dueWords(days);
  if (words.isOverdue) {
    return (
      <span className="text-near whitespace-nowrap" style={{ fontWeight: 560 }} title={formatDate(on)}>
        {words.text}
      </span>
    );
  }
  return (
    <span className="whitespace-nowrap" title={formatDate(on)}>
      {days <= nearDays ? words.text : formatDate(on)}
    </span>
  );
}
