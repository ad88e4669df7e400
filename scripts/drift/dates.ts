/** Civil dates as people write them, to day numbers. */
import { dayOfDate } from "@wavekeep/core";

export type DateOrder = "dmy" | "mdy";

/** Three-letter beginnings of months, without marks, in the languages whose headings are known. */
const months: string[][] = [
  ["jan", "janv", "ene", "gen", "sty", "led", "tam"],
  ["feb", "fev", "lut", "uno", "hel"],
  ["mar", "maerz", "marz", "mrz", "maa", "bre"],
  ["apr", "avr", "abr", "kwi", "dub", "huh"],
  ["may", "mai", "mag", "maj", "mei", "kve", "tou"],
  ["jun", "juin", "giu", "cze", "kes"],
  ["jul", "juil", "lug", "lip", "hei"],
  ["aug", "aou", "ago", "sie", "srp", "elo"],
  ["sep", "set", "wrz", "zar", "syy"],
  ["oct", "okt", "ott", "out", "paz", "rij", "lok"],
  ["nov", "lis", "mar"],
  ["dec", "dez", "dic", "des", "gru", "pro", "jou"],
];

/** One cell: a day, or two readings of which all rows together must decide. */
export type DateReading = { day: number } | { dmy: number | null; mdy: number | null } | null;

export function readDate(text: string): DateReading {
  const cell = text.trim();
  const yearFirst =
    /^(\d{4})[-/. ](\d{1,2})[-/. ](\d{1,2})\.?(?:[T ,].*)?$/.exec(cell) ?? /^(\d{4})(\d{2})(\d{2})$/.exec(cell);
  if (yearFirst !== null) return dated(dayOfDate(Number(yearFirst[1]), Number(yearFirst[2]), Number(yearFirst[3])));
  const yearLast = /^(\d{1,2})([-/.])\s?(\d{1,2})\2\s?(\d{4}|\d{2})(?:[T ,].*)?$/.exec(cell);
  if (yearLast !== null) {
    const a = Number(yearLast[1]);
    const b = Number(yearLast[3]);
    const year = Number(yearLast[4]) + (yearLast[4]!.length === 2 ? 2000 : 0);
    const dmy = dayOfDate(year, b, a);
    // With dots the day comes first wherever dates are written so.
    if (yearLast[2] === ".") return dated(dmy);
    const mdy = dayOfDate(year, a, b);
    if (dmy === null && mdy === null) return null;
    return dmy === mdy ? dated(dmy) : { dmy, mdy };
  }
  return readNamedMonth(cell);
}

function dated(day: number | null): DateReading {
  return day === null ? null : { day };
}

function readNamedMonth(cell: string): DateReading {
  const plain = cell
    .normalize("NFD")
    .replaceAll(/[\u0300-\u036f]/g, "")
    .toLowerCase();
  const dayFirst = /^(\d{1,2})(?:st|nd|rd|th|\.)?[\s\-/.]*(?:de\s+)?([a-z]{3,})\.?[\s\-/.,]*(?:de\s+)?(\d{4})\b/.exec(
    plain,
  );
  if (dayFirst !== null) return named(dayFirst[3]!, dayFirst[2]!, dayFirst[1]!);
  const monthFirst = /^([a-z]{3,})\.?[\s\-/.]*(\d{1,2})(?:st|nd|rd|th)?[\s,\-/.]+(\d{4})\b/.exec(plain);
  if (monthFirst !== null) return named(monthFirst[3]!, monthFirst[1]!, monthFirst[2]!);
  return null;
}

function named(year: string, name: string, day: string): DateReading {
  const month = months.findIndex((starts) => starts.some((start) => name.startsWith(start)));
  return month < 0 ? null : dated(dayOfDate(Number(year), month + 1, Number(day)));
}
