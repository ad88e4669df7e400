/**
 * What every drawing has: a table twin, a summary for screen readers, PNG and CSV to take away, and one tab stop whose
 * arrows go from mark to mark. A page holds a handle (from `useDrawing`), gives it to the drawing and to its links.
 */
import {
  useId,
  useImperativeHandle,
  useMemo,
  useRef,
  useState,
  type KeyboardEvent,
  type ReactNode,
  type RefObject,
} from "react";
import { TextButton } from "../ui/button.tsx";
import { useMe } from "../shared/session.ts";
import { saveCsv } from "./csv.ts";

/** The drawing's data, as a table shows and a CSV holds it. Numbers are numbers. */
export interface TableTwin {
  caption: string;
  head: readonly string[];
  rows: readonly (readonly (string | number | null)[])[];
}

interface Source {
  table: TableTwin;
  element: HTMLElement | null;
}

export interface DrawingHandle {
  /** Name of saved files, without ending. */
  fileName: string;
  asTable: boolean;
  setAsTable: (asTable: boolean) => void;
  source: RefObject<Source | null>;
}

/** State of one drawing on a page. `fileName` names what is saved: `CHK-2027-0063 errors`. */
export function useDrawing(fileName: string): DrawingHandle {
  const [asTable, setAsTable] = useState(false);
  const source = useRef<Source | null>(null);
  return useMemo(() => ({ fileName, asTable, setAsTable, source }), [fileName, asTable]);
}

/** *Table PNG CSV*, for the margin. */
export function DrawingLinks({ handle }: { handle: DrawingHandle }) {
  const me = useMe();
  const savePng = async () => {
    const element = handle.source.current?.element;
    if (element === null || element === undefined) return;
    const { savePng: save } = await import("./png.ts");
    await save(
      element,
      handle.fileName,
      `${handle.fileName} · ${me.lab.name}${me.lab.isDemo ? " · demo" : ""} · Wavekeep`,
    );
  };
  return (
    <>
      <TextButton aria-pressed={handle.asTable} onClick={() => handle.setAsTable(!handle.asTable)}>
        {handle.asTable ? "Drawing" : "Table"}
      </TextButton>
      {!handle.asTable && <TextButton onClick={() => void savePng()}>PNG</TextButton>}
      <TextButton
        onClick={() => {
          const table = handle.source.current?.table;
          if (table !== undefined) saveCsv(table, handle.fileName);
        }}
      >
        CSV
      </TextButton>
    </>
  );
}

/** Arrow keys over marks in the order they stand. */
export interface MarkKeys {
  count: number;
  /** Place of the chosen mark in that order; null for none. */
  at: number | null;
  onMove: (place: number | null) => void;
  onOpen?: (place: number) => void;
  /** Keys of the drawing's own; true when it took the key. */
  onKey?: (event: KeyboardEvent) => boolean;
}

interface FrameProps {
  handle?: DrawingHandle;
  /** One or two sentences: what is seen at a glance. */
  summary: string;
  table: TableTwin;
  /** What is said of the mark that the arrows have reached. */
  announcement?: string;
  keys?: MarkKeys;
  children: ReactNode;
  className?: string;
}

export function DrawingFrame({ handle, summary, table, announcement, keys, children, className }: FrameProps) {
  const element = useRef<HTMLDivElement>(null);
  const summaryId = useId();
  useImperativeHandle(handle?.source, () => ({ table, element: element.current }), [table]);
  if (handle?.asTable === true) return <TwinTable table={table} />;
  const press = (event: KeyboardEvent<HTMLDivElement>) => {
    if (keys === undefined || event.altKey || event.metaKey) return;
    const step = { ArrowRight: 1, ArrowDown: 1, ArrowLeft: -1, ArrowUp: -1 }[event.key];
    if (keys.onKey?.(event) === true) {
      event.preventDefault();
    } else if (step !== undefined && keys.count > 0 && !event.ctrlKey && !event.shiftKey) {
      event.preventDefault();
      keys.onMove(
        keys.at === null ? (step > 0 ? 0 : keys.count - 1) : Math.min(Math.max(keys.at + step, 0), keys.count - 1),
      );
    } else if (event.key === "Home" || event.key === "End") {
      event.preventDefault();
      if (keys.count > 0) keys.onMove(event.key === "Home" ? 0 : keys.count - 1);
    } else if (event.key === "Enter" && keys.at !== null && keys.onOpen !== undefined) {
      event.preventDefault();
      keys.onOpen(keys.at);
    } else if (event.key === "Escape" && keys.at !== null) {
      event.preventDefault();
      keys.onMove(null);
    }
  };
  return (
    <div
      ref={element}
      role="group"
      aria-roledescription="drawing"
      aria-label={table.caption}
      aria-describedby={summaryId}
      tabIndex={keys === undefined ? undefined : 0}
      onKeyDown={press}
      className={`relative ${className ?? ""}`}
    >
      <p id={summaryId} className="sr-only">
        {summary}
        {keys !== undefined && keys.count > 0 && " Arrow keys go from one to the next."}
      </p>
      {children}
      <p aria-live="polite" className="sr-only">
        {announcement}
      </p>
    </div>
  );
}

/** The twin itself. */
function TwinTable({ table }: { table: TableTwin }) {
  const isNumber = table.head.map((_, i) => table.rows.some((row) => typeof row[i] === "number"));
  return (
    <div className="max-h-[480px] overflow-auto" role="region" aria-label={table.caption} tabIndex={0}>
      <table className="rows rows-compact">
        <caption className="sr-only">{table.caption}</caption>
        <thead>
          <tr>
            {table.head.map((head, i) => (
              <th
                key={head}
                scope="col"
                className={`type-label bg-ground sticky top-0 ${isNumber[i] ? "numbers" : ""}`}
              >
                {head}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {table.rows.map((row, r) => (
            <tr key={r}>
              {row.map((cell, i) => (
                <td key={table.head[i]} className={isNumber[i] ? "numbers" : ""}>
                  {typeof cell === "number" ? String(cell).replace("-", "\u2212") : (cell ?? "–")}
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}
