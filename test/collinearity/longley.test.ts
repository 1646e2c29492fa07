import { describe, expect, test } from "vitest";
import { conditionTable, correlationCondition } from "../../src/collinearity/condition.ts";
import { correlationTable } from "../../src/collinearity/correlation.ts";
import { decompose, EXACT, unitColumns } from "../../src/collinearity/decomposition.ts";
import { inflation } from "../../src/collinearity/inflation.ts";
import { leastSquares } from "../../src/collinearity/regression.ts";
import { fromRows, toRows } from "../../src/data/matrix.ts";
import { fromRecords, reference, worst } from "./reference.ts";

const E = reference("E_collinearity");
const LONGLEY: string[] = E.expected.longley.columns;
const longley = fromRecords(E.data.longley, LONGLEY);
const HALD = ["x1", "x2", "x3", "x4"];
const hald = fromRecords(E.data.hald, HALD);
const factors = (table: readonly { inflation: number }[]) => table.map((one) => one.inflation);

describe("variance inflation", () => {
  test("Longley (1967) to 1e-8 relative", () => {
    const found = inflation(longley, LONGLEY);
    expect(worst(factors(found), E.expected.longley.vif, true)).toBeLessThan(1e-8);
    const tolerance = found.map((one) => one.tolerance);
    expect(worst(tolerance, E.expected.longley.tolerance_1_over_vif, true)).toBeLessThan(1e-8);
  });

  test("Hald cement to 1e-9 relative, and as published", () => {
    const found = factors(inflation(hald, HALD));
    expect(worst(found, E.expected.hald.vif, true)).toBeLessThan(1e-9);
    expect(found.map((one) => Number(one.toFixed(3)))).toEqual(E.expected.hald.published_vif);
  });

  test("1/(1 − R²) of each column regressed on the others", () => {
    const R2 = LONGLEY.map((_, k) => {
      const others = LONGLEY.map((_, j) => j).filter((j) => j !== k);
      const x = fromRows(toRows(longley).map((row) => others.map((j) => row[j])));
      return leastSquares(
        x,
        toRows(longley).map((row) => row[k]),
      ).rSquared;
    });
    expect(worst(R2, E.expected.longley.r_squared_each_on_others)).toBeLessThan(1e-11);
  });

  test("infinite for every column of five rows of eight", () => {
    const wide = fromRows(E.data.rank_deficient_5x8);
    expect(factors(inflation(wide, "abcdefgh".split("")))).toEqual(new Array(8).fill(Infinity));
    const { rank, values } = decompose(unitColumns(wide).unit, EXACT);
    expect(rank).toBe(4);
    const eigenvalues = Array.from(values.slice(0, 4), (d) => d * d);
    const expected = E.expected.rank_deficient_5x8.correlation_eigenvalues_first4;
    expect(worst(eigenvalues, expected)).toBeLessThan(1e-12);
  });

  test("infinite for a, b and their sum, finite for the column beside them", () => {
    const aliased = fromRows(E.data.aliased_from_hald);
    const found = factors(inflation(aliased, E.expected.aliased_hald.columns));
    expect([found[0], found[1], found[3]]).toEqual([Infinity, Infinity, Infinity]);
    expect(worst([found[2]], [E.expected.aliased_hald.vif_c_finite], true)).toBeLessThan(1e-9);
    const dropped = fromRows(toRows(aliased).map((row) => row.slice(0, 3)));
    const after = factors(inflation(dropped, ["a", "b", "c"]));
    expect(worst(after, E.expected.aliased_hald.vif_after_dropping_sum_ab, true)).toBeLessThan(1e-9);
  });
});

