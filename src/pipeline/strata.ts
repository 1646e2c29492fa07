import { joinStrata } from "../covariates/by-stratum.ts";
import type { CovariateMatrix } from "../covariates/result.ts";
import { InputError } from "../errors.ts";
import type { Spec } from "../spec/spec.ts";
import { stratumLabel, stratumValues } from "../study/histories.ts";
import type { Frame, NamedColumn } from "../survival/design.ts";
import type { ByStratum } from "../survival/options.ts";
import type { Ingested } from "./ingest.ts";

/** The matrix with the covariates by stratum that the pipeline puts together from its columns. */
export function withStrata(spec: Spec, found: Ingested, matrix: CovariateMatrix): CovariateMatrix {
  const { captures } = spec;
  const asked = spec.survival.byStratum ?? [];
  if (asked.length === 0 || captures === undefined || found.captures === undefined) return matrix;
  const strata = found.captures.counts.map((one) => one.stratum);
  const byStratum = asked.map((one) => {
    const at = captures.strata.indexOf(one.by);
    const parts = strata.map((label) => partOf(one, stratumValues(captures.strata, label)[at]));
    return joinStrata(matrix, one.name, strata, parts, spec.prepare.standardise);
  });
  return { ...matrix, byStratum };
}

function partOf({ name, by, values }: ByStratum, level: string): string {
  const part = values.get(level);
  if (part !== undefined) return part;
  throw new InputError({
    name: "survival.stratum-without-covariate",
    expected: `a covariate for each ${by} of the captures`,
    found: `none for ${JSON.stringify(level)} (there are ${[...values.keys()].join(", ")})`,
    where: { cell: `survival > covariates by stratum > ${name} > values` },
    remedy: `add ${level}: and the name of a covariate`,
  });
}

/**
 * Differences between strata where survival has fewer of them than the captures: a column for each combination of levels of
 * the columns in `survival > strata` against the first. Recapture keeps all. No contrasts where all columns shift survival,
 * which is what a frame without them means. With covariates by stratum also the groups of strata that a model can tell apart.
 */
export function survivalStrata(
  spec: Spec,
  strata: readonly string[],
  intervals: number,
): Pick<Frame, "contrasts" | "groups"> {
  const of = spec.captures?.strata ?? [];
  const by = new Set(spec.survival.byStratum?.map((one) => one.by));
  const shifting = of.filter((name) => spec.survival.strata.includes(name));
  const told = of.filter((name) => shifting.includes(name) || by.has(name));
  const labelled = (columns: readonly string[]) =>
    strata.map((label) => {
      const values = stratumValues(of, label);
      return stratumLabel(
        columns,
        columns.map((name) => values[of.indexOf(name)]),
      );
    });
  const apart = labelled(told);
  const names = [...new Set(apart)];
  return {
    ...(by.size === 0 ? {} : { groups: Int32Array.from(apart, (name) => names.indexOf(name)) }),
    ...(shifting.length === of.length
      ? {}
      : {
          contrasts: {
            survival: against(labelled(shifting), intervals),
            recapture: against(strata, intervals),
          },
        }),
  };
}

/** 1 in the rows of each group but the first. */
function against(groups: readonly string[], intervals: number): NamedColumn[] {
  const [first, ...others] = [...new Set(groups)];
  return others.map((group) => ({
    name: `${group} against ${first}`,
    values: Float64Array.from({ length: groups.length * intervals }, (_, r) =>
      groups[Math.floor(r / intervals)] === group ? 1 : 0,
    ),
  }));
}
