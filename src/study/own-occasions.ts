import type { Interval, Occasion } from "../data/occasion.ts";
import { InputError } from "../errors.ts";
import { intervalName } from "./occasions.ts";

/** Occasions that only a table's columns name: no dates, no effort. */
export function namedOccasions(names: readonly string[]): readonly Occasion[] {
  return names.map((name, index) => ({
    index,
    name,
    first: Number.NaN,
    last: Number.NaN,
    effort: Number.NaN,
  }));
}

/** Their intervals, of length 1 unless told otherwise. Throws `study.lengths`. */
export function undatedIntervals(
  occasions: readonly Occasion[],
  lengths: readonly number[] | undefined,
): readonly Interval[] {
  const count = occasions.length - 1;
  if (lengths !== undefined && (lengths.length !== count || lengths.some((one) => !(one > 0))))
    throw new InputError({
      name: "study.lengths",
      expected: `${count} interval lengths in years, each above 0`,
      found: `[${lengths.join(", ")}]`,
      where: { cell: "captures.lengths" },
      remedy: "give one length for each interval, or leave the key out for 1 year each",
    });
  return occasions.slice(1).map((after, index) => ({
    index,
    name: intervalName(occasions[index], after),
    start: Number.NaN,
    end: Number.NaN,
    length: lengths?.[index] ?? 1,
  }));
}
