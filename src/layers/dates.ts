import { addMonths, type Day, dayOf, isCivilDate, parseIsoDay } from "../data/day.ts";
import type { Period } from "../data/period.ts";
import { InputError } from "../errors.ts";
import { coveredPeriod, noAxis } from "./cover.ts";
import { periodInTable } from "./date-table.ts";
import type { ImageCover, ImageDates, LayerOptions } from "./options.ts";

const TOKENS: Readonly<Record<string, string>> = {
  yyyy: "(?<yyyy>\\d{4})",
  MM: "(?<MM>\\d{2})",
  dd: "(?<dd>\\d{2})",
  DDD: "(?<DDD>\\d{3})",
  dekad: "(?<dekad>\\d{1,2})",
};

/** A date as far as a name tells it. */
interface NamedDate {
  readonly year: number;
  readonly month: number | undefined;
  readonly day: number | undefined;
  readonly dayOfYear: number | undefined;
  readonly dekad: number | undefined;
}

/**
 * A pattern as a search: {yyyy}, {MM}, {dd}, {DDD} (day of the year), {dekad} (1–3 in the month {MM}, else 1–36 in the
 * year); all else stands for itself. A run of digits must not go on before or after a pattern that begins or ends with a part of the date.
 * Throws `layers.date-pattern`.
 */
export function compilePattern(pattern: string): RegExp {
  const refuse = (found: string) =>
    new InputError({
      name: "layers.date-pattern",
      expected: `a pattern with {yyyy} and any of ${Object.keys(TOKENS)
        .slice(1)
        .map((one) => `{${one}}`)
        .join(", ")}, each once`,
      found,
      where: { cell: `date pattern ${JSON.stringify(pattern)}` },
      remedy: "write the name with the parts of its date in braces, e.g. green_{yyyy}_{MM}",
    });
  const seen = new Set<string>();
  const source = pattern
    .split(/(\{[^}]*\})/)
    .map((part) => {
      if (!part.startsWith("{")) return part.replace(/[\\^$.*+?()[\]{}|/-]/g, "\\$&");
      const token = part.slice(1, -1);
      if (TOKENS[token] === undefined) throw refuse(`the part ${part}`);
      if (seen.has(token)) throw refuse(`${part} twice`);
      seen.add(token);
      return TOKENS[token];
    })
    .join("");
  if (!seen.has("yyyy")) throw refuse("no {yyyy}");
  if (seen.has("dd") && !seen.has("MM")) throw refuse("{dd} without {MM}");
  if (seen.has("DDD") && seen.has("MM")) throw refuse("both {DDD} and {MM}");
  // Where the pattern itself begins or ends in digits, the name's run of digits must begin or end there too.
  const before = /^[{\d]/.test(pattern) ? "(?<!\\d)" : "";
  const after = /[}\d]$/.test(pattern) ? "(?!\\d)" : "";
  return new RegExp(`${before}${source}${after}`, "g");
}

/** The date that a text holds by a pattern. `where` is a file or band, for the error. */
export function dateIn(text: string, pattern: string, file: string, cell?: string): NamedDate {
  const where = cell === undefined ? { file } : { file, cell };
  const matches = [...text.matchAll(compilePattern(pattern))];
  if (matches.length !== 1)
    throw new InputError({
      name: matches.length === 0 ? "layers.date-not-found" : "layers.date-ambiguous",
      expected: `a date by the pattern ${JSON.stringify(pattern)}`,
      found:
        matches.length === 0
          ? JSON.stringify(text)
          : `${matches.length} places for it in ${JSON.stringify(text)}`,
      where,
      remedy: "write the pattern as the names have it, with more of the letters round the date",
    });
  const groups = matches[0].groups ?? {};
  const part = (name: string) => (groups[name] === undefined ? undefined : Number(groups[name]));
  const date: NamedDate = {
    year: Number(groups.yyyy),
    month: part("MM"),
    day: part("dd"),
    dayOfYear: part("DDD"),
    dekad: part("dekad"),
  };
  const days = dayOf(date.year + 1, 1, 1) - dayOf(date.year, 1, 1);
  const real =
    isCivilDate(date.year, date.month ?? 1, date.day ?? 1) &&
    (date.dayOfYear === undefined || (date.dayOfYear >= 1 && date.dayOfYear <= days)) &&
    (date.dekad === undefined || (date.dekad >= 1 && date.dekad <= (date.month === undefined ? 36 : 3)));
  if (real) return date;
  throw new InputError({
    name: "layers.bad-date",
    expected: "a date that exists",
    found: JSON.stringify(matches[0][0]),
    where,
    remedy: "mend the name, or the pattern if it reads other digits than meant",
  });
}

