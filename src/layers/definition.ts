import type { GeoKeys } from "./keys.ts";

/** A definition in PROJ's words, or why there is none. */
export type Built = { readonly definition: string } | { readonly refused: string };

/** Looks up `EPSG:n`; undefined if the table does not hold it. */
export type Lookup = (code: number) => string | undefined;

const USER_DEFINED = 32767;
const TO_METRE: Readonly<Record<number, number>> = {
  9001: 1,
  9002: 0.3048,
  9003: 1200 / 3937,
  9036: 1000,
};
const ELLIPSOIDS: Readonly<Record<number, string>> = {
  7001: "airy",
  7003: "aust_SA",
  7004: "bessel",
  7008: "clrk66",
  7019: "GRS80",
  7022: "intl",
  7024: "krass",
  7030: "WGS84",
  7043: "WGS72",
};

/**
 * Builds a definition from the keys of a user-defined system (GeoTIFF 1.1, OGC 19-008 annex C; coordinate
 * transformations by their numbers there). What is not known is refused with a reason, never guessed.
 */
export function definitionFromKeys(keys: GeoKeys, lookup: Lookup): Built {
  const key = (...ids: readonly number[]) => {
    for (const id of ids) {
      const value = keys.numbers.get(id);
      if (value !== undefined) return value;
    }
    return undefined;
  };
  const model = key(1024) ?? 1;
  if (model !== 1 && model !== 2) return { refused: `a system of model type ${model}` };
  const figure = figureOf(key, lookup);
  if (figure === undefined) return { refused: "an ellipsoid or datum that the file does not describe" };
  if ((key(2054) ?? 9102) !== 9102) return { refused: `angular unit ${key(2054)}` };
  if (model === 2) return { definition: `+proj=longlat ${figure} +no_defs` };
  const metre = key(3076) === USER_DEFINED ? key(3077) : TO_METRE[key(3076) ?? 9001];
  if (metre === undefined) return { refused: `linear unit ${key(3076)}` };
  const unit = metre === 1 ? "+units=m" : `+to_meter=${metre}`;
  const zone = utmZone(key(3074));
  if (zone !== undefined) return { definition: `+proj=utm ${zone} ${figure} ${unit} +no_defs` };
  const projection = projectionOf(key);
  if (projection === undefined) return { refused: `coordinate transformation ${key(3075) ?? "(none)"}` };
  // False origins are in the system's unit, PROJ wants metres.
  const east = (key(3082, 3090, 3086) ?? 0) * metre;
  const north = (key(3083, 3091, 3087) ?? 0) * metre;
  return { definition: `${projection} +x_0=${east} +y_0=${north} ${figure} ${unit} +no_defs` };
}

type Key = (...ids: readonly number[]) => number | undefined;

/** Ellipsoid and datum: a known geographic system's, else the datum's, else the axes, else the ellipsoid's number. */
function figureOf(key: Key, lookup: Lookup): string | undefined {
  for (const code of [key(2048), (key(2050) ?? 0) - 2000]) {
    const known = code === undefined ? undefined : lookup(code);
    const parts = known?.match(/\+(datum|ellps|towgs84|a|b|rf|R|pm)=\S+/g);
    if (known?.includes("+proj=longlat") && parts) return parts.join(" ");
  }
  // Another prime meridian than Greenwich, by code or by longitude.
  if ((key(2061) ?? 0) !== 0 || ![undefined, 8901, USER_DEFINED].includes(key(2051))) return undefined;
  const major = key(2057);
  const inverse = key(2059);
  const minor = key(2058) ?? (inverse === 0 ? major : undefined);
  if (major !== undefined && minor !== undefined) return `+a=${major} +b=${minor}`;
  if (major !== undefined && inverse !== undefined) return `+a=${major} +rf=${inverse}`;
  const name = ELLIPSOIDS[key(2056) ?? 0];
  return name === undefined ? undefined : `+ellps=${name}`;
}

/** Projection codes 160zz and 161zz are UTM zone zz, north and south. */
function utmZone(code: number | undefined): string | undefined {
  if (code === undefined) return undefined;
  const zone = code % 100;
  if (zone < 1 || zone > 60) return undefined;
  if (code - zone === 16000) return `+zone=${zone}`;
  return code - zone === 16100 ? `+zone=${zone} +south` : undefined;
}

function projectionOf(key: Key): string | undefined {
  const lon0 = key(3080, 3088, 3084, 3095) ?? 0;
  const lat0 = key(3081, 3089, 3085) ?? 0;
  const k0 = key(3092, 3093) ?? 1;
  const [lat1, lat2] = [key(3078), key(3079)];
  const centre = `+lat_0=${lat0} +lon_0=${lon0}`;
  switch (key(3075)) {
    case 1:
      return `+proj=tmerc ${centre} +k=${k0}`;
    case 7:
      return lat1 === undefined
        ? `+proj=merc +lon_0=${lon0} +k=${k0}`
        : `+proj=merc +lon_0=${lon0} +lat_ts=${lat1}`;
    case 8:
      if (lat1 === undefined || lat2 === undefined) return undefined;
      return `+proj=lcc +lat_1=${lat1} +lat_2=${lat2} ${centre}`;
    case 9:
      return `+proj=lcc +lat_1=${lat0} ${centre} +k_0=${k0}`;
    case 10:
      return `+proj=laea ${centre}`;
    case 11:
      if (lat1 === undefined || lat2 === undefined) return undefined;
      return `+proj=aea +lat_1=${lat1} +lat_2=${lat2} ${centre}`;
    case 12:
      return `+proj=aeqd ${centre}`;
    case 13:
      if (lat1 === undefined || lat2 === undefined) return undefined;
      return `+proj=eqdc +lat_1=${lat1} +lat_2=${lat2} ${centre}`;
    case 15: {
      // The natural origin's latitude is the pole (variant A, with a scale) or the parallel of true scale (B).
      const pole = lat0 < 0 ? -90 : 90;
      const lon = key(3095, 3080) ?? 0;
      if (Math.abs(lat0) === 90) return `+proj=stere +lat_0=${pole} +lon_0=${lon} +k=${k0}`;
      return k0 === 1 ? `+proj=stere +lat_0=${pole} +lat_ts=${lat0} +lon_0=${lon}` : undefined;
    }
    case 16:
      return `+proj=sterea ${centre} +k=${k0}`;
    case 17:
      return `+proj=eqc +lat_ts=${lat1 ?? 0} ${centre}`;
    case 24:
      return `+proj=sinu +lon_0=${key(3088, 3080) ?? 0}`;
    case 28:
      return `+proj=cea +lat_ts=${lat1 ?? 0} +lon_0=${lon0}`;
    default:
      return undefined;
  }
}
