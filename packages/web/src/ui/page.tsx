/** The page as an opened bench book: a margin that says what a thing is, a body that holds it. */
import { useId, type ReactNode } from "react";
import type { StatusState } from "./status.tsx";
import { StatusShape } from "./status.tsx";
import { usePrintedFoot, useTitle } from "./use-title.ts";

interface PageProps {
  /** A sentence wherever there is something to say. */
  title: ReactNode;
  /** What the browser's title and history name; the title itself when it is text. */
  name?: string;
  /** Margin beside the title: number, kind, date. One line a child, or plain nodes. */
  aside?: ReactNode;
  /** Shape that hangs before the title, in the gutter (a verdict). */
  state?: StatusState;
  /** Stands behind the title on its line: a `Status`. */
  status?: ReactNode;
  /** Buttons or facts at the right of the title. */
  actions?: ReactNode;
  /** One or two sentences below the title. */
  lead?: ReactNode;
  /** Foot of every printed page: check number and record hash. */
  foot?: string;
  children?: ReactNode;
}

/** Head of a page and the column that its sections stand in. */
export function Page({ title, name, aside, state, status, actions, lead, foot, children }: PageProps) {
  const shownName = name ?? (typeof title === "string" ? title : "Wavekeep");
  useTitle(shownName);
  usePrintedFoot(foot ?? shownName);
  return (
    <div className="page-column">
      <header className="book">
        <div className="book-margin text-quiet book:pt-[11px]">{aside}</div>
        <div className="book-body">
          <div className="flex flex-wrap items-start justify-between gap-x-10 gap-y-3">
            <div className="max-w-[720px] min-w-0 flex-[1_1_320px]">
              <div className="relative flex flex-wrap items-baseline gap-x-5 gap-y-1">
                <h1 className="type-display text-balance">
                  {state !== undefined && (
                    <StatusShape
                      state={state}
                      size={16}
                      className="mr-3 book:absolute book:top-[10px] book:-left-7 book:mr-0"
                    />
                  )}
                  {title}
                </h1>
                {status !== undefined && <div className="type-lead">{status}</div>}
              </div>
              {lead !== undefined && <div className="type-lead mt-2">{lead}</div>}
            </div>
            {actions !== undefined && (
              <div className="no-print flex flex-wrap items-center gap-3 book:pt-1">{actions}</div>
            )}
          </div>
        </div>
      </header>
      {children}
    </div>
  );
}

interface SectionProps {
  /** What this is: strong, in the margin. */
  title: ReactNode;
  /** One short note below it; goes on a phone. */
  note?: ReactNode;
  /** Switches of the margin. */
  switches?: ReactNode;
  /** *Table PNG CSV*, *All checks*. */
  links?: ReactNode;
  /** Level of the heading; sections inside sections take 3. */
  level?: 2 | 3;
  /** No rule above: the first section under tabs. */
  plain?: boolean;
  children?: ReactNode;
  id?: string;
  className?: string;
}

/** A section: opened by an ink rule over margin and body. */
export function Section({
  title,
  note,
  switches,
  links,
  level = 2,
  plain = false,
  children,
  id,
  className,
}: SectionProps) {
  const headingId = useId();
  const Heading = level === 2 ? "h2" : "h3";
  return (
    <section
      id={id}
      aria-labelledby={headingId}
      className={`book ${plain ? "mt-6" : "section-rule"} ${className ?? ""}`}
    >
      <div className="book-margin flex flex-wrap items-baseline justify-between gap-x-4 gap-y-1 book:block">
        <Heading id={headingId} className="strong">
          {title}
        </Heading>
        {note !== undefined && <div className="margin-note type-note mt-1">{note}</div>}
        {switches !== undefined && <div className="no-print mt-3">{switches}</div>}
        {links !== undefined && (
          <div className="no-print type-note flex flex-wrap gap-x-2 gap-y-2 book:mt-3">{links}</div>
        )}
      </div>
      <div className="book-body">{children}</div>
    </section>
  );
}

/** Field name over a fact, as on the head of a check: `Tolerance used` over `78 %`. */
export function Fact({ label, children }: { label: ReactNode; children: ReactNode }) {
  return (
    <div>
      <dt className="type-label">{label}</dt>
      <dd className="mt-0.5">{children}</dd>
    </div>
  );
}

/** A row of facts. */
export function Facts({ children }: { children: ReactNode }) {
  return <dl className="mt-6 flex flex-wrap gap-x-10 gap-y-4">{children}</dl>;
}

/** Names and values opposite each other, one pair a line: the side of an instrument's page. */
export function FactList({ items }: { items: readonly { label: string; value: ReactNode }[] }) {
  return (
    <dl>
      {items.map((item) => (
        <div key={item.label} className="flex items-baseline justify-between gap-6 py-[3px]">
          <dt className="type-label flex-none">{item.label}</dt>
          <dd className="text-right">{item.value}</dd>
        </div>
      ))}
    </dl>
  );
}
