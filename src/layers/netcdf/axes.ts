import { InputError } from "../../errors.ts";
import { allOf, type Dataset, type NcVariable, textOf } from "./dataset.ts";

export type AxisKind = "x" | "y" | "time" | "other";

/** One dimension of a variable with what its coordinate variable says of it. */
export interface Axis {
  readonly dimension: string;
  readonly length: number;
  readonly kind: AxisKind;
  /** Degrees of longitude or latitude (not of a rotated pole). */
  readonly degrees: boolean;
  readonly coordinate: NcVariable | undefined;
}

const NORTH = /^degrees?_?(north|N)$/;
const EAST = /^degrees?_?(east|E)$/;

/** What a coordinate variable measures, by CF-1.11 §4: standard name, units, axis; last by a name everybody uses. */
function kindOf(variable: NcVariable): { readonly kind: AxisKind; readonly degrees: boolean } {
  const standard = textOf(variable.attributes, "standard_name")?.trim();
  const units = textOf(variable.attributes, "units")?.trim() ?? "";
  const axis = textOf(variable.attributes, "axis")?.trim().toUpperCase();
  if (/\ssince\s/i.test(units) || standard === "time" || axis === "T")
    return { kind: "time", degrees: false };
  if (standard === "projection_x_coordinate" || standard === "grid_longitude")
    return { kind: "x", degrees: false };
  if (standard === "projection_y_coordinate" || standard === "grid_latitude")
    return { kind: "y", degrees: false };
  if (standard === "longitude" || EAST.test(units)) return { kind: "x", degrees: true };
  if (standard === "latitude" || NORTH.test(units)) return { kind: "y", degrees: true };
  if (axis === "X") return { kind: "x", degrees: false };
  if (axis === "Y") return { kind: "y", degrees: false };
  const name = variable.name.replace(/^.*\//, "").toLowerCase();
  if (units === "" || /^degrees?$/.test(units)) {
    if (name === "lon" || name === "longitude") return { kind: "x", degrees: true };
    if (name === "lat" || name === "latitude") return { kind: "y", degrees: true };
  }
  if (name === "x") return { kind: "x", degrees: false };
  return name === "y" ? { kind: "y", degrees: false } : { kind: "other", degrees: false };
}

/** The axes of a variable, in its order of dimensions. */
export function axesOf(dataset: Dataset, variable: NcVariable): readonly Axis[] {
  return variable.dimensions.map((dimension, d) => {
    const found = dataset.variables.get(dimension);
    const coordinate =
      found !== undefined && found.dimensions.length === 1 && found.dimensions[0] === dimension
        ? found
        : undefined;
    const told = coordinate === undefined ? undefined : kindOf(coordinate);
    return {
      dimension,
      length: variable.shape[d],
      // A series without times still runs along a dimension that everybody calls so.
      kind: told?.kind ?? (coordinate === undefined && /(^|\/)time$/i.test(dimension) ? "time" : "other"),
      degrees: told?.degrees ?? false,
      coordinate,
    };
  });
}

/** Where the cells of a regular axis lie: the edge of the first and the step to the next, in the axis' own units. */
export interface RegularAxis {
  readonly edge: number;
  readonly step: number;
  /** True if bounds said so. */
  readonly byBounds: boolean;
}

/** How far, in cells, a cell may lie from its place on a regular axis. */
const TOLERANCE = 0.005;

/**
 * The cells of an axis. Bounds win over coordinates (CF-1.11 §7.1): a coordinate may stand at a cell's edge. Without
 * bounds coordinates are the cells' middles. Longitudes may run on through 180 or 360. Throws `layers.irregular-axis`,
 * `layers.one-cell-axis` and `layers.bounds`.
 */
export function regularAxis(dataset: Dataset, axis: Axis, coordinate: NcVariable): RegularAxis {
  const values = allOf(dataset, coordinate);
  if (axis.degrees && axis.kind === "x") unwrap(values);
  const bounds = boundsOf(dataset, coordinate);
  if (bounds !== undefined) return fromBounds(values, bounds, axis, coordinate, dataset.path);
  const n = values.length;
  if (n < 2)
    throw new InputError({
      name: "layers.one-cell-axis",
      expected: "bounds where an axis has a single cell, whose size nothing else tells",
      found: `${coordinate.name} of one value without bounds`,
      where: { file: dataset.path, cell: coordinate.name },
      remedy: "use a file with bounds, or with more cells",
    });
  const step = (values[n - 1] - values[0]) / (n - 1);
  const middles = Array.from(values);
  checkRegular(middles, values[0], step, coordinate, dataset.path);
  return { edge: values[0] - step / 2, step, byBounds: false };
}

/**
 * Lower and upper bound of each cell, two by two, as the file has them; undefined without bounds, or where the file names
 * some that it does not hold, as files cut out of others do. Throws `layers.bounds`.
 */
export function boundsOf(dataset: Dataset, coordinate: NcVariable): Float64Array | undefined {
  const name = textOf(coordinate.attributes, "bounds")?.trim();
  if (name === undefined || name === "") return undefined;
  const folder = coordinate.name.includes("/") ? coordinate.name.replace(/[^/]*$/, "") : "";
  const bounds = dataset.variables.get(name) ?? dataset.variables.get(folder + name);
  const [n] = coordinate.shape;
  if (bounds === undefined) return undefined;
  if (bounds.shape.length !== 2 || bounds.shape[0] !== n || bounds.shape[1] !== 2)
    throw new InputError({
      name: "layers.bounds",
      expected: `bounds ${name} of ${coordinate.name} with two values a cell (${n} × 2)`,
      found: `one of ${bounds.shape.join(" × ")} values`,
      where: { file: dataset.path, cell: coordinate.name },
      remedy: "fetch the file again, or have the bounds attribute mended",
    });
  return allOf(dataset, bounds);
}

/** Coordinates that name bounds the file does not hold. */
export function lostBounds(dataset: Dataset, axes: readonly Axis[]): readonly string[] {
  return axes.flatMap(({ coordinate }) =>
    coordinate !== undefined &&
    (textOf(coordinate.attributes, "bounds")?.trim() ?? "") !== "" &&
    boundsOf(dataset, coordinate) === undefined
      ? [coordinate.name]
      : [],
  );
}

function fromBounds(
  values: Float64Array,
  bounds: Float64Array,
  axis: Axis,
  coordinate: NcVariable,
  path: string,
): RegularAxis {
  const n = values.length;
  if (axis.degrees && axis.kind === "x") {
    // Bounds follow their coordinate through 180 and 360.
    for (let i = 0; i < bounds.length; i++) bounds[i] += 360 * Math.round((values[i >> 1] - bounds[i]) / 360);
  }
  const low = (i: number) => Math.min(bounds[2 * i], bounds[2 * i + 1]);
  const high = (i: number) => Math.max(bounds[2 * i], bounds[2 * i + 1]);
  const rising = n === 1 || values[n - 1] > values[0];
  const begin = (i: number) => (rising ? low(i) : high(i));
  const end = (i: number) => (rising ? high(i) : low(i));
  // Cells at the poles may be cut short there; the others tell the step.
  const [from, to] = n > 2 && axis.degrees && axis.kind === "y" ? [1, n - 1] : [0, n];
  const step = (end(to - 1) - begin(from)) / (to - from);
  const edge = begin(from) - from * step;
  checkRegular(
    Array.from({ length: to - from }, (_, i) => begin(from + i)),
    begin(from),
    step,
    coordinate,
    path,
  );
  checkRegular(
    Array.from({ length: to - from }, (_, i) => end(from + i)),
    end(from),
    step,
    coordinate,
    path,
  );
  const outer = (i: number, cell: number) =>
    Math.abs(begin(i) - (edge + cell * step)) > TOLERANCE * Math.abs(step) && Math.abs(begin(i)) < 90;
  const outerEnd = (i: number, cell: number) =>
    Math.abs(end(i) - (edge + (cell + 1) * step)) > TOLERANCE * Math.abs(step) && Math.abs(end(i)) < 90;
  if (from === 1 && (outer(0, 0) || outerEnd(n - 1, n - 1)))
    throw irregular(coordinate, path, "outermost cells of another size");
  return { edge, step, byBounds: true };
}

function checkRegular(
  found: readonly number[],
  first: number,
  step: number,
  coordinate: NcVariable,
  path: string,
): void {
  const size = Math.abs(step);
  // Coordinates in single precision are rounded; at 180 by as much as a thousandth of a small cell.
  const rounding = coordinate.type === "float32" ? 2 ** -23 * Math.max(...found.map(Math.abs)) : 0;
  const most = TOLERANCE * size + 2 * rounding;
  const at = found.findIndex((value, i) => !(Math.abs(value - (first + i * step)) <= most));
  if (size > 0 && at < 0) return;
  throw irregular(coordinate, path, `a cell at ${found[Math.max(0, at)]} that is off the step of ${step}`);
}

function irregular(coordinate: NcVariable, path: string, found: string): InputError {
  return new InputError({
    name: "layers.irregular-axis",
    expected: "cells of one size along each axis",
    found: `${coordinate.name} with ${found}`,
    where: { file: path, cell: coordinate.name },
    remedy: "bring the layer to a regular grid first, e.g. with cdo remapcon or gdalwarp",
  });
}

/** Longitudes that jump by a turn (…, 179.5, −179.5, …) run on instead. */
function unwrap(values: Float64Array): void {
  for (let i = 1; i < values.length; i++)
    if (Math.abs(values[i] - values[i - 1]) > 180)
      values[i] -= 360 * Math.round((values[i] - values[i - 1]) / 360);
}
