import type { Series } from "../data/series.ts";
import { InputError } from "../errors.ts";
import { convertUnit, sameDimension } from "./units.ts";

const SECONDS_PER_DAY = 86_400;

/** A unit times one second. In front, since what follows a stroke divides. */
const overTime = (unit: string) => `s*${unit}`;

/**
 * A series in another unit. A mean rate becomes the total of its period (W/m2 → MJ/m2, mm/h → mm: value × seconds of the
 * period) and a total the mean rate of its period; all else is converted by dimension. Throws `stations.unknown-unit`,
 * `stations.other-dimension`, and `stations.rate-of-extremes` for a rate that is a period's minimum or maximum.
 */
export function seriesInUnit(series: Series, unit: string): Series {
  const { unit: own, kind, values } = series;
  if (own === unit) return series;
  if (sameDimension(own, unit)) return { ...series, unit, values: convertUnit(values, own, unit, "reading") };
  const toTotal = sameDimension(overTime(own), unit);
  const toRate = !toTotal && sameDimension(own, overTime(unit));
  // Neither: the conversion itself says what is wrong.
  if (!toTotal && !toRate) return { ...series, unit, values: convertUnit(values, own, unit, "reading") };
  if (kind !== (toTotal ? "mean" : "total"))
    throw new InputError({
      name: "stations.rate-of-extremes",
      expected: toTotal ? "a mean rate, which adds up to a total" : "a total, which has a mean rate",
      found: `a ${kind} of ${series.variable} in ${own}`,
      where: { file: series.files.join(", "), cell: series.variable },
      remedy: `ask for a unit like ${own}, or correct \`kind:\` in the records`,
    });
  const seconds = (i: number) => (series.ends[i] - series.starts[i]) * SECONDS_PER_DAY;
  if (toTotal) {
    const [factor] = convertUnit([1], overTime(own), unit, "reading");
    return { ...series, unit, kind: "total", values: values.map((x, i) => x * factor * seconds(i)) };
  }
  const [factor] = convertUnit([1], own, overTime(unit), "reading");
  return { ...series, unit, kind: "mean", values: values.map((x, i) => (x * factor) / seconds(i)) };
}
