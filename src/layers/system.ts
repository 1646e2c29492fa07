import proj4 from "proj4";
import definitions from "proj4js-definitions";
import { InputError } from "../errors.ts";
import { definitionFromKeys } from "./definition.ts";
import { type Grid, type Pair, toSystem } from "./grid.ts";
import type { GeoKeys } from "./keys.ts";

/** A coordinate system that a layer lies in, against longitude and latitude in WGS 84. */
export interface System {
  /** `EPSG:32632`, or the definition. */
  readonly label: string;
  /** In PROJ's words, or WKT. */
  readonly definition: string;
  /** Where it was known from. */
  readonly from:
    | "the pipeline file"
    | "EPSG code in the file"
    | "text in the file"
    | "keys of the file"
    | "grid mapping of the file"
    | "longitudes and latitudes of the file";
  /** True for longitude and latitude in degrees. */
  readonly geographic: boolean;
  /** True if these are of a rotated pole, so that a turn of true longitude comes back to the same place. */
  readonly rotated?: true;
  /** True if it is longitude and latitude with no shift to WGS 84 at all. */
  readonly plain: boolean;
  /** True for projections that keep areas. */
  readonly equalArea: boolean;
  readonly metresPerUnit: number;
  /** NaN where the projection has no value. */
  readonly toLonLat: (x: number, y: number) => Pair;
  readonly fromLonLat: (longitude: number, latitude: number) => Pair;
}

interface Converter {
  forward(position: readonly number[]): readonly number[];
  inverse(position: readonly number[]): readonly number[];
}

/** Whole turns of longitude under which a place may meet a layer: geographic layers may run from 0 to 360. */
export function turnsOf(system: System): readonly number[] {
  return system.geographic && !system.rotated ? [0, -360, 360] : [0];
}

const EQUAL_AREA = /^(laea|lambert_azimuthal|sinu|aea|albers|cea|moll|eck4|equal|bonne)/i;

let table: ReadonlyMap<string, string> | undefined;

function epsg(code: number): string | undefined {
  table ??= new Map(definitions);
  return table.get(`EPSG:${code}`);
}

/** What is known of a layer's system before it is settled. */
export interface SystemSources {
  readonly path: string;
  readonly user: string | undefined;
  readonly keys: GeoKeys;
  /** WKT of a side file. */
  readonly wkt: string | undefined;
}

/**
 * Settles the system, in this order: what the user wrote; the EPSG code in the keys (or that a WKT text ends with);
 * WKT in a side file or citation; a definition built from the keys of a user-defined system. Else it throws
 * `layers.system-unknown` and says what to write. Definitions that need grid files are refused.
 */
export function resolveSystem({ path, user, keys, wkt }: SystemSources): System {
  if (user !== undefined) return fromUser(user, path);
  const model = keys.numbers.get(1024);
  // Of a projected or user-defined system, the geographic code names but its datum.
  const geographic = model === 2 || model === undefined ? keys.numbers.get(2048) : undefined;
  const code = keys.numbers.get(3072) ?? geographic;
  const texts = [wkt, ...[1026, 3073, 2049].map((id) => keys.texts.get(id))];
  // A side file stands before the file's own keys, as GDAL has it.
  const fromSide = wkt === undefined ? undefined : fromWkt(wkt, path);
  if (fromSide !== undefined) return fromSide;
  if (code !== undefined && code !== 0 && code !== 32767) {
    const known = epsg(code);
    if (known === undefined)
      throw unknownSystem(
        path,
        `EPSG:${code}, which is not among the ${definitions.length} systems that are known`,
      );
    return build(known, `EPSG:${code}`, "EPSG code in the file", path);
  }
  for (const text of texts) {
    const at = text?.search(/(PROJ|GEOG|GEODETIC)(CS|CRS)\[/) ?? -1;
    const found = text === undefined || at < 0 ? undefined : fromWkt(text.slice(at), path);
    if (found !== undefined) return found;
  }
  if (keys.numbers.size === 0) throw unknownSystem(path, "a file that does not say");
  const built = definitionFromKeys(keys, epsg);
  if ("refused" in built) throw unknownSystem(path, built.refused);
  return build(built.definition, built.definition, "keys of the file", path);
}

/** A system by its definition in PROJ's words. Throws `layers.system-unknown`. */
export function systemOf(
  definition: string,
  from: System["from"],
  path: string,
  label: string = definition,
): System {
  return build(definition, label, from, path);
}

function fromUser(user: string, path: string): System {
  const code = /^EPSG:(\d+)$/i.exec(user.trim());
  if (code === null) return build(user, user, "the pipeline file", path);
  const known = epsg(Number(code[1]));
  if (known === undefined)
    throw unknownSystem(
      path,
      `system ${user}, which is not among the ${definitions.length} systems that are known`,
    );
  return build(known, `EPSG:${code[1]}`, "the pipeline file", path);
}

function fromWkt(wkt: string, path: string): System | undefined {
  const authority = /(?:AUTHORITY\["EPSG",\s*"?(\d+)"?\]|ID\["EPSG",\s*"?(\d+)"?\])\s*\]\s*$/.exec(wkt);
  const code = authority === null ? undefined : Number(authority[1] ?? authority[2]);
  const known = code === undefined ? undefined : epsg(code);
  if (known !== undefined) return build(known, `EPSG:${code}`, "text in the file", path);
  return build(wkt, wkt, "text in the file", path);
}

