import { InputError } from "../../errors.ts";
import type { Samples } from "../samples.ts";

/** External types of the classic model and its additions in CDF-5 and NetCDF-4. */
export type NcType =
  | "int8"
  | "uint8"
  | "int16"
  | "uint16"
  | "int32"
  | "uint32"
  | "int64"
  | "uint64"
  | "float32"
  | "float64"
  | "text"
  | "other";

/** An attribute: text, or numbers with the type they are stored in. */
export type Attribute = string | { readonly type: NcType; readonly numbers: readonly number[] };

export type Attributes = ReadonlyMap<string, Attribute>;

export interface NcVariable {
  readonly name: string;
  /** Names of its dimensions, slowest first. */
  readonly dimensions: readonly string[];
  readonly shape: readonly number[];
  readonly type: NcType;
  readonly attributes: Attributes;
  /** Shape of the chunks it is stored in; undefined where it is stored in one piece (or record by record). */
  readonly chunks: readonly number[] | undefined;
  readonly compression: string;
}

/** An open NetCDF file, its header read. */
export interface Dataset {
  readonly path: string;
  /** `NetCDF classic (CDF-1)`, `NetCDF-4`. */
  readonly format: string;
  readonly variables: ReadonlyMap<string, NcVariable>;
  readonly attributes: Attributes;
  /**
   * Raw samples of a block of a variable, row-major in the variable's own order of dimensions; 64-bit integers as
   * numbers. Throws `layers.broken-file` where bytes are missing or cannot be unpacked.
   */
  read(variable: NcVariable, start: readonly number[], count: readonly number[]): Samples;
  /** The texts of a variable of characters or strings. */
  texts(variable: NcVariable): readonly string[];
  close(): void;
}

export const TYPE_BYTES: Readonly<Record<NcType, number>> = {
  int8: 1,
  uint8: 1,
  int16: 2,
  uint16: 2,
  int32: 4,
  uint32: 4,
  int64: 8,
  uint64: 8,
  float32: 4,
  float64: 8,
  text: 1,
  other: 1,
};

/** The text of an attribute; undefined if it is not there or holds numbers. */
export function textOf(attributes: Attributes, name: string): string | undefined {
  const value = attributes.get(name);
  return typeof value === "string" ? value : undefined;
}

/** The numbers of an attribute; undefined if it is not there or holds text. */
export function numbersOf(attributes: Attributes, name: string): readonly number[] | undefined {
  const value = attributes.get(name);
  return value === undefined || typeof value === "string" ? undefined : value.numbers;
}

/** All values of a variable as numbers. */
export function allOf(dataset: Dataset, variable: NcVariable): Float64Array {
  const samples = dataset.read(
    variable,
    variable.shape.map(() => 0),
    variable.shape,
  );
  return Float64Array.from(samples);
}

export function brokenNetcdf(path: string, found: string, cause?: unknown): InputError {
  return new InputError(
    {
      name: "layers.broken-file",
      expected: "a whole NetCDF file",
      found,
      where: { file: path },
      remedy: "fetch or make the file again, or take it out of the layer",
    },
    cause,
  );
}
