import { cut, pad, plain, type Style } from "./style.ts";

/** One window of the plan, as the terminal needs it. */
interface WindowRow {
  readonly covariate: string;
  readonly interval: string;
  readonly firstDay: string;
  readonly lastDay: string;
  readonly daysDue: number;
  readonly problem?: string;
}

export interface WindowPlanOptions {
  readonly style: Style;
  readonly width: number;
  /** A line per covariate and interval; otherwise one per covariate with a mark per interval. */
  readonly every: boolean;
}

/** How full a window is: all days, most, some, none, not known before pixels are read, no window. */
const MARKS = { full: "█", most: "▓", some: "▒", none: "░", unknown: "·", absent: "×" } as const;

function mark(row: WindowRow, covered: number | undefined): string {
  if (row.problem !== undefined || row.daysDue === 0) return MARKS.absent;
  if (covered === undefined) return MARKS.unknown;
  const share = covered / row.daysDue;
  return share >= 1 ? MARKS.full : share >= 0.9 ? MARKS.most : share > 0 ? MARKS.some : MARKS.none;
}

/** The window plan: covariate × interval, with the days due and how many of them have data. */
export function windowPlanLines(
  windows: readonly WindowRow[],
  covered: ReadonlyMap<string, readonly number[]>,
  options: WindowPlanOptions,
): string[] {
  const { style } = options;
  const names = [...new Set(windows.map((one) => one.covariate))];
  const label = Math.min(28, Math.max(0, ...names.map((name) => plain(name).length))) + 2;
  const lines = names.flatMap((name) => {
    const rows = windows.filter((one) => one.covariate === name);
    const days = covered.get(name);
    if (options.every)
      return [
        style.strong(plain(name)),
        ...rows.map((row, t) =>
          row.firstDay === ""
            ? `  ${pad(plain(row.interval), 16)} no window`
            : `  ${pad(plain(row.interval), 16)} ${row.firstDay} to ${row.lastDay}, ${row.daysDue} days due, ${days === undefined ? "data not read yet" : `${days[t]} with data`}`,
        ),
      ];
    const marks = rows.map((row, t) => mark(row, days?.[t])).join("");
    const [first] = rows;
    const span = first.firstDay === "" ? "no window" : `${first.firstDay} to ${first.lastDay}`;
    return [`${pad(cut(plain(name), label - 2), label)}${marks}  ${style.faint(`first ${span}`)}`];
  });
  const key = `${MARKS.full} all days  ${MARKS.most} 90 % or more  ${MARKS.some} fewer  ${MARKS.none} none  ${MARKS.unknown} layer, not read yet  ${MARKS.absent} no window`;
  return options.every ? lines : [...lines, style.faint(key)];
}
