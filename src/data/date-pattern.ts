import { type Day, dayOf, isCivilDate } from "./day.ts";

type Field = "year" | "month" | "day" | "yearday" | "hour" | "minute" | "second" | "zone" | "month name";

/** One piece of a date pattern: a field of so many digits, or a character that must stand there. */
type Piece =
  | { readonly field: Field; readonly least: number; readonly most: number }
  | { readonly literal: string };

const FIELDS: Readonly<Record<string, Field>> = {
  y: "year",
  M: "month",
  d: "day",
  D: "yearday",
  H: "hour",
  m: "minute",
  s: "second",
  X: "zone",
};
const MONTH_NAMES = ["jan", "feb", "mar", "apr", "may", "jun", "jul", "aug", "sep", "oct", "nov", "dec"];

/** A civil date and the minutes since its midnight (0 where the pattern has no time). */
export interface Stamp {
  readonly day: Day;
  readonly minutes: number;
}

export interface DatePattern {
  /** The fields that the pattern names, in its order. */
  readonly fields: readonly Field[];
  /** Undefined for a text that is no date of the calendar in this form. */
  readonly read: (text: string) => Stamp | undefined;
  /** A date and time in this form. */
  readonly write: (stamp: Stamp) => string;
}

/**
 * Compiles a Unicode date pattern: `yyyy` the year (four digits), `M`/`MM` month, `MMM` its English name of three letters,
 * `d`/`dd` day of the month, `D`/`DDD` day of the year, `HH mm ss` the time of day (24:00 is the next midnight), `XXX` the
 * distance from UTC (`+01:00` or `Z`), which is subtracted, and `'…'` literal text. With `exact` a field of two letters has
 * two digits; else numbers may lack their leading zero unless the next field follows without a separator.
 * Gives the offending part of a pattern that cannot be compiled.
 */
export function compilePattern(format: string, exact: boolean): DatePattern | { readonly wrong: string } {
  const pieces: Piece[] = [];
  const runs = format.match(/'[^']*'|([A-Za-z])\1*|./gs) ?? [];
  for (const [at, run] of runs.entries()) {
    if (run.startsWith("'")) for (const literal of run.slice(1, -1) || "'") pieces.push({ literal });
    else if (/^[A-Za-z]/.test(run)) {
      const piece = pieceOf(run, exact, at + 1 < runs.length && /^[A-Za-z]/.test(runs[at + 1]));
      if (piece === undefined) return { wrong: run };
      pieces.push(piece);
    } else pieces.push({ literal: run });
  }
  const fields = pieces.flatMap((piece) => ("field" in piece ? [piece.field] : []));
  if (!fields.includes("year")) return { wrong: "no year" };
  return { fields, read: (text) => readStamp(text, pieces), write: (stamp) => writeStamp(stamp, pieces) };
}

/** `tight`: another field follows without a separator. No other letter is allowed: `YYYY` would read other dates. */
function pieceOf(run: string, exact: boolean, tight: boolean): Piece | undefined {
  const field = FIELDS[run[0]];
  const width = run.length;
  if (field === undefined) return undefined;
  if (field === "zone") return width === 3 ? { field, least: 1, most: 6 } : undefined;
  if (field === "year") return width === 4 ? { field, least: 4, most: 4 } : undefined;
  if (field === "month" && width === 3) return { field: "month name", least: 3, most: 3 };
  const most = field === "yearday" ? 3 : 2;
  if (width > most) return undefined;
  return { field, least: tight || width === 3 || (exact && width === most) ? most : 1, most };
}

function readStamp(text: string, pieces: readonly Piece[]): Stamp | undefined {
  const found = { year: Number.NaN, month: 1, day: 1, yearday: -1, hour: 0, minute: 0, second: 0 };
  let [at, shift] = [0, 0];
  for (const piece of pieces) {
    if ("literal" in piece) {
      if (text[at] !== piece.literal) return undefined;
      at++;
    } else if (piece.field === "month name") {
      found.month = MONTH_NAMES.indexOf(text.slice(at, at + 3).toLowerCase()) + 1;
      at += 3;
    } else if (piece.field === "zone") {
      const zone = /^(?:Z|([+-])(\d\d):?(\d\d))/.exec(text.slice(at));
      if (zone === null) return undefined;
      shift = zone[1] === undefined ? 0 : Number(`${zone[1]}1`) * (Number(zone[2]) * 60 + Number(zone[3]));
      at += zone[0].length;
    } else {
      let [value, digits] = [0, 0];
      while (digits < piece.most && at < text.length) {
        const code = text.charCodeAt(at) - 48;
        if (code < 0 || code > 9) break;
        value = value * 10 + code;
        digits++;
        at++;
      }
      if (digits < piece.least) return undefined;
      found[piece.field] = value;
    }
  }
  const { year, month, day, yearday, hour, minute, second } = found;
  const minutes = hour * 60 + minute + second / 60;
  if (at !== text.length || hour > 24 || minute > 59 || second > 60 || minutes > 1440) return undefined;
  const civil = yearday < 0 ? isCivilDate(year, month, day) : yearday >= 1 && yearday <= daysOf(year);
  if (!civil) return undefined;
  const date = yearday < 0 ? dayOf(year, month, day) : dayOf(year, 1, yearday);
  const since = minutes - shift;
  const over = Math.floor(since / 1440);
  return { day: date + over, minutes: since - over * 1440 };
}

function daysOf(year: number): number {
  return dayOf(year + 1, 1, 1) - dayOf(year, 1, 1);
}

function writeStamp({ day, minutes }: Stamp, pieces: readonly Piece[]): string {
  const date = new Date(day * 86_400_000);
  const year = date.getUTCFullYear();
  const month = date.getUTCMonth();
  const parts: Readonly<Record<Exclude<Field, "month name" | "zone">, number>> = {
    year,
    month: month + 1,
    day: date.getUTCDate(),
    yearday: day - dayOf(year, 1, 1) + 1,
    hour: Math.floor(minutes / 60),
    minute: Math.floor(minutes % 60),
    second: Math.floor((minutes * 60) % 60),
  };
  const text = (piece: Piece) => {
    if ("literal" in piece) return piece.literal;
    if (piece.field === "zone") return "Z";
    if (piece.field === "month name")
      return `${MONTH_NAMES[month][0].toUpperCase()}${MONTH_NAMES[month].slice(1)}`;
    return String(parts[piece.field]).padStart(piece.field === "yearday" ? piece.least : piece.most, "0");
  };
  return pieces.map(text).join("");
}
