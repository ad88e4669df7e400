/**
 * Dates as day numbers: whole days since 1970-01-01 in the Gregorian calendar, by integer arithmetic alone.
 *
 * Method   days are counted in years that begin in March, so that the leap day is the last of its year, and in eras of 400 years
 *          (146,097 days), after which the calendar repeats. Exact for years 1 to 9999. There are no zones and no clock here: a date
 *          is the civil date that was written down.
 */

/** Mean length of a year in the Gregorian calendar, days. */
export const DAYS_PER_YEAR = 365.2425;

const daysPerEra = 146097;
/** Days from 1 March of year 0 to 1 January 1970. */
const epochOffset = 719468;

function isLeapYear(year: number): boolean {
  return year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0);
}

/** Days of a month (1 to 12). */
function daysInMonth(year: number, month: number): number {
  if (month === 2) return isLeapYear(year) ? 29 : 28;
  return month === 4 || month === 6 || month === 9 || month === 11 ? 30 : 31;
}

/** @returns the day number, or null where there is no such date */
export function dayOfDate(year: number, month: number, dayOfMonth: number): number | null {
  const isDate =
    Number.isInteger(year) && Number.isInteger(month) && Number.isInteger(dayOfMonth) && year >= 1 && year <= 9999;
  if (!isDate || month < 1 || month > 12 || dayOfMonth < 1 || dayOfMonth > daysInMonth(year, month)) return null;
  const shiftedYear = month <= 2 ? year - 1 : year;
  const era = Math.floor(shiftedYear / 400);
  const yearOfEra = shiftedYear - era * 400;
  const monthFromMarch = month > 2 ? month - 3 : month + 9;
  const dayOfYear = Math.floor((153 * monthFromMarch + 2) / 5) + dayOfMonth - 1;
  const dayOfEra = yearOfEra * 365 + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100) + dayOfYear;
  return era * daysPerEra + dayOfEra - epochOffset;
}

/** ISO 8601 date (`2027-03-01`) of a day number; a fraction of a day is cut off. */
export function isoDateOfDay(day: number): string {
  const shifted = Math.floor(day) + epochOffset;
  const era = Math.floor(shifted / daysPerEra);
  const dayOfEra = shifted - era * daysPerEra;
  const yearOfEra = Math.floor(
    (dayOfEra - Math.floor(dayOfEra / 1460) + Math.floor(dayOfEra / 36524) - Math.floor(dayOfEra / 146096)) / 365,
  );
  const dayOfYear = dayOfEra - (365 * yearOfEra + Math.floor(yearOfEra / 4) - Math.floor(yearOfEra / 100));
  const monthFromMarch = Math.floor((5 * dayOfYear + 2) / 153);
  const dayOfMonth = dayOfYear - Math.floor((153 * monthFromMarch + 2) / 5) + 1;
  const month = monthFromMarch < 10 ? monthFromMarch + 3 : monthFromMarch - 9;
  const year = yearOfEra + era * 400 + (month <= 2 ? 1 : 0);
  return `${digits(year, 4)}-${digits(month, 2)}-${digits(dayOfMonth, 2)}`;
}

/** Day number of an ISO date, with or without a time after it (the time is left off); null where it is none. */
export function dayOfIsoDate(text: string): number | null {
  const match = /^(\d{4})-(\d{2})-(\d{2})(?:[T ].*)?$/.exec(text.trim());
  return match === null ? null : dayOfDate(Number(match[1]), Number(match[2]), Number(match[3]));
}

function digits(value: number, width: number): string {
  return String(value).padStart(width, "0");
}
