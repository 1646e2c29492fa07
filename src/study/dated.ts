import { columnIndex, type TextTable } from "../data/csv.ts";
import { type Day, isoDay } from "../data/day.ts";
import type { RawFinding } from "../data/finding.ts";
import type { Occasion } from "../data/occasion.ts";
import { InputError } from "../errors.ts";
import type { CaptureResult } from "./capture-result.ts";
import { dayReader } from "./day-format.ts";
import { countsFrom, type History, stratumLabel, tallyFrom } from "./histories.ts";
import { cellError } from "./numbers.ts";
import type { DatedCaptures } from "./options.ts";

/** One row of the file. `at` is the occasion's index, −1 outside all of them. */
interface Capture {
  readonly animal: string;
  readonly date: Day;
  readonly at: number;
  readonly stratum: string;
  readonly lost: boolean;
  readonly fate: string;
  readonly line: number;
}

/**
 * Dated captures, a row each, in any order. A capture outside every occasion, a repeat within one, a capture after
 * a loss, and strata that change within an animal are findings: the first does not count, repeats count once, a
 * loss ends the history, the first written stratum stands.
 * Throws `study.occasions-needed`, `study.capture-date`, `study.animal-missing`, `study.stratum-missing`,
 * `study.no-capture-within`.
 */
export function readDated(
  options: DatedCaptures,
  table: TextTable,
  occasions: readonly Occasion[] | undefined,
): CaptureResult {
  if (occasions === undefined)
    throw new InputError({
      name: "study.occasions-needed",
      expected: "occasions with dates, since the captures are dated",
      found: "no occasions",
      where: { file: options.file, cell: "captures.layout" },
      remedy: "add `occasions:` to the pipeline",
    });
  const captures = capturesOf(options, table, occasions);
  const byAnimal = new Map<string, Capture[]>();
  for (const one of captures) {
    const own = byAnimal.get(one.animal);
    if (own === undefined) byAnimal.set(one.animal, [one]);
    else own.push(one);
  }
  const findings: RawFinding[] = captures
    .filter(({ at }) => at < 0)
    .map((one) => outside(one, occasions, options));
  const histories: History[] = [];
  for (const own of byAnimal.values()) {
    const history = historyOf(own, occasions, options, findings);
    if (history !== undefined) histories.push(history);
  }
  if (histories.length === 0)
    throw new InputError({
      name: "study.no-capture-within",
      expected: `captures within the ${occasions.length} occasions`,
      found:
        captures.length === 1 ? "1 capture, outside them" : `${captures.length} captures, all outside them`,
      where: { file: options.file },
      remedy: "check the dates of the occasions and how dates are written (captures.format)",
    });
  return {
    histories,
    counts: countsFrom(histories, occasions.length),
    occasions,
    intervals: undefined,
    findings,
    animals: histories.length,
    captures: histories.reduce((sum, one) => sum + one.seen.length, 0),
    perOccasion: tallyFrom(histories, occasions),
  };
}

function capturesOf(
  options: DatedCaptures,
  table: TextTable,
  occasions: readonly Occasion[],
): readonly Capture[] {
  const animal = columnIndex(table, options.animal, "captures.animal");
  const date = columnIndex(table, options.date, "captures.date");
  const strata = options.strata.map((name) => columnIndex(table, name, "captures.strata"));
  const fate = options.lost === undefined ? -1 : columnIndex(table, options.lost.column, "captures.lost");
  const read = dayReader(options.format, "captures.format");
  return table.rows.map(({ cells, line }, row) => {
    const day = read(cells[date]);
    if (cells[animal] === "")
      throw cellError(table, row, animal, {
        name: "study.animal-missing",
        expected: "the animal's mark",
        remedy: "write the mark, or take the row out if it is not known",
      });
    if (Number.isNaN(day))
      throw cellError(table, row, date, {
        name: "study.capture-date",
        expected: `a date written as ${options.format}`,
        remedy: "mend the date, or state how dates are written under captures.format",
      });
    const values = strata.map((column) => {
      if (cells[column] !== "") return cells[column];
      throw cellError(table, row, column, {
        name: "study.stratum-missing",
        expected: `a value of ${options.strata[strata.indexOf(column)]} for each capture`,
        remedy:
          "fill the cell, with a word such as `unknown` if need be, or leave the column out of captures.strata",
      });
    });
    return {
      animal: cells[animal],
      date: day,
      at: occasionOf(day, occasions),
      stratum: stratumLabel(options.strata, values),
      lost: fate >= 0 && (options.lost?.values.includes(cells[fate]) ?? false),
      fate: fate < 0 ? "" : cells[fate],
      line,
    };
  });
}

