import type { Footprint } from "../area.ts";
import type { PixelTest } from "../quality.ts";
import type { Samples } from "../samples.ts";
import { TYPE_BYTES } from "./dataset.ts";
import type { NetcdfLayer } from "./layer.ts";
import type { Unpack } from "./packing.ts";
import type { Box, BoxPart } from "./walk.ts";

/** Means and shares, image by image and place by place: [image × places + place]. */
export interface NetcdfGathered {
  readonly values: Float64Array;
  readonly shares: Float64Array;
  /** Share of the place's weight that had values and was refused by quality. */
  readonly refused: Float64Array;
}

/** Which images a place is read from: all where undefined. Images count from 0 among those asked for. */
export type ActiveImages = (place: number) => ReadonlySet<number> | undefined;

/** Bytes of samples that are read in one piece. */
const PIECE_BYTES = 2 ** 22;

/**
 * Σ w v / Σ w over the valid cells of every place in every image, and the valid share Σ w / total; NaN and 0 where
 * nothing is valid. Box after box, and within a box so many images at a time that whole chunks are read once.
 * `bands` are the images' indices along time, in ascending order.
 */
export function gatherNetcdf(
  layer: NetcdfLayer,
  unpack: Unpack,
  bands: readonly number[],
  boxes: readonly Box[],
  footprints: readonly Footprint[],
  active: ActiveImages,
  quality: ((image: number) => PixelTest) | undefined,
): NetcdfGathered {
  const places = footprints.length;
  const size = bands.length * places;
  const sums = new Float64Array(size);
  const weights = new Float64Array(size);
  const refused = new Float64Array(size);
  const bases = new Float64Array(size).fill(Number.NaN);
  for (const box of boxes) {
    const long = imagesAtOnce(layer, box);
    // Pieces begin where chunks do, so that none is unpacked twice.
    for (let i = 0; i < bands.length; ) {
      const pieceEnd = (Math.floor(bands[i] / long) + 1) * long;
      let end = i + 1;
      while (end < bands.length && bands[end] < pieceEnd) end++;
      const wanted = box.parts.filter((part) => {
        const images = active(part.place);
        if (images === undefined) return true;
        for (let k = i; k < end; k++) if (images.has(k)) return true;
        return false;
      });
      if (wanted.length > 0) {
        const count = bands[end - 1] - bands[i] + 1;
        const samples = readBox(layer, box, bands[i], count);
        const at = placesOfSamples(layer, box, count);
        for (const part of wanted) {
          const images = active(part.place);
          const offsets = part.offsets.map((offset) => at.cell(offset));
          for (let k = i; k < end; k++) {
            if (images !== undefined && !images.has(k)) continue;
            const into = k * places + part.place;
            const from = (bands[k] - bands[i]) * at.perImage;
            const test = quality === undefined ? undefined : boxTest(quality(k), box);
            const added = addUp(samples, from, offsets, part, unpack, test, bases[into]);
            bases[into] = added.base;
            sums[into] += added.sum;
            weights[into] += added.weight;
            refused[into] += added.refused;
          }
        }
      }
      i = end;
    }
  }
  const share = (weight: number, i: number) => Math.min(1, weight / footprints[i % places].total);
  return {
    values: sums.map((sum, i) => (weights[i] > 0 ? bases[i] + sum / weights[i] : Number.NaN)),
    shares: weights.map(share),
    refused: refused.map(share),
  };
}

/** Images in one piece: whole chunks along time, so many that a piece is worth reading and fits. */
function imagesAtOnce({ variable, t }: NetcdfLayer, box: Box): number {
  if (t < 0) return 1;
  const chunk = variable.chunks?.[t] ?? 1;
  const bytes = box.width * box.height * TYPE_BYTES[variable.type] * chunk;
  return chunk * Math.max(1, Math.floor(PIECE_BYTES / bytes));
}

/** The samples of a box in `count` images from `first` on, in the variable's own order of dimensions. */
export function readBox(
  { dataset, variable, fixed, x, y, t }: NetcdfLayer,
  box: Pick<Box, "left" | "top" | "width" | "height">,
  first: number,
  count: number,
): Samples {
  const start = [...fixed];
  const counts = fixed.map(() => 1);
  start[x] = box.left;
  start[y] = box.top;
  counts[x] = box.width;
  counts[y] = box.height;
  if (t >= 0) {
    start[t] = first;
    counts[t] = count;
  }
  return dataset.read(variable, start, counts);
}

/** Where the samples of `readBox` stand: `cell(row-major offset within the box) + image × perImage`. */
export function placesOfSamples(
  { fixed, x, y, t }: NetcdfLayer,
  box: Pick<Box, "width" | "height">,
  count: number,
): { readonly cell: (offset: number) => number; readonly perImage: number } {
  const lengths = fixed.map((_, d) => (d === x ? box.width : d === y ? box.height : d === t ? count : 1));
  const stride = (d: number) => lengths.slice(d + 1).reduce((product, one) => product * one, 1);
  const [sx, sy] = [stride(x), stride(y)];
  const { width } = box;
  const straight = sx === 1 && sy === width;
  return {
    cell: straight
      ? (offset) => offset
      : (offset) => {
          const row = Math.floor(offset / width);
          return row * sy + (offset - row * width) * sx;
        },
    perImage: t < 0 ? 0 : stride(t),
  };
}

function boxTest(test: PixelTest, box: Box): (offset: number) => boolean {
  return (offset) => {
    const row = Math.floor(offset / box.width);
    return test(box.left + offset - row * box.width, box.top + row);
  };
}

/** Σ w (v − base) and Σ w over the valid cells of a part; the base is the place's first valid value in this image. */
function addUp(
  samples: Samples,
  from: number,
  offsets: Int32Array,
  { offsets: inBox, weights }: BoxPart,
  unpack: Unpack,
  test: ((offset: number) => boolean) | undefined,
  known: number,
) {
  let [sum, weight, refused, base] = [0, 0, 0, known];
  for (let i = 0; i < offsets.length; i++) {
    const value = unpack(samples[from + offsets[i]]);
    if (Number.isNaN(value)) continue;
    if (test !== undefined && !test(inBox[i])) {
      refused += weights[i];
      continue;
    }
    if (Number.isNaN(base)) base = value;
    sum += weights[i] * (value - base);
    weight += weights[i];
  }
  return { sum, weight, refused, base };
}
