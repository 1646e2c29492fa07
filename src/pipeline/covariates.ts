import { aggregateCovariate, baseValues } from "../aggregate/aggregate.ts";
import type { CovariateDefinition } from "../aggregate/options.ts";
import type { IntervalCovariate, WindowValue } from "../aggregate/result.ts";
import { inverseDistance } from "../aggregate/weights.ts";
import { prepareCovariates } from "../covariates/prepare.ts";
import type { Prepared } from "../covariates/result.ts";
import type { RawFinding } from "../data/finding.ts";
import type { Series } from "../data/series.ts";
import { InputError, placed } from "../errors.ts";
import { nearestName } from "../math/nearest-name.ts";
import type {
  CovariateSpec,
  LayerCovariate,
  ReadyMadeCovariate,
  Spec,
  StationCovariate,
} from "../spec/spec.ts";
import { seriesInUnit } from "../stations/series-unit.ts";
import { type Ingested, layerKey } from "./ingest.ts";
import type { Loaded } from "./load.ts";
import { ofDefinition } from "./reuse/inputs.ts";
import type { Steps } from "./reuse/steps.ts";
import { withStrata } from "./strata.ts";

/** A covariate that was aggregated, with the definition it came from where there is one. */
export interface Made {
  readonly covariate: IntervalCovariate;
  readonly findings: readonly RawFinding[];
  readonly definition: CovariateDefinition | undefined;
}

export interface CovariateSet extends Prepared {
  readonly covariates: readonly IntervalCovariate[];
  /** What each covariate was aggregated from, for the pictures. */
  readonly sources: ReadonlyMap<string, readonly Series[]>;
}

/** From observations to the prepared matrix: windows and statistics, then derive … standardise. */
export async function buildCovariates(loaded: Loaded, found: Ingested, steps: Steps): Promise<CovariateSet> {
  const { spec } = loaded;
  const made: Made[] = [];
  for (const [i, one] of spec.covariates.entries()) {
    const { definition, make } = recipeFor(one, one.entry ?? i, loaded, found);
    const from = () => ({ ...ofDefinition(definition), "the intervals": found.intervals });
    // Ready-made values come from a small file and are taken over as they are.
    made.push(
      definition === undefined
        ? make()
        : { ...(await steps.once(`covariate ${one.name}`, from, make)), definition },
    );
  }
  return prepareMade(loaded, found, made);
}

/** Covariates that were made, prepared to the matrix. */
export function prepareMade({ spec }: Loaded, found: Ingested, made: readonly Made[]): CovariateSet {
  const covariates = made.map((one) => one.covariate);
  const base = baseOf(spec, made);
  const prepared = prepareCovariates(covariates, found.intervals, spec.prepare, base);
  return {
    ...prepared,
    matrix: withStrata(spec, found, prepared.matrix),
    covariates,
    sources: new Map(made.map((one) => [one.covariate.name, one.definition?.series ?? []])),
    findings: [...made.flatMap((one) => one.findings), ...prepared.findings],
  };
}

/** The covariates asked for, aggregated but not prepared. */
export function makeCovariates(
  loaded: Loaded,
  found: Ingested,
  wanted: (one: CovariateSpec) => boolean,
): readonly Made[] {
  return loaded.spec.covariates.flatMap((one, i) =>
    wanted(one) ? [recipeFor(one, one.entry ?? i, loaded, found).make()] : [],
  );
}

/** What a covariate is made of, and its making, which may not be needed. */
interface CovariateRecipe {
  readonly definition: CovariateDefinition | undefined;
  make(): Made;
}

function recipeFor(one: CovariateSpec, index: number, loaded: Loaded, found: Ingested): CovariateRecipe {
  if (one.source === "ready-made")
    return { definition: undefined, make: () => readyMadeCovariate(one, found) };
  const series =
    one.source === "stations" ? stationSeries(one, index, loaded, found) : layerSeries(one, found);
  const second =
    one.source === "stations" && one.second !== undefined
      ? stationSeries({ ...one, variable: one.second }, index, loaded, found)
      : undefined;
  const unit = one.unit ?? series[0].unit;
  const definition: CovariateDefinition = {
    name: one.name,
    theme: one.theme,
    unit,
    window: one.window,
    statistic: one.statistic,
    complete: one.complete,
    join: one.source === "stations" ? one.join : "mean of windows",
    series: series.map((each) => inUnit(each, unit, one.name)),
    ...(second === undefined ? {} : { second: second.map((each) => inUnit(each, unit, one.name)) }),
    ...(one.source === "stations" ? infilling(one, unit, found) : {}),
    ...(one.source === "stations" ? weighting(one, index, series, loaded, found) : {}),
    ...(one.anomaly === undefined ? {} : { anomaly: one.anomaly }),
    ...(one.allowedMissing === undefined ? {} : { allowedMissing: one.allowedMissing }),
  };
  return { definition, make: () => ({ ...aggregateCovariate(definition, found.intervals), definition }) };
}

