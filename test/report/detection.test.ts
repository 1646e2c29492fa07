import { describe, expect, test } from "vitest";
import { drawnAtWidths } from "../../src/report/export.ts";
import { detectionFigure } from "../../src/report/figures/detection.ts";
import type { Detection } from "../../src/simulate/detect.ts";
import { shareOf } from "../../src/simulate/tally.ts";

const nothing = shareOf(0, 10);
const detection = (
  covariates: readonly string[],
  found: readonly (readonly [number, number])[],
): Detection => ({
  covariates,
  directions: covariates.map(() => 1),
  residual: 0.3,
  replicates: 10,
  rows: found.flatMap(([effect, count]) =>
    (["counting years", "counting animals"] as const).map((rule) => ({
      effect,
      rule,
      replicates: 10,
      outcomes: {
        "exactly the truth": shareOf(count, 10),
        "the truth with others": nothing,
        "part of the truth": nothing,
        "only wrong ones": nothing,
        nothing: shareOf(10 - count, 10),
      },
      found: shareOf(count, 10),
      foundOrRival: shareOf(count, 10),
      unrelated: nothing,
    })),
  ),
});
/** Of the circles, which mark the rule that counts years, those of the curve (not of the legend). */
const circles = (svg: string) =>
  [...svg.matchAll(/<circle cx="([\d.]+)" cy="([\d.]+)"/g)]
    .slice(1)
    .map(([, x, y]) => [Number(x), Number(y)]);

describe("what this study can detect, drawn", () => {
  test("points stand where the shares are: 0 % on the lower axis, 100 % on the upper, one half between", () => {
    const { svg, name } = detectionFigure(
      detection(
        ["winter rain"],
        [
          [0, 0],
          [0.4, 5],
          [0.8, 10],
        ],
      ),
    );
    expect(name).toBe("detection");
    const [none, half, all] = circles(svg);
    expect(half[1]).toBeCloseTo((none[1] + all[1]) / 2, 1);
    expect(half[0]).toBeCloseTo((none[0] + all[0]) / 2, 1);
    expect(svg).toContain("winter rain acts on survival");
    expect(svg).toContain("counting years, found by size of effect 0: 0 %, 0.4: 50 %, 0.8: 100 %");
    expect(svg).not.toMatch(/NaN|Infinity|undefined/);
  });

  test("names are escaped and cut to the drawing; one size alone, even 0, can be drawn", () => {
    const long = `<script>${"very long ".repeat(20)}`;
    for (const effect of [0, 0.5]) {
      const { svg, caption } = detectionFigure(detection([long, "snow"], [[effect, 3]]));
      expect(svg).not.toContain("<script>");
      expect(svg).not.toMatch(/NaN|Infinity|undefined/);
      expect(svg).toContain("…");
      expect(caption).toContain(long);
    }
  });
});

describe("in a journal's columns", () => {
  test("the two panels stand side by side or one below the other, the same points in both", async () => {
    const told = detection(
      ["winter rain"],
      [
        [0, 0],
        [0.5, 7],
      ],
    );
    const files = await drawnAtWidths((size) => [detectionFigure(told, size)], { svg: true, png: false });
    expect(files.map((one) => one.path)).toEqual([
      "85mm/detection.svg",
      "85mm/captions.txt",
      "170mm/detection.svg",
      "170mm/captions.txt",
    ]);
    const [narrow, wide] = [0, 2].map((i) => new TextDecoder().decode(files[i].bytes));
    const box = (svg: string) =>
      /viewBox="([-\d.]+) 0 ([\d.]+) ([\d.]+)"/.exec(svg)?.slice(2).map(Number) ?? [];
    expect(box(narrow)[0]).toBeLessThanOrEqual(414);
    expect(box(narrow)[1]).toBeGreaterThan(1.5 * box(wide)[1]);
    const points = (svg: string) => [...svg.matchAll(/<circle /g)].length;
    expect(points(narrow)).toBe(points(wide));
    expect(points(wide)).toBeGreaterThan(0);
  });
});