/** The occasion whose days hold `day`, −1 if none does; occasions are in order and do not overlap. */
function occasionOf(day: Day, occasions: readonly Occasion[]): number {
  let [low, high] = [0, occasions.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (occasions[middle].last < day) low = middle + 1;
    else high = middle;
  }
  return low < occasions.length && occasions[low].first <= day ? low : -1;
}

function outside(one: Capture, occasions: readonly Occasion[], options: DatedCaptures): RawFinding {
  const next = occasions.findIndex(({ first }) => first > one.date);
  const where =
    next === 0
      ? `before the first occasion, ${occasions[0].name}`
      : next < 0
        ? `after the last occasion, ${occasions[occasions.length - 1].name}`
        : `between occasions ${occasions[next - 1].name} and ${occasions[next].name}`;
  return {
    kind: "capture-outside",
    subject: one.animal,
    message: `${one.animal} was recorded on ${isoDay(one.date)}, ${where}; the record does not count`,
    where: { file: options.file, line: one.line },
    value: isoDay(one.date),
    remedy: "mend the date or the occasion's days if one is wrong; records between visits need no mending",
  };
}

/** One animal's history from its rows; undefined if no row counts. Adds to `findings`. */
function historyOf(
  rows: readonly Capture[],
  occasions: readonly Occasion[],
  options: DatedCaptures,
  findings: RawFinding[],
): History | undefined {
  const { animal, stratum, line: firstLine } = rows[0];
  const other = rows.find((one) => one.stratum !== stratum);
  if (other !== undefined)
    findings.push({
      kind: "strata-conflict",
      subject: animal,
      message: `${animal} is "${stratum}" in line ${firstLine}, "${other.stratum}" in line ${other.line}; the first stands`,
      where: { file: options.file, line: other.line },
      value: other.stratum,
      count: rows.filter((one) => one.stratum !== stratum).length,
      remedy: "strata must be constant within an animal: mend the rows",
    });
  // On one day, a loss comes last: an animal that is caught twice in a night may die the second time.
  const ordered = [...rows].sort(
    (a, b) => a.date - b.date || Number(a.lost) - Number(b.lost) || a.line - b.line,
  );
  const end = ordered.findIndex((one) => one.lost);
  for (const late of end < 0 ? [] : ordered.slice(end + 1)) {
    const loss = ordered[end];
    findings.push({
      kind: "capture-after-loss",
      subject: animal,
      message:
        `${animal} was recorded on ${isoDay(late.date)}, after its loss (${loss.fate}) on ` +
        `${isoDay(loss.date)} in line ${loss.line}; what follows the loss does not count`,
      where: { file: options.file, line: late.line },
      value: isoDay(late.date),
      remedy: "mend the mark, the date or the fate of one of the two rows",
    });
  }
  const seen: number[] = [];
  for (const one of end < 0 ? ordered : ordered.slice(0, end + 1)) {
    if (one.at < 0) continue;
    if (seen.at(-1) !== one.at) {
      seen.push(one.at);
      continue;
    }
    findings.push({
      kind: "capture-repeat",
      subject: animal,
      message: `${animal} was caught more than once at occasion ${occasions[one.at].name}; that counts once`,
      where: { file: options.file, line: one.line },
      value: isoDay(one.date),
      remedy: "nothing, if it was really met twice; else mend the mark or the date",
    });
  }
  if (seen.length === 0) return undefined;
  // Found dead between occasions is a death in the interval, not a loss at the capture before it.
  return { stratum, seen, lost: end >= 0 && ordered[end].at >= 0, number: 1 };
}
