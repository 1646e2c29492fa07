import { InputError } from "../../errors.ts";
import type { Axis } from "./axes.ts";
import { allOf, type Dataset, type NcVariable, textOf } from "./dataset.ts";

/**
 * The index of each dimension that is neither x, y nor time: the only one, or the one whose coordinate has the value
 * written under `select` (a number, or a text such as a member's name); where a dimension has no coordinate, its position
 * from 1. Throws `layers.further-dimension` with what there is to choose, and `layers.select`.
 */
export function fixedIndices(
  dataset: Dataset,
  variable: NcVariable,
  axes: readonly Axis[],
  taken: readonly number[],
  select: Readonly<Record<string, string | number>>,
): readonly number[] {
  const further = axes.filter((_, d) => !taken.includes(d));
  const unused = Object.keys(select).find((name) => !further.some((one) => one.dimension === name));
  if (unused !== undefined)
    throw new InputError({
      name: "layers.select",
      expected: `a further dimension of ${variable.name} (${further.map((one) => one.dimension).join(", ") || "it has none"})`,
      found: JSON.stringify(unused),
      where: { file: dataset.path, cell: "select" },
      remedy: "write the dimension's name as the file has it, or remove it",
    });
  return axes.map((axis, d) => {
    if (taken.includes(d)) return 0;
    const wanted = select[axis.dimension];
    const labels = labelsOf(dataset, variable, axis);
    if (wanted === undefined) {
      if (axis.length === 1) return 0;
      throw furtherDimension(dataset, variable, axis, labels, "no choice");
    }
    const at = labels.findIndex((label) => same(label, wanted));
    if (at < 0) throw furtherDimension(dataset, variable, axis, labels, JSON.stringify(wanted));
    return at;
  });
}

function furtherDimension(
  dataset: Dataset,
  variable: NcVariable,
  axis: Axis,
  labels: readonly (string | number)[],
  found: string,
): InputError {
  const units = axis.coordinate === undefined ? undefined : textOf(axis.coordinate.attributes, "units");
  const shown = labels
    .slice(0, 20)
    .map((one) => (typeof one === "string" ? JSON.stringify(one) : String(one)));
  const more = labels.length > 20 ? `, … ${labels.length} in all` : "";
  return new InputError({
    name: "layers.further-dimension",
    expected: `one ${axis.dimension} of ${variable.name}: ${shown.join(", ")}${more}${units === undefined || units === "" || units === "1" ? "" : ` (${units})`}`,
    found,
    where: { file: dataset.path, cell: "select" },
    remedy: `write e.g. select: { ${axis.dimension}: ${shown[0]} }`,
  });
}

/** What the entries of a dimension are called: by its coordinate, a text coordinate beside it, or positions from 1. */
function labelsOf(dataset: Dataset, variable: NcVariable, axis: Axis): readonly (string | number)[] {
  const { coordinate, dimension, length } = axis;
  if (coordinate !== undefined && coordinate.type !== "text" && coordinate.type !== "other")
    return Array.from(allOf(dataset, coordinate));
  const named = (textOf(variable.attributes, "coordinates") ?? "").split(/\s+/);
  const texts = [
    coordinate,
    dataset.variables.get(dimension),
    ...named.map((name) => dataset.variables.get(name)),
  ].find((one) => one !== undefined && one.type === "text" && one.dimensions[0] === dimension);
  if (texts !== undefined) return dataset.texts(texts);
  return Array.from({ length }, (_, i) => i + 1);
}

/** Coordinates in single precision are compared as such. */
function same(label: string | number, wanted: string | number): boolean {
  if (typeof label === "string" || typeof wanted === "string") return String(label) === String(wanted);
  return label === wanted || Math.fround(label) === Math.fround(wanted);
}
