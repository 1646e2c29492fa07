import { compilePattern } from "../data/date-pattern.ts";
import type { Day } from "../data/day.ts";
import { InputError } from "../errors.ts";

/**
 * A reader of civil dates by a Unicode pattern of yyyy, MM or M, dd or d (or D, the day of the year) and separators,
 * e.g. `dd.MM.yyyy`. The reader gives NaN for text that is not a date of the calendar in just this form.
 * Throws `study.date-format` for a pattern that does not name year, month and day, or year and D, once each.
 */
export function dayReader(format: string, cell: string): (text: string) => Day {
  const pattern = compilePattern(format, true);
  const fields = "wrong" in pattern ? "" : [...pattern.fields].sort().join(", ");
  if ("wrong" in pattern || !["day, month, year", "day, month name, year", "year, yearday"].includes(fields))
    throw new InputError({
      name: "study.date-format",
      expected:
        "a date pattern with yyyy, MM and dd (or D, the day of the year), e.g. yyyy-MM-dd or dd.MM.yyyy",
      found: JSON.stringify(format),
      where: { cell },
      remedy: "write the pattern as the dates in the file are written; letters are case-sensitive",
    });
  return (text) => pattern.read(text)?.day ?? Number.NaN;
}
