import { basename, dirname, resolve } from "node:path";
import { isoDay } from "../data/day.ts";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { layerPicture } from "../inspect/layer-picture.ts";
import { type LayerLook, lookLayer } from "../inspect/look-layer.ts";
import { lookNetcdf, looksLikeNetcdf, type NetcdfLook } from "../inspect/look-netcdf.ts";
import { lookTable, type TableLook } from "../inspect/look-table.ts";
import { filesBelow } from "../pipeline/effects/files.ts";
import { nodeDisk } from "../pipeline/effects.ts";
import { findingLines } from "../terminal/findings.ts";
import { cut, plain } from "../terminal/style.ts";
import type { Lines, Terminal } from "./io.ts";

export interface LookCommandOptions {
  readonly json: boolean;
  /** Where a layer's picture is written; it must not be there yet. */
  readonly picture?: string;
  /** GeoJSON file with places to draw in it. */
  readonly places?: string;
  /** Draw them where they are, not as squares of 10 km. */
  readonly exact?: boolean;
}

/** As the pipeline file's own default for sensitive studies. */
const COARSEN_KM = 10;

/** `covey look FILE`: what a data file holds, and the stanza to paste into a pipeline file. */
export async function lookCommand(
  file: string,
  options: LookCommandOptions,
  terminal: Terminal,
): Promise<Lines> {
  const path = resolve(file);
  if (nodeDisk().kind(path) === undefined) throw notFound(file);
  const files = filesBelow(dirname(path));
  const name = basename(path);
  if (/\.(tiff?|gtiff)$/i.test(name)) {
    const look = await lookLayer(name, files);
    const drawn = await drawPicture(name, files, options);
    return options.json ? [json(look)] : [...layerLines(look, terminal), ...drawn];
  }
  if (looksLikeNetcdf(name, files)) {
    const look = await lookNetcdf(name, files);
    return options.json ? [json(look)] : netcdfLines(look, terminal);
  }
  const look = await lookTable(name, files);
  return options.json ? [json(look)] : tableLines(look, terminal);
}

async function drawPicture(name: string, files: Files, options: LookCommandOptions): Promise<Lines> {
  const { picture, places, exact = false } = options;
  if (picture === undefined) return [];
  const text = async (file: string) => filesBelow(dirname(resolve(file))).readText(basename(file));
  const bytes = await layerPicture(name, files, {
    places: places === undefined ? undefined : { file: places, text: await text(places) },
    exact,
    coarsenKm: COARSEN_KM,
  });
  if (!nodeDisk().create(resolve(picture), bytes))
    throw new InputError({
      name: "look.file-exists",
      expected: "a name for a new picture",
      found: "a file of that name, which is left as it is",
      where: { file: picture },
      remedy: "choose another name with --picture",
    });
  const how = exact ? "where they are" : `as squares of some ${COARSEN_KM} km`;
  return ["", `wrote ${plain(picture)}${places === undefined ? "" : `, with the places ${how}`}`];
}

function notFound(file: string): InputError {
  return new InputError({
    name: "look.not-found",
    expected: "a table or a layer",
    found: "nothing there",
    where: { file },
    remedy: "give the path of a file, e.g. sample-data/stations/upland.csv",
  });
}

function json(look: unknown): string {
  return JSON.stringify(look, null, 2);
}

const short = (value: number) => (Number.isNaN(value) ? "–" : String(Number(value.toPrecision(6))));

