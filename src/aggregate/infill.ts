import type { RawFinding } from "../data/finding.ts";
import type { Series } from "../data/series.ts";
import { InputError } from "../errors.ts";
import { sampleSd } from "../math/quantile.ts";
import { align, type Grid } from "./grid.ts";
import { type Common, commonOf, correlation, ratioed, regressed, without } from "./neighbour.ts";
import type { Infill } from "./options.ts";

/** Fewest periods that a station and a neighbour must share. Common practice, no source. */
const LEAST_COMMON = 30;
/** The normal-ratio method takes up to three neighbours (Paulhus & Kohler 1952). */
const RATIO_NEIGHBOURS = 3;

/** What was filled at one station, and how well the same procedure gives back values that are known. */
interface SiteInfill {
  readonly site: string;
  readonly days: number;
  readonly gaps: number;
  /** Gaps that were too long, or in which no neighbour had a value. */
  readonly left: number;
  /** Neighbours that were used, best first. */
  readonly neighbours: readonly string[];
  /** Root mean square of leave-one-out errors over `tested` known values; NaN if there are none. */
  readonly error: number;
  readonly tested: number;
  /** Standard deviation (n − 1) of the known values: what filling by their mean would err by. */
  readonly spread: number;
}

interface Infilled {
  /** The stations, on common periods, with filled values. */
  readonly series: readonly Series[];
  /** filled[s][i] = 1 where value i of station s was infilled. */
  readonly filled: readonly Uint8Array[];
  readonly sites: readonly SiteInfill[];
}

/** A neighbour with what it shares with the station. */
interface Neighbour {
  readonly index: number;
  readonly values: Float64Array;
  readonly common: Common;
}

/** Neighbours that share enough and rise and fall with the station, the best correlated first. */
function neighboursOf(grid: Grid, s: number): Neighbour[] {
  return grid.values
    .map((values, index) => ({ index, values, common: commonOf(values, grid.values[s]) }))
    .filter(({ index, common }) => index !== s && common.count >= LEAST_COMMON && correlation(common) > 0)
    .sort((a, b) => correlation(b.common) - correlation(a.common) || a.index - b.index);
}

/**
 * The value of period i from the neighbours that have one: by regression on the best, or the mean of up to three
 * values × normal ratio. Given the station's own `known` value, that period is first left out of what is shared.
 */
function predict(
  neighbours: readonly Neighbour[],
  i: number,
  infill: Infill,
  total: boolean,
  known: number,
): number {
  const there = neighbours.filter(({ values }) => !Number.isNaN(values[i]));
  if (there.length === 0) return Number.NaN;
  const shared = ({ values, common }: Neighbour) =>
    Number.isNaN(known) ? common : without(common, values[i], known);
  if (infill.method === "regression") {
    const value = regressed(shared(there[0]), there[0].values[i]);
    return total ? Math.max(0, value) : value;
  }
  const used = there.slice(0, RATIO_NEIGHBOURS);
  return used.reduce((sum, one) => sum + ratioed(shared(one), one.values[i]), 0) / used.length;
}

/** Gaps [from, to) between two known values, as positions in the grid. */
function gapsOf(row: Float64Array): (readonly [number, number])[] {
  const gaps: (readonly [number, number])[] = [];
  let last = -1;
  for (let i = 0; i < row.length; i++) {
    if (Number.isNaN(row[i])) continue;
    // Before the first value and after the last there is no gap but no station.
    if (last >= 0 && i > last + 1) gaps.push([last + 1, i]);
    last = i;
  }
  return gaps;
}