describe("condition indices on unit-length columns with intercept (Belsley, Kuh & Welsch 1980)", () => {
  test.each([
    ["longley", longley, LONGLEY],
    ["hald", hald, HALD],
  ] as const)("%s: indices to 1e-7 relative, proportions to 1e-8", (which, matrix, names) => {
    const expected = E.expected[which].belsley_with_intercept;
    const found = conditionTable(matrix, names);
    expect(found.names).toEqual(["intercept", ...names]);
    expect(worst(found.singularValues, expected.singular_values, true)).toBeLessThan(1e-7);
    expect(worst(found.indices, expected.condition_indices, true)).toBeLessThan(1e-7);
    const rows = toRows(found.proportions);
    rows.forEach((row, j) => {
      const tolerance = which === "longley" && j === rows.length - 1 ? 1e-6 : 1e-8;
      const gap = worst(row, expected.proportions_rows_dimension_cols_coefficient[j]);
      expect(gap, `dimension ${j + 1}`).toBeLessThan(tolerance);
    });
  });

  test("condition number of the correlation matrix, which is another thing", () => {
    const svd = decompose(unitColumns(longley).unit, EXACT);
    const expected = E.expected.longley;
    expect(
      worst([correlationCondition(svd)], [expected.correlation_condition_number_sqrt], true),
    ).toBeLessThan(1e-9);
    const eigenvalues = svd.values.map((d) => d * d);
    expect(worst(eigenvalues, expected.correlation_eigenvalues, true)).toBeLessThan(1e-9);
    const product = eigenvalues.reduce((a, b) => a * b);
    expect(worst([product], [expected.determinant_of_correlation], true)).toBeLessThan(1e-9);
    const wide = decompose(unitColumns(fromRows(E.data.rank_deficient_5x8)).unit, EXACT);
    expect(correlationCondition(wide)).toBe(Infinity);
  });

  test("null dimensions stand in one last row that takes the variance of the columns in them", () => {
    const aliased = fromRows(E.data.aliased_from_hald);
    const { indices, proportions, singularValues } = conditionTable(aliased, ["a", "b", "c", "sum"]);
    expect(indices.slice(-1)).toEqual([Infinity]);
    expect(singularValues.slice(-1)).toEqual([0]);
    const last = toRows(proportions)[4];
    expect([last[1], last[2], last[4]]).toEqual([1, 1, 1]);
    expect(last[0]).toBe(0);
    expect(last[3]).toBe(0);
    const sums = [0, 1, 2, 3, 4].map((k) => toRows(proportions).reduce((sum, row) => sum + row[k], 0));
    expect(worst(sums, [1, 1, 1, 1, 1])).toBeLessThan(1e-12);
  });
});

describe("correlation", () => {
  test.each([
    ["longley", longley, LONGLEY],
    ["hald", hald, HALD],
  ] as const)("%s: Pearson matrix to 1e-12", (which, matrix, names) => {
    const { r } = correlationTable(matrix, names, "Pearson");
    expect(worst(r.data, E.expected[which].correlation_matrix.flat())).toBeLessThan(1e-12);
  });

  test("Longley: pairs with |r| above 0.7", () => {
    const { r } = correlationTable(longley, LONGLEY, "Pearson");
    const pairs = LONGLEY.flatMap((b, j) =>
      LONGLEY.slice(0, j).flatMap((a, i) => (Math.abs(r.data[i * 6 + j]) > 0.7 ? [`${a} ${b}`] : [])),
    );
    expect(pairs).toEqual(E.expected.longley.pairs_with_abs_r_above_0_7);
  });
});

describe("regression", () => {
  test("NIST StRD Longley: certified coefficients and standard errors to 11 digits", () => {
    const { nist } = E.expected.longley;
    // NIST's units; rounding undoes what the change of unit adds in the last digit.
    const unit = [1, 1000, 10, 10, 1000, 1];
    const x = fromRows(
      toRows(longley).map((row) => row.map((v, k) => Number((v * unit[k]).toPrecision(12)))),
    );
    const y = E.data.longley.map((row: { Employed: number }) => Math.round(row.Employed * 1000));
    const fit = leastSquares(x, y);
    const digits = (a: number, b: number) => -Math.log10(Math.abs(a / b - 1) + 1e-17);
    const coefficients = [fit.intercept, ...fit.coefficients];
    const errors = [fit.interceptError, ...fit.errors];
    const least = Math.min(
      ...coefficients.map((value, k) => digits(value, nist.certified_coef[k])),
      ...errors.map((value, k) => digits(value, nist.certified_se[k])),
      digits(fit.residualSd, nist.certified_residual_sd),
      digits(fit.rSquared, nist.certified_r_squared),
    );
    expect(least).toBeGreaterThan(11);
  });

  test("Hald: coefficients to 1e-9 relative", () => {
    const y = E.data.hald.map((row: { y: number }) => row.y);
    const fit = leastSquares(hald, y);
    expect(worst([fit.intercept, ...fit.coefficients], E.expected.hald.coef, true)).toBeLessThan(1e-9);
  });
});
