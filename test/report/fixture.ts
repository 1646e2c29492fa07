import type { IntervalCovariate, WindowValue } from "../../src/aggregate/result.ts";
import { diagnose } from "../../src/collinearity/diagnose.ts";
import type { CollinearityOptions } from "../../src/collinearity/options.ts";
import { compare } from "../../src/compare/compare.ts";
import { principalComponents } from "../../src/components/components.ts";
import { prepareCovariates } from "../../src/covariates/prepare.ts";
import { type Day, dayOf } from "../../src/data/day.ts";
import type { Finding } from "../../src/data/finding.ts";
import { zeros } from "../../src/data/matrix.ts";
import type { Interval, Occasion } from "../../src/data/occasion.ts";
import type { Where } from "../../src/data/place.ts";
import type { Series, Site } from "../../src/data/series.ts";
import type { Parallel } from "../../src/effects/effects.ts";
import { silentProgress } from "../../src/effects/effects.ts";
import { type Random, randomStream } from "../../src/math/random.ts";
import type { MapLayer, ReportInput, ShownSeries } from "../../src/report/input.ts";
import type { ScreenOptions } from "../../src/screen/options.ts";
import { type PermutationChunk, permuteYears } from "../../src/screen/permutation.ts";
import type { ScreenProblem } from "../../src/screen/problem.ts";
import { screen } from "../../src/screen/screen.ts";
import type { Counts } from "../../src/study/counts.ts";
import type { Frame } from "../../src/survival/design.ts";
import { compareRecapture, recapturePart } from "../../src/survival/recapture-choice.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";
import type { Table } from "../../src/tables/table.ts";

export interface Made {
  readonly covariates?: number;
  readonly strata?: readonly string[];
  readonly dated?: boolean;
  readonly permutations?: number;
  /** Names to put in place of the first covariate, theme and station. */
  readonly hostile?: string;
  readonly survival?: boolean;
  /** A linear trend over the years in every model. */
  readonly trend?: boolean;
  /** As from a counts table: no places, stations, map, tables or findings, values that came ready-made. */
  readonly bare?: boolean;
}

interface Kind {
  readonly name: string;
  readonly theme: string;
  readonly unit: string;
  readonly centre: number;
  readonly sd: number;
  /** Which hidden series it follows, and how closely. */
  readonly follows: number;
  readonly r: number;
  /** Month-day windows in the year the interval ends; negative: months of the year before. */
  readonly window: readonly [number, number] | undefined;
}

const KINDS: readonly Kind[] = [
  {
    name: "winter rain",
    theme: "rain",
    unit: "mm",
    centre: 310,
    sd: 70,
    follows: 0,
    r: 0.97,
    window: [-11, 2],
  },
  {
    name: "wettest five days",
    theme: "rain",
    unit: "mm",
    centre: 62,
    sd: 14,
    follows: 0,
    r: 0.85,
    window: [-11, 2],
  },
  {
    name: "rainy nights in May",
    theme: "rain",
    unit: "1",
    centre: 9,
    sd: 3,
    follows: 4,
    r: 0.7,
    window: [5, 5],
  },
  {
    name: "interval rain",
    theme: "rain",
    unit: "mm",
    centre: 2.2,
    sd: 0.4,
    follows: 0,
    r: 0.7,
    window: undefined,
  },
  {
    name: "cold nights",
    theme: "temperature",
    unit: "1",
    centre: 71,
    sd: 15,
    follows: 1,
    r: 0.95,
    window: [-11, 3],
  },
  {
    name: "coldest night",
    theme: "temperature",
    unit: "degC",
    centre: -11,
    sd: 3,
    follows: 1,
    r: -0.8,
    window: [-11, 3],
  },
  {
    name: "spring warmth",
    theme: "temperature",
    unit: "degC d",
    centre: 240,
    sd: 50,
    follows: 2,
    r: 0.9,
    window: [3, 5],
  },
  {
    name: "hot spell",
    theme: "temperature",
    unit: "degC",
    centre: 29,
    sd: 2,
    follows: 3,
    r: 0.9,
    window: [6, 7],
  },
  {
    name: "last summer",
    theme: "temperature",
    unit: "degC",
    centre: 24,
    sd: 1.2,
    follows: 5,
    r: 0.9,
    window: [-6, -8],
  },
  {
    name: "snow at roost",
    theme: "snow",
    unit: "percent",
    centre: 34,
    sd: 16,
    follows: 1,
    r: 0.88,
    window: [-12, 2],
  },
  { name: "snow days", theme: "snow", unit: "1", centre: 41, sd: 14, follows: 1, r: 0.9, window: [-12, 2] },
  {
    name: "spring green",
    theme: "greenness",
    unit: "1",
    centre: 0.52,
    sd: 0.05,
    follows: 2,
    r: 0.85,
    window: [3, 5],
  },
  {
    name: "summer green",
    theme: "greenness",
    unit: "1",
    centre: 0.71,
    sd: 0.04,
    follows: 3,
    r: -0.6,
    window: [6, 7],
  },
  {
    name: "green before",
    theme: "greenness",
    unit: "1",
    centre: 0.6,
    sd: 0.05,
    follows: 5,
    r: 0.6,
    window: [-6, -8],
  },
];

