import { civil, type Day, dayOf } from "../data/day.ts";
import { InputError } from "../errors.ts";
import { periodsOf, stemOf } from "../layers/dates.ts";
import type { ImageCover } from "../layers/options.ts";
import { guessPattern } from "./layer-stanza.ts";

/** Composites this many days long are usually counted anew from each 1 January. */
const COMPOSITES = [8, 16];

/** How long each image counts, and how the pipeline file says so. */
export interface Spacing {
  readonly covers: ImageCover;
  readonly text: string;
}

/**
 * What each image of a row of files most likely stands for, by the days in their names: `8 days anew each year`, `16 days
 * anew each year`, `dekad` or `month`, where each day fits that calendar and most of them follow each other in it.
 * Undefined where they do not, or are too few to tell.
 */
export function guessSpacing(paths: readonly string[]): Spacing | undefined {
  const days = [...new Set(paths.flatMap(dayIn))].sort((a, b) => a - b);
  const steps = days.slice(1).map((day, i) => day - days[i]);
  if (steps.length < 3) return undefined;
  /** Gaps of missing files apart, so many steps are of the calendar. */
  const mostly = (fits: (step: number) => boolean) => steps.filter(fits).length > 0.6 * steps.length;
  const monthDays = days.map((day) => civil(day).day);
  for (const length of COMPOSITES)
    if (
      days.every((day) => (day - dayOf(civil(day).year, 1, 1)) % length === 0) &&
      mostly((step) => step === length)
    )
      return { covers: { days: length, anew: true }, text: `${length} days anew each year` };
  if (monthDays.every((day) => [1, 11, 21].includes(day)) && mostly((step) => step >= 8 && step <= 11))
    return { covers: "dekad", text: "dekad" };
  if (monthDays.every((day) => day === 1) && mostly((step) => step >= 28 && step <= 31))
    return { covers: "month", text: "month" };
  return undefined;
}

/** The one day in a file's name, if it holds a whole date. */
function dayIn(path: string): Day[] {
  const guess = guessPattern(stemOf(path));
  const pattern = /\{.*\}/.exec(guess?.pattern ?? "")?.[0];
  if (guess?.covers !== "day" || pattern === undefined) return [];
  try {
    return periodsOf(path, [""], { date: { name: pattern }, covers: "day" }).map(({ start }) => start);
  } catch (error) {
    if (error instanceof InputError) return [];
    throw error;
  }
}
