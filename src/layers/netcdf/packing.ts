import type { LayerOptions } from "../options.ts";
import {
  type Attribute,
  type Attributes,
  type NcType,
  type NcVariable,
  numbersOf,
  textOf,
} from "./dataset.ts";

/** How raw samples become values; NaN is missing. */
export type Unpack = (raw: number) => number;

/** What a variable says of its values. */
export interface Packing {
  readonly scale: number;
  readonly offset: number;
  /** Raw values that mean missing. */
  readonly missing: readonly number[];
  /** Least and greatest valid raw value. */
  readonly raw: readonly [number, number];
  /** Least and greatest valid value after scale and offset. */
  readonly unpacked: readonly [number, number];
  /** Number to add to negative raw values: 2^bits where signed bytes stand for unsigned. */
  readonly wrap: number;
}

/** What unwritten values hold where a variable names no fill value (NetCDF Users Guide, appendix B; not for bytes). */
const DEFAULT_FILL: Readonly<Partial<Record<NcType, number>>> = {
  int16: -32767,
  uint16: 65535,
  int32: -2147483647,
  uint32: 4294967295,
  int64: 2 - 2 ** 63,
  uint64: 2 ** 64 - 2,
  float32: 9.969209968386869e36,
  float64: 9.969209968386869e36,
};

const BITS: Readonly<Partial<Record<NcType, number>>> = { int8: 8, int16: 16, int32: 32 };

/**
 * Reads `_FillValue`, `missing_value`, `valid_range` or `valid_min` and `valid_max`, `_Unsigned`, `scale_factor` and
 * `add_offset` (CF-1.11 §2.5.1 and §8.1; NetCDF Users Guide, appendix A). Missing values and the valid range are of the
 * packed numbers, but for a range written in another type than the packed variable's: that is of the unpacked ones.
 */
export function packingOf({ type, attributes }: NcVariable): Packing {
  const bits = BITS[type];
  const wrap =
    bits !== undefined && textOf(attributes, "_Unsigned")?.trim().toLowerCase() === "true" ? 2 ** bits : 0;
  const stored = (value: number) => (wrap > 0 && value < 0 ? value + wrap : asStored(value, type));
  const fill = numbersOf(attributes, "_FillValue") ?? (wrap > 0 ? [] : defaultFill(type));
  const missing = [...fill, ...(numbersOf(attributes, "missing_value") ?? [])].map(stored);
  const packs = attributes.has("scale_factor") || attributes.has("add_offset");
  const range = rangeOf(attributes);
  const ofUnpacked = packs && range.type !== undefined && range.type !== type;
  const whole = [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY] as const;
  const [least, greatest] = range.limits;
  return {
    scale: numbersOf(attributes, "scale_factor")?.[0] ?? 1,
    offset: numbersOf(attributes, "add_offset")?.[0] ?? 0,
    missing,
    raw: ofUnpacked ? whole : [stored(least), stored(greatest)],
    unpacked: ofUnpacked ? [least, greatest] : whole,
    wrap,
  };
}

function defaultFill(type: NcType): readonly number[] {
  const value = DEFAULT_FILL[type];
  return value === undefined ? [] : [value];
}

/** A number as samples of the type hold it: −99.9 in single precision is another number. */
function asStored(value: number, type: NcType): number {
  return type === "float32" && Number.isFinite(value) ? Math.fround(value) : value;
}

/** The valid range and the type it is written in; `valid_range` stands before the two others. */
function rangeOf(attributes: Attributes): {
  readonly limits: readonly [number, number];
  readonly type: NcType | undefined;
} {
  const of = (name: string) => {
    const value: Attribute | undefined = attributes.get(name);
    return value === undefined || typeof value === "string" ? undefined : value;
  };
  const range = of("valid_range");
  if (range !== undefined && range.numbers.length === 2)
    return { limits: [range.numbers[0], range.numbers[1]], type: range.type };
  const [least, greatest] = [of("valid_min"), of("valid_max")];
  return {
    limits: [least?.numbers[0] ?? Number.NEGATIVE_INFINITY, greatest?.numbers[0] ?? Number.POSITIVE_INFINITY],
    type: (least ?? greatest)?.type,
  };
}

/** The values of raw samples; what the pipeline file says stands before the file's scale and offset, and adds its fill. */
export function unpacker(
  variable: NcVariable,
  options: Pick<LayerOptions, "scale" | "offset" | "fill" | "valid">,
): Unpack {
  const packing = packingOf(variable);
  const scale = options.scale ?? packing.scale;
  const offset = options.offset ?? packing.offset;
  const { wrap } = packing;
  const fill = options.fill === undefined ? [] : [asStored(options.fill, variable.type)];
  const missing = [...packing.missing, ...fill];
  const [a = Number.NaN, b = Number.NaN] = missing;
  const more = missing.slice(2);
  const longer = more.length > 0;
  const [rawLeast, rawGreatest] = packing.raw;
  const least = Math.max(packing.unpacked[0], options.valid?.[0] ?? Number.NEGATIVE_INFINITY);
  const greatest = Math.min(packing.unpacked[1], options.valid?.[1] ?? Number.POSITIVE_INFINITY);
  return (sample) => {
    const raw = sample < 0 && wrap > 0 ? sample + wrap : sample;
    if (raw === a || raw === b || raw < rawLeast || raw > rawGreatest || (longer && more.includes(raw)))
      return Number.NaN;
    const value = raw * scale + offset;
    return value >= least && value <= greatest && Number.isFinite(value) ? value : Number.NaN;
  };
}

/** Numbers of samples from which on a table pays. */
const MANY = 2 ** 20;

/** The same rule for many samples of 8 or 16 bits: the value of each possible sample is worked out once. */
export function tabled(unpack: Unpack, type: NcType, samples: number): Unpack {
  const bits = type === "int8" || type === "uint8" ? 8 : type === "int16" || type === "uint16" ? 16 : 0;
  if (bits === 0 || samples < MANY) return unpack;
  const mask = 2 ** bits - 1;
  const signed = type === "int8" || type === "int16";
  const values = Float64Array.from({ length: mask + 1 }, (_, i) =>
    unpack(signed && i > mask >> 1 ? i - mask - 1 : i),
  );
  return (sample) => values[sample & mask];
}
