import type { IntervalCovariate } from "../../aggregate/result.ts";
import { intervalWords } from "../../data/occasion.ts";
import { periodText } from "../../data/period.ts";
import { listWords } from "../../data/words.ts";
import type { Cast } from "../cast.ts";
import { belongs, drawing, type Figure, fitted, label, marker, rect, segment } from "../figure.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, px, whole } from "../numbers.ts";
import { ink } from "../palette.ts";
import type { Size } from "../size.ts";
import { intervalSpan, occasionX, type TimeAxis, timeAxis, timeLabels } from "./axis-time.ts";

const ROW = 19;
const CATCH = 58;

/** The time ribbon: captures at each occasion, the intervals between, and where in them each covariate looks. */
export function ribbon(input: ReportInput, cast: Cast, size: Size): Figure | undefined {
  if (input.intervals.length === 0) return undefined;
  const axis = timeAxis(input, size.names, size.width - 14);
  const rows = rowsOf(input);
  const top = input.caught.length > 0 ? CATCH + 6 : 4;
  const bandY = top;
  const rowsY = bandY + 34;
  const bottom = rowsY + rows.length * ROW + 6;
  const height = bottom + 22;
  const body = [
    input.intervals.map((_, t) => {
      const [a, b] = intervalSpan(input, axis, t);
      return t % 2 === 0 ? rect(a, bandY, b - a, bottom - bandY, "wash") : undefined;
    }),
    timeLabels(input, axis, rowsY, bottom + 15),
    captures(input, axis, top - 8),
    band(input, axis, bandY),
    rows.map((row, r) => rowOf(input, cast, axis, row, rowsY + r * ROW)),
  ].map((piece) => html`${piece.map((one) => one as Html | undefined)}`);
  const says = `${counted(input.occasions.length, "occasion")}, ${intervalWords(input.occasions.length - 1, input.intervals.length)} from ${input.occasions[0]?.name ?? "the first"} to ${input.occasions.at(-1)?.name ?? "the last"}, ${counted(rows.length, "row")} of windows for ${counted(input.covariates.length, "covariate")}${catchWords(input)}`;
  const split = input.intervals.length > input.occasions.length - 1;
  const rest = axis.dated
    ? "Each row shows, within each interval, the days a covariate looks at; neighbours that overlap are set one above the other. A hollow bar is a window whose value is missing; a lone marker is a value that came ready-made, without a window."
    : "The occasions carry no dates, so they stand in their order and windows cannot be drawn: a marker says that the interval has a value, a cross that it has none.";
  return {
    name: "time-ribbon",
    title: "The time ribbon",
    caption: `${input.caught.length > 0 ? "Above: animals caught at each occasion, newly marked (solid) and seen again (open). " : ""}The band is the run of intervals, each from one occasion to the next${split ? ", longer ones cut into years" : ""}. ${rest}${derived(cast, input)}`,
    svg: drawing(size.width, height, "The time ribbon", says, body),
  };
}

function catchWords(input: ReportInput): string {
  if (input.caught.length === 0) return "";
  const sum = (key: "newlyMarked" | "seenAgain") => input.caught.reduce((all, one) => all + one[key], 0);
  return `; ${whole(sum("newlyMarked"))} newly marked and ${whole(sum("seenAgain"))} seen again in all`;
}

function captures(input: ReportInput, axis: TimeAxis, base: number): Html[] {
  if (input.caught.length === 0) return [];
  const most = Math.max(1, ...input.caught.map((one) => one.newlyMarked + one.seenAgain));
  const unit = (CATCH - 14) / most;
  const width = Math.max(3, Math.min(11, ((axis.right - axis.left) / input.caught.length) * 0.4));
  return [
    label(axis.left - 12, base - 24, "animals caught", { anchor: "end", fill: "muted" }),
    label(axis.left - 12, base - 9, axis.left < 150 ? `at most ${most}` : `at most ${most} at an occasion`, {
      anchor: "end",
      fill: "muted",
      size: 11,
    }),
    ...input.caught.map((one, i) => {
      const x = occasionX(input, axis, i) - width / 2;
      const [fresh, again] = [one.newlyMarked * unit, one.seenAgain * unit];
      return html`${rect(x, base - fresh, width, fresh, "mark")}<rect x="${px(x + 0.5)}" y="${px(base - fresh - again)}" width="${px(width - 1)}" height="${px(again)}" fill="none" stroke="${ink("mark")}"/>`;
    }),
    segment(axis.left, base, axis.right, base, "rule"),
  ];
}

