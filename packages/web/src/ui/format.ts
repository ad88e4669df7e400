/**
 * How numbers, times and hashes are written, in one place.
 *
 * Real minus U+2212, `+` where an error is shown, U+202F before a unit, `%` and between thousands (thin and hair spaces
 * all but vanish in Roboto Flex). Value and expanded uncertainty end at the same place, the uncertainty with two digits
 * (GUM 7.2.6: at most two).
 */
import { TZDate } from "@date-fns/tz";
import { differenceInCalendarDays, format } from "date-fns";

export const MINUS = "\u2212";
export const NARROW_SPACE = "\u202f";
/** Around ±, where a narrow space would run the signs together. */
export const NO_BREAK = "\u00a0";

export interface NumberStyle {
  /** Places after the point. */
  decimals?: number;
  /** `+` before what is positive, as errors are written. */
  signed?: boolean;
  /** Narrow spaces between thousands. */
  grouped?: boolean;
}

/** Writes a finite number; anything else becomes an en dash, never `NaN`. */
export function formatNumber(
  value: number | null | undefined,
  { decimals = 0, signed = false, grouped = false }: NumberStyle = {},
): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return "\u2013";
  const text = Math.abs(value).toFixed(Math.min(Math.max(decimals, 0), 12));
  const [whole = "", fraction] = text.split(".");
  const digits = grouped ? whole.replace(/\B(?=(\d{3})+$)/g, NARROW_SPACE) : whole;
  const isZero = Number(text) === 0;
  const sign = isZero ? "" : value < 0 ? MINUS : signed ? "+" : "";
  return `${sign}${digits}${fraction === undefined ? "" : `.${fraction}`}`;
}

/** A count of things: `4 318`. */
export const formatCount = (count: number): string => formatNumber(count, { grouped: true });

/** A share of one as per cent: `78 %`. */
export const formatPercent = (share: number | null | undefined, decimals = 0): string =>
  share === null || share === undefined || !Number.isFinite(share)
    ? "\u2013"
    : `${formatNumber(share * 100, { decimals, grouped: true })}${NARROW_SPACE}%`;

/**
 * Places after the point at which an expanded uncertainty shows two digits. Rounding to nearest never loses more than
 * 4.8 % with two digits (10.499 to 10), so rounding up, asked for beyond 5 %, never comes into play.
 *
 * @returns null when there is no such uncertainty (absent, zero, not finite)
 */
export function uncertaintyDecimals(expandedUnc: number | null | undefined): number | null {
  if (expandedUnc === null || expandedUnc === undefined || !Number.isFinite(expandedUnc) || expandedUnc <= 0)
    return null;
  const exponent = Math.floor(Math.log10(expandedUnc));
  const decimals = 1 - exponent;
  // 0.0996 is written 0.10: the digit gained by rounding is taken back.
  const rounded = Math.round(expandedUnc * 10 ** decimals);
  return Math.max(rounded >= 100 ? decimals - 1 : decimals, 0);
}

/** Places for a value without an uncertainty: three significant digits, at most six places. */
function plainDecimals(value: number): number {
  if (!Number.isFinite(value) || value === 0) return 0;
  return Math.min(Math.max(2 - Math.floor(Math.log10(Math.abs(value))), 0), 6);
}

export interface QuantityParts {
  value: string;
  /** Without its sign; null when none was given. */
  unc: string | null;
  unit: string;
}

/** Value, expanded uncertainty and unit as they are written; the pieces, for typesetting. */
export function quantityParts(
  value: number,
  expandedUnc: number | null | undefined,
  unit = "",
  style: NumberStyle = {},
): QuantityParts {
  const decimals = style.decimals ?? uncertaintyDecimals(expandedUnc) ?? plainDecimals(value);
  const hasUnc = expandedUnc !== null && expandedUnc !== undefined && Number.isFinite(expandedUnc);
  return {
    value: formatNumber(value, { ...style, decimals }),
    unc: hasUnc ? formatNumber(expandedUnc, { decimals }) : null,
    unit,
  };
}

