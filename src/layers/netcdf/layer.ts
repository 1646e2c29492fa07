import { InputError } from "../../errors.ts";
import type { Grid } from "../grid.ts";
import type { LayerOptions } from "../options.ts";
import { resolveSystem, type System, systemOf } from "../system.ts";
import { type Axis, axesOf, regularAxis } from "./axes.ts";
import { type Dataset, type NcVariable, textOf } from "./dataset.ts";
import { type Mapping, mappingOf, metresIn } from "./grid-mapping.ts";
import { rotatedSystem } from "./rotated.ts";
import { fixedIndices } from "./select.ts";

/** One variable of a NetCDF file as a stack of images on a grid; no value has been read. */
export interface NetcdfLayer {
  readonly dataset: Dataset;
  readonly variable: NcVariable;
  readonly axes: readonly Axis[];
  readonly grid: Grid;
  /** Which dimension of the variable runs along x, y and time (−1 if none does). */
  readonly x: number;
  readonly y: number;
  readonly t: number;
  /** Index taken of every other dimension; 0 for x, y and time. */
  readonly fixed: readonly number[];
  readonly images: number;
  readonly mapping: Mapping | undefined;
  readonly wkt: string | undefined;
}

/**
 * Describes the variable a layer is of: its axes by the CF conventions, its grid (any order of dimensions, either
 * direction of each axis) and the index of every further dimension. Throws `layers.no-variable`, `layers.no-axes`,
 * `layers.two-dimensional-coordinates`, `layers.further-dimension` and what the axes throw.
 */
export function describeNetcdf(
  dataset: Dataset,
  options: Pick<LayerOptions, "variable" | "select">,
): NetcdfLayer {
  const variable = chooseVariable(dataset, options.variable);
  const axes = axesOf(dataset, variable);
  const [x, y, t] = (["x", "y", "time"] as const).map((kind) => axes.findIndex((one) => one.kind === kind));
  if (x < 0 || y < 0) throw noAxes(dataset, variable);
  const fixed = fixedIndices(dataset, variable, axes, [x, y, t], options.select ?? {});
  const mapping = gridMapping(dataset, variable);
  const across = lie(dataset, axes[x]);
  const down = lie(dataset, axes[y]);
  return {
    dataset,
    variable,
    axes,
    grid: {
      width: axes[x].length,
      height: axes[y].length,
      affine: { x0: across.edge, a: across.step, b: 0, y0: down.edge, d: 0, e: down.step },
    },
    x,
    y,
    t,
    fixed,
    images: t < 0 ? 1 : axes[t].length,
    mapping: mapping?.mapping,
    wkt: mapping?.wkt,
  };
}

/** Names of the variables that lie on a grid of one-dimensional axes. */
export function gridVariables(dataset: Dataset): readonly NcVariable[] {
  return [...dataset.variables.values()].filter((one) => {
    const kinds = axesOf(dataset, one).map(({ kind }) => kind);
    return kinds.includes("x") && kinds.includes("y") && one.type !== "text" && one.type !== "other";
  });
}

function chooseVariable(dataset: Dataset, name: string | undefined): NcVariable {
  const candidates = gridVariables(dataset);
  if (name !== undefined) {
    const found = dataset.variables.get(name);
    if (found !== undefined) return found;
  } else if (candidates.length === 1) return candidates[0];
  else if (candidates.length === 0) {
    const plane = [...dataset.variables.values()].find(
      (one) => one.shape.length >= 2 && twoDimensional(dataset, one),
    );
    if (plane !== undefined) throw noAxes(dataset, plane);
  }
  const names = candidates.map((one) => one.name);
  throw new InputError({
    name: "layers.no-variable",
    expected: `a variable on a grid (${names.length === 0 ? "there is none" : names.join(", ")})`,
    found:
      name === undefined ? (names.length === 0 ? "none" : `${names.length} of them`) : JSON.stringify(name),
    where: { file: dataset.path },
    remedy: names.length === 0 ? "use a file of gridded values" : `write e.g. variable: ${names[0]}`,
  });
}

/** Latitude and longitude of two dimensions that a variable names as its coordinates. */
function twoDimensional(dataset: Dataset, variable: NcVariable): readonly string[] | undefined {
  const named = (textOf(variable.attributes, "coordinates") ?? "").split(/\s+/).filter((one) => one !== "");
  const flat = (named.length > 0 ? named : [...dataset.variables.keys()]).filter((name) => {
    const one = dataset.variables.get(name);
    return (
      one !== undefined &&
      one.shape.length >= 2 &&
      /^degrees?_?(north|east|N|E)$/.test(textOf(one.attributes, "units") ?? "") &&
      one.dimensions.every((dimension) => variable.dimensions.includes(dimension))
    );
  });
  return flat.length === 0 ? undefined : flat;
}

