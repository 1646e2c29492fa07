import type { ImageCover, LayerOptions, QualityOptions } from "../layers/options.ts";
import type { QualityRule } from "../layers/quality.ts";
import type { DateColumn, RecordOptions, TableOptions } from "../stations/options.ts";
import type { CaptureOptions, PlaceOptions, ReadyMadeOptions } from "../study/options.ts";
import { given, mapValues } from "./given.ts";
import type { KeyPath } from "./path.ts";
import type { Problem } from "./problems.ts";
import type { RawPipeline } from "./schema.ts";
import type { StudyOptions } from "./spec.ts";
import { readMetres } from "./windows.ts";
import type { YamlText } from "./yaml.ts";

export function readStudy({ title, sensitive, coarsen }: RawPipeline["study"]): StudyOptions {
  return { title, sensitive, coarsenKm: readMetres(coarsen) / 1000 };
}

export function readCaptures(raw: NonNullable<RawPipeline["captures"]>): CaptureOptions {
  if (raw.layout !== "counts") return given(raw);
  const { "released at": releasedAt, ...rest } = raw;
  return given({ ...rest, releasedAt });
}

/** Missing values keep the digits they are written with: -99.90 in a table is not -99.9. */
function missingTexts(values: readonly (string | number)[], yaml: YamlText, path: KeyPath): string[] {
  return values.map((value, i) =>
    typeof value === "string" ? value : (yaml.source([...path, i]) ?? String(value)),
  );
}

export function readRecords(
  raw: RawPipeline["records"][number],
  yaml: YamlText,
  path: KeyPath,
  problems: Problem[],
): RecordOptions {
  const missing = missingTexts(raw.missing, yaml, [...path, "missing"]);
  const shared = { date: readDate(raw, path, problems), missing, table: readTable(raw.table) };
  if (raw.layout === "long") {
    const { station, series, files, layout } = raw;
    return given({
      files,
      layout,
      ...shared,
      station: given(station),
      series: mapValues(series, (one) => given(one)),
    });
  }
  if (raw.layout === "wide") return given({ ...raw, ...shared });
  return given({ ...raw, ...shared, station: given(raw.station) });
}

function readTable(raw: RawPipeline["records"][number]["table"]): TableOptions | undefined {
  if (raw === undefined) return undefined;
  const { "header row": headerRow, "header rows": headerRows, "units row": unitsRow, ...rest } = raw;
  return given({ ...rest, headerRow, headerRows, unitsRow });
}

/** Readings must be told how they make days, and nothing else may be. */
function readDate(
  { date, layout }: RawPipeline["records"][number],
  path: KeyPath,
  problems: Problem[],
): DateColumn {
  const { "within day": within, ...rest } = date;
  const readings = date.covers === "reading";
  if (readings && within === undefined)
    problems.push({
      name: "spec.missing-key",
      path: [...path, "date", "within day"],
      expected: 'the key "within day" where one row is a reading',
      found: "no such key",
      remedy: "say when a day ends and how many readings make one, e.g. within day: { readings: 24 }",
    });
  if (!readings && within !== undefined)
    problems.push({
      name: "spec.conflict",
      path: [...path, "date", "within day"],
      atKey: true,
      expected: "readings within the day",
      found: `covers: ${date.covers}`,
      remedy: "write covers: reading, or remove it",
    });
  if ((layout === "months across" || layout === "days across") && (readings || date.covers !== "day"))
    problems.push({
      name: "spec.conflict",
      path: [...path, "date", "covers"],
      expected: `no word on what a row covers: ${layout} says it`,
      found: `covers: ${date.covers}`,
      remedy: "remove it",
    });
  return given({ ...rest, within: within === undefined ? undefined : readWithin(within) });
}

function readWithin(
  raw: NonNullable<RawPipeline["records"][number]["date"]["within day"]>,
): NonNullable<DateColumn["within"]> {
  const [hours, minutes] = raw["day ends"].split(":").map(Number);
  const { stamped, readings } = raw;
  return {
    ends: hours * 60 + minutes,
    stamped,
    shift: Math.round(raw["add hours"] * 60),
    readings,
    least: raw["at least"] ?? readings,
  };
}

function readCover(text: string): ImageCover {
  switch (text) {
    case "day":
    case "month":
    case "year":
    case "dekad":
    case "bounds":
      return text;
    default:
      return { days: Number.parseInt(text, 10), ...(text.endsWith("anew each year") ? { anew: true } : {}) };
  }
}

export function readLayer(raw: RawPipeline["layers"][string]): LayerOptions {
  const quality = raw.quality === undefined ? undefined : readQuality(raw.quality);
  return given({ ...raw, date: given(raw.date), covers: readCover(raw.covers), quality });
}

function readQuality(raw: NonNullable<RawPipeline["layers"][string]["quality"]>): QualityOptions {
  const pass = raw.pass.map(({ bits, values }): QualityRule => {
    if (bits === undefined) return { values };
    const [first, last = first] = bits.split(" to ").map(Number);
    return { bits: [first, last], values };
  });
  return given({ ...raw, date: raw.date === undefined ? undefined : given(raw.date), pass });
}

export function readPlaces(raw: RawPipeline["places"]): Record<string, PlaceOptions> {
  return mapValues(raw, (place): PlaceOptions => {
    if (!("fixes" in place)) return place;
    const { "at least": least, ...rest } = place;
    return given({ ...rest, least });
  });
}

export function readReadyMade(raw: RawPipeline["ready-made"]): Record<string, ReadyMadeOptions> {
  return mapValues(raw, (table) => ({ ...table }));
}