function layerLines(look: LayerLook, { style }: Terminal): Lines {
  const [west, south, east, north] = look.bounds;
  const [across, down] = look.pixelMetres;
  return [
    style.strong(`${plain(look.path)}  ${look.width} × ${look.height} pixels, ${look.bytes} bytes`),
    `values     ${look.type}, ${look.compression}, ${look.layout}`,
    `system     ${plain(look.system)} (${look.systemFrom})`,
    `pixel      ${short(across)} × ${short(down)} m in the middle`,
    `extent     ${short(west)} to ${short(east)} °E, ${short(south)} to ${short(north)} °N`,
    `nodata     ${look.nodataText === undefined ? "none declared" : plain(look.nodataText)}; mask ${look.mask}`,
    `dates      ${datesText(look.dates)}`,
    ...look.bands.map(
      (band, i) =>
        `band ${i + 1}     ${plain(band.description) || "no description"}; scale ${band.scale}, offset ${band.offset}; missing ${(100 * band.missingShare).toFixed(2)} %; ${short(band.least)} to ${short(band.greatest)}, mean ${short(band.mean)}${band.unit === "" ? "" : ` ${plain(band.unit)}`}`,
    ),
    ...(look.bandCount > look.bands.length ? [`and ${look.bandCount - look.bands.length} more bands`] : []),
    ...(look.beside.length === 0 ? [] : [`beside     ${look.beside.join(", ")}`]),
    "",
    style.strong("to paste"),
    ...look.stanza.trimEnd().split("\n"),
  ];
}

function netcdfLines(look: NetcdfLook, { style }: Terminal): Lines {
  return [
    style.strong(`${plain(look.path)}  ${look.format}, ${look.bytes} bytes`),
    ...look.variables.flatMap((one) => {
      const [west, south, east, north] = one.bounds;
      const [across, down] = one.pixelMetres;
      return [
        style.strong(`${plain(one.name)}${one.title === "" ? "" : `  ${plain(one.title)}`}`),
        `  values   ${one.type}${one.unit === "" ? "" : ` in ${plain(one.unit)}`}; scale ${one.scale}, offset ${one.offset}; ${one.dimensions}; ${one.storage}`,
        `  dates    ${one.dates}${one.methods === "" ? "" : `; ${plain(one.methods)}`}`,
        `  system   ${plain(one.system)}; ${short(west)} to ${short(east)} °E, ${short(south)} to ${short(north)} °N`,
        `  pixel    ${short(across)} × ${short(down)} m in the middle`,
        `  first    missing ${(100 * one.missingShare).toFixed(2)} %; ${short(one.least)} to ${short(one.greatest)}, mean ${short(one.mean)}`,
        ...one.notes.map((note) => `  note     ${plain(note)}`),
      ];
    }),
    ...(look.others.length === 0 ? [] : [`beside     ${look.others.map(plain).join(", ")}`]),
    "",
    style.strong("to paste"),
    ...look.stanza.trimEnd().split("\n"),
  ];
}

function datesText(dates: readonly string[]): string {
  if (dates.length === 0) return "none in the name or the bands' descriptions";
  return dates.length === 1 ? dates[0] : `${dates[0]} … ${dates[dates.length - 1]}, ${dates.length} images`;
}

function tableLines(look: TableLook, { style, width }: Terminal): Lines {
  return [
    style.strong(`${plain(look.path)}  ${look.rows} rows, ${look.columns.length} columns: ${look.kind}`),
    `written in ${look.encoding}${look.bom ? " with a byte order mark" : ""}, separated by ${JSON.stringify(look.delimiter)}, decimal ${JSON.stringify(look.decimal)}, header on line ${look.headerLine}`,
    ...look.columns.map((one) => {
      const what =
        one.type === "number"
          ? `${short(one.least)} to ${short(one.greatest)}, mean ${short(one.mean)}`
          : one.type === "date"
            ? `${isoDay(one.first)} to ${isoDay(one.last)}, ${one.formats.join(" or ")}`
            : `${one.distinct} distinct: ${one.examples.slice(0, 4).join(", ")}`;
      const odd = one.suspicious.map((each) => `${JSON.stringify(each.text)} × ${each.count}`).join(", ");
      return cut(
        plain(
          `  ${one.name.padEnd(18)} ${one.role.padEnd(12)} ${what}; ${one.empty} empty${odd === "" ? "" : `; suspicious ${odd}`}`,
        ),
        width,
      );
    }),
    "",
    ...findingLines(
      look.findings.map((one) => ({ ...one, severity: "warn" as const })),
      { style, lines: 30, width },
    ),
    "",
    style.strong("to paste"),
    ...look.stanza.trimEnd().split("\n"),
  ];
}
