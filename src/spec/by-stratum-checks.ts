import type { ByStratum } from "../survival/options.ts";
import type { Problem } from "./problems.ts";
import { unknownName } from "./read-covariates.ts";
import type { Spec } from "./spec.ts";

const quote = (name: string) => JSON.stringify(name);

/** Covariates by stratum: their column, what they are made of, and that each of those has no other part to play. */
export function byStratumProblems(spec: Spec): Problem[] {
  return (spec.survival.byStratum ?? []).flatMap((one) => problemsOf(spec, one));
}

function problemsOf(spec: Spec, { name, by, values }: ByStratum): Problem[] {
  const { captures, covariates, prepare, survival, collinearity } = spec;
  const path = ["survival", "covariates by stratum", name];
  const names = [...covariates, ...prepare.derive].map((one) => one.name);
  const problems: Problem[] = [];
  const conflict = (at: readonly (string | number)[], expected: string, found: string, remedy: string) =>
    problems.push({ name: "spec.conflict", path: [...path, ...at], expected, found, remedy });
  if (names.includes(name))
    problems.push({
      name: "spec.repeated-name",
      path,
      expected: "each covariate name once",
      found: `${quote(name)} again`,
      remedy: "give one of the two another name",
      atKey: true,
    });
  if (captures === undefined)
    problems.push({
      name: "spec.needs",
      path,
      expected: "captures, which hold the strata",
      found: "no captures",
      remedy: "add the section captures, or remove this",
      atKey: true,
    });
  else if (!captures.strata.includes(by))
    problems.push(
      unknownName(
        [...path, "by"],
        "a stratum of the captures",
        by,
        captures.strata,
        "add it to the strata of the captures",
      ),
    );
  if (prepare.standardise.type === "base")
    conflict(
      [],
      "standardise: sample or none beside covariates by stratum, which are standardised over strata and intervals",
      "a base period",
      "write standardise: sample",
    );
  const transforms = new Set([...values.values()].map((part) => prepare.transform[part]));
  if (transforms.size > 1)
    conflict(
      ["values"],
      "one transform for all of them",
      [...transforms].map((one) => one ?? "none").join(", "),
      "write the same transform for each under prepare > transform",
    );
  for (const [level, part] of values) {
    const at = ["values", level];
    if (!names.includes(part)) {
      problems.push(
        unknownName([...path, ...at], "a covariate", part, names, "name a covariate of this file"),
      );
      continue;
    }
    if (survival.forced.includes(part))
      conflict(
        at,
        "a covariate that is not forced in by itself",
        quote(part),
        `force ${quote(name)} in instead`,
      );
    if (collinearity.decisions.some((one) => one.drop === part))
      conflict(at, "a covariate that no decision drops", quote(part), "remove the decision");
  }
  return problems;
}