function build(definition: string, label: string, from: System["from"], path: string): System {
  // A grid file marked with @ may be left out; any other is mandatory, and without it every value would be NaN.
  if (/nadgrids=(?!@null)[^@\s]|GRIDFILE|PARAMETERFILE/.test(definition))
    throw unknownSystem(path, `${label}, which needs grid files`);
  let converter: Converter;
  let described: ReturnType<typeof describe>;
  try {
    const whole = withDefaults(definition);
    converter = proj4(whole) as unknown as Converter; // its types want mutable pairs
    described = describe(whole);
  } catch (error) {
    // The library throws bare strings for some definitions.
    throw unknownSystem(
      path,
      `${label}, which cannot be read (${error instanceof Error ? error.message : error})`,
    );
  }
  const geographic = described.name === "longlat";
  const lonLat = (x: number, y: number) => pair(() => converter.inverse([x, y]));
  const forward = (lon: number, lat: number) => pair(() => converter.forward([lon, lat]));
  const probes: readonly Pair[] = [
    [10, 50],
    [-100, -40],
    [170, 70],
  ];
  const plain =
    geographic &&
    probes.every(([lon, lat]) => {
      const [x, y] = forward(lon, lat);
      return Math.abs(x - lon) < 1e-9 && Math.abs(y - lat) < 1e-9;
    });
  return {
    label,
    definition,
    from,
    geographic,
    plain,
    equalArea: EQUAL_AREA.test(described.name),
    metresPerUnit: geographic ? Number.NaN : described.metres,
    // Without a shift the way through radians would only cost digits.
    toLonLat: plain ? (x, y) => [x, y] : lonLat,
    fromLonLat: plain ? (lon, lat) => [lon, lat] : forward,
  };
}

/** PROJ's defaults of 0 written out: without them the library gives NaN for some projections. */
function withDefaults(definition: string): string {
  if (!/^\s*\+proj=/.test(definition) || /\+proj=(longlat|latlong|utm)\b/.test(definition)) return definition;
  const missing = ["x_0", "y_0", "lon_0", "lat_0"].filter(
    (key) => !new RegExp(`\\+${key}=`).test(definition),
  );
  return [definition, ...missing.map((key) => `+${key}=0`)].join(" ");
}

/**
 * Throws `layers.system-does-not-fit` where the layer's pixels have no longitude and latitude in this system: metres
 * read as degrees, or a system of another part of the world.
 */
export function checkFit(grid: Grid, system: System, path: string): void {
  const pieces = 8;
  for (let i = 0; i <= pieces; i++)
    for (let j = 0; j <= pieces; j++) {
      const at = toSystem(grid.affine, (grid.width * i) / pieces, (grid.height * j) / pieces);
      const [lon, lat] = system.toLonLat(...at);
      if (Math.abs(lon) <= 540 && Math.abs(lat) <= 90 + 1e-6) return;
    }
  throw new InputError({
    name: "layers.system-does-not-fit",
    expected: `pixels that have a place in ${system.label}`,
    found: `a layer whose first corner is at ${grid.affine.x0}, ${grid.affine.y0}`,
    where: { file: path },
    remedy: "write the system the coordinates are in, e.g. system: EPSG:32632",
  });
}

/** A pair of finite numbers, or NaN; the library throws outside a projection's domain. */
function pair(convert: () => readonly number[]): Pair {
  try {
    const [x, y] = convert();
    return Number.isFinite(x) && Number.isFinite(y) ? [x, y] : [Number.NaN, Number.NaN];
  } catch {
    return [Number.NaN, Number.NaN];
  }
}

function describe(definition: string): { name: string; metres: number } {
  // The package's types leave out what its projections carry.
  const projection = proj4.Proj(definition) as unknown as { projName?: string; to_meter?: number };
  const name = projection.projName ?? "";
  return { name: name === "identity" ? "longlat" : name, metres: projection.to_meter ?? 1 };
}

function unknownSystem(path: string, found: string): InputError {
  return new InputError({
    name: "layers.system-unknown",
    expected: "a coordinate system that can be settled without guessing",
    found,
    where: { file: path },
    remedy:
      "write it under the layer, e.g. system: EPSG:32632, or as +proj=… text (its provider's page says which)",
  });
}