const ignoreAll: Parallel = {
  map: async (_task, inputs) =>
    // the only task of the rooms that the fixture runs
    inputs.map((one) => permuteYears(one as unknown as PermutationChunk)) as never,
};

export const WARN: CollinearityOptions["warn"] = { correlation: 0.7, inflation: 10, condition: 30 };

/** A whole study for the page, by the real rooms, from one seed. */
export async function reportInput(made: Made = {}): Promise<ReportInput> {
  const random = randomStream(11, "page fixture", 0);
  const n = 20;
  const dated = made.dated ?? true;
  const { occasions, intervals } = time(n, dated, random);
  const covariates = candidates(made.covariates ?? KINDS.length, intervals, made.hostile, random).map(
    (one) =>
      made.bare
        ? {
            ...one,
            values: one.values.map((value) => ({ ...value, period: undefined, daysDue: 0, daysCovered: 0 })),
          }
        : one,
  );
  const prepared = prepareCovariates(covariates, intervals, {
    derive: [],
    transform: {},
    detrend: "none",
    incomplete: "leave out",
    standardise: { type: "sample" },
  });
  const { matrix, leftOut } = prepared;
  const collinearity: CollinearityOptions = { warn: WARN, cluster: 0.7, decisions: [] };
  const { diagnosis, findings } = diagnose(matrix.standard, matrix.names, collinearity, {
    uncentred: matrix.raw,
  });
  const components = principalComponents(matrix.standard, matrix.names, { type: "broken stick" });
  const base = {
    title: made.hostile ?? "An invented maternity roost",
    version: "0.1.0",
    sensitive: true,
    coarsenedKm: 10,
    occasions,
    intervals,
    covariates,
    matrix,
    leftOut,
    shown: dated ? shownSeries(covariates, random) : [],
    places: made.bare ? [] : PLACES,
    stations: made.bare ? [] : stations(made.hostile),
    map: made.bare ? undefined : land(),
    warn: WARN,
    findings: made.bare
      ? []
      : [...listed(made.hostile), ...findings.map((one) => ({ ...one, severity: "warn" as const }))],
    tables: made.bare ? [] : tables(matrix.names, matrix.rows, Array.from(matrix.standard.data)),
    record: JSON.stringify(
      {
        version: "0.1.0",
        seed: 1,
        inputs: [{ path: "captures.csv", sha256: "9f2c…" }],
        pipeline: made.hostile ?? "covey: 1",
      },
      undefined,
      2,
    ),
  };
  if (made.survival === false)
    return {
      ...base,
      caught: [],
      animals: Number.NaN,
      diagnosis: undefined,
      components: undefined,
      screened: undefined,
      comparison: undefined,
    };

  const strata = made.strata ?? ["adult", "young"];
  const driver = (name: string) => matrix.names.indexOf(name);
  const effect = (t: number) => {
    const at = (name: string) =>
      driver(name) < 0 ? 0 : matrix.standard.data[t * matrix.names.length + driver(name)];
    return -0.55 * at("winter rain") + 0.35 * at("spring warmth");
  };
  const rates = intervals.map((_, t) => 1 / (1 + Math.exp(-(0.95 + effect(t) + 0.2 * random.normal()))));
  const caught = occasions.map((one) => ({ occasion: one.name, newlyMarked: 0, seenAgain: 0 }));
  const counts = strata.map((stratum, g) =>
    simulate(stratum, g === 0 ? 12 : 9, rates, g * -0.5, caught, random),
  );
  const data = counts.map(sufficientStatistics);
  const frame: Frame = {
    strata,
    intervals: n,
    lengths: Float64Array.from(intervals, (one) => one.length),
    forced: made.trend === true ? [trend(n)] : [],
    effort: undefined,
  };
  const recapture = compareRecapture(data, frame, "choose");
  const problem: ScreenProblem = {
    data,
    frame,
    recapture: recapturePart(frame, recapture.chosen),
    covariates: matrix.names.map((name, k) => ({
      name,
      values: Float64Array.from({ length: n }, (_, t) => matrix.standard.data[t * matrix.names.length + k]),
    })),
  };
  const options: ScreenOptions = {
    steps: 100,
    downTo: 0.001,
    gamma: 1,
    chooseBy: "BIC",
    sampleSize: "releases",
    fit: "shrunken",
    permutations: made.permutations ?? 19,
  };
  const animals = counts.reduce((sum, one) => sum + one.animals, 0);
  const { result } = await screen(problem, recapture, options, animals, 1, {
    parallel: ignoreAll,
    progress: silentProgress,
  });
  return {
    ...base,
    caught,
    animals,
    diagnosis,
    components,
    screened: result,
    comparison: compare(problem, result, components, diagnosis.kept, options),
  };
}

