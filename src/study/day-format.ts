import { civil, type Day, dayOf, isCivilDate } from "../data/day.ts";
import { InputError } from "../errors.ts";

const FIELD = /yyyy|MM|dd|DDD|D|M|d/g;
const DIGITS: Readonly<Record<string, string>> = {
  yyyy: "(?<year>\\d{4})",
  MM: "(?<month>\\d{2})",
  M: "(?<month>\\d{1,2})",
  dd: "(?<day>\\d{2})",
  d: "(?<day>\\d{1,2})",
  DDD: "(?<yearday>\\d{3})",
  D: "(?<yearday>\\d{1,3})",
};

/**
 * A reader of civil dates by a Unicode pattern of yyyy, MM or M, dd or d (or D, the day of the year) and separators,
 * e.g. `dd.MM.yyyy`. The reader gives NaN for text that is not a date of the calendar in just this form.
 * Throws `study.date-format` for a pattern that does not name year, month and day, or year and D, once each.
 */
export function dayReader(format: string, cell: string): (text: string) => Day {
  const fields = format.match(FIELD) ?? [];
  const letters = fields
    .map((one) => one[0])
    .sort()
    .join("");
  if (!["Mdy", "Dy"].includes(letters) || /[A-Za-z]/.test(format.replace(FIELD, "")))
    throw new InputError({
      name: "study.date-format",
      expected:
        "a date pattern with yyyy, MM and dd (or D, the day of the year), e.g. yyyy-MM-dd or dd.MM.yyyy",
      found: JSON.stringify(format),
      where: { cell },
      remedy: "write the pattern as the dates in the file are written; letters are case-sensitive",
    });
  const source = format
    .split(/(yyyy|MM|dd|DDD|D|M|d)/)
    .map((part) => DIGITS[part] ?? part.replace(/[.*+?^${}()|[\]\\/-]/g, "\\$&"))
    .join("");
  const pattern = new RegExp(`^${source}$`);
  return (text) => {
    const groups = pattern.exec(text)?.groups;
    if (groups === undefined) return Number.NaN;
    const year = Number(groups.year);
    if (groups.yearday !== undefined) {
      const day = dayOf(year, 1, 1) + Number(groups.yearday) - 1;
      return civil(day).year === year ? day : Number.NaN;
    }
    const [month, day] = [Number(groups.month), Number(groups.day)];
    return isCivilDate(year, month, day) ? dayOf(year, month, day) : Number.NaN;
  };
}
