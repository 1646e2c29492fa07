import { z } from "zod";
import { FINDING_KINDS, type FindingKind } from "../data/finding.ts";
import { years } from "./schema-covariates.ts";
import { DEFAULT_SEVERITY } from "./severity.ts";
import {
  allStated,
  choice,
  inputPath,
  keys,
  list,
  named,
  number,
  oneOf,
  prose,
  shared,
  someOf,
  stated,
  text,
} from "./words.ts";

export const prepare = allStated("how the matrix is prepared", {
  transform: stated(
    named(
      "transforms by covariate",
      "the name of a covariate",
      choice("a transform", ["log", "log1p", "square root", "logit"]),
    ),
    {},
  ),
  detrend: stated(choice("how trends are taken out", ["none", "linear", "difference"]), "none"),
  incomplete: stated(choice("what happens to columns with gaps", ["leave out", "mean", "stop"]), "leave out"),
  standardise: stated(
    oneOf(
      "how columns are standardised: sample, none or { base: 1991 to 2020 }",
      [
        choice("a rule by name", ["sample", "none"]),
        keys("a fixed base period", { base: years("the base period, at least 20 years") }),
      ],
      "sample",
    ),
    "sample",
  ),
});

export const collinearity = allStated("when covariates are too alike", {
  warn: allStated("the levels above which a warning is given", {
    correlation: stated(number("the absolute correlation", 0.7, { above: 0, max: 1 }), 0.7),
    inflation: stated(number("the variance inflation", 10, { min: 1 }), 10),
    condition: stated(number("the condition index", 30, { min: 1 }), 30),
  }),
  cluster: stated(
    number("the absolute correlation that holds a cluster together", 0.7, { above: 0, max: 1 }),
    0.7,
  ),
  priority: list(
    "covariates by importance: pruning drops the last of them first",
    text("the name of a covariate"),
    ["winter rain"],
  ).optional(),
  decisions: stated(
    list(
      "your own decisions between covariates",
      keys("a decision", {
        drop: text("the covariate to drop", "last summer"),
        keep: text("the covariate kept in its place", "hot spell").optional(),
        note: prose("the reason", "same weeks"),
      }),
    ),
    [],
  ),
});

/** Settings of Horn's parallel analysis where it is only named. */
export const PARALLEL = { replicates: 1000, quantile: 0.95 } as const;

export const components = allStated("the principal components", {
  keep: stated(
    oneOf(
      "how many components are kept: broken stick, eigenvalue, parallel, { share: … } or { number: … }",
      [
        choice("a rule by name", ["broken stick", "eigenvalue", "parallel"]),
        keys("parallel analysis with settings", {
          parallel: keys("settings of the parallel analysis", {
            replicates: stated(
              number("the number of random data sets", 1000, { min: 50, max: 100_000, whole: true }),
              PARALLEL.replicates,
            ),
            quantile: stated(
              number("the quantile of their eigenvalues", 0.95, { above: 0, below: 1 }),
              PARALLEL.quantile,
            ),
          }),
        }),
        keys("a share of the variance", {
          share: number("the share of variance", 0.8, { above: 0, max: 1 }),
        }),
        keys("a fixed number", {
          number: number("the number of components", 3, { min: 1, max: 1000, whole: true }),
        }),
      ],
      "broken stick",
    ),
    "broken stick",
  ),
  within: stated(
    oneOf(
      "the columns that are taken together: all, themes, or groups by name such as { water: [winter rain, snow] }",
      [
        choice("a rule by name", ["all", "themes"]),
        named(
          "groups of covariates by name; those in none form a group of their own",
          "the name of a group",
          someOf("the covariates of the group", text("the name of a covariate", "winter rain"), [
            "winter rain",
          ]),
        ),
      ],
      "all",
    ),
    "all",
  ),
  simplify: stated(
    choice("loadings by which the components kept can be named, beside their own", [
      "none",
      "varimax",
      "sparse",
    ]),
    "none",
  ),
  resamples: stated(
    number("the resamples of the intervals that tell how sure the loadings are; 0 for none", 400, {
      min: 0,
      max: 100_000,
      whole: true,
    }),
    0,
  ),
});

export const screen = allStated("the adaptive-lasso screen", {
  steps: stated(
    number("the number of penalties on the path", 100, { min: 2, max: 10_000, whole: true }),
    100,
  ),
  "down to": stated(
    number("the least penalty as a share of the greatest", 0.001, { above: 0, below: 1 }),
    0.001,
  ),
  gamma: stated(number("the power of the adaptive weights", 1, { min: 0, max: 10 }), 1),
  "choose by": stated(
    choice("the criterion that chooses the penalty", ["BIC", "AICc", "extended BIC", "QBIC", "QAICc"]),
    "BIC",
  ),
  "sample size": stated(
    choice("what the criterion counts as one observation", ["releases", "animals", "intervals"]),
    "releases",
  ),
  fit: stated(choice("the fit at which the criterion is taken", ["shrunken", "refit"]), "shrunken"),
  permutations: stated(
    number("the permutations of years over the whole procedure", 199, { min: 0, max: 100_000, whole: true }),
    199,
  ),
  resamples: stated(
    number("the times the study is drawn again, years and animals anew, and screened; 0 for none", 50, {
      min: 0,
      max: 100_000,
      whole: true,
    }),
    50,
  ),
});

const SEVERITIES = ["accept", "warn", "stop"] as const;
const KEEP = ["first", "last", "none"] as const;
const severity = shared("severity", choice("what is done about findings of a kind", SEVERITIES));
const note = () => prose("the reason", "typed twice");
const exceptionFile = () => inputPath("the file it holds for", "stations/upland.csv");

const exceptions = stated(
  list(
    "exceptions",
    shared(
      "exception",
      keys("an exception for a file or a subject", {
        file: exceptionFile().optional(),
        subject: text("the station, covariate, animal or layer it holds for", "Ash").optional(),
        do: stated(choice("what is done instead", SEVERITIES), "accept"),
        note: note(),
      }),
    ),
  ),
  [],
);

const duplicateSettings = {
  keep: stated(choice("which of contradicting rows stands", KEEP), "none"),
  except: stated(
    list(
      "exceptions",
      keys("an exception for a file", {
        file: exceptionFile(),
        keep: choice("which of contradicting rows stands", KEEP),
        note: note(),
      }),
    ),
    [],
  ),
};

function policy(kind: FindingKind) {
  const settings = kind === "duplicate" ? duplicateSettings : { except: exceptions };
  return stated(
    oneOf(`what is done about findings of the kind ${kind}: accept, warn, stop, or { do: …, except: … }`, [
      severity,
      keys("what is done, with exceptions", { do: stated(severity, DEFAULT_SEVERITY[kind]), ...settings }),
    ]),
    DEFAULT_SEVERITY[kind],
  );
}

export const findings = z
  .strictObject(Object.fromEntries(FINDING_KINDS.map((kind) => [kind, policy(kind)])))
  .meta({ description: "what is done about each kind of finding" })
  .prefault({});
