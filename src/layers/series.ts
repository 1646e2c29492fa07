import { isoDay } from "../data/day.ts";
import type { RawFinding } from "../data/finding.ts";
import { type Period, periodText } from "../data/period.ts";
import type { MovingPlace } from "../data/place.ts";
import type { Series } from "../data/series.ts";
import type { ImagePeriod } from "./dates.ts";
import { fixesIn } from "./moving.ts";
import type { LayerOptions, Wanted } from "./options.ts";
import type { Kept } from "./reuse.ts";

/** What one file gave: its images' periods and, place by place, their values. */
export interface FileValues {
  readonly path: string;
  readonly periods: readonly ImagePeriod[];
  readonly places: readonly (Kept | undefined)[];
}

/** One image in the order of time. */
export interface DatedImage extends Period {
  readonly file: number;
  readonly image: number;
  readonly path: string;
}

/**
 * Puts images in order of time. An image that begins with another is left out (the first by file name stands); one
 * that runs into the next is cut off where that begins. Both are findings, and so are days between images that none
 * covers.
 */
export function orderImages(
  name: string,
  files: readonly { readonly path: string; readonly periods: readonly ImagePeriod[] }[],
): { readonly images: readonly DatedImage[]; readonly findings: readonly RawFinding[] } {
  const all = files
    .flatMap(({ path, periods }, file) =>
      periods.map(({ start, end }, image): DatedImage => ({ start, end, file, image, path })),
    )
    .sort((p, q) => p.start - q.start || p.file - q.file || p.image - q.image);
  const images: DatedImage[] = [];
  const findings: RawFinding[] = [];
  const cut: DatedImage[] = [];
  for (const one of all) {
    const before = images[images.length - 1];
    if (before !== undefined && before.start === one.start) {
      findings.push({
        kind: "layer-overlap",
        subject: name,
        message: `${one.path} begins on the same day (${isoDay(one.start)}) as ${before.path}, which stands`,
        where: { file: one.path },
        value: isoDay(one.start),
        remedy: "take one of the two out, or mend the date pattern",
      });
      continue;
    }
    if (before !== undefined && before.end > one.start) {
      cut.push(before);
      images[images.length - 1] = { ...before, end: one.start };
    } else if (before !== undefined && before.end < one.start)
      findings.push({
        kind: "layer-gap",
        subject: name,
        message: `no image covers ${periodText({ start: before.end, end: one.start })} (${one.start - before.end} days)`,
        where: { file: one.path },
        value: isoDay(before.end),
        count: one.start - before.end,
        remedy: "add the missing files, or accept the gap; windows that need these days may be incomplete",
      });
    images.push(one);
  }
  if (cut.length > 0)
    findings.push({
      kind: "layer-overlap",
      subject: name,
      message: `${cut.length} images run into the next and are cut off where it begins, the first from ${isoDay(cut[0].start)}`,
      where: { file: cut[0].path },
      value: isoDay(cut[0].start),
      count: cut.length,
      remedy:
        "check what the images cover; for composites counted anew each year write e.g. covers: 16 days anew each year",
    });
  return { images, findings };
}

/** Series and valid shares of all places from the values of all files; applies the threshold of valid area. */
export function seriesOf(
  name: string,
  options: LayerOptions,
  wanted: readonly Wanted[],
  read: readonly FileValues[],
): {
  readonly series: readonly Series[];
  readonly validShares: readonly Float64Array[];
  readonly refused: readonly Float64Array[];
  readonly findings: readonly RawFinding[];
} {
  const { images, findings } = orderImages(name, read);
  const starts = Int32Array.from(images, (one) => one.start);
  const ends = Int32Array.from(images, (one) => one.end);
  const files = [...new Set(images.map((one) => one.path))].sort((a, b) => (a < b ? -1 : 1));
  const found: RawFinding[] = [...findings];
  const validShares: Float64Array[] = [];
  const refused: Float64Array[] = [];
  const series = wanted.map(({ place, use }, w): Series => {
    const at = (one: DatedImage) => read[one.file].places[w];
    const values = Float64Array.from(images, (one) => at(one)?.values[one.image] ?? Number.NaN);
    const shares = Float64Array.from(images, (one) => at(one)?.shares[one.image] ?? 0);
    validShares.push(shares);
    if (options.quality !== undefined)
      refused.push(Float64Array.from(images, (one) => at(one)?.refused?.[one.image] ?? 0));
    const few = place.type === "moving" ? fewFixes(name, place, images) : undefined;
    // Shares are sums of weights in another order than the whole; a wholly valid place must pass a threshold of 1.
    const least = "validArea" in use ? use.validArea - 1e-9 : 0;
    const low = images.filter((_, i) => few?.at[i] !== true && (shares[i] < least || shares[i] === 0));
    if (few?.finding !== undefined) found.push(few.finding);
    images.forEach((_, i) => {
      if (shares[i] < least) values[i] = Number.NaN;
    });
    found.push(...placeFindings(name, place.name, w, read, use.by));
    const everOutside = read.every((one) => (one.places[w]?.outside ?? 0) >= 1);
    if (low.length > 0 && !everOutside)
      found.push(lowFinding(name, place.name, low, images.length, "validArea" in use ? use.validArea : 0));
    return {
      site: place.name,
      variable: name,
      unit: options.unit,
      kind: options.kind,
      starts,
      ends,
      values,
      files,
    };
  });
  return { series, validShares, refused, findings: found };
}

