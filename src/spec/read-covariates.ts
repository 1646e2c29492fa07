import type { Infill } from "../aggregate/options.ts";
import type { DeriveOptions } from "../covariates/options.ts";
import type { PlaceUse } from "../layers/options.ts";
import { nearestName } from "../math/nearest-name.ts";
import { given } from "./given.ts";
import type { KeyPath } from "./path.ts";
import type { Problem } from "./problems.ts";
import { readComplete, readStatistic, readWindow } from "./read-values.ts";
import type { RawPipeline } from "./schema.ts";
import { DERIVE_RULES } from "./schema-covariates.ts";
import type { CovariateSpec, CovariateValues } from "./spec.ts";
import { derivedUnit, unitAfter } from "./units.ts";
import { readMetres, readYears } from "./windows.ts";

type RawCovariate = RawPipeline["covariates"][number];
type RawValues = Extract<RawCovariate, { window: unknown }>;
type RawLayerCovariate = Extract<RawCovariate, { at: string }>;

/** A name that is used but stands nowhere. */
export function unknownName(
  path: KeyPath,
  kind: string,
  found: string,
  known: readonly string[],
  how: string,
): Problem {
  const near = nearestName(found, known);
  const shown = known.slice(0, 20).map((name) => JSON.stringify(name));
  const more = known.length > 20 ? [`${known.length - 20} more`] : [];
  const names = known.length === 0 ? "there are none" : [...shown, ...more].join(", ");
  return {
    name: "spec.unknown-name",
    path,
    expected: `${kind} (${names})`,
    found: JSON.stringify(found),
    remedy: near === undefined ? how : `did you mean ${JSON.stringify(near)}?`,
  };
}

/** The names that covariates can be made from. */
export interface Sources {
  /** Variable → unit, over all records. */
  readonly series: ReadonlyMap<string, string>;
  readonly layers: ReadonlyMap<string, string>;
  /** `table.column` → unit. */
  readonly readyMade: ReadonlyMap<string, string>;
  readonly places: readonly string[];
}

export function sourcesOf(raw: RawPipeline): Sources {
  const series = new Map<string, string>();
  for (const record of raw.records) {
    if (record.layout !== "long") series.set(record.variable, record.unit);
    else for (const [name, { unit }] of Object.entries(record.series)) series.set(name, unit);
  }
  const tables = Object.entries(raw["ready-made"]).flatMap(([table, { columns }]) =>
    Object.entries(columns).map(([column, { unit }]) => [`${table}.${column}`, unit] as const),
  );
  return {
    series,
    layers: new Map(Object.entries(raw.layers).map(([name, { unit }]) => [name, unit])),
    readyMade: new Map(tables),
    places: Object.keys(raw.places),
  };
}

function readValues(raw: RawValues, path: KeyPath, problems: Problem[]): CovariateValues {
  const window = readWindow(raw.window);
  if (window === undefined)
    problems.push({
      name: "spec.format",
      path: [...path, "window", "season"],
      expected: "days that the months have",
      found: JSON.stringify(
        typeof raw.window === "object" && "season" in raw.window ? raw.window.season : "",
      ),
      remedy: "write a month without a day for its first or last day",
    });
  if (window?.type === "span" && window.from.of === window.to.of && window.from.days >= window.to.days)
    problems.push({
      name: "spec.empty-window",
      path: [...path, "window"],
      expected: "a span whose beginning is before its end",
      found: `${window.to.days - window.from.days} days`,
      remedy: "exchange from and to, or move one of them",
    });
  const base = raw.departures === undefined ? undefined : readYears(raw.departures.base);
  return given({
    window: window ?? { type: "interval" as const, lag: 0 },
    statistic: readStatistic(raw.statistic),
    complete: readComplete(raw.complete),
    unit: raw.unit,
    anomaly: base === undefined || raw.departures === undefined ? undefined : { by: raw.departures.by, base },
    allowedMissing: raw["allowed missing"],
  });
}

