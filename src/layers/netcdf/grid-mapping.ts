import { InputError } from "../../errors.ts";
import { type Attributes, numbersOf, textOf } from "./dataset.ts";

/** A grid mapping in PROJ's words, the pole of a rotated grid, plain longitude and latitude, or why there is none. */
export type Mapping =
  | { readonly type: "definition"; readonly definition: string }
  | { readonly type: "rotated"; readonly pole: RotatedPole }
  | { readonly type: "degrees" }
  | { readonly type: "unknown"; readonly name: string };

export interface RotatedPole {
  readonly latitude: number;
  readonly longitude: number;
  /** Longitude of the true pole in the rotated grid. */
  readonly turn: number;
}

/**
 * Reads the attributes of a grid mapping variable (CF-1.11 appendix F, names and parameters as there). What is not
 * known is told, never guessed.
 */
export function mappingOf(attributes: Attributes): Mapping {
  const name = textOf(attributes, "grid_mapping_name")?.trim() ?? "";
  const one = (key: string, missing = 0) => numbersOf(attributes, key)?.[0] ?? missing;
  if (name === "latitude_longitude") {
    const figure = figureOf(attributes);
    return figure.includes("+towgs84")
      ? { type: "definition", definition: `+proj=longlat ${figure} +no_defs` }
      : { type: "degrees" };
  }
  if (name === "rotated_latitude_longitude")
    return {
      type: "rotated",
      pole: {
        latitude: one("grid_north_pole_latitude"),
        longitude: one("grid_north_pole_longitude"),
        turn: one("north_pole_grid_longitude"),
      },
    };
  const projection = projectionOf(name, attributes);
  if (projection === undefined || one("longitude_of_prime_meridian") !== 0) return { type: "unknown", name };
  const origin = `+x_0=${one("false_easting")} +y_0=${one("false_northing")}`;
  return {
    type: "definition",
    definition: `${projection} ${origin} ${figureOf(attributes)} +units=m +no_defs`,
  };
}

function projectionOf(name: string, attributes: Attributes): string | undefined {
  const one = (key: string) => numbersOf(attributes, key)?.[0];
  const parallels = numbersOf(attributes, "standard_parallel") ?? [];
  const lat0 = one("latitude_of_projection_origin") ?? 0;
  const lon0 =
    one("longitude_of_projection_origin") ??
    one("longitude_of_central_meridian") ??
    one("straight_vertical_longitude_from_pole") ??
    0;
  const centre = `+lat_0=${lat0} +lon_0=${lon0}`;
  switch (name) {
    case "albers_conical_equal_area":
      if (parallels.length === 0) return undefined;
      return `+proj=aea +lat_1=${parallels[0]} +lat_2=${parallels[1] ?? parallels[0]} ${centre}`;
    case "azimuthal_equidistant":
      return `+proj=aeqd ${centre}`;
    case "lambert_azimuthal_equal_area":
      return `+proj=laea ${centre}`;
    case "lambert_conformal_conic":
      if (parallels.length === 0) return undefined;
      return `+proj=lcc +lat_1=${parallels[0]} +lat_2=${parallels[1] ?? parallels[0]} ${centre}`;
    case "lambert_cylindrical_equal_area": {
      const scale = one("scale_factor_at_projection_origin");
      if (parallels.length === 0 && scale !== undefined && scale !== 1) return undefined;
      return `+proj=cea +lat_ts=${parallels[0] ?? 0} +lon_0=${lon0}`;
    }
    case "mercator":
      return parallels.length > 0
        ? `+proj=merc +lat_ts=${parallels[0]} +lon_0=${lon0}`
        : `+proj=merc +k=${one("scale_factor_at_projection_origin") ?? 1} +lon_0=${lon0}`;
    case "orthographic":
      return `+proj=ortho ${centre}`;
    case "polar_stereographic": {
      if (Math.abs(lat0) !== 90) return undefined;
      const scale = one("scale_factor_at_projection_origin");
      return parallels.length > 0
        ? `+proj=stere +lat_0=${lat0} +lat_ts=${parallels[0]} +lon_0=${lon0}`
        : `+proj=stere +lat_0=${lat0} +k=${scale ?? 1} +lon_0=${lon0}`;
    }
    case "sinusoidal":
      return `+proj=sinu +lon_0=${lon0}`;
    case "stereographic":
      return `+proj=stere ${centre} +k=${one("scale_factor_at_projection_origin") ?? 1}`;
    case "transverse_mercator":
      return `+proj=tmerc ${centre} +k=${one("scale_factor_at_central_meridian") ?? 1}`;
    default:
      return undefined;
  }
}

/** The figure of the earth; WGS 84 where nothing is said. */
function figureOf(attributes: Attributes): string {
  const one = (key: string) => numbersOf(attributes, key)?.[0];
  const shift = numbersOf(attributes, "towgs84");
  const datum = shift === undefined ? "" : ` +towgs84=${shift.join(",")}`;
  const radius = one("earth_radius");
  if (radius !== undefined) return `+a=${radius} +b=${radius}${datum}`;
  const major = one("semi_major_axis");
  const minor = one("semi_minor_axis");
  const inverse = one("inverse_flattening");
  if (major !== undefined && minor !== undefined) return `+a=${major} +b=${minor}${datum}`;
  if (major !== undefined && inverse !== undefined && inverse !== 0)
    return `+a=${major} +rf=${inverse}${datum}`;
  if (major !== undefined) return `+a=${major} +b=${major}${datum}`;
  return `+datum=WGS84${datum}`;
}

/** Metres in a unit of projected coordinates. Throws `layers.axis-units`. */
export function metresIn(
  units: string | undefined,
  where: { readonly file: string; readonly cell: string },
): number {
  switch (units?.trim().toLowerCase()) {
    case undefined:
    case "":
    case "m":
    case "metre":
    case "metres":
    case "meter":
    case "meters":
      return 1;
    case "km":
    case "kilometre":
    case "kilometres":
    case "kilometer":
    case "kilometers":
      return 1000;
    default:
      throw new InputError({
        name: "layers.axis-units",
        expected: "projected coordinates in m or km",
        found: JSON.stringify(units),
        where,
        remedy: "use a layer in metres, or bring it to longitude and latitude first",
      });
  }
}
