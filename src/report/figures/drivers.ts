import type { RefittedSet } from "../../screen/screen.ts";
import type { Cast, Member } from "../cast.ts";
import { belongs, drawing, type Figure, fitted, label, marker, segment } from "../figure.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { px, show } from "../numbers.ts";
import { ink } from "../palette.ts";
import { extent, line, ticks, tickText } from "../scale.ts";
import type { Size } from "../size.ts";
import { type TimeAxis, timeAxis, timeLabels } from "./axis-time.ts";
import { type Counting, chosenBy } from "./counting.ts";

const LEFT = 62;
const HIGH = 104;
const PLOT = 62;

interface Driver {
  readonly name: string;
  readonly member: Member | undefined;
  readonly effect: number;
  /** Effect times standardised value, by interval. */
  readonly parts: readonly number[];
}

/** What each chosen covariate adds to logit survival in each interval, above or below its mean. */
export function drivers(counting: Counting) {
  return (input: ReportInput, cast: Cast, size: Size): Figure | undefined => {
    const set = chosenBy(input, counting);
    if (set === undefined || set.names.length === 0) return undefined;
    const rows = set.names.flatMap((name) => driverOf(input, cast, set, name) ?? []);
    if (rows.length === 0) return undefined;
    const axis = timeAxis({ ...input, covariates: [] }, LEFT, size.width - 12);
    const [low, high] = extent([0, ...rows.flatMap((one) => one.parts)]);
    const title = "What drives survival";
    const says = rows.map((one) => {
      const [least, most] = [Math.min(...one.parts), Math.max(...one.parts)];
      const at = (value: number) => input.intervals[one.parts.indexOf(value)].name;
      return `${one.name}, effect ${show(one.effect)} per sd: from ${show(least)} (${at(least)}) to ${show(most)} (${at(most)})`;
    });
    return {
      name: counting === "years" ? "survival-drivers" : "survival-drivers-by-animals",
      title,
      caption: `What each covariate chosen counting ${counting} adds to logit apparent annual survival in each interval: its effect (refitted without penalty) times its standardised value. Solid bars lift survival above that of a mean interval, hollow bars press it below. All rows share one scale.`,
      svg: drawing(
        size.width,
        rows.length * HIGH + 20,
        title,
        `${says.join("; ")} (logit)`,
        html`${rows.map((one, i) => row(input, axis, one, i * HIGH, [low, high]))}${timeLabels(input, axis, rows.length * HIGH, rows.length * HIGH + 14)}`,
      ),
    };
  };
}

function driverOf(input: ReportInput, cast: Cast, set: RefittedSet, name: string): Driver | undefined {
  const { names, standard } = input.matrix;
  const [k, at] = [names.indexOf(name), set.fit.names.indexOf(name)];
  if (k < 0 || at < 0) return undefined;
  const effect = set.fit.estimates[at];
  const parts = Array.from(
    { length: standard.rows },
    (_, t) => effect * standard.data[t * standard.columns + k],
  );
  return { name, member: cast.byName.get(name), effect, parts };
}

function row(
  input: ReportInput,
  axis: TimeAxis,
  driver: Driver,
  top: number,
  [low, high]: readonly [number, number],
): Html {
  const y0 = top + 24;
  const room = 0.06 * (high - low || 1);
  const y = line([low - room, high + room], [y0 + PLOT, y0]);
  const bars = driver.parts.map((part, t) => {
    const { start, end } = input.intervals[t];
    const [a, b] = axis.dated ? [axis.x(start), axis.x(end)] : [axis.x(t), axis.x(t + 1)];
    const wide = Math.max(2, 0.6 * (b - a));
    const [from, to] = [y(Math.max(part, 0)), y(Math.min(part, 0))];
    const lifts = part >= 0;
    return html`<rect x="${px((a + b) / 2 - wide / 2)}" y="${px(from)}" width="${px(wide)}" height="${px(to - from)}" fill="${ink(lifts ? "more" : "panel")}" stroke="${ink(lifts ? "more" : "less")}" stroke-width="1.4"><title>${driver.name}, ${input.intervals[t].name}: ${show(part)}</title></rect>`;
  });
  const head = `${driver.name}, effect ${show(driver.effect)} per sd`;
  return belongs(driver.member, [
    driver.member !== undefined && marker(driver.member.theme, axis.left - 10, top + 10),
    label(axis.left, top + 14, fitted(head, axis.right - axis.left)),
    label(14, y0 + PLOT / 2, "logit", { anchor: "middle", turn: -90, fill: "muted", size: 11 }),
    ticks(low, high, 3).map(
      (value) =>
        html`${segment(axis.left, y(value), axis.right, y(value), "rule")}${label(axis.left - 6, y(value) + 4, tickText(value), { anchor: "end", fill: "muted", size: 11 })}`,
    ),
    segment(axis.left, y(0), axis.right, y(0), "muted"),
    bars,
  ]);
}
