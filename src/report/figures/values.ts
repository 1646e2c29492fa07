import type { Cast, Member } from "../cast.ts";
import { unitText } from "../cast.ts";
import { belongs, drawing, type Figure, fitted, label, marker, segment } from "../figure.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { brief, counted, px, show } from "../numbers.ts";
import { ink } from "../palette.ts";
import { extent, line, ticks, tickText } from "../scale.ts";
import type { Size } from "../size.ts";
import { isDated, yearTicks } from "./axis-time.ts";

const HIGH = 128;
const [PLOT_LEFT, PLOT_TOP, PLOT_HEIGHT] = [44, 24, 74];
/** Of a panel, px: what fits beside each other is drawn beside each other. */
const LEAST = 200;
const MOST = 262;

/** Small multiples: the values of each covariate by interval, in its own unit. */
export function values(input: ReportInput, cast: Cast, size: Size): Figure | undefined {
  const shown = cast.members.map((member) => ({ member, values: valuesOf(input, member.name) }));
  if (shown.length === 0 || input.intervals.length === 0) return undefined;
  const columns = Math.max(
    1,
    Math.min(Math.round(size.width / MOST), Math.floor(size.width / LEAST), shown.length),
  );
  const cell = Math.min(MOST, size.width / columns);
  const rows = Math.ceil(shown.length / columns);
  const missing = shown.reduce((sum, one) => sum + one.values.filter(Number.isNaN).length, 0);
  const says = `${counted(shown.length, "covariate")} over ${counted(input.intervals.length, "interval")}, ${counted(missing, "value")} missing. ${shown
    .slice(0, 30)
    .map(({ member, values }) => {
      const [low, high] = extent(values);
      return `${member.name}: ${show(low)} to ${show(high)} ${unitText(member.unit)}`.trimEnd();
    })
    .join("; ")}`;
  return {
    name: "covariate-values",
    title: "Covariates by interval",
    caption: `Each covariate in its own unit, one value per interval${isDated(input) ? ", set at the interval's middle" : ", in the order of intervals"}; the thin line is the mean. A cross on the lower edge marks a missing value. Steps between points are only a guide for the eye.`,
    svg: drawing(
      columns * cell,
      rows * HIGH,
      "Covariates by interval",
      says,
      shown.map((one, i) => panel(input, one, (i % columns) * cell, Math.floor(i / columns) * HIGH, cell)),
    ),
  };
}

/** Values before preparation; of a derived covariate, its column of the matrix. */
export function valuesOf(input: ReportInput, name: string): number[] {
  const found = input.covariates.find((one) => one.name === name);
  if (found !== undefined) return found.values.map((one) => one.value);
  const { names, raw } = input.matrix;
  const k = names.indexOf(name);
  return Array.from({ length: raw.rows }, (_, t) => raw.data[t * raw.columns + k]);
}

function panel(
  input: ReportInput,
  { member, values }: { readonly member: Member; readonly values: readonly number[] },
  left: number,
  top: number,
  cell: number,
): Html {
  const plotWidth = cell - PLOT_LEFT - 14;
  const dated = isDated(input);
  const at = (t: number) => (dated ? (input.intervals[t].start + input.intervals[t].end) / 2 : t + 1);
  const [x0, y0] = [left + PLOT_LEFT, top + PLOT_TOP];
  const domain: [number, number] = dated
    ? [input.intervals[0].start, input.intervals[input.intervals.length - 1].end]
    : [0.5, input.intervals.length + 0.5];
  const x = line(domain, [x0, x0 + plotWidth]);
  const [low, high] = extent(values);
  const room = 0.08 * (high - low || Math.abs(high) || 1);
  const y = line([low - room, high + room], [y0 + PLOT_HEIGHT, y0]);
  const known = values.map((value, t) => ({ value, t })).filter((one) => Number.isFinite(one.value));
  const mean = known.reduce((sum, one) => sum + one.value, 0) / known.length;
  // a gap breaks the line: it must not run through intervals without a value
  const path = values
    .map((value, t) =>
      Number.isFinite(value)
        ? `${t > 0 && Number.isFinite(values[t - 1]) ? "L" : "M"}${px(x(at(t)))},${px(y(value))}`
        : "",
    )
    .join("");
  const years = dated
    ? yearTicks({ from: domain[0], to: domain[1], left: x0, right: x0 + plotWidth }).map(({ day, text }) => ({
        at: x(day),
        text,
      }))
    : ticks(1, input.intervals.length, 5).map((value) => ({ at: x(value), text: tickText(value) }));
  const unit = unitText(member.unit);
  return belongs(member, [
    html`<rect x="${px(left)}" y="${top}" width="${px(cell - 8)}" height="${HIGH - 6}" fill="none"/>`,
    marker(member.theme, left + 8, top + 10),
    label(left + 18, top + 14, fitted(unit === "" ? member.name : `${member.name} (${unit})`, cell - 30)),
    ticks(low - room, high + room, 3).map(
      (value) =>
        html`${segment(x0, y(value), x0 + plotWidth, y(value), "rule")}${label(x0 - 5, y(value) + 4, tickText(value), { anchor: "end", fill: "muted", size: 11 })}`,
    ),
    years.map(
      (one) =>
        html`${segment(one.at, y0 + PLOT_HEIGHT, one.at, y0 + PLOT_HEIGHT + 4, "muted")}${label(one.at, y0 + PLOT_HEIGHT + 16, one.text, { anchor: "middle", fill: "muted", size: 11 })}`,
    ),
    known.length > 0 && segment(x0, y(mean), x0 + plotWidth, y(mean), "muted", 1),
    html`<path d="${path}" fill="none" stroke="${ink(member.theme.token)}" stroke-width="1.2" opacity="0.6"/>`,
    known.map(({ value, t }) => marker(member.theme, x(at(t)), y(value), 3)),
    values.map((value, t) => {
      const [cx, cy] = [x(at(t)), y0 + PLOT_HEIGHT];
      return Number.isNaN(value)
        ? html`${segment(cx - 4, cy - 4, cx + 4, cy + 4, "ink", 1.5)}${segment(cx - 4, cy + 4, cx + 4, cy - 4, "ink", 1.5)}`
        : html``;
    }),
    html`<title>${member.name}: mean ${show(mean)}${unit === "" ? "" : ` ${unit}`}, ${brief(known.length)} of ${brief(values.length)} intervals</title>`,
  ]);
}
