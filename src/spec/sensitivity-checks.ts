import type { KeyPath } from "./path.ts";
import type { Problem } from "./problems.ts";
import { unknownName } from "./read-covariates.ts";
import type { Spec } from "./spec.ts";

/** What the alternatives say of themselves and of the rest of the pipeline. */
export function sensitivityProblems(spec: Spec): Problem[] {
  const { sensitivity, covariates, captures, occasions } = spec;
  if (sensitivity === undefined) return [];
  const problems: Problem[] = [];
  const at = (i: number, ...keys: string[]): KeyPath => ["sensitivity", "alternatives", i, ...keys];
  const needs = (path: KeyPath, expected: string, found: string, remedy: string) =>
    problems.push({ name: "spec.needs", path, expected, found, remedy });
  if (captures === undefined)
    needs(
      ["sensitivity"],
      "captures, for alternatives to select from",
      "no captures",
      "add the section captures",
    );
  const seen = new Set<string>();
  const observed = covariates.filter((one) => one.source !== "ready-made").map((one) => one.name);
  sensitivity.alternatives.forEach((one, i) => {
    if (seen.has(one.name))
      problems.push({
        name: "spec.repeated-name",
        path: at(i, "name"),
        expected: "each alternative's name once",
        found: `${JSON.stringify(one.name)} again`,
        remedy: "give one of the two another name",
      });
    seen.add(one.name);
    const { name: _, of, window, lag, statistic, ...rest } = one;
    const values = window !== undefined || lag !== undefined || statistic !== undefined;
    if (of !== undefined && !observed.includes(of))
      problems.push(
        unknownName(
          at(i, "of"),
          "a covariate with a window of its own",
          of,
          observed,
          "name a covariate from stations or a layer",
        ),
      );
    if (values && of === undefined)
      needs(at(i), "the covariate whose window, lag or statistic changes", "no key of", "add of: its name");
    if (of !== undefined && !values)
      needs(at(i, "of"), "a window, lag or statistic that changes", "none of them", "add one of them");
    if (!values && of === undefined && Object.keys(rest).length === 0)
      needs(at(i), "something that differs from the study", "only a name", "add a window, lag, criterion …");
    if (one.recapture === "effort" && occasions?.effort === undefined)
      needs(
        at(i, "recapture"),
        "a column of effort among the occasions",
        "no effort",
        "add effort: to the occasions, or choose another recapture part",
      );
  });
  return problems;
}