/** Images in whose period a place that moves has too few fixes; they are missing. */
function fewFixes(
  name: string,
  place: MovingPlace,
  images: readonly DatedImage[],
): { readonly at: readonly boolean[]; readonly finding: RawFinding | undefined } {
  const least = Math.max(1, place.least);
  const counts = images.map((one) => fixesIn(place, one).length);
  const at = counts.map((count) => count < least);
  const few = images.filter((_, i) => at[i]);
  if (few.length === 0) return { at, finding: undefined };
  const dates = few.slice(0, 3).map((one) => isoDay(one.start));
  const message = `${few.length} of ${images.length} images have fewer than ${least} fixes in their period (${dates.join(", ")}${few.length > 3 ? ", …" : ""}) and count as missing`;
  return {
    at,
    finding: {
      kind: "few-fixes",
      subject: `${name} at ${place.name}`,
      message,
      value: dates[0],
      count: few.length,
      remedy: "add fixes, lower `at least` of the place, or accept the images as missing",
    },
  };
}

function lowFinding(
  name: string,
  place: string,
  low: readonly DatedImage[],
  images: number,
  least: number,
): RawFinding {
  const dates = low.slice(0, 3).map((one) => isoDay(one.start));
  return {
    kind: "layer-valid-area",
    subject: `${name} at ${place}`,
    message:
      `${low.length} of ${images} images have ${least > 0 ? `less than ${least} of the area` : "nothing"} valid ` +
      `(${dates.join(", ")}${low.length > 3 ? ", …" : ""}) and count as missing`,
    where: { file: low[0].path },
    value: dates[0],
    count: low.length,
    remedy: "accept them as missing, or lower the valid area if part of the place will do",
  };
}

/** Files of one stack share their grid as a rule; where they do not, the worst is told, and of how many files it is one. */
function placeFindings(
  name: string,
  place: string,
  w: number,
  read: readonly FileValues[],
  by: string,
): RawFinding[] {
  const outsideIn = ({ places }: FileValues) => places[w]?.outside ?? 0;
  const worst = read.reduce((held, one) => (outsideIn(one) > outsideIn(held) ? one : held), read[0]);
  const kept = worst.places[w];
  if (kept === undefined) return [];
  if (kept.outside > 1e-9) {
    const touched = read.filter((one) => outsideIn(one) > 1e-9).length;
    const some = touched < read.length;
    const share = `${(100 * kept.outside).toPrecision(3)} % of the place lies outside the layer`;
    return [
      {
        kind: "place-outside",
        subject: `${name} at ${place}`,
        message: some
          ? `${share} in the worst of ${touched} of its ${read.length} files, and counts as not valid there`
          : kept.outside >= 1
            ? "the place lies outside the layer; all its values are missing"
            : `${share} and counts as not valid`,
        ...(some ? { where: { file: worst.path } } : {}),
        value: String(kept.outside),
        remedy: some
          ? "check that all files of the layer lie on one grid, and the place's coordinates (longitude first)"
          : "check the place's coordinates (longitude first) and the layer's extent",
      },
    ];
  }
  if ((by !== "area" && by !== "radius") || kept.pixels >= 1) return [];
  return [
    {
      kind: "layer-small-place",
      subject: `${name} at ${place}`,
      message: `the place is smaller than a pixel (${kept.pixels.toPrecision(3)} of one)`,
      value: String(kept.pixels),
      remedy: "its values are those of the few pixels it touches; a point by bilinear may tell as much",
    },
  ];
}