/** `+0.313 ± 0.031 nm`. */
export function formatQuantity(
  value: number,
  expandedUnc: number | null | undefined,
  unit = "",
  style: NumberStyle = {},
): string {
  const parts = quantityParts(value, expandedUnc, unit, style);
  const body = parts.unc === null ? parts.value : `${parts.value}${NO_BREAK}±${NO_BREAK}${parts.unc}`;
  return parts.unit === "" ? body : `${body}${NARROW_SPACE}${parts.unit}`;
}

/** A tolerance or limit as a lab writes it: at least two places below ten, no trailing noise. `0.40 nm`. */
export function formatLimit(value: number, unit = "nm"): string {
  const needed = (String(Number(value.toPrecision(6))).split(".")[1] ?? "").length;
  return `${formatNumber(value, { decimals: Math.max(needed, value < 10 ? 2 : 0) })}${NARROW_SPACE}${unit}`;
}

/**
 * Reads a number as people type and paste it: comma or point, spaces of any width between thousands, a real minus, a
 * unit behind. Where both signs stand, the later one is the decimal sign; several of one kind are thousands.
 *
 * @returns null when it is not one number; `""` is null too
 */
export function parseDecimal(text: string): number | null {
  const cleaned = text
    .replace(/[\s\u00a0\u2009\u200a\u202f']/g, "")
    .replace(/^[\u2212\u2013]/, "-")
    .replace(/(?<=\d)(?:nm|hPa|min|°C|%|px|m|cm-1|counts)$/i, "");
  if (!/^[+-]?[\d.,]*\d[\d.,]*(?:e[+-]?\d+)?$/i.test(cleaned)) return null;
  const [mantissa = "", exponent] = cleaned.split(/e/i);
  const lastComma = mantissa.lastIndexOf(",");
  const lastPoint = mantissa.lastIndexOf(".");
  const decimalSign = lastComma > lastPoint ? "," : ".";
  const otherSign = decimalSign === "," ? "." : ",";
  const count = mantissa.split(decimalSign).length - 1;
  let plain: string;
  if (count > 1) {
    if (lastComma >= 0 && lastPoint >= 0) return null;
    if (!/^[+-]?\d{1,3}([.,]\d{3})+$/.test(mantissa)) return null;
    plain = mantissa.replaceAll(decimalSign, "");
  } else {
    const whole = mantissa.split(decimalSign)[0] ?? "";
    if (whole.includes(otherSign) && !new RegExp(`^[+-]?\\d{1,3}(\\${otherSign}\\d{3})+$`).test(whole)) return null;
    plain = mantissa.replaceAll(otherSign, "").replace(decimalSign, ".");
  }
  const value = Number(exponent === undefined ? plain : `${plain}e${exponent}`);
  return Number.isFinite(value) ? value : null;
}

/** First eight hex digits, in two groups: `7f3a 91c0`. */
export const formatSeal = (hash: string): string => hash.slice(0, 8).replace(/(.{4})(?=.)/g, `$1${NARROW_SPACE}`);
/** Both ends of a long hash: `19d2 c5e8 … 7b31`. */
export const formatHash = (hash: string): string =>
  hash.length <= 16 ? formatSeal(hash) : `${formatSeal(hash)} … ${hash.slice(-4)}`;

/** `1.4 MB`: powers of ten, as file managers of today count. */
export function formatBytes(bytes: number): string {
  const units = ["B", "kB", "MB", "GB"];
  const step = bytes < 1000 ? 0 : Math.min(Math.floor(Math.log10(bytes) / 3), units.length - 1);
  const value = bytes / 1000 ** step;
  return `${formatNumber(value, { decimals: step === 0 || value >= 100 ? 0 : 1 })}${NARROW_SPACE}${units[step]}`;
}

const zoneNames = new Map<string, Intl.DateTimeFormat>();
/** Short name of a zone at an instant: `CET`, `CEST`, `GMT-7`. */
export function zoneName(at: string | Date, zone: string): string {
  let formatter = zoneNames.get(zone);
  if (formatter === undefined) {
    formatter = new Intl.DateTimeFormat("en-GB", { timeZone: zone, timeZoneName: "short" });
    zoneNames.set(zone, formatter);
  }
  return formatter.formatToParts(new Date(at)).find((part) => part.type === "timeZoneName")?.value ?? zone;
}

const inZone = (at: string | Date, zone: string) => new TZDate(new Date(at), zone);
/** A due date is a date, not an instant: noon keeps it off every day's edge. */
const ofDate = (on: string) => new TZDate(`${on}T12:00:00Z`, "UTC");

/** `8 Mar 2027` of an instant, in the lab's zone. */
export const formatDay = (at: string | Date, zone: string): string => format(inZone(at, zone), "d MMM yyyy");
/** `16:20 CET`. */
export const formatTime = (at: string | Date, zone: string, seconds = false): string =>
  `${format(inZone(at, zone), seconds ? "HH:mm:ss" : "HH:mm")} ${zoneName(at, zone)}`;
/** `16:20`, where a heading names the zone. */
export const formatClock = (at: string | Date, zone: string): string => format(inZone(at, zone), "HH:mm");
/** `8 Mar 2027, 16:20 CET`. */
export const formatInstant = (at: string | Date, zone: string, seconds = false): string =>
  `${formatDay(at, zone)}, ${formatTime(at, zone, seconds)}`;
/** `yyyy-mm-dd` of an instant in the lab's zone: what a day's heading groups by. */
export const dayOf = (at: string | Date, zone: string): string => format(inZone(at, zone), "yyyy-MM-dd");

/** `8 Mar` in the year of `now`, else `7 Dec 2026`. */
export function formatShortDay(at: string | Date, zone: string, now: Date = new Date()): string {
  const then = inZone(at, zone);
  return format(then, then.getFullYear() === inZone(now, zone).getFullYear() ? "d MMM" : "d MMM yyyy");
}

/** `14 Jan 2027` of a date `yyyy-mm-dd`. */
export const formatDate = (on: string): string => format(ofDate(on), "d MMM yyyy");
/** `14 Jan` in the year of `todayOn`, else with its year. */
export const formatShortDate = (on: string, todayOn: string): string =>
  format(ofDate(on), on.slice(0, 4) === todayOn.slice(0, 4) ? "d MMM" : "d MMM yyyy");
/** `Tuesday`, `9 March 2027`. */
export const formatWeekday = (on: string): { weekday: string; day: string } => ({
  weekday: format(ofDate(on), "EEEE"),
  day: format(ofDate(on), "d MMMM yyyy"),
});

/** Days from one date to another, dates `yyyy-mm-dd`. */
export const daysBetween = (fromOn: string, toOn: string): number =>
  differenceInCalendarDays(ofDate(toOn), ofDate(fromOn));

/** `due in 6 days`, `due today`, `overdue 3 days`. */
export function dueWords(days: number): { text: string; isOverdue: boolean } {
  if (days < 0) return { text: `overdue ${-days} ${days === -1 ? "day" : "days"}`, isOverdue: true };
  if (days === 0) return { text: "due today", isOverdue: false };
  return { text: `due in ${days} ${days === 1 ? "day" : "days"}`, isOverdue: false };
}

/** `3 minutes ago`, `in 2 days`: the absolute time belongs in a title beside it. */
export function formatAgo(at: string | Date, now: Date = new Date()): string {
  const seconds = (new Date(at).getTime() - now.getTime()) / 1000;
  const size = Math.abs(seconds);
  if (size < 45) return "just now";
  const steps: [number, Intl.RelativeTimeFormatUnit][] = [
    [3600, "minute"],
    [86_400, "hour"],
    [86_400 * 30, "day"],
    [86_400 * 365, "month"],
    [Infinity, "year"],
  ];
  const lengths: Partial<Record<Intl.RelativeTimeFormatUnit, number>> = {
    minute: 60,
    hour: 3600,
    day: 86_400,
    month: 86_400 * 30.44,
    year: 86_400 * 365.25,
  };
  const unit = steps.find(([limit]) => size < limit)?.[1] ?? "year";
  return new Intl.RelativeTimeFormat("en-GB", { numeric: "always" }).format(
    Math.round(seconds / (lengths[unit] ?? 1)),
    unit,
  );
}
