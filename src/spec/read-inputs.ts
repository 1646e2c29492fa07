import type { ImageCover, LayerOptions } from "../layers/options.ts";
import type { RecordOptions } from "../stations/options.ts";
import type { CaptureOptions, ReadyMadeOptions } from "../study/options.ts";
import { given, mapValues } from "./given.ts";
import type { KeyPath } from "./path.ts";
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
): RecordOptions {
  const missing = missingTexts(raw.missing, yaml, [...path, "missing"]);
  const date = given(raw.date);
  return raw.layout === "wide"
    ? { ...raw, date, missing }
    : { ...raw, date, missing, series: mapValues(raw.series, (one) => given(one)) };
}

function readCover(text: string): ImageCover {
  switch (text) {
    case "day":
    case "month":
    case "year":
    case "dekad":
      return text;
    default:
      return { days: Number.parseInt(text, 10) };
  }
}

export function readLayer(raw: RawPipeline["layers"][string]): LayerOptions {
  return given({ ...raw, covers: readCover(raw.covers) });
}

export function readReadyMade(raw: RawPipeline["ready-made"]): Record<string, ReadyMadeOptions> {
  return mapValues(raw, (table) => ({ ...table }));
}
