import { describe, expect, test } from "vitest";
import { countsFrom, type History } from "../../src/study/histories.ts";
import { namedOccasions } from "../../src/study/own-occasions.ts";
import { goodnessOfFit } from "../../src/survival/goodness-of-fit.ts";
import { goodnessTable } from "../../src/tables/goodness-table.ts";

const history = (row: string, number: number, stratum: string): History => ({
  stratum,
  seen: [...row].flatMap((one, t) => (one === "1" ? [t] : [])),
  lost: false,
  number,
});
const histories = ["female", "male"].flatMap((stratum) => [
  history("111", 15, stratum),
  history("110", 5, stratum),
  history("100", 30, stratum),
  history("011", 10, stratum),
  history("010", 30, stratum),
]);
const counts = countsFrom(histories, 3);
const occasions = namedOccasions(["2001", "2002", "2003"]);

describe("table of the fit of the general model", () => {
  test("a row per table, per sum over occasions and per sum over components, with ĉ", () => {
    const table = goodnessTable(goodnessOfFit(counts, histories), occasions);
    const at = (name: string) => table.columns.findIndex((one) => one.name === name);
    for (const row of table.rows) expect(row.length).toBe(table.columns.length);
    const [first] = table.rows;
    expect([first[0], first[at("occasion")], first[at("first_group")], first[at("second_group")]]).toEqual([
      "female",
      "2002",
      "10, 30",
      "15, 5",
    ]);
    const whole = table.rows.find((row) => row[0] === "all strata" && row[1] === "all components");
    const byHand = 2 * (20 / 3) ** 2 * (3 / 50 + 3 / 70 + 3 / 25 + 3 / 35);
    expect(whole?.[at("chi_square")]).toBeCloseTo(byHand, 9);
    expect(whole?.[at("df")]).toBe(2);
    expect(whole?.[at("inflation")]).toBeCloseTo(byHand / 2, 9);
    expect(table.description).toContain("not used in any criterion");
    expect(table.description).not.toContain("Not given");
  });

  test("of counts alone it says what is not given and why, and keeps no row for it", () => {
    const table = goodnessTable(goodnessOfFit(counts, undefined), occasions);
    expect(table.description).toContain('Not given: "newly marked or seen before: met again at all" and');
    expect(table.description).toContain("does not tell which of the released animals were newly marked");
    expect(table.rows.filter((row) => String(row[1]).startsWith("newly marked"))).toEqual([]);
  });
});
