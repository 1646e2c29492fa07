import { describe, expect, test } from "vitest";
import { changedSpec } from "../../src/pipeline/sensitivity.ts";
import { parsePipeline, pipelineProblems } from "../../src/spec/parse.ts";
import { edited } from "./good.ts";

const withSection = (section: string) => edited("recapture: effort\n", `recapture: effort\n${section}\n`);
const problems = (alternatives: string) =>
  pipelineProblems(withSection(`sensitivity: { alternatives: [${alternatives}] }`), "p.yaml").map(
    ({ name, expected, found }) => `${name}: ${expected}, found ${found}`,
  );

describe("sensitivity in the pipeline file", () => {
  const text = withSection(
    "sensitivity:\n  permutations: 99\n  alternatives:\n" +
      "    - { name: longer, of: winter rain, window: { season: Oct to Mar }, statistic: maximum }\n" +
      "    - { name: earlier, of: snow, lag: 1 }\n" +
      "    - { name: other rules, detrend: linear, choose by: AICc, sample size: intervals, recapture: constant, year trend: true }",
  );
  const spec = parsePipeline(text, "p.yaml");
  const { alternatives } = spec.sensitivity ?? { alternatives: [] };

  test("each alternative changes what it names and nothing else", () => {
    expect(spec.sensitivity?.permutations).toBe(99);
    const [longer, earlier, rules] = alternatives.map((one) => changedSpec(spec, one));
    expect(longer.covariates[0]).toMatchObject({
      name: "winter rain",
      statistic: { type: "maximum" },
      window: { type: "season", lag: 0 },
    });
    expect(longer.covariates.slice(1)).toEqual(spec.covariates.slice(1));
    expect({ ...longer, covariates: spec.covariates }).toEqual(spec);
    const snow = spec.covariates.find((one) => one.name === "snow");
    expect(earlier.covariates.find((one) => one.name === "snow")).toEqual({
      ...snow,
      window: { ...(snow !== undefined && "window" in snow ? snow.window : {}), lag: 1 },
    });
    expect(rules.covariates).toEqual(spec.covariates);
    expect(rules.prepare).toEqual({ ...spec.prepare, detrend: "linear" });
    expect(rules.screen).toEqual({ ...spec.screen, chooseBy: "AICc", sampleSize: "intervals" });
    expect(rules.recapture).toBe("constant");
    expect(rules.survival.yearTrend).toBe(true);
  });

  test("without the section there is nothing of it", () => {
    expect(
      "sensitivity" in parsePipeline(edited("recapture: effort\n", "recapture: effort\n"), "p.yaml"),
    ).toBe(false);
  });

  test("mistakes are told by name with what was found", () => {
    expect(problems("{ name: a, of: snw, lag: 1 }")[0]).toMatch(/^spec.unknown-name: .*found "snw"/);
    expect(problems("{ name: a, of: disturbance, lag: 1 }")[0]).toMatch(
      /^spec.unknown-name: .*window of its own/,
    );
    expect(problems("{ name: a, lag: 1 }")).toEqual([
      "spec.needs: the covariate whose window, lag or statistic changes, found no key of",
    ]);
    expect(problems("{ name: a, of: snow }")[0]).toMatch(/^spec.needs: a window, lag or statistic/);
    expect(problems("{ name: a }")).toEqual([
      "spec.needs: something that differs from the study, found only a name",
    ]);
    expect(problems("{ name: a, choose by: AICc }, { name: a, choose by: BIC }")).toEqual([
      'spec.repeated-name: each alternative\'s name once, found "a" again',
    ]);
    expect(problems("{ name: a, choose by: WAIC }")[0]).toMatch(/^spec.not-a-choice/);
  });
});

describe("components in the pipeline file", () => {
  const components = (text: string) => withSection(`components: ${text}`);

  test("groups, simple loadings and resamples", () => {
    expect(
      parsePipeline(
        components("{ within: { water: [winter rain, snow] }, simplify: sparse, resamples: 50 }"),
        "p.yaml",
      ).components,
    ).toEqual({
      keep: { type: "broken stick" },
      within: { water: ["winter rain", "snow"] },
      simplify: "sparse",
      resamples: 50,
    });
    expect(parsePipeline(components("{ within: themes }"), "p.yaml").components.within).toBe("themes");
  });

  test("a name that is no covariate, and a covariate in two groups", () => {
    const names = (text: string) => pipelineProblems(components(text), "p.yaml").map((one) => one.name);
    expect(names("{ within: { water: [winter ran] } }")).toEqual(["spec.unknown-name"]);
    expect(names("{ within: { water: [snow], cold: [snow] } }")).toEqual(["spec.conflict"]);
    expect(names("{ within: theme }")).toEqual(["spec.not-a-choice"]);
  });
});
