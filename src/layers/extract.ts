import type { RawFinding } from "../data/finding.ts";
import type { Series } from "../data/series.ts";
import type { Effects } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { settleDates } from "./date-table.ts";
import type { ImagePeriod } from "./dates.ts";
import type { CellMethods } from "./netcdf/cell-methods.ts";
import type { LayerOptions, Wanted } from "./options.ts";
import type { PixelTest } from "./quality.ts";
import {
  indexQuality,
  openQuality,
  type QualityIndex,
  qualityFiles,
  withoutQuality,
} from "./quality-stack.ts";
import { fetching, isAddress, isRemote, layerPaths, openFile, versionHash } from "./remote.ts";
import { fileKey, type Kept, placeKey, readKept, writeKept } from "./reuse.ts";
import { type FileValues, seriesOf } from "./series.ts";
import { findSideFiles } from "./side.ts";
import { type KnownPlaces, openSource, type Source } from "./source.ts";
import { turn } from "./turn.ts";

export interface LayerExtraction {
  /** One for each wanted place, in their order; the site is the place's name. */
  readonly series: readonly Series[];
  /** Parallel to each series' values: share of the place's area (or of the point's weight) with valid pixels. */
  readonly validShares: readonly Float64Array[];
  readonly findings: readonly RawFinding[];
  /** Parallel to each series' values: share of the place that had values which quality refused; empty without quality. */
  readonly refused: readonly Float64Array[];
  /** What the files say their values are, where they do (NetCDF). */
  readonly methods: CellMethods | undefined;
  /** Files whose values were not at hand and were read. */
  readonly filesRead: number;
  /** Files the layer has. */
  readonly files: number;
}

/**
 * Reads a stack of GeoTIFF or NetCDF images at places. Files go one after the other, each needed block is read and unpacked
 * once for all places, and what was read of a file is handed to the reuse effect before the next begins. Memory does
 * not grow with the number of files beyond the values themselves.
 * Throws InputErrors named `layers.…` with the file's name, and InterruptedError between files.
 */
export async function extractLayers(
  name: string,
  given: LayerOptions,
  wanted: readonly Wanted[],
  effects: Effects,
): Promise<LayerExtraction> {
  const options = await settleDates(given, effects.files);
  const paths = await layerPaths(options, effects.files);
  if (paths.length === 0) throw noFiles(name, options);
  const sides = await findSideFiles(
    paths.filter((one) => !isAddress(one)),
    effects.files,
  );
  // One hash a place, not one a place and file.
  const keyed = wanted.map((one) => ({ ...one, key: placeKey(one.place, one.use) }));
  const { quality } = options;
  const index = quality === undefined ? undefined : await indexQuality(name, options, quality, effects.files);
  const known: KnownPlaces = new Map();
  const read: FileValues[] = [];
  const findings: RawFinding[] = [];
  let methods: CellMethods | undefined;
  let filesRead = 0;
  const step = effects.progress.start(`layer ${name}`, paths.length);
  for (const path of paths) {
    effects.checkInterrupted();
    const side = sides(path);
    const file = await openFile(path, effects.files);
    try {
      const source = await fetching(file, () => openSource(file, side, options, name, effects));
      try {
        const { periods } = source;
        findings.push(...source.findings);
        methods ??= source.methods;
        const beside = qualityFiles(periods, index);
        const key = await fileKey(
          path,
          side,
          options,
          effects,
          beside,
          isRemote(file) ? versionHash(file) : undefined,
        );
        const kept = new Map(await readKept(key, effects));
        const absent = keyed.filter(({ key: one }) => !isWhole(kept.get(one), periods));
        if (absent.length > 0) {
          filesRead++;
          const values = await withQuality(name, source, options, index, effects, (test) =>
            fetching(file, () => source.read(absent, known, test)),
          );
          values.forEach((one, i) => {
            kept.set(absent[i].key, one);
          });
          await writeKept(key, kept, effects);
        }
        read.push({ path, periods, places: keyed.map((one) => kept.get(one.key)) });
      } finally {
        source.close();
      }
    } finally {
      file.close();
    }
    step.tick();
    await turn();
  }
  step.done();
  const made = seriesOf(name, options, wanted, read);
  const without = quality === undefined ? [] : withoutQuality(name, read, index);
  return {
    ...made,
    findings: [...repeatedOnce(findings), ...made.findings, ...without],
    methods,
    filesRead,
    files: paths.length,
  };
}

/** Runs a reading with the quality of its file's images open. */
async function withQuality(
  name: string,
  { path, grid, periods }: Source,
  options: LayerOptions,
  index: QualityIndex | undefined,
  effects: Effects,
  work: (test: ((image: number) => PixelTest) | undefined) => Promise<readonly Kept[]>,
): Promise<readonly Kept[]> {
  if (options.quality === undefined) return work(undefined);
  const open = await openQuality(name, path, grid, periods, options, options.quality, index, effects.files);
  try {
    return await work(open.test);
  } finally {
    open.close();
  }
}

/** Files of one stack tend to say the same: each kind of finding is told once, with the number of files. */
function repeatedOnce(findings: readonly RawFinding[]): RawFinding[] {
  const bySaying = new Map<string, RawFinding & { readonly files: number }>();
  for (const one of findings) {
    const key = `${one.kind} ${one.subject} ${one.remedy}`;
    const held = bySaying.get(key);
    bySaying.set(key, held === undefined ? { ...one, files: 1 } : { ...held, files: held.files + 1 });
  }
  return [...bySaying.values()].map(({ files, ...one }) =>
    files === 1 ? one : { ...one, message: `${one.message}; so in ${files} files` },
  );
}

/** True if values are kept for every image of the file. */
function isWhole(kept: Kept | undefined, periods: readonly ImagePeriod[]): boolean {
  return kept !== undefined && kept.values.length === periods.length && kept.shares.length === periods.length;
}

export function noFiles(name: string, options: LayerOptions): InputError {
  return new InputError({
    name: "layers.no-files",
    expected: `files for the layer ${name}`,
    found: `none that match ${options.files.map((one) => JSON.stringify(one)).join(", ")}`,
    where: { cell: `layers ${name} files` },
    remedy: "mend the pattern; it is looked for below the data folder",
  });
}
