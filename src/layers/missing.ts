import { fromHalf, type SampleType } from "./samples.ts";

/**
 * The number a nodata text stands for; undefined for none. Besides plain numbers the spellings of C libraries occur:
 * nan, -nan, inf, -inf, 1.#QNAN, -1.#IND, 1.#INF.
 */
export function parseNodata(text: string | undefined): number | undefined {
  const word = text?.replace(/\0.*$/s, "").trim().toLowerCase();
  if (word === undefined || word === "" || word === "none") return undefined;
  if (/^[-+]?(nan(\(.*\))?|1\.#(qnan|ind|snan)\d*)$/.test(word)) return Number.NaN;
  const infinite = /^([-+]?)(inf(inity)?|1\.#inf\d*)$/.exec(word);
  if (infinite !== null) return infinite[1] === "-" ? Number.NEGATIVE_INFINITY : Number.POSITIVE_INFINITY;
  const value = Number(word);
  return Number.isNaN(value) ? undefined : value;
}

/** Largest float32, 2^128 − 2^104. */
const LARGEST_FLOAT32 = 2 ** 128 - 2 ** 104;

/**
 * The nodata value as samples of this type hold it, for comparison by equality. −99.9 in a float32 layer is stored as
 * the nearest float32, so the text's number is rounded alike; "−3.402823e+38" is the largest float32 written with
 * too few digits and means it. Values that the type cannot hold match nothing.
 */
export function nodataAsStored(nodata: number | undefined, type: SampleType): number | undefined {
  if (nodata === undefined || type === "float64" || !type.startsWith("float")) return nodata;
  if (type === "float32") {
    const near = Math.abs(Math.abs(nodata) - LARGEST_FLOAT32) < 1e-6 * LARGEST_FLOAT32;
    return near ? Math.sign(nodata) * LARGEST_FLOAT32 : Math.fround(nodata);
  }
  return nearestHalf(nodata);
}

/** The float16 nearest to a number, by trying its neighbours in the ordered run of non-negative halves. */
function nearestHalf(value: number): number {
  if (!Number.isFinite(value)) return value;
  const size = Math.abs(value);
  let low = 0;
  let high = 0x7bff;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (fromHalf(middle) <= size) low = middle;
    else high = middle - 1;
  }
  const upper = fromHalf(Math.min(low + 1, 0x7bff));
  const lower = fromHalf(low);
  return Math.sign(value) * (upper - size < size - lower ? upper : lower);
}
