import type { World } from "../../simulate/resampling.ts";
import type { Cast } from "../cast.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, percent } from "../numbers.ts";
import { covariateName, grid } from "../parts.ts";

/** Covariates shown: those chosen at least this often somewhere. */
const LEAST = 0.05;

/** What the procedure chooses when years and animals are drawn again, beside what it chooses where nothing acts. */
export function resamplingBlock({ resampling }: ReportInput, cast: Cast): Html | undefined {
  if (resampling === undefined) return undefined;
  const { names, replicates, worlds } = resampling;
  const of = (world: World) => worlds.find((one) => one.world === world);
  const [years, none, same] = [of("new years"), of("null"), of("same years")];
  const share = (value: number | undefined) =>
    value === undefined || Number.isNaN(value) ? "–" : percent(value);
  const shown = names
    .map((_, k) => k)
    .filter((k) => worlds.some((one) => one.byYears[k] >= LEAST || one.byAnimals[k] >= LEAST))
    .sort((a, b) => (years?.byYears[b] ?? 0) - (years?.byYears[a] ?? 0) || a - b);
  const said =
    years === undefined
      ? html`Nothing was chosen by years, so there is no model with covariates to draw from.`
      : html`Drawn from the model with the covariates chosen by years, exactly the same set comes out in ${percent(years.sameByYears)} of resamples.`;
  const error = percent(Math.sqrt(0.25 / replicates));
  return html`<h3>The study drawn again</h3>
<p>${counted(replicates, "time", "times")} each, new years and new animals were drawn from the model with random interval effects, and everything was chosen anew. ${said} Drawn from the same model without covariates, where whatever is chosen is wrong, the choice by years takes something in ${share(none?.anythingByYears)}, the one that counts animals in ${share(none?.anythingByAnimals)}. A frequency means nothing without its null beside it (Monte Carlo standard error at most ${error}).</p>
${grid(
  cast,
  "How often a covariate is chosen",
  [
    { text: "covariate" },
    { text: "by years, new years and animals", look: "n" },
    { text: "by years, null", look: "n" },
    { text: "same direction", look: "n" },
    { text: "by animals, null", look: "n" },
    { text: "by animals, animals only, same years", look: "n" },
  ],
  shown.map((k) => ({
    covariate: names[k],
    cells: [
      covariateName(cast, names[k]),
      share(years?.byYears[k]),
      share(none?.byYears[k]),
      share(years?.sameSign[k]),
      share(none?.byAnimals[k]),
      share(same?.byAnimals[k]),
    ],
  })),
)}<p class="note">"Animals only, same years" keeps each year's own survival and draws only the animals: it repeats whatever chance did in these years, and so agrees with itself. It is no evidence.</p>`;
}
