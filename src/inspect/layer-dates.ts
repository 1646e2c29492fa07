import { periodText } from "../data/period.ts";
import { InputError } from "../errors.ts";
import { periodsOf, stemOf } from "../layers/dates.ts";
import type { ImageCover } from "../layers/options.ts";
import { guessPattern } from "./layer-stanza.ts";

/**
 * What the images of a file seem to stand for, by a date in its name (one band) or in its bands' descriptions: a period
 * for each band. Empty if neither holds a date. `spacing` is what the images beside this one say, if they say anything.
 */
export function guessDates(
  path: string,
  descriptions: readonly string[],
  spacing?: { readonly covers: ImageCover },
): readonly string[] {
  const inName = guessPattern(stemOf(path));
  const inBands = guessPattern(descriptions[0] ?? "");
  const named = inName !== undefined && descriptions.length === 1;
  const guess = named ? inName : inBands;
  if (guess === undefined) return [];
  try {
    // The parts of the date alone: descriptions may differ in what stands round it.
    const pattern = /\{.*\}/.exec(guess.pattern)?.[0] ?? guess.pattern;
    const date = named ? { name: pattern } : { band: pattern };
    // The stanza's guesses are words of the union, or they would not be pasted.
    const covers = named && spacing !== undefined ? spacing.covers : (guess.covers as ImageCover);
    return periodsOf(path, descriptions, { date, covers }).map(periodText);
  } catch (error) {
    if (error instanceof InputError) return [];
    throw error;
  }
}
