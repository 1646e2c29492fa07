import type { RawFinding } from "../data/finding.ts";
import type { AnyPlace, Polygon, Where } from "../data/place.ts";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { readFixes } from "./fixes.ts";
import { type GeoFeature, readFeatures } from "./geojson.ts";
import type { PlaceOptions } from "./options.ts";
import { checkPosition, readPolygon } from "./rings.ts";

export interface PlacesResult {
  readonly places: ReadonlyMap<string, AnyPlace>;
  readonly findings: readonly RawFinding[];
}

/**
 * Reads the places: a feature of a GeoJSON file (RFC 7946; point, polygon or multipolygon, WGS 84) chosen by its
 * properties, a point written out in the pipeline, or a table of dated positions.
 * Throws `study.no-feature`, `study.several-features`, `study.geometry-type`, and what `readFeatures`,
 * `checkPosition` and `readPolygon` throw.
 */
export async function readPlaces(
  options: Readonly<Record<string, PlaceOptions>>,
  files: Files,
): Promise<PlacesResult> {
  const read = new Map<string, readonly GeoFeature[]>();
  const places = new Map<string, AnyPlace>();
  const findings: RawFinding[] = [];
  for (const [name, one] of Object.entries(options)) {
    if ("fixes" in one) {
      const moving = await readFixes(name, one, files);
      places.set(name, moving.place);
      findings.push(...moving.findings);
      continue;
    }
    if (!("file" in one)) {
      const position = checkPosition([one.longitude, one.latitude], { cell: `places.${name}` });
      places.set(name, { type: "point", name, position });
      continue;
    }
    const features = read.get(one.file) ?? readFeatures(await files.readText(one.file), one.file);
    read.set(one.file, features);
    places.set(name, whereOf(name, pick(features, one.where, one.file, name), one.file));
  }
  return { places, findings };
}

function pick(
  features: readonly GeoFeature[],
  wanted: Readonly<Record<string, string>>,
  file: string,
  name: string,
): GeoFeature {
  const keys = Object.keys(wanted);
  // Own properties only: `where: { constructor: … }` must not meet what every object inherits.
  const value = ({ properties }: GeoFeature, key: string) =>
    Object.hasOwn(properties, key) ? String(properties[key]) : undefined;
  const matching = features.filter((one) => keys.every((key) => value(one, key) === wanted[key]));
  if (matching.length === 1) return matching[0];
  const asked =
    keys.map((key) => `${key} = ${JSON.stringify(wanted[key])}`).join(" and ") || "any properties";
  const there = features.map((one) => {
    const shown = (keys.length > 0 ? keys : Object.keys(one.properties)).map((key) => value(one, key));
    return JSON.stringify(shown.filter((text) => text !== undefined).join(" ") || "(no such property)");
  });
  throw new InputError({
    name: matching.length === 0 ? "study.no-feature" : "study.several-features",
    expected: `one feature with ${asked}`,
    found:
      matching.length === 0
        ? features.length === 0
          ? "no feature at all"
          : `${features.length} features: ${there.slice(0, 10).join(", ")}${there.length > 10 ? ", …" : ""}`
        : `${matching.length} of them (${matching.map((one) => one.path).join(", ")})`,
    where: { file, cell: `places.${name}.where` },
    remedy:
      matching.length === 0
        ? "name a value that is there"
        : "add a property that tells them apart, or join them into one multipolygon",
  });
}

function whereOf(name: string, feature: GeoFeature, file: string): Where {
  const { geometry, path } = feature;
  const cell = `${path}.coordinates`;
  const { coordinates } = geometry;
  if (geometry.type === "Point")
    return { type: "point", name, position: checkPosition(coordinates, { file, cell }) };
  if (geometry.type === "Polygon")
    return { type: "area", name, polygons: [readPolygon(coordinates, { file, cell })] };
  if (geometry.type === "MultiPolygon" && Array.isArray(coordinates) && coordinates.length > 0) {
    const polygons = coordinates.map(
      (one: unknown, i): Polygon => readPolygon(one, { file, cell: `${cell}[${i}]` }),
    );
    return { type: "area", name, polygons };
  }
  throw new InputError({
    name: "study.geometry-type",
    expected: "a Point, a Polygon or a MultiPolygon with coordinates",
    found:
      geometry.type === "MultiPolygon" ? "a MultiPolygon without polygons" : JSON.stringify(geometry.type),
    where: { file, cell: path },
    remedy: "draw the place as a point or an area",
  });
}