/** The first day that a date names. */
function firstDay(date: NamedDate): Day {
  if (date.dayOfYear !== undefined) return dayOf(date.year, 1, date.dayOfYear);
  if (date.dekad !== undefined) {
    const index = date.month === undefined ? date.dekad - 1 : (date.month - 1) * 3 + date.dekad - 1;
    return dayOf(date.year, Math.floor(index / 3) + 1, (index % 3) * 10 + 1);
  }
  return dayOf(date.year, date.month ?? 1, date.day ?? 1);
}

/** Parts of a date that must be known for what an image covers. */
function enough(date: NamedDate, covers: ImageCover): boolean {
  const toTheDay = date.day !== undefined || date.dayOfYear !== undefined || date.dekad !== undefined;
  if (covers === "year") return true;
  if (covers === "month") return date.month !== undefined || toTheDay;
  return toTheDay;
}

/** One period for each image (band) of a file that is used: its band, from 0, and what it covers. */
export interface ImagePeriod extends Period {
  readonly band: number;
}

/**
 * The periods of a file's images. By name or table: one image, band `options.band` (the only one by default). By band
 * description or first and step: every band. Throws `layers.several-bands`, `layers.date-…`, `layers.bad-date`.
 */
export function periodsOf(
  path: string,
  descriptions: readonly string[],
  options: Pick<LayerOptions, "date" | "covers" | "band">,
): readonly ImagePeriod[] {
  const { date, covers, band } = options;
  if ("name" in date)
    return [{ band: bandFor(path, descriptions.length, band), ...fromName(path, date.name, covers) }];
  if ("table" in date) {
    if (!("periods" in date)) throw new Error("settleDates comes first");
    return [{ band: bandFor(path, descriptions.length, band), ...periodInTable(path, date) }];
  }
  if ("band" in date)
    return descriptions.map((text, index) => {
      const cell = `band ${index + 1}`;
      return { band: index, ...periodFrom(dateIn(text, date.band, path, cell), covers, path, cell) };
    });
  if ("axis" in date) throw noAxis(path);
  return descriptions.map((_, index) => ({
    band: index,
    ...coveredPeriod(stepped(date, index, path), covers),
  }));
}

/** The file's name without folder and ending. */
export function stemOf(path: string): string {
  return path.slice(path.lastIndexOf("/") + 1).replace(/\.[^.]*$/, "");
}

function fromName(path: string, pattern: string, covers: ImageCover): Period {
  return periodFrom(dateIn(stemOf(path), pattern, path), covers, path);
}

function periodFrom(date: NamedDate, covers: ImageCover, file: string, cell?: string): Period {
  if (enough(date, covers)) return coveredPeriod(firstDay(date), covers);
  throw new InputError({
    name: "layers.date-too-coarse",
    expected: `a date exact enough for images that cover ${typeof covers === "object" ? `${covers.days} days` : `a ${covers}`}`,
    found: "a pattern that names less",
    where: cell === undefined ? { file } : { file, cell },
    remedy: "add {MM} and {dd}, or {DDD}, to the pattern, or say what the images cover",
  });
}

function bandFor(path: string, bands: number, wanted: number | undefined): number {
  const band = wanted ?? (bands === 1 ? 1 : 0);
  if (Number.isInteger(band) && band >= 1 && band <= bands) return band - 1;
  throw new InputError({
    name: "layers.several-bands",
    expected: wanted === undefined ? "one band in a file dated by its name" : `a band ${wanted}`,
    found: `${bands} band${bands === 1 ? "" : "s"}`,
    where: { file: path },
    remedy: "say which one (band: 1), or date the bands by their descriptions or by first and step",
  });
}

function stepped(date: Extract<ImageDates, { step: string }>, index: number, path: string): Day {
  const text = /^\d{4}$/.test(date.first)
    ? `${date.first}-01-01`
    : date.first.length === 7
      ? `${date.first}-01`
      : date.first;
  const first = parseIsoDay(text);
  if (Number.isNaN(first))
    throw new InputError({
      name: "layers.bad-date",
      expected: "the first image's date as yyyy-MM-dd, yyyy-MM or yyyy",
      found: JSON.stringify(date.first),
      where: { file: path, cell: "date first" },
      remedy: "write the date of band 1",
    });
  if (date.step === "day") return first + index;
  return addMonths(first, index * (date.step === "year" ? 12 : 1));
}
