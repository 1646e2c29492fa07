import { type Day, dayOf, daysInMonth, isoDay } from "../data/day.ts";
import type { Period } from "../data/period.ts";
import { InputError } from "../errors.ts";
import type { ImageCover } from "./options.ts";

/** The period that an image dated `day` stands for: the month (dekad, year) that holds it, or so many days from it. */
export function coveredPeriod(day: Day, covers: ImageCover): Period {
  if (typeof covers === "object") {
    const end = day + covers.days;
    const [year] = isoDay(day).split("-").map(Number);
    return { start: day, end: covers.anew === true ? Math.min(end, dayOf(year + 1, 1, 1)) : end };
  }
  if (covers === "bounds") throw noAxis(undefined);
  if (covers === "day") return { start: day, end: day + 1 };
  const [year, month, dom] = isoDay(day).split("-").map(Number);
  if (covers === "year") return { start: dayOf(year, 1, 1), end: dayOf(year + 1, 1, 1) };
  if (covers === "month") return { start: dayOf(year, month, 1), end: dayOf(year, month + 1, 1) };
  // Dekads are days 1–10, 11–20 and 21 to the month's end.
  const first = dom <= 10 ? 1 : dom <= 20 ? 11 : 21;
  const last = first === 21 ? daysInMonth(year, month) : first + 9;
  return { start: dayOf(year, month, first), end: dayOf(year, month, last) + 1 };
}

export function noAxis(file: string | undefined): InputError {
  return new InputError({
    name: "layers.no-time-axis",
    expected: "a NetCDF file with a time axis, where images are dated or covered by it",
    found: "a file without",
    ...(file === undefined ? {} : { where: { file } }),
    remedy: "date the images by name, band or first and step, and write what they cover",
  });
}