function trend(n: number) {
  return { name: "year trend", values: Float64Array.from({ length: n }, (_, t) => (t - (n - 1) / 2) / n) };
}

function time(n: number, dated: boolean, random: Random) {
  const day = (year: number): Day => dayOf(year, 7, 22) + random.below(6);
  const occasions: Occasion[] = Array.from({ length: n + 1 }, (_, index) => {
    const first = day(2003 + index);
    return dated
      ? { index, name: String(2003 + index), first, last: first + 2 + random.below(3), effort: Number.NaN }
      : { index, name: String(index + 1), first: Number.NaN, last: Number.NaN, effort: Number.NaN };
  });
  const mid = (one: Occasion) => Math.floor((one.first + one.last) / 2);
  const intervals: Interval[] = Array.from({ length: n }, (_, index) => ({
    index,
    name: `${occasions[index].name} to ${occasions[index + 1].name}`,
    start: mid(occasions[index]),
    end: mid(occasions[index + 1]),
    length: 1,
  }));
  return { occasions, intervals };
}

function candidates(
  many: number,
  intervals: readonly Interval[],
  hostile: string | undefined,
  random: Random,
): IntervalCovariate[] {
  const hidden = Array.from({ length: 6 }, () => intervals.map(() => random.normal()));
  return Array.from({ length: many }, (_, k) => {
    const kind = KINDS[k % KINDS.length];
    const again = Math.floor(k / KINDS.length);
    const name = k === 0 && hostile ? hostile : again === 0 ? kind.name : `${kind.name} ${again + 1}`;
    const values = intervals.map((interval, t): WindowValue => {
      const z =
        kind.r * hidden[kind.follows][t] +
        Math.sqrt(1 - kind.r ** 2) * random.normal() +
        again * random.normal();
      const period = windowOf(kind, interval);
      const days = period === undefined ? 365 : period.end - period.start;
      const gap = random.uniform() < 0.1 ? random.below(9) : 0;
      return {
        value: kind.centre + kind.sd * z,
        period,
        daysDue: days,
        daysCovered: days - gap,
        longestGap: gap,
        failed: undefined,
        scaled: gap > 4,
        stations: kind.theme === "rain" ? ["050114", "Ash", "Beck"] : [],
      };
    });
    if (kind.name === "green before" && many > 3)
      values[2] = {
        ...values[2],
        value: Number.NaN,
        daysCovered: 20,
        longestGap: 60,
        failed: "2 of 3 months missing",
      };
    return {
      name,
      theme: k === 0 && hostile ? hostile : kind.theme,
      unit: kind.unit,
      definition: `${kind.name}: ${kind.theme} over ${kind.window === undefined ? "the whole interval" : "its season"}`,
      files: [`stations/${kind.theme}.csv`],
      values,
    };
  });
}

