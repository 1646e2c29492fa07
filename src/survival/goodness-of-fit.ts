import { chiSquareUpper } from "../math/distributions.ts";
import type { Counts } from "../study/counts.ts";
import type { History } from "../study/histories.ts";
import { type TableTest, testTwoRows } from "./contingency.ts";
import {
  COMPONENTS,
  type GoodnessComponent,
  markedTables,
  metTables,
  type OccasionTable,
} from "./goodness-tables.ts";

/** One component at one occasion of one stratum. */
export interface GoodnessRow extends OccasionTable, TableTest {
  readonly stratum: string;
}

/** A sum of χ² over independent tables. */
export interface GoodnessSum {
  readonly chiSquare: number;
  readonly df: number;
  /** NaN where df is 0. */
  readonly p: number;
}

export interface ComponentSum extends GoodnessSum {
  /** Undefined for the sum over strata. */
  readonly stratum: string | undefined;
  readonly component: GoodnessComponent;
  /**
   * Σ signed √χ² / √(number of tables) over 2 × 2 tables, standard normal if there is no effect; positive where newly
   * marked animals are met again more often than others, or animals met more often at the next occasion than animals
   * passed over. NaN for the components that are not 2 × 2.
   */
  readonly direction: number;
}

export interface StratumSum extends GoodnessSum {
  /** Undefined for the sum over strata. */
  readonly stratum: string | undefined;
  /** ĉ between animals, max(1, χ²/df); NaN where df is 0. */
  readonly betweenAnimals: number;
  /** The sum without the first component: the fit of the model that lets survival differ after first marking. */
  readonly afterMarking: GoodnessSum;
  readonly betweenAnimalsAfterMarking: number;
}

/**
 * Fit of the general model, in which survival and recapture differ for every interval and occasion of every stratum:
 * four components, each a sum over occasions, independent of each other where the model holds.
 */
export interface GoodnessOfFit {
  readonly rows: readonly GoodnessRow[];
  /** By stratum, then over all strata. */
  readonly components: readonly ComponentSum[];
  /** By stratum, then over all strata, if there are several. */
  readonly sums: readonly StratumSum[];
  readonly overall: StratumSum;
  /** Components that the data cannot give, with the reason. */
  readonly missing: readonly { readonly component: GoodnessComponent; readonly reason: string }[];
}

/**
 * The four components (Burnham, Anderson, White, Brownie & Pollock 1987, AFS Monograph 5; Pradel 1993) by stratum,
 * occasion and summed. `histories` are undefined for counts tables: these tell who was met where, but not which of
 * the released animals were newly marked, so that the first two components cannot be had.
 */
export function goodnessOfFit(
  counts: readonly Counts[],
  histories: readonly History[] | undefined,
): GoodnessOfFit {
  const rows = counts.flatMap((one) => {
    const own = histories?.filter(({ stratum }) => stratum === one.stratum);
    const tables = [...(own === undefined ? [] : markedTables(own, one.occasions)), ...metTables(one)];
    return tables.map(
      (table): GoodnessRow => ({
        stratum: one.stratum,
        ...table,
        ...testTwoRows(table.first, table.second),
      }),
    );
  });
  const known = COMPONENTS.filter((_, k) => k >= 2 || histories !== undefined);
  const strata: (string | undefined)[] = counts.map((one) => one.stratum);
  const each = strata.length > 1 ? [...strata, undefined] : strata;
  const within = (stratum: string | undefined) =>
    rows.filter((row) => stratum === undefined || row.stratum === stratum);
  return {
    rows,
    components: each.flatMap((stratum) =>
      known.map((component) => componentSum(stratum, component, within(stratum))),
    ),
    sums: each.map((stratum) => stratumSum(stratum, within(stratum))),
    overall: stratumSum(undefined, rows),
    missing: COMPONENTS.filter((one) => !known.includes(one)).map((component) => ({
      component,
      reason: "a counts table does not tell which of the released animals were newly marked",
    })),
  };
}

function componentSum(
  stratum: string | undefined,
  component: GoodnessComponent,
  rows: readonly GoodnessRow[],
): ComponentSum {
  const own = rows.filter((row) => row.component === component);
  // the other two components have wider tables, and two columns only where they were cut short
  const signed = [COMPONENTS[0], COMPONENTS[2]].some((one) => one === component)
    ? own.filter((row) => row.df === 1).map((row) => row.direction)
    : [];
  return {
    stratum,
    component,
    ...sumOf(own),
    direction:
      signed.length === 0 ? Number.NaN : signed.reduce((a, b) => a + b, 0) / Math.sqrt(signed.length),
  };
}

function stratumSum(stratum: string | undefined, rows: readonly GoodnessRow[]): StratumSum {
  const all = sumOf(rows);
  const afterMarking = sumOf(rows.filter((row) => row.component !== COMPONENTS[0]));
  return {
    stratum,
    ...all,
    betweenAnimals: varianceInflation(all),
    afterMarking,
    betweenAnimalsAfterMarking: varianceInflation(afterMarking),
  };
}

function sumOf(rows: readonly TableTest[]): GoodnessSum {
  const chiSquare = rows.reduce((sum, row) => sum + row.chiSquare, 0);
  const df = rows.reduce((sum, row) => sum + row.df, 0);
  return { chiSquare, df, p: df === 0 ? Number.NaN : chiSquareUpper(chiSquare, df) };
}

/** ĉ = χ²/df, never below 1 (Lebreton et al. 1992); NaN where nothing can be tested. */
function varianceInflation({ chiSquare, df }: GoodnessSum): number {
  return df === 0 ? Number.NaN : Math.max(1, chiSquare / df);
}
