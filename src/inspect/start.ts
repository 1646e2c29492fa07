import type { Files, Progress } from "../effects/effects.ts";
import { CoveyError, InputError } from "../errors.ts";
import { stemOf } from "../layers/dates.ts";
import { readFeatures } from "../study/geojson.ts";

import { stationsOf, withKnownStations } from "./known-station.ts";
import { guessPattern } from "./layer-stanza.ts";
import { lookLayer } from "./look-layer.ts";
import { lookNetcdf, looksLikeNetcdf } from "./look-netcdf.ts";
import { lookTable, type TableLook } from "./look-table.ts";
import { yamlText } from "./stanza.ts";
import { covariateLines, type KnownPlace, kindsIn } from "./start-covariates.ts";
import { type Group, groupTables } from "./start-groups.ts";

export interface StartOptions {
  readonly title: string;
  /** Folder of the data and of the results, relative to where the pipeline will stand. */
  readonly data: string;
  readonly output: string;
}

/** A file, and what it was taken for or why it was not. */
export interface StartFile {
  readonly paths: readonly string[];
  readonly as: string;
}

export interface Start {
  /** The pipeline file. */
  readonly text: string;
  readonly recognised: readonly StartFile[];
  readonly left: readonly StartFile[];
}

/** Sections that a pipeline has once; the others are lists or named. */
const SINGLE = ["occasions", "captures", "stations"];
const ORDER = ["occasions", "captures", "places", "stations", "records", "layers", "ready-made"];
const TABLE = /\.((csv|tsv|txt|dat|tab|parquet)(\.gz)?|xlsx)$/i;
const LAYER = /\.(tiff?|gtiff|nc4?|cdf)$/i;
const PLACES = /\.geojson$/i;

/**
 * A first pipeline for the files of a folder: what each file seems to be, with the guesses marked, and what was not
 * recognised, as comments. Files below an output folder of covey are passed over. Throws `start.nothing-recognised`.
 */
export async function startPipeline(files: Files, options: StartOptions, progress: Progress): Promise<Start> {
  const every = await files.list(["**/*"]);
  const outputs = every
    .filter((path) => /(^|\/)run-record\.json$/.test(path))
    .map((path) => path.slice(0, -15));
  const all = every.filter((path) => !outputs.some((folder) => path.startsWith(folder)));
  const left: StartFile[] = [];
  const groups: Group[] = [];

  const tables = all.filter((path) => TABLE.test(path));
  const images = imageGroups(all.filter((path) => LAYER.test(path)));
  const step = progress.start("looking at files", tables.length + images.length);
  const looks: TableLook[] = [];
  for (const path of tables) {
    const look = await orReason(lookTable(path, files));
    if (typeof look === "string") left.push({ paths: [path], as: look });
    else if (look.kind === "unknown")
      left.push({ paths: [path], as: "a table of neither records, captures, occasions nor stations" });
    else looks.push(look);
    step.tick();
  }
  groups.push(...groupTables(looks, all));
  for (const paths of images) {
    const stanzas = await orReason(layerStanzas(paths[0], files));
    if (typeof stanzas === "string") left.push({ paths, as: stanzas });
    else for (const lines of stanzas) groups.push({ section: "layers", paths, lines });
    step.tick();
  }
  step.done();
  const places: KnownPlace[] = [];
  for (const path of all.filter((one) => PLACES.test(one))) {
    const found = await orReason(placesIn(path, files));
    if (typeof found === "string") left.push({ paths: [path], as: found });
    else {
      groups.push({ section: "places", paths: [path], lines: found.lines });
      places.push(...found.places);
    }
  }
  for (const path of all)
    if (!TABLE.test(path) && !LAYER.test(path) && !PLACES.test(path))
      left.push({ paths: [path], as: "not a table, a GeoTIFF, a NetCDF or a GeoJSON file by its name" });
  if (groups.length === 0) throw nothing(all.length);

  const { lines, used } = sectionLines(withKnownStations(groups, await stationsOf(groups, files)));
  const covariates = covariateLines(lines.join("\n"), places);
  const text = [
    "# A first pipeline, guessed from the files: read every line before you trust it. `covey check` says what is missing.",
    "covey: 1",
    `study: { title: ${yamlText(options.title)}, sensitive: true, coarsen: 10 km }`,
    `data: ${yamlText(options.data)}`,
    `output: ${yamlText(options.output)}`,
    "seed: 1",
    ...(used.has("occasions")
      ? []
      : ["# occasions: no file with a first and last day of each occasion was recognised"]),
    ...(used.has("captures") ? [] : ["# captures: none were recognised, so only the covariate set is built"]),
    ...lines,
    "# A value per interval of everything that was read. Put windows in their place that mean something to the animals,",
    "# such as window: { season: Nov to Feb }.",
    "covariates:",
    ...covariates,
    ...together(left).map(
      ({ paths, as }) => `# not recognised: ${listText(paths)} (${as.replace(/\s+/g, " ")})`,
    ),
  ];
  return {
    text: `${text.join("\n")}\n`,
    recognised: groups.map(({ section, paths }) => ({ paths, as: section })),
    left: together(left),
  };
}