function windowOf(kind: Kind, interval: Interval) {
  if (Number.isNaN(interval.start)) return undefined;
  if (kind.window === undefined) return { start: interval.start, end: interval.end };
  const year = 2004 + interval.index;
  const [from, to] = kind.window;
  const before = (month: number) => (month < 0 ? year - 1 : year);
  return { start: dayOf(before(from), Math.abs(from), 1), end: dayOf(before(to), Math.abs(to) + 1, 1) };
}

/** Capture histories by the model's own rules, summed into release–recapture counts. */
function simulate(
  stratum: string,
  newly: number,
  rates: readonly number[],
  shift: number,
  caught: { newlyMarked: number; seenAgain: number }[],
  random: Random,
): Counts {
  const n = rates.length;
  const released = new Float64Array(n);
  const seen = zeros(n, n);
  let animals = 0;
  for (let first = 0; first <= n; first++)
    for (let a = 0; a < newly; a++) {
      animals++;
      caught[first].newlyMarked++;
      let last = first;
      if (last < n) released[last]++;
      for (let t = first; t < n; t++) {
        const logit = Math.log(rates[t] / (1 - rates[t])) + shift;
        if (random.uniform() > 1 / (1 + Math.exp(-logit))) break;
        if (random.uniform() > 0.72) continue;
        seen.data[last * n + t]++;
        caught[t + 1].seenAgain++;
        last = t + 1;
        if (last < n) released[last]++;
      }
    }
  return { stratum, occasions: n + 1, released, seen, animals };
}

function shownSeries(covariates: readonly IntervalCovariate[], random: Random): ShownSeries[] {
  return covariates
    .filter((_, k) => k % 3 === 0)
    .slice(0, 6)
    .map((one) => {
      const months = 12 * 21;
      const starts = Int32Array.from({ length: months }, (_, m) => dayOf(2003, 1 + m, 1));
      const series: Series = {
        site: one.theme === "greenness" ? "winter range" : "Ash",
        variable: one.theme,
        unit: one.unit,
        kind: "mean",
        starts,
        ends: Int32Array.from({ length: months }, (_, m) => dayOf(2003, 2 + m, 1)),
        values: Float64Array.from({ length: months }, (_, m) =>
          m > 100 && m < 104 ? Number.NaN : 40 + 25 * Math.sin((m / 6) * Math.PI) + 8 * random.normal(),
        ),
        files: ["stations/lowland_ash.csv"],
      };
      return { covariate: one.name, series };
    });
}

const PLACES: readonly Where[] = [
  { type: "point", name: "roost", position: [6.15, 49.85] },
  {
    type: "area",
    name: "winter range",
    polygons: [
      [
        [
          [5.95, 49.72],
          [6.2, 49.66],
          [6.42, 49.78],
          [6.3, 49.98],
          [6.02, 49.94],
          [5.95, 49.72],
        ],
      ],
    ],
  },
];

