import { columnIndex, readCsv } from "../data/csv.ts";
import type { RawFinding } from "../data/finding.ts";
import type { Site } from "../data/series.ts";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { decodeText, encodingOf } from "./dialect.ts";
import type { StationListOptions } from "./options.ts";

/**
 * Reads the list of stations: one row each, sorted by id (code unit). Coordinates are WGS 84 degrees, elevation metres; an
 * empty cell is NaN. Repeated ids count once, with their first place; findings tell of repeats and of stations that move.
 * Throws `table.column-missing`, `stations.no-id`, `stations.bad-coordinate`.
 */
export async function readStationList(
  options: StationListOptions,
  files: Files,
): Promise<{ readonly sites: readonly Site[]; readonly findings: readonly RawFinding[] }> {
  const bytes = await files.readBytes(options.file);
  const table = readCsv(decodeText(bytes, encodingOf(bytes, false).encoding), options.file);
  const position = (key: "id" | "name" | "longitude" | "latitude" | "elevation") => {
    const column = options[key];
    return column === undefined ? -1 : columnIndex(table, column, `stations.${key}`);
  };
  const at = {
    id: position("id"),
    name: position("name"),
    longitude: position("longitude"),
    latitude: position("latitude"),
    elevation: position("elevation"),
  };
  const sites = new Map<string, { readonly site: Site; readonly line: number }>();
  const findings: RawFinding[] = [];
  for (const { cells, line } of table.rows) {
    const where = { file: options.file, line };
    const id = cells[at.id];
    if (id === "")
      throw new InputError({
        name: "stations.no-id",
        expected: `an id in the column ${JSON.stringify(options.id)}`,
        found: "an empty cell",
        where,
        remedy: "fill it in, or remove the row",
      });
    const number = (column: number, limit: number) =>
      readNumber(column < 0 ? "" : cells[column], limit, column, where);
    const site: Site = {
      id,
      name: at.name < 0 ? id : cells[at.name],
      longitude: number(at.longitude, 180),
      latitude: number(at.latitude, 90),
      elevation: number(at.elevation, 9000),
    };
    const earlier = sites.get(id);
    if (earlier === undefined) {
      sites.set(id, { site, line });
      continue;
    }
    if (!samePlace(earlier.site, site)) {
      findings.push({
        kind: "moved",
        subject: id,
        message: `Station ${id} stands in the list at two places (lines ${earlier.line} and ${line}): it may have moved, and its values may step; its first place is used.`,
        where,
        value: placeText(site),
        remedy:
          "give the station a new id from the day it moved, remove one of the rows, or accept it with a note",
      });
      continue;
    }
    findings.push({
      kind: "duplicate",
      subject: id,
      message: `Station ${id} stands in the list twice, at the same place (lines ${earlier.line} and ${line}); it counts once.`,
      where,
      value: id,
      remedy: "remove one of the rows",
    });
  }
  const sorted = [...sites.values()].map(({ site }) => site).sort((a, b) => (a.id < b.id ? -1 : 1));
  return { sites: sorted, findings };
}

function placeText({ longitude, latitude, elevation }: Site): string {
  return `${longitude}, ${latitude}, ${elevation} m`;
}

function samePlace(a: Site, b: Site): boolean {
  return (
    Object.is(a.longitude, b.longitude) &&
    Object.is(a.latitude, b.latitude) &&
    Object.is(a.elevation, b.elevation)
  );
}

function readNumber(
  text: string,
  limit: number,
  column: number,
  where: { file: string; line: number },
): number {
  if (text === "") return Number.NaN;
  const value = Number(text.replace(",", "."));
  if (Number.isFinite(value) && Math.abs(value) <= limit) return value;
  throw new InputError({
    name: "stations.bad-coordinate",
    expected: `a number from ${-limit} to ${limit}${limit === 9000 ? " (metres)" : " (degrees, WGS 84)"}`,
    found: JSON.stringify(text),
    where: { ...where, column: column + 1 },
    remedy: "write decimal degrees and metres; leave the cell empty if it is not known",
  });
}