function band(input: ReportInput, axis: TimeAxis, y: number): Html[] {
  const least = Math.min(
    ...input.intervals.map((_, t) => intervalSpan(input, axis, t)[1] - intervalSpan(input, axis, t)[0]),
  );
  const step = [1, 5, 10].find((one) => one * least > 7 * String(input.intervals.length).length) ?? 20;
  return [
    label(axis.left - 12, y + 15, axis.left < 150 ? "intervals" : "intervals and occasions", {
      anchor: "end",
      fill: "muted",
    }),
    ...input.intervals.map((one, t) => {
      const [a, b] = intervalSpan(input, axis, t);
      const bar = rect(a, y + 4, b - a, 14, "mark", t % 2 === 0 ? 0.32 : 0.16);
      const text = String(one.index + 1);
      return one.index % step === 0
        ? html`${bar}${label((a + b) / 2, y + 15, text, { anchor: "middle", size: 11 })}`
        : bar;
    }),
    ...input.occasions.map((_, i) => {
      const x = occasionX(input, axis, i);
      return segment(x, y, x, y + 22, "mark", 2);
    }),
  ];
}

interface Row {
  readonly covariates: readonly IntervalCovariate[];
}

/** One row per covariate; where there are many, one row per set of windows. */
function rowsOf(input: ReportInput): Row[] {
  if (input.covariates.length <= 40) return input.covariates.map((one) => ({ covariates: [one] }));
  const groups = new Map<string, IntervalCovariate[]>();
  for (const one of input.covariates) {
    const key = one.values.map(({ period }) => `${period?.start}:${period?.end}`).join(" ");
    groups.set(key, [...(groups.get(key) ?? []), one]);
  }
  return [...groups.values()].map((covariates) => ({ covariates }));
}

function rowOf(input: ReportInput, cast: Cast, axis: TimeAxis, row: Row, y: number): Html {
  const [first, ...others] = row.covariates;
  const member = cast.byName.get(first.name);
  const text = others.length === 0 ? first.name : `${first.name} + ${others.length} more`;
  const token = member?.theme.token ?? "muted";
  const overlap = first.values.some((one, t) => {
    const next = first.values[t + 1]?.period;
    return one.period !== undefined && next !== undefined && next.start < one.period.end;
  });
  const marks = first.values.map((one, t) => {
    const [a, b] = intervalSpan(input, axis, t);
    const missing = Number.isNaN(one.value);
    if (one.period === undefined || !axis.dated) {
      const x = (a + b) / 2;
      if (missing)
        return html`${segment(x - 4, y + 5, x + 4, y + 13, "muted", 1.5)}${segment(x - 4, y + 13, x + 4, y + 5, "muted", 1.5)}`;
      return member === undefined ? undefined : marker(member.theme, x, y + 9, 3.6);
    }
    const periods = one.periods ?? [one.period];
    return periods.map((period) => {
      const [from, to] = [axis.x(period.start), axis.x(period.end)];
      const [dy, h] = overlap ? [t % 2 === 0 ? 2 : 10, 6] : [4, 10];
      const width = px(Math.max(1.5, to - from - 1));
      const look = missing
        ? html`fill="none" stroke="${ink(token)}" stroke-dasharray="2 2"`
        : html`fill="${ink(token)}"`;
      return html`<rect x="${px(from + 0.5)}" y="${y + dy}" width="${width}" height="${h}" rx="1.5" ${look}><title>${first.name}, ${input.intervals[t].name}: ${periodText(period)}</title></rect>`;
    });
  });
  return belongs(others.length === 0 ? member : undefined, [
    html`<rect x="0" y="${y}" width="${axis.left - 6}" height="${ROW}" fill="none"/>`,
    member !== undefined && marker(member.theme, axis.left - 18, y + 9, 4),
    label(axis.left - 30, y + 13, fitted(text, axis.left - 34), { anchor: "end" }),
    marks.map((one) => one as Html),
    html`<title>${listWords(row.covariates.map((one) => one.name))}</title>`,
  ]);
}

/** Covariates made from others have no window of their own. */
function derived(cast: Cast, input: ReportInput): string {
  const own = new Set(input.covariates.map((one) => one.name));
  const made = cast.members.map((one) => one.name).filter((name) => !own.has(name));
  return made.length === 0 ? "" : ` Made from others, and so without a row: ${listWords(made)}.`;
}
