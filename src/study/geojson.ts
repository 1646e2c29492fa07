import { InputError } from "../errors.ts";

/** A feature as far as it is used; its geometry is not checked yet. */
export interface GeoFeature {
  readonly properties: Readonly<Record<string, unknown>>;
  readonly geometry: { readonly type: unknown; readonly coordinates: unknown };
  /** Where its geometry stands in the file, e.g. `features[2].geometry`. */
  readonly path: string;
}

/** Names of the one system GeoJSON has (RFC 7946, 4), as older files write it in a `crs` member. */
const WGS84 = /^(urn:ogc:def:crs:OGC:(1\.3)?:CRS84|(urn:ogc:def:crs:)?EPSG:(:)?4326)$/i;

type Json = Readonly<Record<string, unknown>>;

const isObject = (value: unknown): value is Json =>
  typeof value === "object" && value !== null && !Array.isArray(value);

/**
 * The features of a GeoJSON text: a FeatureCollection, a Feature or a bare geometry.
 * Throws `study.geojson-syntax`, `study.geojson-type`, `study.geojson-system`, `study.geometry-missing`.
 */
export function readFeatures(text: string, file: string): readonly GeoFeature[] {
  const root = parse(text, file);
  if (!isObject(root)) throw wrongType(root, file, "");
  checkSystem(root, file);
  if (root.type === "FeatureCollection") {
    if (!Array.isArray(root.features)) throw wrongType(root.features, file, "features");
    return root.features.map((one: unknown, i) => featureOf(one, file, `features[${i}]`));
  }
  if (root.type === "Feature") return [featureOf(root, file, "")];
  if (!("coordinates" in root)) throw wrongType(root.type, file, "type");
  return [{ properties: {}, geometry: { type: root.type, coordinates: root.coordinates }, path: "geometry" }];
}

function parse(text: string, file: string): unknown {
  try {
    return JSON.parse(text);
  } catch (error) {
    const message = (error as Error).message;
    const position = /position (\d+)/.exec(message);
    const before = text.slice(0, position === null ? text.length : Number(position[1])).split("\n");
    throw new InputError(
      {
        name: "study.geojson-syntax",
        expected: "GeoJSON",
        found: text.trim() === "" ? "an empty file" : "text that is not JSON",
        where: { file, line: before.length, column: (before.at(-1) ?? "").length + 1 },
        remedy: "save the places as GeoJSON (RFC 7946) again",
      },
      error,
    );
  }
}

function featureOf(value: unknown, file: string, path: string): GeoFeature {
  if (!isObject(value) || value.type !== "Feature") throw wrongType(value, file, path);
  const place = path === "" ? "geometry" : `${path}.geometry`;
  if (!isObject(value.geometry))
    throw new InputError({
      name: "study.geometry-missing",
      expected: "a geometry for each feature",
      found: JSON.stringify(value.geometry) ?? "none",
      where: { file, cell: place },
      remedy: "draw the place, or take the feature out",
    });
  const { type, coordinates } = value.geometry;
  return {
    properties: isObject(value.properties) ? value.properties : {},
    geometry: { type, coordinates },
    path: place,
  };
}

function checkSystem(root: Json, file: string): void {
  if (!("crs" in root) || root.crs === null) return;
  const properties = isObject(root.crs) ? root.crs.properties : undefined;
  const name = isObject(properties) ? properties.name : undefined;
  if (typeof name === "string" && WGS84.test(name)) return;
  throw new InputError({
    name: "study.geojson-system",
    expected: "WGS 84 longitude and latitude, the only system of GeoJSON (RFC 7946, section 4)",
    found: JSON.stringify(name ?? root.crs),
    where: { file, cell: "crs" },
    remedy: "save the places in WGS 84 (EPSG:4326)",
  });
}

function wrongType(value: unknown, file: string, cell: string): InputError {
  const found = isObject(value) ? value.type : value;
  return new InputError({
    name: "study.geojson-type",
    expected: "a FeatureCollection of Features, a Feature or a geometry",
    found: found === undefined ? "nothing of the kind" : JSON.stringify(found).slice(0, 80),
    where: { file, ...(cell === "" ? {} : { cell }) },
    remedy: "save the places as GeoJSON (RFC 7946) again",
  });
}
