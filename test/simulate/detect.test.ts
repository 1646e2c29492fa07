import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { randomStream } from "../../src/math/random.ts";
import { type Detection, detect } from "../../src/simulate/detect.ts";
import {
  drawStudy as drawReplicate,
  REPLICATES_TASK,
  type ReplicateChunk,
  simulateReplicates,
} from "../../src/simulate/replicate.ts";
import { detectionSentences } from "../../src/simulate/says.ts";
import { type StudyDesign, studyDesign } from "../../src/simulate/study-design.ts";
import { shareOf } from "../../src/simulate/tally.ts";
import { drawStudy, inProcess, SCREEN } from "../support/study.ts";

const { problem } = drawStudy(3, { intervals: 15, covariates: 4, marked: 30, residual: 0.3 }, [0.5]);
const design = studyDesign(problem);
const options = { ...SCREEN, steps: 30 };
const helpers = {
  parallel: inProcess({ "simulate.replicates": simulateReplicates }),
  progress: { start: () => ({ tick: () => {}, done: () => {} }) },
};
const request = { named: [0], directions: [1], effects: [0, 1.2], residual: 0.2, replicates: 25 } as const;
const rowOf = ({ rows }: Detection, effect: number, rule: string) => {
  const row = rows.find((one) => one.effect === effect && one.rule === rule);
  if (row === undefined) throw new Error(`no row for ${effect}, ${rule}`);
  return row;
};

describe("what a design can detect", () => {
  test("nothing is chosen by years in most studies without an effect, a huge effect is nearly always found", async () => {
    const found = await detect(design, request, options, 1, helpers);
    const none = rowOf(found, 0, "counting years");
    // the rule's aim is 10 % at most; 25 replicates of that reach 8 with a chance of .002
    expect(none.outcomes["only wrong ones"].share).toBeLessThan(8 / 25);
    expect(none.unrelated.share).toBe(none.outcomes["only wrong ones"].share);
    expect(rowOf(found, 1.2, "counting years").found.share).toBeGreaterThanOrEqual(0.9);
    expect(rowOf(found, 1.2, "counting animals").found.share).toBeGreaterThanOrEqual(0.9);
    expect(found.rows.map((one) => `${one.effect} ${one.rule}`)).toEqual([
      "0 counting years",
      "0 counting animals",
      "1.2 counting years",
      "1.2 counting animals",
    ]);
  });

  test("the same seed gives the same, another seed another; other sizes on the grid change nothing", async () => {
    const small = { ...request, effects: [0.4], replicates: 12 };
    const first = await detect(design, small, options, 7, helpers);
    expect(await detect(design, small, options, 7, helpers)).toEqual(first);
    expect(await detect(design, small, options, 8, helpers)).not.toEqual(first);
    const more = await detect(design, { ...small, effects: [0.5, 0.4, 0.4] }, options, 7, helpers);
    expect(more.rows.filter((one) => one.effect === 0.4)).toEqual(first.rows);
    expect(more.rows.length).toBe(4);
  });

  test("every replicate is drawn once, and no two effects share a random stream", async () => {
    const chunks: ReplicateChunk[] = [];
    const parallel = {
      map: async <Input, Output>(task: string, inputs: readonly Input[]): Promise<Output[]> => {
        expect(task).toBe(REPLICATES_TASK);
        // the inputs of this task are chunks
        chunks.push(...(inputs as unknown as ReplicateChunk[]));
        return inputs.map(() => [] as unknown as Output);
      },
    };
    await detect(design, { ...request, effects: [0, 0.2, 0.4], replicates: 12 }, options, 1, {
      ...helpers,
      parallel,
    });
    const drawn = chunks.flatMap((one) =>
      Array.from({ length: one.to - one.from }, (_, i) => `${one.stream}: ${one.from + i}`),
    );
    expect(new Set(drawn).size).toBe(3 * 12);
    expect(drawn.length).toBe(3 * 12);
    expect([...new Set(chunks.map((one) => one.scenario.effects[0]?.perSd ?? 0))]).toEqual([0, 0.2, 0.4]);
  });

  test("how replicates are cut into chunks changes nothing", () => {
    const chunk = {
      design,
      scenario: { effects: [{ covariate: 1, perSd: 0.5 }], residual: 0.3 },
      options,
      seed: 2,
      stream: "x",
    };
    const whole = simulateReplicates({ ...chunk, from: 0, to: 6 });
    const parts = [
      ...simulateReplicates({ ...chunk, from: 0, to: 1 }),
      ...simulateReplicates({ ...chunk, from: 1, to: 6 }),
    ];
    expect(parts).toEqual(whole);
  });

  test("the order of the covariates changes neither what is drawn nor what is chosen", () => {
    fc.assert(
      fc.property(fc.shuffledSubarray([0, 1, 2, 3], { minLength: 4 }), fc.nat(1000), (order, seed) => {
        const moved: StudyDesign = { ...design, covariates: order.map((k) => design.covariates[k]) };
        const at = (one: StudyDesign, covariate: number) => ({
          design: one,
          scenario: { effects: [{ covariate, perSd: 0.6 }], residual: 0.3 },
          options,
          seed,
          stream: "order",
          from: 0,
          to: 1,
        });
        const [before] = simulateReplicates(at(design, 0));
        const [after] = simulateReplicates(at(moved, order.indexOf(0)));
        const names = (set: readonly number[]) => set.map((k) => order[k]).sort();
        expect(names(after.byYears)).toEqual([...before.byYears].sort());
        expect(names(after.byAnimals)).toEqual([...before.byAnimals].sort());
      }),
      { numRuns: 15 },
    );
  });

  test("survival of a two-year interval: annual squared, its years varying by σ²/2, effect per sd, same for the strata", () => {
    const lengths = Float64Array.from(design.frame.lengths, (_, t) => (t === 0 ? 2 : 1));
    const marked = Float64Array.from(lengths, (_, t) => (t === 0 ? 200_000 : 0));
    const always = new Float64Array(lengths.length).fill(1);
    const strata = [0, 0.7].map((logit) => ({
      stratum: `at ${logit}`,
      marked,
      baseline: new Float64Array(lengths.length).fill(logit),
      recapture: always,
    }));
    // a covariate in other units than sd acts all the same by its sd
    const inMetres = { name: "metres", values: design.covariates[0].values.map((x) => 100 + 7 * x) };
    const frame = { ...design.frame, lengths };
    const world: StudyDesign = { ...design, frame, strata, covariates: [inMetres] };
    const scenario = { effects: [{ covariate: 0, perSd: 0.6 }], residual: 0.8 };
    const drawn = drawReplicate(world, scenario, randomStream(4, "long", 0));
    // the n normal deviates of the years are the first that are drawn
    const random = randomStream(4, "long", 0);
    const z = Float64Array.from(lengths, () => random.normal());
    const annual = (logit: number, t: number) =>
      1 /
      (1 + Math.exp(-logit - 0.6 * design.covariates[0].values[t] - (0.8 * z[t]) / Math.sqrt(lengths[t])));
    [0, 0.7].forEach((logit, g) => {
      const { seen } = drawn.data[g];
      const near = (share: number, expected: number, n: number) =>
        expect(Math.abs(share - expected)).toBeLessThan(4 * Math.sqrt((expected * (1 - expected)) / n));
      near(seen[0] / 200_000, annual(logit, 0) ** 2, 200_000);
      near(seen[1] / seen[0], annual(logit, 1), seen[0]);
    });
  });
});

