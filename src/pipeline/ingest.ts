import type { RawFinding } from "../data/finding.ts";
import type { Interval, Occasion } from "../data/occasion.ts";
import type { AnyPlace } from "../data/place.ts";
import type { Series, Site } from "../data/series.ts";
import type { Effects } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { extractLayers, type LayerExtraction } from "../layers/extract.ts";
import { statisticFinding } from "../layers/netcdf/cell-methods.ts";
import type { Wanted } from "../layers/options.ts";
import { type Refusal, refusalsOf } from "../layers/refusals.ts";
import type { LayerCovariate, Spec } from "../spec/spec.ts";
import { readRecords } from "../stations/read-records.ts";
import { readStationList } from "../stations/station-list.ts";
import type { CaptureResult } from "../study/capture-result.ts";
import { readCaptures } from "../study/captures.ts";
import { readOccasions } from "../study/occasions.ts";
import { readPlaces } from "../study/places.ts";
import { type ReadyMadeColumn, readReadyMade } from "../study/ready-made.ts";
import { splitIntervals } from "../study/split-years.ts";
import { ofRecords } from "./reuse/inputs.ts";
import { type StepNote, type Steps, withoutReuse } from "./reuse/steps.ts";

/** All that was read, before anything is made of it. */
export interface Ingested {
  readonly occasions: readonly Occasion[];
  /** Between occasions; under `split: years` the years that they are cut into. */
  readonly intervals: readonly Interval[];
  /** Under `split: years`, where something was cut: the interval between occasions that each year is of. */
  readonly yearsOf?: Int32Array;
  /** Undefined where the pipeline only builds the covariate set. */
  readonly captures: CaptureResult | undefined;
  readonly places: ReadonlyMap<string, AnyPlace>;
  readonly sites: readonly Site[];
  readonly stationSeries: readonly Series[];
  /** Series of a layer covariate by `layerKey`. */
  readonly layerSeries: ReadonlyMap<string, Series>;
  /** By table and column. */
  readonly readyMade: ReadonlyMap<string, ReadonlyMap<string, ReadyMadeColumn>>;
  /** What the layers' quality refused, by layer and reading. */
  readonly refusals: readonly Refusal[];
  readonly findings: readonly RawFinding[];
}

/** What tells one reading of a layer from another. */
export function layerKey({ layer, place, use }: Pick<LayerCovariate, "layer" | "place" | "use">): string {
  return JSON.stringify([layer, place, use]);
}

/** Occasions and captures, stations and their records, layers at places (if wanted), ready-made values. */
export async function ingest(
  spec: Spec,
  effects: Effects,
  withLayers = true,
  steps: Steps = withoutReuse(),
): Promise<Ingested> {
  const findings: RawFinding[] = [];
  const keep = <Result extends { readonly findings: readonly RawFinding[] }>(result: Result): Result => {
    findings.push(...result.findings);
    return result;
  };
  const dated =
    spec.occasions === undefined ? undefined : keep(await readOccasions(spec.occasions, effects.files));
  const captures =
    spec.captures === undefined
      ? undefined
      : keep(await readCaptures(spec.captures, dated?.occasions, effects.files));
  const occasions = dated?.occasions ?? captures?.occasions ?? [];
  const between = dated?.intervals ?? captures?.intervals;
  if (between === undefined) throw noOccasions();
  const cut = spec.survival.split === "years" ? splitIntervals(between) : undefined;
  const intervals = cut?.years ?? between;
  effects.checkInterrupted();

  const { places } = keep(await readPlaces(spec.places, effects.files));
  const sites =
    spec.stations === undefined ? undefined : keep(await readStationList(spec.stations, effects.files)).sites;
  const records =
    spec.records.length === 0
      ? { series: [], findings: [], rows: 0 }
      : keep(
          await steps.once(
            "station records",
            () => ofRecords(spec, sites, effects.files),
            () => readRecords(spec.records, sites, spec.duplicates, effects),
          ),
        );
  effects.checkInterrupted();

  const layerSeries = new Map<string, Series>();
  const refusals: Refusal[] = [];
  for (const [name, wanted] of withLayers ? wantedByLayer(spec, places) : []) {
    const extraction = keep(
      await extractLayers(
        name,
        spec.layers[name],
        wanted.map((one) => one.wanted),
        effects,
      ),
    );
    steps.note(layerNote(name, extraction.filesRead, extraction.files, steps.keeps));
    wanted.forEach((one, i) => {
      layerSeries.set(one.key, extraction.series[i]);
    });
    refusals.push(
      ...refusalsOf(
        name,
        wanted.map((one) => one.wanted),
        extraction,
      ),
    );
    findings.push(...methodFindings(spec, name, extraction));
  }
  const readyMade = new Map<string, ReadonlyMap<string, ReadyMadeColumn>>();
  for (const [name, options] of Object.entries(spec.readyMade)) {
    const { columns } = keep(await readReadyMade(options, intervals, effects.files));
    readyMade.set(name, new Map(columns.map((one) => [one.name, one])));
  }
  return {
    occasions,
    intervals,
    ...(cut !== undefined && cut.years.length > between.length ? { yearsOf: cut.yearsOf } : {}),
    captures,
    places,
    sites: sites ?? [],
    stationSeries: records.series,
    layerSeries,
    readyMade,
    refusals,
    findings,
  };
}

/** Statistics that contradict what a layer's file says its values are. */
export function methodFindings(
  spec: Spec,
  layer: string,
  { methods }: Pick<LayerExtraction, "methods">,
): RawFinding[] {
  if (methods === undefined) return [];
  return spec.covariates.flatMap((one) => {
    if (one.source !== "layer" || one.layer !== layer) return [];
    const found = statisticFinding(one.name, one.statistic.type, layer, methods);
    return found === undefined ? [] : [found];
  });
}

/** The layers' own store works file by file and place by place. */
function layerNote(name: string, read: number, files: number, keeps: boolean): StepNote {
  const kept = files - read;
  const why = !keeps
    ? "no results are kept without --reuse"
    : read === 0
      ? `the values of all ${files} files were kept`
      : `${read} of ${files} files had no kept values for these places and options`;
  return { step: `layer ${name}`, outcome: kept === files ? "reused" : "ran", why };
}

/** For each layer the places it is read at, each way of reading once. */
function wantedByLayer(spec: Spec, places: ReadonlyMap<string, AnyPlace>) {
  const byLayer = new Map<string, { key: string; wanted: Wanted }[]>();
  for (const one of spec.covariates) {
    if (one.source !== "layer") continue;
    const place = places.get(one.place);
    if (place === undefined) throw new Error(`place ${one.place} was checked and is gone`);
    const list = byLayer.get(one.layer) ?? [];
    const key = layerKey(one);
    if (!list.some((other) => other.key === key)) list.push({ key, wanted: { place, use: one.use } });
    byLayer.set(one.layer, list);
  }
  return byLayer;
}

function noOccasions(): InputError {
  return new InputError({
    name: "pipeline.no-occasions",
    expected: "occasions, or a counts table whose columns name them",
    found: "neither",
    where: { cell: "occasions" },
    remedy: "add occasions: with a file of one row per occasion",
  });
}
