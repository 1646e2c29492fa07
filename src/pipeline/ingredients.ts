import type { Diagnosis } from "../collinearity/result.ts";
import type { Components } from "../components/result.ts";
import type { CovariateMatrix } from "../covariates/result.ts";
import type { ScreenOptions } from "../screen/options.ts";
import type { ScreenResult } from "../screen/screen.ts";
import type { Spec } from "../spec/spec.ts";
import type { Ingested } from "./ingest.ts";
import type { Ingredients } from "./reuse/steps.ts";
import type { Posed } from "./survival-problem.ts";

// What each stage's result depends on, named as a person would look for it. A stage that comes to read something more must
// have it here: test/pipeline/reuse.test.ts changes one thing at a time and compares with a run that reuses nothing.

/** What the pipeline says of the model, whatever the keys are; all that acts through other ingredients is taken out. */
function modelOptions(spec: Spec): Ingredients {
  const {
    study,
    data,
    output,
    seed,
    occasions,
    captures,
    places,
    stations,
    records,
    layers,
    readyMade,
    ...behind
  } = spec;
  const { covariates, prepare, collinearity, components, screen, findings, duplicates, ...model } = behind;
  return Object.fromEntries(Object.entries(model).map(([key, value]) => [`${key}:`, value]));
}

/** The stages behind the covariate matrix. */
export function stageIngredients(spec: Spec, found: Ingested, matrix: CovariateMatrix) {
  const { captures, intervals, occasions, yearsOf } = found;
  const theMatrix = { "the covariate matrix": matrix };
  const candidates = { "dropped and forced covariates": [spec.collinearity.decisions, spec.survival.forced] };
  const seed = { "seed:": spec.seed };
  return {
    diagnose: () => ({ ...theMatrix, "collinearity:": spec.collinearity, "the intervals": intervals }),
    reduce: () => ({
      ...theMatrix,
      ...candidates,
      ...seed,
      "components:": spec.components,
      "the number of intervals": intervals.length,
    }),
    goodness: () => ({ "the captures": captures }),
    recapture: () => ({
      ...theMatrix,
      ...candidates,
      ...modelOptions(spec),
      "the captures": captures,
      "the occasions and intervals": [occasions, intervals, yearsOf],
    }),
    screen: ({ problem, recapture }: Posed, criterion: ScreenOptions) => ({
      ...seed,
      "the captures, candidates and recapture part": [problem, recapture],
      "screen: and ĉ between animals": criterion,
      "the number of animals": captures?.animals,
    }),
    // Makes covariates in other ways and goes through the stages again, so whatever was read and asked for matters.
    sensitivity: (criterion: ScreenOptions, set: object) => {
      const { study, data, output, findings, ...said } = spec;
      return {
        "the pipeline": { ...said, screen: criterion },
        "all that was read": found,
        "the covariates": set,
      };
    },
    resampling: (posed: Posed, screened: ScreenResult, criterion: ScreenOptions) => ({
      ...seed,
      "the captures, candidates and recapture part": posed,
      "the screen's result": screened,
      "screen: and ĉ between animals": criterion,
    }),
    compare: (
      posed: Posed,
      screened: ScreenResult,
      components: Components | undefined,
      diagnosis: Diagnosis | undefined,
    ) => ({
      "the captures, candidates and recapture part": posed,
      "the screen's result": screened,
      "the components": components,
      "the covariates kept after pruning": diagnosis?.kept,
      "collinearity:": spec.collinearity,
      "components:": spec.components,
      "the covariates and their themes": [matrix.names, matrix.recipes.map((one) => one.theme)],
      ...seed,
    }),
  };
}