describe("the sentences", () => {
  const share = (value: number) => shareOf(Math.round(200 * value), 200);
  const made = (grid: readonly (readonly [effect: number, years: number, wrong: number])[]): Detection => ({
    covariates: ["winter rain"],
    directions: [-1],
    residual: 0.3,
    replicates: 200,
    rows: grid.flatMap(([effect, years, wrong]) =>
      (["counting years", "counting animals"] as const).map((rule) => ({
        effect,
        rule,
        replicates: 200,
        outcomes: {
          "exactly the truth": share(years),
          "the truth with others": share(0),
          "part of the truth": share(0),
          "only wrong ones": share(0),
          nothing: share(1 - years),
        },
        found: share(years),
        foundOrRival: share(years),
        unrelated: share(rule === "counting years" ? wrong : 3 * wrong),
      })),
    ),
  });

  test("are made from the numbers", () => {
    const grid = [
      [0, 0.02, 0.04],
      [0.2, 0.12, 0.03],
      [0.3, 0.5, 0.03],
      [0.4, 0.61, 0.02],
    ] as const;
    expect(detectionSentences(made(grid))).toEqual([
      "With this design an effect of 0.4 per sd would be found in 61 % of studies counting years; effects below 0.3 would mostly be missed.",
      "Where nothing acts, something is chosen all the same in 4 % counting years and in 12 % counting animals.",
    ]);
  });

  test("the smallest size found in four of five is the one told; without an effect of 0 the worst mistake is", () => {
    const grid = [
      [0.4, 0.85, 0.02],
      [0.8, 1, 0.05],
    ] as const;
    expect(detectionSentences(made(grid))).toEqual([
      "With this design an effect of 0.4 per sd would be found in 85 % of studies counting years.",
      "Something unrelated to the truth is chosen in up to 5 % counting years and up to 15 % counting animals.",
    ]);
  });

  test("where rivals name what the choice does not, that is said", () => {
    const twins = made([[0.6, 0.5, 0]]);
    const rows = twins.rows.map((one) => ({ ...one, foundOrRival: share(0.9) }));
    expect(detectionSentences({ ...twins, rows })[1]).toBe(
      'With rivals counted ("this or that") it would be named in 90 %, not 50 %.',
    );
  });

  test("a study that can find nothing is told so", () => {
    expect(detectionSentences(made([[0.4, 0.1, 0]]))[0]).toBe(
      "With this design an effect of 0.4 per sd would be found in 10 % of studies counting years; no effect on the grid would be found in half of them.",
    );
    expect(detectionSentences(made([[0, 0, 0.1]]))).toEqual([
      "Where nothing acts, something is chosen all the same in 10 % counting years and in 30 % counting animals.",
    ]);
  });
});
