import type { Detection, DetectionRow, Rule } from "./detect.ts";

/** A power that is usually held to be enough (common practice, no source). */
const ENOUGH = 0.8;
/** Below this share an effect is missed more often than not. */
const HALF = 0.5;

/** What the numbers say, in plain sentences: first the answer, then what is chosen wrongly. */
export function detectionSentences(detection: Detection): readonly string[] {
  return [answer(detection), beside(detection), mistakes(detection)].filter((one) => one !== "");
}

/** The row the answer speaks of: the smallest effect that is found often enough, else the largest on the grid. */
function shownRow(rows: readonly DetectionRow[]): DetectionRow | undefined {
  const years = rowsOf(rows, "counting years").filter((one) => one.effect > 0);
  return years.find((one) => one.found.share >= ENOUGH) ?? years.at(-1);
}

/** "With this design an effect of 0.4 per sd would be found in 61 % of studies counting years; effects below …". */
function answer({ rows, covariates }: Detection): string {
  const shown = shownRow(rows);
  if (shown === undefined) return "";
  const what = covariates.length === 1 ? "an effect" : "effects";
  const found = `With this design ${what} of ${shown.effect} per sd would be found in ${percent(shown.found.share)} of studies counting years`;
  // all sizes below the first that is found at least every second time
  const years = rowsOf(rows, "counting years").filter((one) => one.effect > 0);
  const first = years.findIndex((one) => one.found.share >= HALF);
  if (first < 0) return `${found}; no effect on the grid would be found in half of them.`;
  return first === 0 ? `${found}.` : `${found}; effects below ${years[first].effect} would mostly be missed.`;
}

/** Where rivals name the truth clearly more often than the choice does, that is worth a sentence. */
function beside({ rows }: Detection): string {
  const row = shownRow(rows);
  if (row === undefined || !(row.foundOrRival.low > row.found.high)) return "";
  return `With rivals counted ("this or that") it would be named in ${percent(row.foundOrRival.share)}, not ${percent(row.found.share)}.`;
}

function mistakes({ rows }: Detection): string {
  const share = (rule: Rule, effect: number) =>
    rowsOf(rows, rule).find((one) => one.effect === effect)?.unrelated.share;
  const [years, animals] = [share("counting years", 0), share("counting animals", 0)];
  if (years !== undefined && animals !== undefined)
    return `Where nothing acts, something is chosen all the same in ${percent(years)} counting years and in ${percent(animals)} counting animals.`;
  const worst = (rule: Rule) => Math.max(...rowsOf(rows, rule).map((one) => one.unrelated.share));
  return `Something unrelated to the truth is chosen in up to ${percent(worst("counting years"))} counting years and up to ${percent(worst("counting animals"))} counting animals.`;
}

function rowsOf(rows: readonly DetectionRow[], rule: Rule): readonly DetectionRow[] {
  return rows.filter((one) => one.rule === rule);
}

function percent(share: number): string {
  return `${Math.round(100 * share)} %`;
}