function infillSite(grid: Grid, s: number, names: readonly string[], infill: Infill, total: boolean) {
  const known = grid.values[s];
  const neighbours = neighboursOf(grid, s);
  const values = known.slice();
  const filled = new Uint8Array(known.length);
  let [days, gaps, left] = [0, 0, 0];
  for (const [from, to] of gapsOf(known)) {
    // From the last known day to the next, so that days on which no station has a row count too.
    const length = grid.starts[to] - grid.ends[from - 1];
    const guesses = Array.from({ length: to - from }, (_, k) =>
      predict(neighbours, from + k, infill, total, Number.NaN),
    );
    if (length > infill.longest || guesses.every(Number.isNaN)) {
      left++;
      continue;
    }
    gaps++;
    guesses.forEach((guess, k) => {
      if (Number.isNaN(guess)) return;
      values[from + k] = guess;
      filled[from + k] = 1;
      days += grid.ends[from + k] - grid.starts[from + k];
    });
  }
  let [squares, tested] = [0, 0];
  for (let i = 0; i < known.length; i++) {
    if (Number.isNaN(known[i])) continue;
    const miss = predict(neighbours, i, infill, total, known[i]) - known[i];
    if (Number.isNaN(miss)) continue;
    squares += miss * miss;
    tested++;
  }
  const site: SiteInfill = {
    site: names[s],
    days,
    gaps,
    left,
    neighbours: neighbours.map(({ index }) => names[index]),
    error: Math.sqrt(squares / tested),
    tested,
    spread: sampleSd(known.filter((value) => !Number.isNaN(value))),
  };
  return { values, filled, site };
}

/** Other stations whose values cover the same periods; daily values cannot stand for a missing month. */
function comparable(series: readonly Series[], others: readonly Series[]): Series[] {
  const ends = new Map<number, number>();
  const add = ({ starts, ends: own }: Series) => {
    for (let i = 0; i < starts.length; i++) ends.set(starts[i], own[i]);
  };
  series.forEach(add);
  const own = new Set(series.map((one) => one.site));
  return others.filter((one) => {
    const fits = one.starts.every((start, i) => (ends.get(start) ?? one.ends[i]) === one.ends[i]);
    if (own.has(one.site) || !fits) return false;
    add(one);
    return true;
  });
}

/**
 * Fills gaps of at most `longest` days between two known values from the other stations (methods §2): regression on
 * the best-correlated neighbour that has the day, a total never below 0; or the normal-ratio method (Paulhus &
 * Kohler 1952). Only values that were measured fill others. Each station's error is that of the whole procedure,
 * leaving out one known value after another. `others` are stations that only lend their values. Throws `aggregate.normal-ratio` for anything but totals, since a ratio
 * of temperatures has no meaning, and `aggregate.periods-differ`.
 */
export function infillSeries(
  series: readonly Series[],
  infill: Infill,
  others: readonly Series[] = [],
): Infilled {
  const wrong = series.find((one) => one.kind !== "total");
  if (infill.method === "normal ratio" && wrong !== undefined)
    throw new InputError({
      name: "aggregate.normal-ratio",
      expected: "totals, such as rain, for the normal-ratio method",
      found: `${wrong.variable}, a ${wrong.kind}`,
      where: { cell: wrong.site },
      remedy: "fill its gaps by regression",
    });
  const all = [...series, ...comparable(series, others)];
  const grid = align(all);
  const names = all.map((one) => one.site);
  const done = series.map((one, s) => infillSite(grid, s, names, infill, one.kind === "total"));
  const { starts, ends } = grid;
  return {
    series: series.map((one, s) => ({ ...one, starts, ends, values: done[s].values })),
    filled: done.map((one) => one.filled),
    sites: done.map((one) => one.site),
  };
}

/** One finding per station that was filled. */
export function infillFindings(
  covariate: string,
  { method, longest }: Infill,
  unit: string,
  sites: readonly SiteInfill[],
): RawFinding[] {
  return sites
    .filter((one) => one.days > 0)
    .map(({ site, days, gaps, left, neighbours, error, tested, spread }) => ({
      kind: "infilled" as const,
      subject: covariate,
      message:
        `${site}: ${days} day${days === 1 ? "" : "s"} in ${gaps} gap${gaps === 1 ? "" : "s"} filled by ${method} on ` +
        `${neighbours.slice(0, method === "regression" ? 1 : RATIO_NEIGHBOURS).join(", ")} (leave-one-out error ` +
        `${digits(error)} ${unit} over ${tested} values, whose own sd is ${digits(spread)}); ` +
        `${left} gap${left === 1 ? "" : "s"} left (longer than ${longest} days, or no neighbour)`,
      where: { cell: `${covariate}, ${site}` },
      count: days,
      remedy: "compare the error with the sd, and the result with and without infilling",
    }));
}

const digits = (value: number) => Number(value.toPrecision(3));
