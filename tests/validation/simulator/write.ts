/** A table of numbers as text, in the manners that instruments' files have: signs, headings, notes above, line ends. */
import type { Random } from "./random.ts";

export interface Manner {
  delimiter: "\t" | "," | ";" | " ";
  decimal: "." | ",";
  newline: "\n" | "\r\n";
  head: "none" | "headings" | "notes" | "comments";
  hasAxisColumn: boolean;
  form: "fixed" | "scientific";
}

export function pickManner(random: Random, canDropAxis: boolean): Manner {
  const hasAxisColumn = !canDropAxis || random.chance(0.8);
  // One column of numbers with a decimal comma can as well be two columns: that is for the tests of reading.
  const isComma = random.chance(0.25) && hasAxisColumn;
  return {
    delimiter: isComma ? random.pick(["\t", ";"] as const) : random.pick(["\t", ",", ";", " "] as const),
    decimal: isComma ? "," : ".",
    newline: random.chance(0.5) ? "\r\n" : "\n",
    head: random.pick(["none", "headings", "notes", "comments"] as const),
    hasAxisColumn,
    form: random.chance(0.15) ? "scientific" : "fixed",
  };
}

export function writeTable(
  manner: Manner,
  axis: { name: string; values: ArrayLike<number>; digits: number },
  counts: { name: string; values: ArrayLike<number>; digits: number },
  notes: Record<string, string>,
): string {
  const lines: string[] = [];
  const print = (value: number, digits: number): string => {
    const text = manner.form === "scientific" ? value.toExponential(9) : value.toFixed(digits);
    return manner.decimal === "," ? text.replace(".", ",") : text;
  };
  if (manner.head === "notes") for (const [key, value] of Object.entries(notes)) lines.push(`${key}: ${value}`);
  if (manner.head === "comments") for (const [key, value] of Object.entries(notes)) lines.push(`# ${key} = ${value}`);
  const join = (cells: string[]): string => (manner.hasAxisColumn ? cells : cells.slice(1)).join(manner.delimiter);
  if (manner.head !== "none") {
    // With spaces between the columns a heading of two words would be two columns.
    const names = [axis.name, counts.name];
    lines.push(join(manner.delimiter === " " ? names.map((name) => name.replaceAll(" ", "_")) : names));
  }
  for (let i = 0; i < axis.values.length; i += 1) {
    const position = axis.digits === 0 ? String(axis.values[i]!) : print(axis.values[i]!, axis.digits);
    lines.push(join([position, print(counts.values[i]!, counts.digits)]));
  }
  return lines.join(manner.newline) + manner.newline;
}