/** What a covariate whose gaps are filled needs beside its own stations: all others that have its variables. */
function infilling(one: StationCovariate, unit: string, found: Ingested): Partial<CovariateDefinition> {
  if (one.infill === undefined) return {};
  const having = (variable: string) =>
    found.stationSeries
      .filter((each) => each.variable === variable)
      .map((each) => inUnit(each, unit, one.name));
  return {
    infill: one.infill,
    neighbours: having(one.variable),
    ...(one.second === undefined ? {} : { secondNeighbours: having(one.second) }),
  };
}

/** Weights of the stations by their distance to a place, which must be a point. */
function weighting(
  one: StationCovariate,
  index: number,
  series: readonly Series[],
  loaded: Loaded,
  found: Ingested,
): Pick<CovariateDefinition, "weights"> {
  if (one.weights === undefined) return {};
  const { near, power } = one.weights;
  const place = found.places.get(near);
  if (place?.type !== "point")
    throw new InputError({
      name: "aggregate.weights-place",
      expected: "a place that is a point, to measure distances to",
      found: `${near}, which is an area`,
      where: {
        file: loaded.file,
        ...(loaded.positions(["covariates", index, "weights"]) ?? {}),
        cell: `covariates > ${one.name} > weights`,
      },
      remedy: "name a point, e.g. one in the middle of the area",
    });
  const names = [...new Set(series.map((each) => each.site))];
  const bySite = inverseDistance(names, found.sites, place.position, power, one.name);
  return { weights: { bySite, words: `weighted by 1/distance^${power} to ${near}` } };
}

function inUnit(series: Series, unit: string, covariate: string): Series {
  return placed({ cell: `covariates > ${covariate} > unit` }, () => seriesInUnit(series, unit));
}

function layerSeries(one: LayerCovariate, found: Ingested): readonly Series[] {
  const series = found.layerSeries.get(layerKey(one));
  if (series === undefined) throw new Error(`layer ${one.layer} was not read for ${one.name}`);
  return [series];
}

/** The series of the stations a covariate names, by id or by name. */
function stationSeries(
  one: StationCovariate,
  index: number,
  loaded: Loaded,
  found: Ingested,
): readonly Series[] {
  const series = found.stationSeries.filter((each) => each.variable === one.variable);
  if (one.stations === "all") {
    if (series.length > 0) return series;
    throw stationError(
      "stations.no-series",
      one,
      index,
      loaded,
      `no station with a series of ${one.variable}`,
      "",
    );
  }
  const idOf = new Map(
    found.sites.flatMap((site) => [[site.name, site.id] as const, [site.id, site.id] as const]),
  );
  return one.stations.map((name) => {
    const id = idOf.get(name) ?? name;
    const match = series.find((each) => each.site === id);
    if (match !== undefined) return match;
    const names = series.map((each) => found.sites.find((site) => site.id === each.site)?.name ?? each.site);
    // a station may be named by its identifier too, so a slip in one is looked up as well
    const near = nearestName(name, [...names, ...series.map((each) => each.site)]);
    const known = `stations with ${one.variable}: ${names.join(", ") || "none"}`;
    throw stationError("stations.unknown", one, index, loaded, JSON.stringify(name), near ?? known);
  });
}

function stationError(
  name: string,
  one: StationCovariate,
  index: number,
  loaded: Loaded,
  found: string,
  hint: string,
) {
  const at = loaded.positions(["covariates", index, "stations"]);
  return new InputError({
    name,
    expected: `a station that has a series of ${one.variable}`,
    found,
    where: { file: loaded.file, ...(at ?? {}), cell: `covariates > ${one.name} > stations` },
    remedy:
      hint === ""
        ? "add records that have it"
        : hint.startsWith("stations")
          ? `write one of the ${hint}`
          : `did you mean ${JSON.stringify(hint)}?`,
  });
}

/** Ready-made values come without a window: nothing was aggregated. */
function readyMadeCovariate(one: ReadyMadeCovariate, found: Ingested): Made {
  const column = found.readyMade.get(one.table)?.get(one.column);
  if (column === undefined) throw new Error(`ready-made ${one.table}.${one.column} was checked and is gone`);
  const values = Array.from(
    column.values,
    (value): WindowValue => ({
      value,
      period: undefined,
      daysDue: 0,
      daysCovered: 0,
      longestGap: 0,
      failed: Number.isNaN(value) ? "no value in the file" : undefined,
      scaled: false,
      stations: [],
    }),
  );
  return {
    covariate: {
      name: one.name,
      theme: one.theme,
      unit: one.unit,
      definition: `${one.column}, as given by interval`,
      files: [column.file],
      values,
    },
    findings: [],
    definition: undefined,
  };
}

/** Values of the base years by covariate, where standardisation asks for them. */
function baseOf(spec: Spec, made: readonly Made[]): ReadonlyMap<string, Float64Array> | undefined {
  const { standardise } = spec.prepare;
  if (standardise.type !== "base") return undefined;
  const base = new Map<string, Float64Array>();
  for (const { covariate, definition } of made) {
    const values = definition === undefined ? undefined : baseValues(definition, standardise);
    if (values !== undefined) base.set(covariate.name, values);
  }
  return base;
}