function noAxes(dataset: Dataset, variable: NcVariable): InputError {
  const flat = twoDimensional(dataset, variable);
  const where = { file: dataset.path, cell: variable.name };
  if (flat !== undefined)
    return new InputError({
      name: "layers.two-dimensional-coordinates",
      expected: "a grid whose axes are one-dimensional coordinates",
      found: `${variable.name} at positions that ${flat.join(" and ")} give cell by cell`,
      where,
      remedy: "bring it to a regular grid first, e.g. with cdo remapcon, or use the projected original",
    });
  return new InputError({
    name: "layers.no-axes",
    expected: "coordinate variables for x and y (by standard_name, units such as degrees_north, or axis)",
    found: `${variable.name} of ${variable.dimensions.map((one, d) => `${one} = ${variable.shape[d]}`).join(", ") || "no dimensions"}`,
    where,
    remedy: "choose a variable that lies on a grid, or add coordinates by the CF conventions",
  });
}

function lie(dataset: Dataset, axis: Axis): { readonly edge: number; readonly step: number } {
  const { coordinate } = axis;
  if (coordinate === undefined)
    throw new Error(`axis ${axis.dimension} was told by a coordinate that is gone`);
  const { edge, step } = regularAxis(dataset, axis, coordinate);
  const units = textOf(coordinate.attributes, "units");
  const degrees = axis.degrees || /^degrees?(_?(north|east|N|E))?$/.test(units?.trim() ?? "");
  const metres = degrees ? 1 : metresIn(units, { file: dataset.path, cell: coordinate.name });
  return { edge: edge * metres, step: step * metres };
}

/** The grid mapping a variable names; the extended form "name: x y" too (CF-1.11 §5.6). */
function gridMapping(
  dataset: Dataset,
  variable: NcVariable,
): { readonly mapping: Mapping; readonly wkt: string | undefined } | undefined {
  const text = textOf(variable.attributes, "grid_mapping")?.trim();
  if (text === undefined || text === "") return undefined;
  const name = text.replace(/:.*$/s, "").trim();
  const found = dataset.variables.get(name);
  if (found === undefined)
    throw new InputError({
      name: "layers.grid-mapping",
      expected: `a grid mapping variable ${name}, which ${variable.name} names`,
      found: "none",
      where: { file: dataset.path, cell: variable.name },
      remedy: "fetch the file again, or write system: under the layer",
    });
  return {
    mapping: mappingOf(found.attributes),
    wkt: textOf(found.attributes, "crs_wkt") ?? textOf(found.attributes, "spatial_ref"),
  };
}

const NO_KEYS = { numbers: new Map<number, number>(), texts: new Map<number, string>() };

/**
 * Settles the system: what the user wrote; degrees of longitude and latitude as they are; the grid mapping's WKT, unless
 * its attributes put the grid elsewhere, which then stand (CF-1.11 §5.6.1); else its attributes. Throws
 * `layers.system-unknown`.
 */
export function netcdfSystem(layer: NetcdfLayer, user: string | undefined): System {
  const { dataset, axes, mapping, wkt, grid } = layer;
  const { path } = dataset;
  const known = { path, keys: NO_KEYS, wkt };
  if (user !== undefined) return resolveSystem({ ...known, user });
  if (mapping?.type === "rotated")
    return rotatedSystem(mapping.pole, grid.affine.x0 + (grid.affine.a * grid.width) / 2);
  if (axes[layer.x].degrees && axes[layer.y].degrees) {
    if (mapping?.type === "definition") return systemOf(mapping.definition, "grid mapping of the file", path);
    return systemOf(
      "+proj=longlat +datum=WGS84 +no_defs",
      "longitudes and latitudes of the file",
      path,
      "EPSG:4326",
    );
  }
  const byAttributes =
    mapping?.type === "definition"
      ? systemOf(mapping.definition, "grid mapping of the file", path)
      : undefined;
  if (wkt === undefined) return byAttributes ?? resolveSystem({ ...known, user });
  const byText = resolveSystem({ ...known, user });
  return byAttributes !== undefined && !agree(byText, byAttributes, layer) ? byAttributes : byText;
}

/** Two descriptions agree where they put the grid's middle within a kilometre, as shifts of datum do. */
function agree(a: System, b: System, { grid }: NetcdfLayer): boolean {
  const { x0, a: step, y0, e } = grid.affine;
  const at = [x0 + (step * grid.width) / 2, y0 + (e * grid.height) / 2] as const;
  const [p, q] = [a.toLonLat(...at), b.toLonLat(...at)];
  return Math.abs(p[0] - q[0]) * Math.cos((p[1] * Math.PI) / 180) < 0.01 && Math.abs(p[1] - q[1]) < 0.01;
}
