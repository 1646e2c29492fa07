import { columnIndex, type TextTable } from "../data/csv.ts";
import { type Matrix, zeros } from "../data/matrix.ts";
import type { Occasion } from "../data/occasion.ts";
import { InputError } from "../errors.ts";
import type { CaptureResult } from "./capture-result.ts";
import { stratumLabel } from "./histories.ts";
import { cellError, countCell } from "./numbers.ts";
import type { CountCaptures } from "./options.ts";
import { namedOccasions, undatedIntervals } from "./own-occasions.ts";

/**
 * Release–recapture counts: per stratum a row for each release occasion 1 … T−1, with the number released and, in
 * the columns of occasions 2 … T, how many of them were next met there (Burnham et al. 1987, the reduced array).
 * Cells at or before the release are empty or 0. Without dated occasions the first row names the first occasion and
 * the columns the others.
 * Throws `study.release-occasion`, `study.release-repeated`, `study.release-row-missing`, `study.seen-before-release`,
 * `study.more-seen-than-released`, `study.occasion-columns`, `study.stratum-missing`, `study.not-a-count`,
 * `study.lengths`.
 */
export function readCountsTable(
  options: CountCaptures,
  table: TextTable,
  dated: readonly Occasion[] | undefined,
): CaptureResult {
  const at = columnIndex(table, options.releasedAt, "captures.released at");
  const released = columnIndex(table, options.released, "captures.released");
  const strata = options.strata.map((name) => columnIndex(table, name, "captures.strata"));
  const rest = table.header.filter((_, i) => ![at, released, ...strata].includes(i));
  const names = options.columns ?? dated?.slice(1).map((one) => one.name) ?? rest;
  const columns = names.map((name) => columnIndex(table, name, "captures.columns"));
  const occasions = dated ?? namedOccasions([table.rows[0].cells[at], ...names]);
  const intervals = occasions.length - 1;
  if (columns.length !== intervals || intervals < 1)
    throw new InputError({
      name: "study.occasion-columns",
      expected:
        dated === undefined
          ? "at least 1 column of next recaptures"
          : `${intervals} columns, one for each occasion but the first`,
      found: `${columns.length}: ${names.join(", ")}`,
      where: { file: options.file, line: 1, cell: "captures.columns" },
      remedy: "name one column for each occasion after the first, in order of time",
    });
  const groups = new Map<string, { released: Float64Array; seen: Matrix; lines: Map<number, number> }>();
  table.rows.forEach(({ cells, line }, row) => {
    const values = strata.map((column, i) => {
      if (cells[column] !== "") return cells[column];
      throw cellError(table, row, column, {
        name: "study.stratum-missing",
        expected: `a value of ${options.strata[i]} in each row`,
        remedy: "fill the cell, or leave the column out of captures.strata",
      });
    });
    const stratum = stratumLabel(options.strata, values);
    const group = groups.get(stratum) ?? {
      released: new Float64Array(intervals),
      seen: zeros(intervals, intervals),
      lines: new Map<number, number>(),
    };
    groups.set(stratum, group);
    const i = occasions.slice(0, -1).findIndex((one) => one.name === cells[at]);
    const before = group.lines.get(i);
    if (i < 0 || before !== undefined)
      throw cellError(table, row, at, {
        name: i < 0 ? "study.release-occasion" : "study.release-repeated",
        expected:
          i < 0
            ? `an occasion before the last: ${occasions
                .slice(0, -1)
                .map((one) => one.name)
                .join(", ")}`
            : `each release occasion in one row of ${stratum} (see line ${before})`,
        remedy: i < 0 ? "mend the name; releases at the last occasion are left out" : "join the two rows",
      });
    group.lines.set(i, line);
    group.released[i] = countCell(table, row, released);
    readRow(table, row, columns, i, group.seen);
    const met = group.seen.data.slice(i * intervals, (i + 1) * intervals).reduce((sum, one) => sum + one, 0);
    if (met > group.released[i])
      throw cellError(table, row, released, {
        name: "study.more-seen-than-released",
        expected: `at least the ${met} animals that were met again`,
        remedy: "mend the row: each released animal is counted once, where it is next met",
      });
  });
  const sorted = [...groups].sort(([a], [b]) => (a < b ? -1 : 1));
  for (const [stratum, { lines }] of sorted)
    for (const one of occasions.slice(0, -1))
      if (!lines.has(one.index)) throw rowMissing(options.file, stratum, one.name);
  const counts = sorted.map(([stratum, group]) => ({
    stratum,
    occasions: occasions.length,
    released: group.released,
    seen: group.seen,
    animals: Number.NaN,
  }));
  const seenAgain = occasions.map((_, t) =>
    counts.reduce((sum, { seen }) => {
      for (let i = 0; i < t; i++) sum += seen.data[i * intervals + t - 1];
      return sum;
    }, 0),
  );
  const unknown = Number.NaN;
  return {
    histories: undefined,
    counts,
    occasions,
    intervals: dated === undefined ? undatedIntervals(occasions, options.lengths) : undefined,
    findings: [],
    animals: unknown,
    captures: unknown,
    perOccasion: occasions.map(({ name }, t) => ({
      occasion: name,
      newlyMarked: unknown,
      seenAgain: seenAgain[t],
      lost: unknown,
    })),
  };
}

/** Fills row i of `seen`; cells of occasions up to the release may be empty. */
function readRow(table: TextTable, row: number, columns: readonly number[], i: number, seen: Matrix): void {
  columns.forEach((column, j) => {
    const early = j < i;
    const value = early && table.rows[row].cells[column] === "" ? 0 : countCell(table, row, column);
    if (early && value > 0)
      throw cellError(table, row, column, {
        name: "study.seen-before-release",
        expected: "0 or nothing: this occasion is not after the release",
        remedy: "check the order of rows and columns; both run with time",
      });
    seen.data[i * seen.columns + j] = value;
  });
}

function rowMissing(file: string, stratum: string, name: string): InputError {
  return new InputError({
    name: "study.release-row-missing",
    expected: `a row for each release occasion of ${stratum}`,
    found: `none for ${JSON.stringify(name)}`,
    where: { file },
    remedy: "add the row; where nobody was released, write 0",
  });
}
