import { columnIndex, type TextTable } from "../data/csv.ts";
import type { Occasion } from "../data/occasion.ts";
import { InputError } from "../errors.ts";
import type { CaptureResult } from "./capture-result.ts";
import { countsFrom, type History, stratumLabel, tallyFrom } from "./histories.ts";
import { cellError, countCell } from "./numbers.ts";
import type { ZeroOneCaptures } from "./options.ts";
import { namedOccasions, undatedIntervals } from "./own-occasions.ts";

/**
 * A row per animal (or group of animals with one history), a 0 or 1 per occasion. An animal whose lost column holds
 * one of the lost values was lost at its last capture.
 * Throws `study.not-zero-one`, `study.never-caught`, `study.animal-repeated`, `study.animal-missing`,
 * `study.stratum-missing`, `study.not-a-count`, `study.occasion-columns`, `study.lengths`.
 */
export function readZeroOne(
  options: ZeroOneCaptures,
  table: TextTable,
  dated: readonly Occasion[] | undefined,
): CaptureResult {
  const animal = columnIndex(table, options.animal, "captures.animal");
  const number = options.number === undefined ? -1 : columnIndex(table, options.number, "captures.number");
  const strata = options.strata.map((name) => columnIndex(table, name, "captures.strata"));
  const fate = options.lost === undefined ? -1 : columnIndex(table, options.lost.column, "captures.lost");
  const rest = table.header.filter((_, i) => ![animal, number, fate, ...strata].includes(i));
  const names = options.columns ?? dated?.map((one) => one.name) ?? rest;
  const columns = names.map((name) => columnIndex(table, name, "captures.columns"));
  const occasions = dated ?? namedOccasions(names);
  if (columns.length !== occasions.length || columns.length < 2)
    throw new InputError({
      name: "study.occasion-columns",
      expected: dated === undefined ? "at least 2 occasion columns" : `${dated.length} occasion columns`,
      found: `${columns.length}: ${names.join(", ")}`,
      where: { file: options.file, line: 1, cell: "captures.columns" },
      remedy: "name one column for each occasion, in order of time",
    });
  const lines = new Map<string, number>();
  const histories = table.rows.map(({ cells, line }, row): History => {
    const mark = cells[animal];
    const before = lines.get(mark);
    if (mark === "" || before !== undefined)
      throw cellError(table, row, animal, {
        name: mark === "" ? "study.animal-missing" : "study.animal-repeated",
        expected: mark === "" ? "the animal's mark" : `each animal in one row (see line ${before})`,
        remedy: mark === "" ? "write the mark" : "join the two rows, or mend the mark",
      });
    lines.set(mark, line);
    const seen = columns.flatMap((column, t) => {
      if (cells[column] === "0") return [];
      if (cells[column] === "1") return [t];
      throw cellError(table, row, column, {
        name: "study.not-zero-one",
        expected: "1 (caught) or 0 (not caught)",
        remedy: "write 0 or 1; for an animal that was lost, use captures.lost",
      });
    });
    if (seen.length === 0)
      throw cellError(table, row, animal, {
        name: "study.never-caught",
        expected: "an animal caught at least once",
        remedy: "take the row out: an animal that was never caught tells nothing",
      });
    const values = strata.map((column, i) => {
      if (cells[column] !== "") return cells[column];
      throw cellError(table, row, column, {
        name: "study.stratum-missing",
        expected: `a value of ${options.strata[i]} for each animal`,
        remedy:
          "fill the cell, with a word such as `unknown` if need be, or leave the column out of captures.strata",
      });
    });
    return {
      stratum: stratumLabel(options.strata, values),
      seen,
      lost: fate >= 0 && (options.lost?.values.includes(cells[fate]) ?? false),
      number: number < 0 ? 1 : countCell(table, row, number),
    };
  });
  return {
    histories,
    counts: countsFrom(histories, occasions.length),
    occasions,
    intervals: dated === undefined ? undatedIntervals(occasions, options.lengths) : undefined,
    findings: [],
    animals: histories.reduce((sum, one) => sum + one.number, 0),
    captures: histories.reduce((sum, one) => sum + one.number * one.seen.length, 0),
    perOccasion: tallyFrom(histories, occasions),
  };
}
