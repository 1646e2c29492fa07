import { civil, type Day, dayOf } from "../../data/day.ts";
import { label, segment } from "../figure.ts";
import type { Html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { extent, line } from "../scale.ts";

/** How the study's time runs over a drawing: by date, or by the order of occasions where there are no dates. */
export interface TimeAxis {
  readonly dated: boolean;
  /** x of a day; of an occasion's or interval's position where undated. */
  readonly x: (at: number) => number;
  readonly from: number;
  readonly to: number;
  readonly left: number;
  readonly right: number;
}

export function isDated(input: ReportInput): boolean {
  return input.intervals.length > 0 && input.intervals.every((one) => Number.isFinite(one.start));
}

/** Room for every window, so that those of the years before have their place too. */
export function timeAxis(input: ReportInput, left: number, right: number): TimeAxis {
  const dated = isDated(input);
  const days = dated
    ? [
        ...input.intervals.flatMap((one) => [one.start, one.end]),
        ...input.occasions.flatMap((one) => [one.first, one.last + 1]),
        ...input.covariates.flatMap((one) =>
          one.values.flatMap(({ period }) => (period === undefined ? [] : [period.start, period.end])),
        ),
      ]
    : [-0.3, input.intervals.length + 0.3];
  const [from, to] = extent(days);
  return { dated, x: line([from, to], [left, right]), from, to, left, right };
}

/** Where an interval begins and ends on the axis. */
export function intervalSpan(input: ReportInput, axis: TimeAxis, t: number): readonly [number, number] {
  const { start, end } = input.intervals[t];
  return axis.dated ? [axis.x(start), axis.x(end)] : [axis.x(t), axis.x(t + 1)];
}

/** Where an occasion stands on the axis. */
export function occasionX(input: ReportInput, axis: TimeAxis, i: number): number {
  const { first, last } = input.occasions[i];
  return axis.dated ? axis.x((first + last + 1) / 2) : axis.x(i);
}

/** First days of the years that get a label, thinned to what fits. */
export function yearTicks(
  axis: Pick<TimeAxis, "from" | "to" | "left" | "right">,
): { day: Day; text: string }[] {
  const [first, last] = [civil(axis.from).year, civil(axis.to).year];
  const room = (axis.right - axis.left) / Math.max(1, last - first + 1);
  const step = [1, 2, 5, 10, 20, 50, 100].find((years) => years * room >= 38) ?? 100;
  const out: { day: Day; text: string }[] = [];
  for (let year = Math.ceil(first / step) * step; year <= last; year += step) {
    const day = dayOf(year, 1, 1);
    if (day >= axis.from && day <= axis.to) out.push({ day, text: String(year) });
  }
  return out;
}

/** A line and a label at each first of January, or the occasions' names where there are no dates. */
export function timeLabels(input: ReportInput, axis: TimeAxis, top: number, y: number): Html[] {
  if (axis.dated)
    return yearTicks(axis).flatMap(({ day, text }) => [
      segment(axis.x(day), top, axis.x(day), y - 12, "rule"),
      label(axis.x(day), y, text, { fill: "muted", anchor: "middle" }),
    ]);
  const step = Math.ceil(input.occasions.length / Math.max(1, Math.floor((axis.right - axis.left) / 46)));
  return input.occasions.flatMap((one, i) =>
    i % step === 0 ? [label(axis.x(i), y, one.name, { fill: "muted", anchor: "middle" })] : [],
  );
}