function readUse(raw: RawLayerCovariate, path: KeyPath, problems: Problem[]): PlaceUse {
  const { by, radius } = raw;
  const validArea = raw["valid area"] ?? 0.8;
  const conflict = (key: string, expected: string, remedy: string) =>
    problems.push({
      name: "spec.conflict",
      path: [...path, key],
      atKey: true,
      expected,
      found: `by: ${by}`,
      remedy,
    });
  if (by === "radius") {
    if (radius === undefined)
      problems.push({
        name: "spec.missing-key",
        path: [...path, "radius"],
        expected: 'the key "radius" where a layer is read by radius',
        found: "no such key",
        remedy: "add it, e.g. radius: 2 km",
      });
    const metres = readMetres(radius ?? "1 m");
    if (metres === 0)
      problems.push({
        name: "spec.out-of-range",
        path: [...path, "radius"],
        expected: "a radius above 0",
        found: JSON.stringify(radius),
        remedy: "write how far round the place counts, e.g. radius: 2 km, or by: nearest",
      });
    return { by, metres, validArea };
  }
  if (radius !== undefined)
    conflict(
      "radius",
      "a radius only where a layer is read by radius",
      "write by: radius, or remove the radius",
    );
  if (by === "area") return { by, validArea };
  if (raw["valid area"] !== undefined)
    conflict(
      "valid area",
      "a valid area only where a layer is read by area or radius",
      "write by: area, or remove the valid area",
    );
  return { by };
}

/** Where the covariate comes from is told by its keys; a layer's or variable's name settles what keys leave open. */
function readCovariate(
  raw: RawCovariate,
  sources: Sources,
  path: KeyPath,
  problems: Problem[],
): CovariateSpec {
  const { name, theme } = raw;
  const from = [...path, "from"];
  if (!("window" in raw)) {
    const unit = sources.readyMade.get(raw.from);
    if (unit === undefined)
      problems.push(
        unknownName(
          from,
          "a column of a ready-made table",
          raw.from,
          [...sources.readyMade.keys()],
          "write table.column of a table under ready-made",
        ),
      );
    const dot = raw.from.indexOf(".");
    const [table, column] = [raw.from.slice(0, dot), raw.from.slice(dot + 1)];
    return { source: "ready-made", name, theme, table, column, unit: unit ?? "1" };
  }
  const values = readValues(raw, path, problems);
  if ("at" in raw) {
    if (!sources.layers.has(raw.from))
      problems.push(
        unknownName(from, "a layer", raw.from, [...sources.layers.keys()], "add the layer under layers"),
      );
    if (!sources.places.includes(raw.at))
      problems.push(
        unknownName([...path, "at"], "a place", raw.at, sources.places, "add the place under places"),
      );
    const use = readUse(raw, path, problems);
    return { source: "layer", name, theme, layer: raw.from, place: raw.at, use, ...values };
  }
  const variables = [...sources.series.keys()];
  if (!sources.series.has(raw.from)) {
    if (sources.layers.has(raw.from))
      problems.push({
        name: "spec.missing-key",
        path: [...path, "at"],
        expected: `the keys "at" and "by", since ${JSON.stringify(raw.from)} is a layer`,
        found: "no such keys",
        remedy: "add them, e.g. at: roost, by: nearest",
      });
    else
      problems.push(
        unknownName(
          from,
          "a variable of the records",
          raw.from,
          [...variables, ...sources.layers.keys()],
          "add it to the series of the records",
        ),
      );
  }
  if (raw.second !== undefined && !sources.series.has(raw.second))
    problems.push(
      unknownName(
        [...path, "second"],
        "a variable of the records",
        raw.second,
        variables,
        "add it to the series of the records",
      ),
    );
  const ofExtremes = values.statistic.type === "degree-days of extremes";
  if (ofExtremes !== (raw.second !== undefined))
    problems.push({
      name: "spec.conflict",
      path: [...path, ofExtremes ? "statistic" : "second"],
      expected: "a second variable for degree-days of extremes, and for no other statistic",
      found: ofExtremes ? "no second variable" : JSON.stringify(raw.second),
      remedy: ofExtremes ? "add the variable with the daily minima, e.g. second: tmin" : "remove it",
    });
  const apart = raw.join === "apart";
  const conflict = (key: string, expected: string, found: string, remedy: string) =>
    problems.push({ name: "spec.conflict", path: [...path, key], expected, found, remedy });
  if (apart && raw.stations === "all")
    conflict(
      "stations",
      "the names of stations that are kept apart, since each makes a covariate of its own",
      "all",
      "list them, e.g. stations: [Ash, Beck]",
    );
  if (apart && raw.weights !== undefined)
    conflict("weights", "weights only where stations are joined", "join: apart", "remove the weights");
  if (raw.weights !== undefined && !sources.places.includes(raw.weights.near))
    problems.push(
      unknownName(
        [...path, "weights", "near"],
        "a place",
        raw.weights.near,
        sources.places,
        "add the place under places",
      ),
    );
  return given({
    source: "stations" as const,
    name,
    theme,
    variable: raw.from,
    second: raw.second,
    stations: raw.stations,
    join: raw.join === "apart" ? ("mean of windows" as const) : raw.join,
    weights: raw.weights,
    infill: readInfill(raw.infill),
    ...values,
  });
}

