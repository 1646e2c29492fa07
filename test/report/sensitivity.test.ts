import { expect, test } from "vitest";
import { type Analysis, failedAnalysis, summariseSensitivity } from "../../src/compare/sensitivity.ts";
import { castOf } from "../../src/report/cast.ts";
import { sensitivityFigure } from "../../src/report/figures/sensitivity.ts";
import { html } from "../../src/report/html.ts";
import { sensitivitySection } from "../../src/report/sections/sensitivity.ts";
import { JOURNAL_WIDTHS, SCREEN } from "../../src/report/size.ts";
import { sensitivityTables } from "../../src/tables/sensitivity-tables.ts";
import { reportInput } from "./fixture.ts";

test("what is selected where: one mark for each choice, failures told, all analyses in the tables", async () => {
  const input = await reportInput({ covariates: 4, permutations: 0 });
  const names = input.matrix.names.slice(0, 4);
  const made = (name: string, byYears: readonly string[], rest: Partial<Analysis> = {}): Analysis => ({
    name,
    changes: name === "base" ? "" : `${name} <b>`,
    failed: undefined,
    candidates: names,
    byYears,
    rivals: [],
    byAnimals: [],
    gain: byYears.length,
    share: 0.4,
    recapture: "constant",
    ...rest,
  });
  const sensitivity = summariseSensitivity(
    [
      made("base", [names[0]], { rivals: [{ chosen: names[0], others: [names[1]] }] }),
      made("second", [names[0]], { byAnimals: [names[2]], candidates: names.slice(0, 3) }),
      failedAnalysis("third", "detrended: difference", "expected values that differ, found 20 times 3"),
    ],
    [],
  );
  if (input.comparison === undefined) throw new Error("the fixture compares");
  const shown = { ...input, comparison: { ...input.comparison, sensitivity } };
  const cast = castOf(shown);
  const figure = sensitivityFigure(shown, cast, SCREEN);
  const count = (pattern: RegExp) => [...(figure?.svg ?? "").matchAll(pattern)].length;
  // two filled squares, one hollow one, one dot, one ×
  expect(count(/height="13" fill="#/g)).toBe(2);
  expect(count(/height="13" fill="none"/g)).toBe(1);
  expect(count(/<circle /g)).toBe(1);
  expect(count(/>×</g)).toBe(1);
  const page = html`${sensitivitySection(shown, cast, figure === undefined ? [] : [figure]).body}`.text;
  expect(page).toContain("Each of the 2 analyses, the study itself counted in");
  expect(page).toContain("not run: expected values that differ");
  expect(page).toContain("second &lt;b&gt;");
  const [table, long] = sensitivityTables(sensitivity);
  expect(table.rows.map((row) => row[0])).toEqual(["base", "second", "third"]);
  expect(long.rows).toHaveLength(7);
  expect(long.rows.filter((row) => row[2] === true).map((row) => row[1])).toEqual([names[0], names[0]]);
  for (const { size } of JOURNAL_WIDTHS) {
    const svg = sensitivityFigure(shown, cast, size)?.svg ?? "";
    expect(Number(/ width="([\d.]+)"/.exec(svg)?.[1])).toBeLessThanOrEqual(size.width);
    expect([...svg.matchAll(/<circle /g)]).toHaveLength(1);
  }
  // a study without alternatives has neither figure nor words of any
  expect(sensitivityFigure(input, castOf(input), SCREEN)).toBeUndefined();
  expect(html`${sensitivitySection(input, cast, []).body}`.text).toContain("states no other way");
});
