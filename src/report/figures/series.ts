import { isoDay } from "../../data/day.ts";
import type { Cast } from "../cast.ts";
import { unitText } from "../cast.ts";
import { belongs, drawing, type Figure, fitted, label, marker, rect, segment } from "../figure.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput, ShownSeries } from "../input.ts";
import { counted, px, show } from "../numbers.ts";
import { ink } from "../palette.ts";
import { extent, line, ticks, tickText } from "../scale.ts";
import type { Size } from "../size.ts";
import { type TimeAxis, timeAxis, yearTicks } from "./axis-time.ts";

const LEFT = 48;
const HIGH = 108;
const PLOT = 58;
/** A site that is a mean of sites is no place. */
const MEAN = /^mean of/;

/** Observed series, with the windows of the covariate they feed shaded behind. */
export function seriesFigure(input: ReportInput, cast: Cast, { width }: Size): Figure | undefined {
  const shown = input.shown.filter((one) => one.series.starts.length > 0);
  const axis = timeAxis(input, LEFT, width - 10);
  if (shown.length === 0 || !axis.dated) return undefined;
  const says = shown
    .map(({ covariate, series }) => {
      const [low, high] = extent(series.values);
      const known = series.values.filter(Number.isFinite).length;
      return `${series.variable} at ${series.site} for ${covariate}: ${isoDay(series.starts[0])} to ${isoDay(series.ends[series.ends.length - 1] - 1)}, ${known} of ${series.values.length} values known, ${show(low)} to ${show(high)} ${unitText(series.unit)}`.trimEnd();
    })
    .join("; ");
  return {
    name: "observed-series",
    title: "Observed series and their windows",
    caption: `${counted(shown.length, "observed series", "observed series")}, thinned for the picture to at most one value a month. Shaded: the windows in which the covariate looks at it. Where the line breaks nothing was observed.`,
    svg: drawing(
      width,
      shown.length * HIGH + 4,
      "Observed series and their windows",
      says,
      shown.map((one, i) => panel(input, cast, axis, one, i * HIGH, drawnBefore(shown, i))),
    ),
  };
}

/** The panel that draws the same series first: the line is kept once, however many covariates look at it. */
function drawnBefore(shown: readonly ShownSeries[], i: number): number {
  const { series } = shown[i];
  return shown.findIndex(({ series: other }) => {
    return (
      other === series ||
      (other.variable === series.variable &&
        other.site === series.site &&
        other.values.length === series.values.length &&
        other.values.every(
          (value, k) => Object.is(value, series.values[k]) && other.starts[k] === series.starts[k],
        ))
    );
  });
}

function panel(
  input: ReportInput,
  cast: Cast,
  axis: TimeAxis,
  { covariate, series }: ShownSeries,
  top: number,
  first: number,
): Html {
  const member = cast.byName.get(covariate);
  const y0 = top + 24;
  const [low, high] = extent(series.values);
  const y = line([low - 0.05 * (high - low), high + 0.05 * (high - low)], [y0 + PLOT, y0]);
  const windows = input.covariates.find((one) => one.name === covariate)?.values ?? [];
  const shade = windows.flatMap((one) =>
    (one.periods ?? (one.period === undefined ? [] : [one.period])).map((period) =>
      rect(
        axis.x(period.start),
        y0,
        axis.x(period.end) - axis.x(period.start),
        PLOT,
        member?.theme.token ?? "mark",
        0.2,
      ),
    ),
  );
  const unit = unitText(series.unit);
  const head = `${series.variable}${unit === "" ? "" : ` (${unit})`}${MEAN.test(series.site) ? "," : " at"} ${series.site}, for ${covariate}`;
  return belongs(member, [
    member !== undefined && marker(member.theme, LEFT - 10, top + 10),
    label(LEFT, top + 14, fitted(head, axis.right - LEFT)),
    shade,
    ticks(low, high, 3).map(
      (value) =>
        html`${segment(axis.left, y(value), axis.right, y(value), "rule")}${label(LEFT - 6, y(value) + 4, tickText(value), { anchor: "end", fill: "muted", size: 11 })}`,
    ),
    first * HIGH === top
      ? html`<path id="observed-${first}" d="${pathOf(axis, series, y)}" fill="none" stroke="${ink("ink")}" stroke-width="1.1" stroke-linejoin="round"/>`
      : html`<use href="#observed-${first}" y="${top - first * HIGH}"/>`,
    top === 0
      ? html`<g id="observed-years">${years(axis, y0 + PLOT)}</g>`
      : html`<use href="#observed-years" y="${top}"/>`,
  ]);
}

function pathOf(axis: TimeAxis, series: ShownSeries["series"], y: (value: number) => number): string {
  let path = "";
  let pen = false;
  for (let i = 0; i < series.values.length; i++) {
    const middle = (series.starts[i] + series.ends[i]) / 2;
    if (!Number.isFinite(series.values[i]) || middle < axis.from || middle > axis.to) {
      pen = false;
      continue;
    }
    // thinned to months, two values further apart than about two months have a gap between them
    if (pen && series.starts[i] - series.ends[i - 1] > 62) pen = false;
    path += `${pen ? "L" : "M"}${px(axis.x(middle))},${px(y(series.values[i]))}`;
    pen = true;
  }
  return path;
}

function years(axis: TimeAxis, foot: number): Html[] {
  return yearTicks(axis).map(
    ({ day, text }) =>
      html`${segment(axis.x(day), foot, axis.x(day), foot + 4, "muted")}${label(axis.x(day), foot + 16, text, { anchor: "middle", fill: "muted", size: 11 })}`,
  );
}