function stations(hostile: string | undefined): Site[] {
  const at = (id: string, name: string, longitude: number, latitude: number, elevation: number) => ({
    id,
    name,
    longitude,
    latitude,
    elevation,
  });
  return [
    at("050114", hostile ?? "Upland", 6.35, 50.05, 512),
    at("Ash", "Ash", 6.05, 49.78, 210),
    at("Beck", "Beck", 6.1, 49.62, 240),
    at("Cote", "Cote", 5.85, 49.9, 330),
    at("Dell", "Dell", 6.45, 49.7, 180),
    at("Elm", "Elm", Number.NaN, Number.NaN, Number.NaN),
  ];
}

function land(): MapLayer {
  const [width, height] = [70, 60];
  const values = new Float64Array(width * height);
  for (let i = 0; i < height; i++)
    for (let j = 0; j < width; j++) {
      const value = 0.5 + 0.2 * Math.sin(i / 7) * Math.cos(j / 9) + 0.1 * Math.sin((i + j) / 5);
      values[i * width + j] = i < 8 && j > 60 ? Number.NaN : value;
    }
  const box = { west: 5.75, east: 6.6, south: 49.55, north: 50.12 };
  return { variable: "greenness", title: "greenness, May 2012", unit: "1", width, height, values, ...box };
}

function listed(hostile: string | undefined): Finding[] {
  return [
    {
      kind: "gap",
      severity: "warn",
      subject: hostile ?? "Ash: rain",
      message: "31 days in a row without a value, 2011-05-01 to 2011-05-31",
      where: { file: "stations/lowland_ash.csv", line: 3043 },
      count: 31,
      remedy: "complete the records, or let the covariate leave the interval out",
    },
    {
      kind: "duplicate",
      severity: "warn",
      subject: "050114: rain",
      message: "the day 2009-02-03 stands twice; the first row is kept",
      where: { file: "stations/upland.csv", line: 2227, column: 2 },
      value: "2009-02-03",
      remedy: "correct the file",
    },
    {
      kind: "sentinel",
      severity: "accept",
      subject: "Beck",
      message: "-9999 stands for a missing value 42 times",
      where: { file: "stations/lowland_beck.csv", line: 12, column: 3 },
      value: "-9999",
      count: 42,
      remedy: "none needed: it is declared",
    },
    {
      kind: "capture-outside",
      severity: "warn",
      subject: "ring A1042",
      message: "caught on 2014-08-19, outside every occasion",
      where: { file: "captures.csv", line: 811 },
      value: "2014-08-19",
      remedy: "widen the occasion, or leave the capture out",
    },
    {
      kind: "incomplete",
      severity: "warn",
      subject: "green before, 2005 to 2006",
      message: "2 of 3 months missing",
      where: { cell: "green before, 2005 to 2006" },
      remedy: "choose another window",
    },
  ];
}

function tables(names: readonly string[], rows: readonly string[], data: readonly number[]): Table[] {
  return [
    {
      name: "covariates-standardised",
      title: "Standardised covariates",
      description: "One row per interval; every covariate in sd of its own.",
      columns: [
        { name: "interval", title: "interval", type: "text", description: "from occasion to occasion" },
        ...names.map((name, k) => ({
          name: `c${k}`,
          title: name,
          type: "number" as const,
          unit: "sd",
          description: name,
        })),
      ],
      rows: rows.map((row, t) => [row, ...names.map((_, k) => data[t * names.length + k])]),
    },
    {
      name: "windows",
      title: "Windows",
      description: "Which rows hold.",
      columns: [
        { name: "what", title: "what", type: "text", description: "a name" },
        { name: "many", title: "days", type: "integer", unit: "d", description: "days due" },
        { name: "whole", title: "complete", type: "truth", description: "true where nothing is missing" },
      ],
      rows: [
        ["winter rain", 120, true],
        ["green before", 92, false],
        ["nothing", undefined, undefined],
      ],
    },
  ];
}
