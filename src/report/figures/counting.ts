import type { RefittedSet } from "../../screen/screen.ts";
import type { ReportInput } from "../input.ts";

/** What is taken for the sample: the years, or the animals. */
export type Counting = "years" | "animals";

/** The set chosen that way. Where both ways choose the same, it is drawn once, as that of the years. */
export function chosenBy({ screened }: ReportInput, counting: Counting): RefittedSet | undefined {
  if (screened === undefined) return undefined;
  const { byYears, byAnimals } = screened;
  if (counting === "years") return byYears;
  const key = (set: RefittedSet) => JSON.stringify([...set.names].sort((a, b) => (a < b ? -1 : 1)));
  return key(byYears) === key(byAnimals) ? undefined : byAnimals;
}
