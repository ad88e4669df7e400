/** A filter of the margin: what is shown now, as a word that can be pressed. The system's own list lies beneath. */
import type { ReactNode } from "react";
import type { Choice } from "../ui/index.ts";

interface FilterSelectProps {
  /** What is filtered, for screen readers: `Kind of entry`. */
  label: string;
  /** Word of the open filter: `Everyone`. */
  every: string;
  value: string | undefined;
  choices: readonly Choice[];
  onChange: (value: string | null) => void;
}

export function FilterSelect({ label, every, value, choices, onChange }: FilterSelectProps) {
  return (
    <span className="text-accent relative inline-flex max-w-full items-center">
      <select
        aria-label={label}
        className={`type-note field-sizing-content min-h-6 max-w-full appearance-none truncate bg-transparent pr-5 !text-accent ${value === undefined ? "" : "strong"}`}
        value={value ?? ""}
        onChange={(event) => onChange(event.target.value === "" ? null : event.target.value)}
      >
        <option value="">{every}</option>
        {choices.map((choice) => (
          <option key={choice.value} value={choice.value}>
            {choice.label}
          </option>
        ))}
      </select>
      <span
        aria-hidden="true"
        className="border-quiet pointer-events-none absolute top-[7px] right-1 size-[6px] rotate-45 border-r border-b"
      />
    </span>
  );
}

/** Filters under each other in the margin, beside each other on a phone. */
export function Filters({ children }: { children: ReactNode }) {
  return <div className="flex flex-wrap gap-x-4 gap-y-1 book:flex-col book:items-start">{children}</div>;
}
