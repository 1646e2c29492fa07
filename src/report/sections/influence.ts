import { listWords } from "../../data/words.ts";
import type { InfluenceRow } from "../../screen/influence.ts";
import type { Cast } from "../cast.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, show } from "../numbers.ts";
import { covariateList, grid, type Row } from "../parts.ts";

/** How far the choices hang on single intervals: the sets chosen with one left out, and which ones bring them about. */
export function influenceBlock(input: ReportInput, cast: Cast): Html | undefined {
  const rows = input.screened?.influence ?? [];
  if (input.screened === undefined || rows.length === 0) return undefined;
  const years = grouped(rows, "byYears");
  const animals = grouped(rows, "byAnimals");
  const same = years.get(key(input.screened.byYears.names))?.length ?? 0;
  const table = (words: string, sets: ReadonlyMap<string, readonly InfluenceRow[]>, of: Counted): Row[] =>
    [...sets.values()]
      .sort((a, b) => b.length - a.length || a[0].interval - b[0].interval)
      .map((found, i) => ({
        cells: [
          i === 0 ? words : "",
          covariateList(cast, found[0][of]),
          String(found.length),
          found.length > rows.length / 2
            ? "most"
            : found.map((one) => input.intervals[one.interval].name).join(", "),
        ],
      }));
  return html`<h3>One interval left out at a time</h3>
<p>Leaving out each of the ${counted(rows.length, "interval")} in turn, the choice that counts years stays the same ${same} times. An interval that changes it deserves a look at what happened in it.${carrying(input, rows)}</p>
${grid(
  cast,
  "What is chosen with one interval left out",
  [
    { text: "counting" },
    { text: "chosen", look: "w" },
    { text: "times", look: "n" },
    { text: "without", look: "w" },
  ],
  [...table("years", years, "byYears"), ...table("animals", animals, "byAnimals")],
)}`;
}

/**
 * The intervals that carry the choice by years: those without which some of it goes, else the one without which its gain is
 * least.
 */
function carrying({ screened, intervals }: ReportInput, rows: readonly InfluenceRow[]): string {
  const chosen = screened?.byYears.names ?? [];
  if (chosen.length === 0) return "";
  const named = (found: readonly InfluenceRow[]) =>
    listWords(found.map((one) => intervals[one.interval].name));
  // a rival in the place of a chosen covariate tells the same story
  const kept = (name: string, one: InfluenceRow) =>
    [name, ...(screened?.rivals.find((rival) => rival.chosen === name)?.others ?? [])].some((other) =>
      one.byYears.includes(other),
    );
  const losing = rows.filter((one) => !chosen.every((name) => kept(name, one)));
  if (losing.length > 0)
    return ` ${named(losing)} ${losing.length === 1 ? "carries" : "carry"} it: without ${losing.length === 1 ? "that interval" : "any one of them"} some of what was chosen no longer stands.`;
  const least = rows.reduce((low, one) => (one.gain < low.gain ? one : low));
  return ` No single interval carries it; it leans most on ${named([least])}, without which the gain is ${show(least.gain)}${screened?.permutation === undefined ? "" : ` instead of ${show(screened.permutation.gain)}`}.`;
}

type Counted = "byYears" | "byAnimals";

function key(names: readonly string[]): string {
  return JSON.stringify([...names].sort((a, b) => (a < b ? -1 : 1)));
}

function grouped(rows: readonly InfluenceRow[], of: Counted): Map<string, InfluenceRow[]> {
  const out = new Map<string, InfluenceRow[]>();
  for (const one of rows) out.set(key(one[of]), [...(out.get(key(one[of])) ?? []), one]);
  return out;
}
