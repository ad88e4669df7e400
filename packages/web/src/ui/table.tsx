/**
 * A table by the design's rules: label heads on one graph line, hairlines between rows, nothing vertical; a line of
 * light announced by a tick in its hue; a reason under its row, inside the same hairline; on a phone the rows may be
 * drawn another way (`narrow`).
 */
import { Fragment, type KeyboardEvent, type ReactNode } from "react";

export interface Column<Row> {
  key: string;
  head: ReactNode;
  /** Numbers stand at the right edge, aligned by `Decimal`. */
  numbers?: boolean;
  cell: (row: Row) => ReactNode;
  /** Extra classes of the column's cells, e.g. `whitespace-nowrap`, `hidden wide:table-cell`. */
  className?: string;
}

interface TableProps<Row> {
  /** What the table holds, for screen readers. */
  caption: string;
  columns: readonly Column<Row>[];
  rows: readonly Row[];
  rowKey: (row: Row) => string;
  compact?: boolean;
  isChosen?: (row: Row) => boolean;
  onChoose?: (row: Row) => void;
  /** Hue of the tick left of the first column: a line of light. */
  tick?: (row: Row) => string | null;
  /** A reason or refusal, under its row and inside the same hairline. */
  rowNote?: (row: Row) => ReactNode;
  rowClassName?: (row: Row) => string;
  /** The row at 375 px, in place of its cells. */
  narrow?: (row: Row) => ReactNode;
  foot?: ReactNode;
}

export function Table<Row>({
  caption,
  columns,
  rows,
  rowKey,
  compact = false,
  isChosen,
  onChoose,
  tick,
  rowNote,
  rowClassName,
  narrow,
  foot,
}: TableProps<Row>) {
  const press = (row: Row) =>
    onChoose === undefined
      ? {}
      : {
          tabIndex: 0,
          "data-press": true,
          onClick: () => onChoose(row),
          onKeyDown: (event: KeyboardEvent) => {
            if (event.target !== event.currentTarget || (event.key !== "Enter" && event.key !== " ")) return;
            event.preventDefault();
            onChoose(row);
          },
        };
  return (
    <>
      <table className={`rows ${compact ? "rows-compact" : ""} ${narrow === undefined ? "" : "hidden book:table"}`}>
        <caption className="sr-only">{caption}</caption>
        <thead>
          <tr>
            {columns.map((column) => (
              <th
                key={column.key}
                scope="col"
                className={`type-label ${column.numbers === true ? "numbers" : ""} ${column.className ?? ""}`}
              >
                {column.head}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => {
            const note = rowNote?.(row) ?? null;
            const chosen = isChosen?.(row) ?? false;
            const hue = tick?.(row) ?? null;
            return (
              <Fragment key={rowKey(row)}>
                <tr
                  {...press(row)}
                  data-chosen={chosen || undefined}
                  aria-selected={isChosen === undefined ? undefined : chosen}
                  className={`${note === null ? "" : "has-note"} ${rowClassName?.(row) ?? ""}`}
                >
                  {columns.map((column, index) => (
                    <td
                      key={column.key}
                      className={`${column.numbers === true ? "numbers" : ""} ${column.className ?? ""} ${index === 0 && hue !== null ? "relative" : ""}`}
                    >
                      {index === 0 && hue !== null && (
                        <span
                          aria-hidden="true"
                          className="absolute top-1/2 -left-[10px] h-[13px] w-[2px] -translate-y-1/2"
                          style={{ background: hue }}
                        />
                      )}
                      {column.cell(row)}
                    </td>
                  ))}
                </tr>
                {note !== null && (
                  <tr data-chosen={chosen || undefined}>
                    <td className="!pt-0" />
                    <td colSpan={columns.length - 1} className="type-note !pt-0">
                      {note}
                    </td>
                  </tr>
                )}
              </Fragment>
            );
          })}
        </tbody>
        {foot !== undefined && <tfoot>{foot}</tfoot>}
      </table>
      {narrow !== undefined && (
        <ul className="book:hidden" aria-label={caption}>
          {rows.map((row) => (
            <li
              key={rowKey(row)}
              className="border-hairline border-b py-2"
              data-chosen={(isChosen?.(row) ?? false) || undefined}
            >
              {narrow(row)}
            </li>
          ))}
        </ul>
      )}
    </>
  );
}
