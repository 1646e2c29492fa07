import { expect, test } from "vitest";
import type { Detection } from "../../src/simulate/detect.ts";
import { shareOf } from "../../src/simulate/tally.ts";
import { detectionTable } from "../../src/tables/detection-tables.ts";

const share = (count: number) => shareOf(count, 20);
const detection: Detection = {
  covariates: ["ice", "storms"],
  directions: [-1, 1],
  residual: 0.25,
  replicates: 20,
  rows: [
    {
      effect: 0.4,
      rule: "counting years",
      replicates: 20,
      outcomes: {
        "exactly the truth": share(8),
        "the truth with others": share(2),
        "part of the truth": share(5),
        "only wrong ones": share(1),
        nothing: share(4),
      },
      found: share(10),
      foundOrRival: share(12),
      unrelated: share(3),
    },
  ],
};

test("every share stands under its name with its standard error; the five outcomes add up to 1", () => {
  const { columns, rows, description } = detectionTable(detection);
  const row = Object.fromEntries(columns.map((one, j) => [one.name, rows[0][j]]));
  expect(rows[0].length).toBe(columns.length);
  expect(row).toMatchObject({
    covariates: "ice + storms",
    effect: 0.4,
    rule: "counting years",
    replicates: 20,
    found: 0.5,
    found_or_rival: 0.6,
    exact: 0.4,
    with_others: 0.1,
    part: 0.25,
    wrong: 0.05,
    nothing: 0.2,
    unrelated: 0.15,
  });
  expect(row.found_se).toBeCloseTo(Math.sqrt(0.25 / 20), 14);
  expect(row.unrelated_se).toBeCloseTo(Math.sqrt((0.15 * 0.85) / 20), 14);
  const outcomes = ["exact", "with_others", "part", "wrong", "nothing"];
  expect(outcomes.reduce((sum, name) => sum + Number(row[name]), 0)).toBeCloseTo(1, 12);
  expect(description).toContain("Residual sd between years 0.25 on the logit");
});