/** Files that were left out for one reason, told together. */
function together(left: readonly StartFile[]): StartFile[] {
  const reasons = [...new Set(left.map((one) => one.as))];
  return reasons.map((as) => ({
    as,
    paths: left.filter((one) => one.as === as).flatMap((one) => one.paths),
  }));
}

function listText(paths: readonly string[]): string {
  const more = paths.length > 12 ? ` and ${paths.length - 12} more` : "";
  return paths.slice(0, 12).join(", ") + more;
}

/** The sections in the order of a pipeline; a second file for what there is one of becomes a comment. */
function sectionLines(groups: readonly Group[]): { lines: string[]; used: ReadonlySet<string> } {
  const used = new Set<string>();
  // A layer may not share its name with a variable of the records.
  const layerNames = new Set(variablesOf(groups));
  const lines = ORDER.flatMap((section) => {
    const own = groups.filter((one) => one.section === section);
    if (own.length === 0) return [];
    used.add(section);
    return [
      `${section}:`,
      ...own.flatMap(({ lines, paths }, i) => {
        if (i > 0 && SINGLE.includes(section))
          return [`# ${pathsText(paths)} could stand here instead:`, ...lines.map((line) => `#${line}`)];
        return section === "layers" ? renamed(lines, layerNames) : lines;
      }),
    ];
  });
  return { lines, used };
}

function variablesOf(groups: readonly Group[]): string[] {
  const records = groups.filter((one) => one.section === "records").flatMap((one) => one.lines);
  return [...kindsIn(["records:", ...records].join("\n")).keys()];
}

/** Layers whose files' names begin alike get a number. */
function renamed(lines: readonly string[], names: Set<string>): string[] {
  const name = lines[0].trim().replace(/:$/, "");
  let free = names.has(name) ? `${name} layer` : name;
  for (let i = 2; names.has(free); i++) free = `${name} layer ${i}`;
  names.add(free);
  return [`  ${free}:`, ...lines.slice(1)];
}

/** The lines of each layer that a file's look suggests: one, or one for each variable of a NetCDF file. */
async function layerStanzas(path: string, files: Files): Promise<string[][]> {
  const look = looksLikeNetcdf(path, files) ? await lookNetcdf(path, files) : await lookLayer(path, files);
  const layers: string[][] = [];
  for (const line of look.stanza.trimEnd().split("\n").slice(1))
    if (/^ {2}\S/.test(line)) layers.push([line]);
    else layers[layers.length - 1].push(line);
  return layers;
}

/** Images of one folder whose names differ in their date alone are one layer. */
function imageGroups(paths: readonly string[]): string[][] {
  const groups = new Map<string, string[]>();
  for (const path of paths) {
    const stem = stemOf(path);
    const key = path.replace(stem, guessPattern(stem)?.pattern ?? stem);
    groups.set(key, [...(groups.get(key) ?? []), path]);
  }
  return [...groups.values()];
}

async function placesIn(path: string, files: Files) {
  const features = readFeatures(await files.readText(path), path);
  const keys = Object.keys(features[0]?.properties ?? {});
  const textsOf = (key: string) => features.map(({ properties }) => properties[key]);
  const tells = (key: string) => {
    const texts = textsOf(key);
    return (
      texts.every((one) => typeof one === "string" && one.trim() !== "") &&
      new Set(texts).size === texts.length
    );
  };
  const key = ["name", ...keys].find((one) => keys.includes(one) && tells(one));
  if (features.length === 0 || key === undefined) return "no property that names every feature differently";
  const named = features.map(({ properties, geometry }) => ({
    name: String(properties[key]),
    type: geometry.type === "Point" ? ("point" as const) : ("area" as const),
  }));
  return {
    places: named,
    lines: named.map(({ name }) => {
      const text = yamlText(name);
      return `  ${text}: { file: ${yamlText(path)}, where: { ${yamlText(key)}: ${text} } }`;
    }),
  };
}

/** What a look gives, or in words why the file could not be read. */
async function orReason<T>(work: Promise<T>): Promise<T | string> {
  try {
    return await work;
  } catch (error) {
    if (error instanceof InputError || error instanceof CoveyError)
      return `expected ${error.facts.expected}, found ${error.facts.found}`;
    throw error;
  }
}

function pathsText(paths: readonly string[]): string {
  return paths.length <= 2 ? paths.join(" and ") : `${paths[0]} and ${paths.length - 1} like it`;
}

function nothing(count: number): InputError {
  return new InputError({
    name: "start.nothing-recognised",
    expected:
      "tables, GeoTIFF, NetCDF or GeoJSON files that look like records, captures, occasions, layers or places",
    found:
      count === 0
        ? "an empty folder"
        : `${count} file${count === 1 ? " that does not" : "s, none of which do"}`,
    remedy: "name the folder that holds the data, or look at one file with `covey look`",
  });
}
