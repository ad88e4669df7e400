/** Numbers as tables write them: decimal point or comma, grouped thousands, signs of print. */

/** Text of cells that say "not measured". */
const empty = new Set(["", "-", "–", "—", "n/a", "na", "nan", "null", "none", ".", "?", "k.a.", "nd", "n.d."]);

export function isEmptyCell(text: string): boolean {
  return empty.has(text.trim().toLowerCase());
}

/** Whether a table's numbers have a decimal comma: some have one, and fewer have a point. */
export function hasDecimalComma(cells: Iterable<string>): boolean {
  let commas = 0;
  let points = 0;
  for (const cell of cells) {
    if (/^[-+−]?\d+,\d+(?:e[-+]?\d+)?$/i.test(cell.trim())) commas += 1;
    else if (/^[-+−]?\d*\.\d+(?:e[-+]?\d+)?$/i.test(cell.trim())) points += 1;
  }
  return commas > points;
}

/** @returns NaN where the cell is no number */
export function readNumber(text: string, decimalComma: boolean): number {
  let cell = text
    .trim()
    .replace("−", "-")
    .replaceAll(/[\s\u00a0\u202f']/g, "")
    .replace(/(?:nm|°c|å)$/i, "");
  const comma = cell.lastIndexOf(",");
  const point = cell.lastIndexOf(".");
  if (comma >= 0 && point >= 0) {
    // Both: the later one is the decimal sign, the earlier one groups thousands.
    cell = comma > point ? cell.replaceAll(".", "").replace(",", ".") : cell.replaceAll(",", "");
  } else if (comma >= 0) {
    cell = cell.replace(",", ".");
  } else if (decimalComma && /^[-+]?[1-9]\d{0,2}\.\d{3}$/.test(cell)) {
    cell = cell.replace(".", "");
  }
  return /^[-+]?(?:\d+\.?\d*|\.\d+)(?:e[-+]?\d+)?$/i.test(cell) ? Number(cell) : NaN;
}
