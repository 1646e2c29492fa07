import type { Resampling, World } from "../simulate/resampling.ts";
import { number, text, whole } from "./columns.ts";
import type { Table } from "./table.ts";

/** How often each covariate is chosen when the study is drawn again, beside its null. */
export function resamplingTable({ names, replicates, signs, worlds }: Resampling): Table {
  const of = (world: World) => worlds.find((one) => one.world === world);
  const [years, none, same] = [of("new years"), of("null"), of("same years")];
  const share = (name: string, title: string, what: string) => number(name, title, "1", what);
  return {
    name: "selection-frequency",
    title: "How often each covariate is chosen when the study is drawn again",
    description: `${replicates} resamples from each world, the whole procedure repeated. New years: years and animals drawn from the random-interval model with the covariates chosen by years. Null: from the same model without covariates. Same years: animals only, so that what was special about these years comes back every time. Empty where nothing was chosen by years.`,
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      share("new_years", "by years, new years", "chosen by years; years and animals drawn anew"),
      share("null", "by years, null", "chosen by years where nothing acts"),
      share("same_sign", "same direction", "of those chosen with new years, effect as in the study"),
      share("same_years", "by years, same years", "chosen by years; animals only, same years"),
      share("animals_new_years", "by animals, new years", "chosen by the criterion that counts animals"),
      share(
        "animals_null",
        "by animals, null",
        "chosen by the criterion that counts animals, nothing acting",
      ),
      share("animals_same_years", "by animals, same years", "the same; animals only, same years"),
      whole("direction", "direction", "1", "1 raises survival in the study, −1 lowers it"),
    ],
    rows: names.map((name, k) => [
      name,
      years?.byYears[k],
      none?.byYears[k],
      years?.sameSign[k],
      same?.byYears[k],
      years?.byAnimals[k],
      none?.byAnimals[k],
      same?.byAnimals[k],
      signs[k],
    ]),
  };
}

/** How often two covariates are chosen together; pairs that never were are left out. */
export function togetherTable({ names, worlds }: Resampling): Table {
  const of = (world: World) => worlds.find((one) => one.world === world);
  const [years, none] = [of("new years"), of("null")];
  const K = names.length;
  const pairs = names.flatMap((_, a) => names.flatMap((_, b) => (a < b ? [[a, b] as const] : [])));
  return {
    name: "chosen-together",
    title: "Covariates chosen together when the study is drawn again",
    description:
      "Shares of resamples in which the choice by years holds both; pairs never chosen are left out.",
    columns: [
      text("a", "covariate", "one of the two"),
      text("b", "with", "the other"),
      number("new_years", "new years", "1", "both chosen; years and animals drawn anew"),
      number("null", "null", "1", "both chosen where nothing acts"),
    ],
    rows: pairs
      .filter(([a, b]) => worlds.some((one) => one.together[a * K + b] > 0 && one.world !== "same years"))
      .map(([a, b]) => [names[a], names[b], years?.together[a * K + b], none?.together[a * K + b]]),
  };
}