/** One covariate, or one per station where they are kept apart, named after it. */
export function readCovariates(
  raw: readonly RawCovariate[],
  sources: Sources,
  problems: Problem[],
): readonly CovariateSpec[] {
  const read = raw.flatMap((one, entry): CovariateSpec[] => {
    const covariate = readCovariate(one, sources, ["covariates", entry], problems);
    const apart = "join" in one && one.join === "apart";
    if (!apart || covariate.source !== "stations" || covariate.stations === "all")
      return [{ ...covariate, entry }];
    return covariate.stations.map((station) => ({
      ...covariate,
      entry,
      name: `${covariate.name} at ${station}`,
      stations: [station],
    }));
  });
  if (read.length > raw.length) return read;
  return read.map(({ entry: _, ...one }) => one);
}

type RawInfill = Extract<RawCovariate, { join: unknown }>["infill"];

function readInfill(raw: RawInfill): Infill | undefined {
  if (raw === undefined) return undefined;
  const method = raw.method === "normal ratio" ? "normal ratio" : "regression";
  return { method, longest: Number.parseInt(raw["longest gap"], 10) };
}

/** The unit of a covariate's column in the matrix. */
export function covariateUnit(covariate: CovariateSpec, sources: Sources): string {
  if (covariate.source === "ready-made") return covariate.unit;
  const own =
    covariate.source === "layer"
      ? sources.layers.get(covariate.layer)
      : sources.series.get(covariate.variable);
  return unitAfter(covariate.statistic, covariate.unit ?? own ?? "1");
}

/** What the schema's mappings of `derive` may hold; its inferred type cannot say that for computed keys. */
interface RawDerived extends Readonly<Partial<Record<DeriveOptions["rule"], readonly string[]>>> {
  readonly name: string;
  readonly theme: string;
  readonly unit?: string;
}

/** `units` holds the unit of every column so far; the derived one is added to it. */
export function readDerived(
  checked: RawPipeline["derive"][number],
  units: Map<string, string>,
  path: KeyPath,
  problems: Problem[],
): DeriveOptions {
  const raw = checked as unknown as RawDerived;
  const { name, theme } = raw;
  const rule = DERIVE_RULES.find((key) => raw[key] !== undefined) ?? "mean";
  const of = raw[rule] ?? [];
  of.forEach((source, i) => {
    if (!units.has(source))
      problems.push(
        unknownName(
          [...path, rule, i],
          "a covariate that stands above",
          source,
          [...units.keys()],
          "name a covariate, or one derived before this one",
        ),
      );
  });
  const sourceUnits = of.map((source) => units.get(source) ?? "1");
  const unit = raw.unit ?? derivedUnit(rule, sourceUnits);
  units.set(name, unit);
  return { name, theme, unit, rule, of };
}
