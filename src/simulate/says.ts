import type { Detection, DetectionRow, Rule } from "./detect.ts";

/** A power that is usually held to be enough (common practice, no source). */
const ENOUGH = 0.8;
/** Below this share an effect is missed more often than not. */
const HALF = 0.5;

/** What the numbers say, in plain sentences: first the answer, then what is chosen wrongly. */
export function detectionSentences(detection: Detection): readonly string[] {
  return [answer(detection), beside(detection), mistakes(detection)].filter((one) => one !== "");
}

/** "With this design an effect of 0.4 per sd would be found in 61 % of studies counting years; effects below …". */
function answer({ rows, covariates }: Detection): string {
  const years = rowsOf(rows, "counting years").filter((one) => one.effect > 0);
  if (years.length === 0) return "";
  const shown = years.find((one) => one.found.share >= ENOUGH) ?? years[years.length - 1];
  const what = covariates.length === 1 ? "an effect" : "effects";
  const found = `With this design ${what} of ${shown.effect} per sd would be found in ${percent(shown.found.share)} of studies counting years`;
  // all sizes up to the first that is found at least every second time
  const first = years.findIndex((one) => one.found.share >= HALF);
  if (first < 0) return `${found}; no effect on the grid would be found in half of them.`;
  return first === 0 ? `${found}.` : `${found}; effects below ${years[first].effect} would mostly be missed.`;
}

/** Where rivals name the truth clearly more often than the choice does, that is worth a sentence. */
function beside({ rows, covariates }: Detection): string {
  const row = rowsOf(rows, "counting years")
    .filter((one) => one.effect > 0)
    .find((one) => one.foundOrRival.low > one.found.high);
  if (row === undefined) return "";
  return `With rivals counted ("this or that") ${covariates.length === 1 ? "an effect" : "effects"} of ${row.effect} would be named in ${percent(row.foundOrRival.share)}, not ${percent(row.found.share)}.`;
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
