import { type Day, isoDay } from "../../data/day.ts";
import type { RawFinding } from "../../data/finding.ts";
import { InputError } from "../../errors.ts";
import { coveredPeriod } from "../cover.ts";
import type { ImagePeriod } from "../dates.ts";
import type { ImageCover } from "../options.ts";
import { boundsOf } from "./axes.ts";
import { civilDay, labelOf } from "./calendar.ts";
import { allOf, type Dataset, type NcVariable, textOf } from "./dataset.ts";
import { momentOf, readTimeScale } from "./time-units.ts";

export interface TimePeriods {
  readonly periods: readonly ImagePeriod[];
  readonly calendar: string;
  readonly byBounds: boolean;
  readonly findings: readonly RawFinding[];
}

/**
 * The periods of a time axis' steps. Time bounds win (CF-1.11 §7.1), begun and ended at the nearest midnight; without them
 * a step stands for the day, month, … (`covers`) that holds its moment. Days are UTC's. In calendars of the models the
 * dates' names are kept, and dates that no year has are refused.
 * Throws `layers.time-…`, `layers.calendar`, `layers.calendar-day`, `layers.within-day`, `layers.climatology`.
 */
export function timePeriods(
  dataset: Dataset,
  time: NcVariable,
  covers: ImageCover,
  layer: string,
): TimePeriods {
  const where = { file: dataset.path, cell: time.name };
  const { attributes } = time;
  if (attributes.has("climatology"))
    throw new InputError({
      name: "layers.climatology",
      expected: "images of one period each",
      found: `${time.name} with climatological bounds, each of many years at once (CF §7.4)`,
      where,
      remedy: "use the series that the climatology was made of",
    });
  const scale = readTimeScale(textOf(attributes, "units") ?? "", textOf(attributes, "calendar"), where);
  const moments = Array.from(allOf(dataset, time), (value) => {
    const moment = momentOf(scale, value);
    if (Number.isFinite(moment) && Math.abs(value) < 9e36) return moment;
    throw new InputError({
      name: "layers.time-missing",
      expected: "a time at every step",
      found: `${value}`,
      where,
      remedy: "fetch the file again, or date the images by first and step",
    });
  });
  const bounds = boundsOf(dataset, time);
  const dayOf = (number: number): Day => {
    const day = civilDay(scale.calendar, number);
    if (day !== undefined) return day;
    const { year, month, day: dom } = labelOf(scale.calendar, number);
    throw new InputError({
      name: "layers.calendar-day",
      expected: "dates that the civil calendar has",
      found: `${dom}.${month}.${year} in the ${scale.calendar} calendar`,
      where,
      remedy: "use monthly values, or convert the days to the standard calendar first",
    });
  };
  if (bounds !== undefined) {
    const edges = Array.from(bounds, (value) => momentOf(scale, value));
    const periods = moments.map((_, band): ImagePeriod => {
      const [low, high] = [edges[2 * band], edges[2 * band + 1]].sort((p, q) => p - q);
      if (!(high - low >= 1 - 1e-6))
        throw withinDay(`bounds of ${(24 * (high - low)).toPrecision(3)} hours`, where);
      return { band, start: dayOf(Math.round(low)), end: dayOf(Math.round(high)) };
    });
    return {
      periods,
      calendar: scale.calendar,
      byBounds: true,
      findings: boundFindings(edges, periods, covers, layer, dataset.path),
    };
  }
  if (covers === "bounds")
    throw new InputError({
      name: "layers.no-time-bounds",
      expected: "bounds of the times, since covers: bounds was written",
      found: `${time.name} without bounds`,
      where,
      remedy: "write what an image covers, e.g. covers: month",
    });
  const shortest = Math.min(...moments.slice(1).map((moment, i) => moment - moments[i]));
  if (shortest > 0 && shortest < 1 - 1e-6)
    throw withinDay(`steps of ${(24 * shortest).toPrecision(3)} hours`, where);
  const periods = moments.map((moment, band) => ({
    band,
    ...coveredPeriod(dayOf(Math.floor(moment)), covers),
  }));
  return { periods, calendar: scale.calendar, byBounds: false, findings: [] };
}

function withinDay(found: string, where: { readonly file: string; readonly cell: string }): InputError {
  return new InputError({
    name: "layers.within-day",
    expected: "images of whole days or longer",
    found,
    where,
    remedy: "make daily means, sums or extremes first",
  });
}

/** Bounds off midnight, and bounds that are not what the pipeline file says. */
function boundFindings(
  edges: readonly number[],
  periods: readonly ImagePeriod[],
  covers: ImageCover,
  layer: string,
  path: string,
): RawFinding[] {
  const out: RawFinding[] = [];
  const off = edges.filter((edge) => Math.abs(edge - Math.round(edge)) > 1e-6);
  if (off.length > 0)
    out.push({
      kind: "layer-bounds",
      subject: layer,
      message: `${off.length} of ${edges.length} time bounds are not at midnight UTC (the first at ${clock(off[0])}) and were moved to the nearest`,
      where: { file: path },
      count: off.length,
      remedy: "accept it if days of the data may begin a few hours from those of the study",
    });
  if (covers === "bounds") return out;
  const other = periods.filter(({ start, end }) => {
    const said = coveredPeriod(start, covers);
    return said.start !== start || said.end !== end;
  });
  if (other.length > 0)
    out.push({
      kind: "layer-bounds",
      subject: layer,
      message: `${other.length} of ${periods.length} images have time bounds that are not the ${typeof covers === "object" ? `${covers.days} days` : covers} written under covers, the first ${isoDay(other[0].start)} to ${isoDay(other[0].end - 1)}; the bounds stand`,
      where: { file: path },
      value: isoDay(other[0].start),
      count: other.length,
      remedy: "write covers: bounds",
    });
  return out;
}

function clock(edge: number): string {
  const minutes = Math.round((edge - Math.floor(edge)) * 1440);
  return `${String(Math.floor(minutes / 60)).padStart(2, "0")}:${String(minutes % 60).padStart(2, "0")}`;
}
