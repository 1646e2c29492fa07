import type { RawFinding } from "../data/finding.ts";
import type { Matrix } from "../data/matrix.ts";
import { largeWords } from "../data/words.ts";
import type { CollinearityOptions } from "./options.ts";
import type { ConditionTable, CorrelationTable, Dependency, Diagnosis } from "./result.ts";

/** All that a person should know of a diagnosis, in the order of the columns within each kind. */
export function collinearityFindings(
  diagnosis: Diagnosis,
  matrix: Matrix,
  names: readonly string[],
  options: CollinearityOptions,
): RawFinding[] {
  return [
    ...missingCells(matrix, names, diagnosis.completeRows ?? matrix.rows),
    ...correlated(diagnosis.pearson, diagnosis.partial, options.warn.correlation),
    ...dependent(diagnosis, names),
    ...inflated(diagnosis, options.warn.inflation),
    ...illConditioned(diagnosis.condition, options.warn.condition),
  ];
}

function missingCells(matrix: Matrix, names: readonly string[], complete: number): RawFinding[] {
  return names.flatMap((subject, k) => {
    let missing = 0;
    for (let i = 0; i < matrix.rows; i++)
      if (!Number.isFinite(matrix.data[i * matrix.columns + k])) missing++;
    if (missing === 0) return [];
    return {
      kind: "incomplete-column",
      subject,
      message:
        `${missing} of ${matrix.rows} intervals missing: its correlations use the intervals that both columns have, ` +
        `all other measures the ${complete} intervals without any missing cell`,
      count: missing,
      remedy: "mend the series, or let prepare leave the column out or fill in its mean",
    };
  });
}

/** One finding per column: its pairs with later columns at or above the limit. */
function correlated(
  pearson: CorrelationTable,
  partial: CorrelationTable | undefined,
  limit: number,
): RawFinding[] {
  const K = pearson.names.length;
  return pearson.names.flatMap((subject, a) => {
    const pairs: string[] = [];
    for (let b = a + 1; b < K; b++) {
      const r = pearson.r.data[a * K + b];
      // Written so that a missing r is no pair.
      if (!(Math.abs(r) >= limit)) continue;
      const given = partial?.r.data[a * K + b] ?? Number.NaN;
      const trend = Math.abs(given) < limit ? `, ${given.toFixed(2)} once the year is taken out` : "";
      pairs.push(`${pearson.names[b]} (r = ${r.toFixed(2)}, n = ${pearson.n.data[a * K + b]}${trend})`);
    }
    if (pairs.length === 0) return [];
    return {
      kind: "correlated",
      subject,
      message: `correlates at |r| ≥ ${limit} with ${pairs.join(", ")}`,
      count: pairs.length,
      remedy: "see the clusters; keep one covariate of each, or note the decision in the pipeline file",
    };
  });
}

function dependent({ allDepend, dependencies }: Diagnosis, names: readonly string[]): RawFinding[] {
  const named = dependencies.map((one): RawFinding => {
    const subject = one.names[one.names.length - 1];
    return { kind: "exact-dependency", subject, message: dependencyText(one), remedy: "drop one of them" };
  });
  if (!allDepend) return named;
  const message =
    `every one of the ${names.length} covariates is reproduced exactly by the others` +
    " (variance inflation is infinite throughout)";
  const remedy =
    "fewer covariates than intervals are needed to tell them apart: drop some, or use components";
  return [
    ...named,
    { kind: "exact-dependency", subject: "all covariates", message, count: names.length, remedy },
  ];
}

function dependencyText({ names, kind, relation }: Dependency): string {
  const told = relation === undefined ? names.join(", ") : relation;
  if (kind === "copy") return `${names[1]} holds the same values as ${names[0]}`;
  if (kind === "rescaled") return `${names[1]} is ${names[0]} on another scale: ${told}`;
  return `depend on each other exactly: ${told}`;
}

function inflated({ inflation, dependencies, allDepend }: Diagnosis, limit: number): RawFinding[] {
  if (allDepend) return [];
  const named = new Set(dependencies.flatMap(({ names }) => names));
  return inflation.flatMap(({ name, inflation: factor }) => {
    if (factor <= limit || (factor === Number.POSITIVE_INFINITY && named.has(name))) return [];
    return {
      kind: "inflated",
      subject: name,
      message: Number.isFinite(factor)
        ? `variance inflation ${largeWords(factor)}, above ${limit}`
        : "the other covariates reproduce it exactly, by a relation of more than four of them",
      remedy: "see the pruning and what each step would drop",
    };
  });
}

/** A dimension matters where its index is above the limit and holds more than half of two variances (Belsley et al.). */
function illConditioned({ names, indices, proportions }: ConditionTable, limit: number): RawFinding[] {
  return indices.flatMap((index, j) => {
    const held = names
      .map((name, k) => ({ name, share: proportions.data[j * names.length + k] }))
      .filter(({ share }) => share > 0.5);
    // A null dimension is told by the exact dependencies.
    if (!(index > limit) || !Number.isFinite(index) || held.length < 2) return [];
    const told = held.map(({ name, share }) => `${name} (${share.toFixed(2)})`).join(", ");
    return {
      kind: "ill-conditioned",
      subject: held[held.length - 1].name,
      message: `condition index ${largeWords(index)}, above ${limit}, holds most of the variance of ${told}`,
      count: held.length,
      remedy: "these coefficients cannot be told apart well: keep fewer of them, or use components",
    };
  });
}
