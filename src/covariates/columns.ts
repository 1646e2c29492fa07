import type { IntervalCovariate } from "../aggregate/result.ts";
import type { Interval } from "../data/occasion.ts";
import { InputError } from "../errors.ts";
import { checkDerive, deriveColumn, deriveText } from "./derive.ts";
import type { BaseValues, DeriveOptions } from "./options.ts";

/** A covariate with one value per interval, given or derived, before anything is done to it. */
export interface RawColumn {
  readonly name: string;
  readonly theme: string;
  readonly unit: string;
  readonly definition: string;
  readonly values: Float64Array;
  /** Why each missing value is missing; by row. */
  readonly reasons: readonly (string | undefined)[];
  /** Values of the base years; undefined where there are none. */
  readonly base: ArrayLike<number> | undefined;
}

function refuseRepeat(name: string): never {
  throw new InputError({
    name: "covariates.repeated",
    expected: "each covariate name once",
    found: `${JSON.stringify(name)} twice`,
    where: { cell: name },
    remedy: "rename one of them",
  });
}

/** The column of a name; throws `covariates.unknown`, listing the names there are. */
function named(columns: readonly RawColumn[], name: string, cell: string): RawColumn {
  const found = columns.find((one) => one.name === name);
  if (found !== undefined) return found;
  throw new InputError({
    name: "covariates.unknown",
    expected: `one of the covariates ${columns.map((one) => JSON.stringify(one.name)).join(", ")}`,
    found: JSON.stringify(name),
    where: { cell },
    remedy: "name a covariate that stands above this one",
  });
}

/** Throws `covariates.unknown` if a name is none of the columns'. */
export function checkNames(columns: readonly RawColumn[], names: readonly string[], cell: string): void {
  for (const name of names) named(columns, name, cell);
}

function derived(
  columns: readonly RawColumn[],
  options: DeriveOptions,
  intervals: readonly Interval[],
): RawColumn {
  checkDerive(options);
  const { name, theme, unit, of } = options;
  const from = of.map((one) => named(columns, one, `derive: ${name}`));
  const values = deriveColumn(
    options,
    from.map((one) => one.values),
    (t) => intervals[t].name,
  );
  const reasons = Array.from(values, (value, t) => {
    const source = from.find((one) => Number.isNaN(one.values[t]));
    return Number.isNaN(value) ? `${source?.name ?? name}: ${source?.reasons[t] ?? "no value"}` : undefined;
  });
  const bases = from.flatMap((one) => (one.base === undefined ? [] : [one.base]));
  const base =
    bases.length < from.length ? undefined : deriveColumn(options, bases, (t) => `base year ${t + 1}`);
  return { name, theme, unit, definition: deriveText(options), values, reasons, base };
}

/**
 * The given covariates and after them the derived ones, which may use those before them. Throws
 * `covariates.repeated`, `.unknown`, `.derive-count`, `.impossible`, `.rows`.
 */
export function rawColumns(
  covariates: readonly IntervalCovariate[],
  derive: readonly DeriveOptions[],
  intervals: readonly Interval[],
  base: BaseValues | undefined,
): RawColumn[] {
  const columns: RawColumn[] = [];
  const add = (column: RawColumn) => {
    if (columns.some((one) => one.name === column.name)) refuseRepeat(column.name);
    columns.push(column);
  };
  for (const { name, theme, unit, definition, values } of covariates) {
    if (values.length !== intervals.length)
      throw new InputError({
        name: "covariates.rows",
        expected: `one value for each of ${intervals.length} intervals`,
        found: String(values.length),
        where: { cell: name },
        remedy: "give the ready-made file a row per interval",
      });
    add({
      name,
      theme,
      unit,
      definition,
      values: Float64Array.from(values, (one) => one.value),
      reasons: values.map((one) => one.failed),
      base: base?.get(name),
    });
  }
  for (const options of derive) add(derived(columns, options, intervals));
  return columns;
}
