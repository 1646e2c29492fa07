import { civil, type Day, dayOf } from "../data/day.ts";
import { cut, pad, plain, type Style } from "./style.ts";

/** A window as the plan has it, days as YYYY-MM-DD, both within it. */
interface Drawn {
  readonly covariate: string;
  readonly firstDay: string;
  readonly lastDay: string;
}

/** The interval that is drawn, end exclusive. */
interface Span {
  readonly name: string;
  readonly start: Day;
  readonly end: Day;
}

/** Columns of a month at most, so that the months' initials stand apart. */
const PER_MONTH = 4;
const MONTHS = "JFMAMJJASOND";

/**
 * The windows of one interval as a calendar: a head with a letter where each month begins, a line for the interval, and
 * one for each covariate with its window. A window shorter than a column still has one. Nothing without dates.
 */
export function timelineLines(
  windows: readonly Drawn[],
  span: Span,
  { style, width }: { readonly style: Style; readonly width: number },
): string[] {
  const dated = windows.filter((one) => one.firstDay !== "");
  if (dated.length === 0 || !Number.isFinite(span.start)) return [];
  const from = Math.min(span.start, ...dated.map((one) => dayIn(one.firstDay)));
  const to = Math.max(span.end, ...dated.map((one) => dayIn(one.lastDay) + 1));
  const label = Math.min(28, Math.max(12, ...dated.map((one) => plain(one.covariate).length))) + 2;
  const months = Math.ceil((to - from) / 30.4);
  const columns = Math.max(12, Math.min(width - label - 1, months * PER_MONTH));
  const at = (day: Day) => Math.floor(((day - from) / (to - from)) * columns);
  const bar = (start: Day, end: Day, full: string, rest: string) => {
    const a = Math.min(columns - 1, at(start));
    const b = Math.max(a + 1, Math.min(columns, at(end)));
    return rest.repeat(a) + full.repeat(b - a) + rest.repeat(columns - b);
  };
  return [
    style.strong(`windows of ${plain(span.name)}`),
    pad("", label) + style.faint(monthLine(from, to, columns, at)),
    `${pad("interval", label)}${bar(span.start, span.end, "─", " ")}`.trimEnd(),
    ...dated.map(
      (one) =>
        pad(cut(plain(one.covariate), label - 2), label) +
        bar(dayIn(one.firstDay), dayIn(one.lastDay) + 1, "█", "·"),
    ),
  ];
}

function monthLine(from: Day, to: Day, columns: number, at: (day: Day) => number): string {
  const line = Array.from({ length: columns }, () => " ");
  const { year, month } = civil(from);
  for (let k = 0; ; k++) {
    const first = dayOf(year + Math.floor((month - 1 + k) / 12), ((month - 1 + k) % 12) + 1, 1);
    if (first >= to) break;
    if (first < from) continue;
    const column = at(first);
    if (line[column] === " ") line[column] = MONTHS[(month - 1 + k) % 12];
  }
  return line.join("").trimEnd();
}

function dayIn(text: string): Day {
  const [year, month, day] = text.split("-").map(Number);
  return dayOf(year, month, day);
}
