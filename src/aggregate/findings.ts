import type { FindingKind, RawFinding } from "../data/finding.ts";
import type { Interval } from "../data/occasion.ts";
import type { Joined } from "./join.ts";
import type { WindowValue } from "./result.ts";
import type { SiteWindow } from "./site-window.ts";
import type { WindowPeriods } from "./window.ts";

/** One site over all intervals. */
export interface SiteRow {
  readonly site: string;
  readonly windows: readonly (SiteWindow | undefined)[];
}

const NAMED = 3;

/** The first few of a list, and how many more there are. */
function few(items: readonly string[]): string {
  const more = items.length - NAMED;
  return items.slice(0, NAMED).join("; ") + (more > 0 ? `; and ${more} more` : "");
}

function windowFindings(
  name: string,
  intervals: readonly Interval[],
  windows: readonly WindowPeriods[],
): RawFinding[] {
  const remedies: Readonly<Record<"window-empty" | "window-leak", string>> = {
    "window-empty": "choose a season that lies between two occasions, or a span counted from an occasion",
    "window-leak": "end the window at the end occasion: what comes after cannot act on survival before",
  };
  return (["window-empty", "window-leak"] as const).flatMap((kind: FindingKind & keyof typeof remedies) => {
    const which = intervals.filter((_, t) => windows[t].problem === kind);
    if (which.length === 0) return [];
    const words = windows[intervals.indexOf(which[0])].words;
    const message = `${which.length} of ${intervals.length} intervals: ${which[0].name} ${words}`;
    const others = which.slice(1).map((one) => one.name);
    return [
      {
        kind,
        subject: name,
        message: others.length === 0 ? message : `${message}; so do ${few(others)}`,
        where: { cell: `${name}, ${which[0].name}` },
        count: which.length,
        remedy: remedies[kind],
      },
    ];
  });
}

/** Intervals that have a window but no value. */
function incompleteFinding(
  name: string,
  intervals: readonly Interval[],
  values: readonly WindowValue[],
): RawFinding[] {
  const bad = intervals.filter((_, t) => values[t].period !== undefined && values[t].failed !== undefined);
  if (bad.length === 0) return [];
  const told = bad.map((interval) => `${interval.name} (${values[intervals.indexOf(interval)].failed})`);
  return [
    {
      kind: "incomplete",
      subject: name,
      message: `${bad.length} of ${intervals.length} intervals have no value: ${few(told)}`,
      where: { cell: `${name}, ${bad[0].name}` },
      count: bad.length,
      remedy: "add the days, choose another station or window, or loosen `complete`",
    },
  ];
}

/** Stations that never gave a complete window, beside others that did. */
function absentFindings(name: string, rows: readonly SiteRow[], joined: Joined): RawFinding[] {
  if (joined.absent.length === rows.length) return [];
  return joined.absent.map((s) => {
    const { site, windows } = rows[s];
    const due = windows.filter((one) => one !== undefined);
    const why = due.find((one) => one.failed !== undefined)?.failed ?? "no window";
    return {
      kind: "incomplete",
      subject: name,
      message: `${site} is complete in none of ${due.length} intervals and takes no part (first: ${why})`,
      where: { cell: `${name}, ${site}` },
      count: due.length,
      remedy: "leave the station out, or loosen `complete`",
    };
  });
}

function changingFinding(
  name: string,
  intervals: readonly Interval[],
  rows: readonly SiteRow[],
  joined: Joined,
  partialDays: readonly number[],
): RawFinding[] {
  const remedy = "use stations that are there all along, or fill their gaps";
  const taking = rows.filter((_, s) => !joined.absent.includes(s));
  if (joined.changing.length > 0) {
    const told = joined.changing.map((t) => {
      const away = taking.filter((row) => Number.isNaN(row.windows[t]?.value ?? Number.NaN));
      return `${intervals[t].name} lacks ${away.map((row) => row.site).join(", ")}`;
    });
    const message =
      `the stations change in ${joined.changing.length} of ${intervals.length} intervals (${few(told)}); ` +
      "departures from each one's base mean are averaged and the base is added back";
    const where = { cell: `${name}, ${intervals[joined.changing[0]].name}` };
    return [
      { kind: "changing-stations", subject: name, message, where, count: joined.changing.length, remedy },
    ];
  }
  const touched = intervals.filter((_, t) => partialDays[t] > 0);
  if (touched.length === 0) return [];
  const days = partialDays.reduce((sum, one) => sum + one, 0);
  const message =
    `on ${days} days in ${touched.length} of ${intervals.length} intervals some of the stations have no value; ` +
    "the others' values are reduced by how far each stands above the mean of all in that month";
  const where = { cell: `${name}, ${touched[0].name}` };
  return [{ kind: "changing-stations", subject: name, message, where, count: days, remedy }];
}

/** Everything a person should know of one covariate, each kind once, with counts. */
export function findingsOf(
  name: string,
  intervals: readonly Interval[],
  windows: readonly WindowPeriods[],
  values: readonly WindowValue[],
  rows: readonly SiteRow[],
  joined: Joined,
  partialDays: readonly number[],
): RawFinding[] {
  return [
    ...windowFindings(name, intervals, windows),
    ...incompleteFinding(name, intervals, values),
    ...absentFindings(name, rows, joined),
    ...changingFinding(name, intervals, rows, joined, partialDays),
  ];
}
