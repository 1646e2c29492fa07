import {
  appendFileSync,
  copyFileSync,
  cpSync,
  existsSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
} from "node:fs";
import { join } from "node:path";
import { afterAll, describe, expect, test } from "vitest";
import { silentProgress } from "../../src/effects/effects.ts";
import { reuseIn } from "../../src/pipeline/effects/reuse.ts";
import { type Executed, execute } from "../../src/pipeline/execute.ts";
import { loadPipeline } from "../../src/pipeline/load.ts";
import { contentDigest } from "../../src/pipeline/reuse/digest.ts";
import { changeText, stepsIn } from "../../src/pipeline/reuse/steps.ts";
import { bytesBelow, ROOT, temporaryFolder } from "./covey.ts";

const GOOD = join(ROOT, "test/bad-input/good");
const home = temporaryFolder();
afterAll(home.remove);
let count = 0;

/** The good study as a folder's data, with few resamples and no figures as PNG, which take most of a run's time. */
function goodData(data: string): void {
  cpSync(GOOD, data, { recursive: true });
  const file = join(data, "pipeline.yaml");
  edit(file, "permutations: 20", "permutations: 20, resamples: 3");
  appendFileSync(file, "\nfigures: { svg: true, png: false }\n");
}

/** A fresh copy of it. */
function study(): string {
  const folder = join(home.path, `study-${count++}`);
  goodData(join(folder, "data"));
  return folder;
}

function edit(file: string, from: string | RegExp, to: string): void {
  const before = readFileSync(file, "utf8");
  const after = before.replace(from, to);
  if (after === before) throw new Error(`${file} holds no ${from}`);
  writeFileSync(file, after);
}

function run(folder: string, reuseFolder?: string): Promise<Executed> {
  return execute(
    loadPipeline(join(folder, "data/pipeline.yaml")),
    { version: "0.0.0", nodeMajor: 20 },
    {
      workers: 1,
      through: "compare",
      progress: silentProgress,
      signal: new AbortController().signal,
      ...(reuseFolder === undefined ? {} : { reuseFolder }),
    },
  );
}

const ran = (done: Executed) => done.steps.filter((one) => one.outcome === "ran").map((one) => one.step);
const outputOf = (folder: string) => bytesBelow(join(folder, "out"));
const COVARIATES = ["covariate winter rain", "covariate frost", "covariate spring green"];
/** What rests on the screen, and is done again with it. */
const BEHIND_SCREEN = ["screen", "resampling", "compare", "sensitivity", "page and figures"];
const BEHIND = ["diagnose", "reduce", "recapture", ...BEHIND_SCREEN];
const ALL = ["station records", "layer green", ...COVARIATES, "diagnose", "reduce", "goodness of fit"].concat(
  BEHIND.slice(2),
);

interface Change {
  readonly what: string;
  readonly file: string;
  readonly from: string | RegExp;
  readonly to: string;
  /** The steps that depend on it; all others must be reused. */
  readonly redone: readonly string[];
  readonly why: readonly [step: string, why: string];
}

const pipeline = "pipeline.yaml";
const CHANGES: readonly Change[] = [
  {
    what: "one value of one station file",
    file: "weather_beck.csv",
    from: /2003-12,[\d.]+/,
    to: "2003-12,99.9",
    redone: ["station records", "covariate winter rain", ...BEHIND],
    why: ["station records", "the file weather_beck.csv changed"],
  },
  {
    what: "the window of one covariate",
    file: pipeline,
    from: "season: Dec to Feb",
    to: "season: Nov to Feb",
    redone: ["covariate frost", ...BEHIND],
    why: ["covariate frost", "its definition changed"],
  },
  {
    what: "a threshold of the collinearity report",
    file: pipeline,
    from: "survival:",
    to: "collinearity: { warn: { inflation: 4 } }\nsurvival:",
    redone: ["diagnose", "compare", "sensitivity", "page and figures"],
    why: ["diagnose", "collinearity: changed"],
  },
  {
    what: "how many permutations",
    file: pipeline,
    from: "permutations: 20",
    to: "permutations: 10",
    redone: BEHIND_SCREEN,
    why: ["screen", "screen: and ĉ between animals changed"],
  },
  {
    what: "the seed",
    file: pipeline,
    from: "seed: 3",
    to: "seed: 4",
    redone: ["reduce", ...BEHIND_SCREEN],
    why: ["reduce", "seed: changed"],
  },
  {
    what: "how many components are kept",
    file: pipeline,
    from: "survival:",
    to: "components: { keep: { number: 1 } }\nsurvival:",
    redone: ["reduce", "compare", "sensitivity", "page and figures"],
    why: ["reduce", "components: changed"],
  },
  {
    what: "one capture less",
    file: "captures.csv",
    from: /\n[^\n]*\n$/,
    to: "\n",
    redone: ["goodness of fit", "recapture", ...BEHIND_SCREEN],
    why: ["goodness of fit", "the captures changed"],
  },
  {
    what: "a remark in the pipeline file, which only the record holds",
    file: pipeline,
    from: "prepare:",
    to: "# how values are prepared\nprepare:",
    redone: ["page and figures"],
    why: ["page and figures", "what it shows changed"],
  },
  {
    what: "an image of the layer",
    file: "layers/green_2005_04.tif",
    from: "",
    to: "",
    redone: ["layer green", "covariate spring green", ...BEHIND],
    why: ["layer green", "1 of 7 files had no kept values for these places and options"],
  },
];

describe("stages reused by content", () => {
  const kept = join(home.path, "kept");

  test("the first run does every step, the second none, and both write what a run without reuse writes", async () => {
    const folder = study();
    await run(folder);
    const cold = outputOf(folder);
    const first = await run(folder, kept);
    expect(ran(first)).toEqual(ALL);
    expect(outputOf(folder)).toEqual(cold);
    const second = await run(folder, kept);
    expect(ran(second)).toEqual([]);
    expect(new Set(second.steps.slice(2).map((one) => one.why))).toEqual(
      new Set(["nothing it depends on changed"]),
    );
    expect(outputOf(folder)).toEqual(cold);
  }, 240_000);

  test("the result of every step can be kept, that of asked-for alternatives too", async () => {
    const folder = study();
    const alternatives = "[{ name: earlier, of: frost, lag: 1 }, { name: by AICc, choose by: AICc }]";
    edit(
      join(folder, "data/pipeline.yaml"),
      "survival:",
      `sensitivity: { permutations: 2, alternatives: ${alternatives} }\nsurvival:`,
    );
    const own = join(folder, "kept");
    expect(ran(await run(folder, own))).toEqual(ALL);
    const first = outputOf(folder);
    expect([...first.keys()].some((path) => path.includes("sensitiv"))).toBe(true);
    expect(ran(await run(folder, own))).toEqual([]);
    expect(outputOf(folder)).toEqual(first);
  }, 240_000);

  const folder = study();
  const data = join(folder, "data");
  const own = join(folder, "kept");
  const settled = join(folder, "kept at first");

  test.each(CHANGES)(
    "$what: exactly what depends on it runs again, and the bytes are those of a run from scratch",
    async ({ file, from, to, redone, why }) => {
      // Each change is made to the same study, in the same place, with what its first run kept.
      if (!existsSync(settled)) {
        await run(folder, own);
        cpSync(own, settled, { recursive: true });
      }
      for (const path of [data, own]) rmSync(path, { recursive: true });
      goodData(data);
      cpSync(settled, own, { recursive: true });
      if (file.endsWith(".tif")) {
        copyFileSync(join(data, "layers/green_2002_04.tif"), join(data, file));
        appendFileSync(join(data, file), "\0");
      } else edit(join(data, file), from, to);
      const warm = await run(folder, own);
      expect(ran(warm)).toEqual(redone);
      expect(warm.steps.find((one) => one.step === why[0])?.why).toBe(why[1]);
      const said = outputOf(folder);
      await run(folder);
      expect(said).toEqual(outputOf(folder));
    },
    240_000,
  );

  test("a new year: the layer reads its new file only, and the bytes are those of a run from scratch", async () => {
    const folder = study();
    const own = join(folder, "kept");
    await run(folder, own);
    const data = join(folder, "data");
    appendFileSync(join(data, "occasions.csv"), "2009,2009-07-20,2009-07-22,25\n");
    appendFileSync(join(data, "captures.csv"), "B163,2009-07-21,f,released\n");
    appendFileSync(join(data, "visits.csv"), "2008 to 2009,4\n");
    for (const [id, name] of ["0101,ash", "0102,beck"].map((one) => one.split(",")))
      appendFileSync(
        join(data, `weather_${name}.csv`),
        Array.from(
          { length: 12 },
          (_, i) => `${id},2009-${String(i + 1).padStart(2, "0")},${50 + i}.5,${i}.5\n`,
        ).join(""),
      );
    copyFileSync(join(data, "layers/green_2004_04.tif"), join(data, "layers/green_2009_04.tif"));
    appendFileSync(join(data, "layers/green_2009_04.tif"), "\0");
    const warm = await run(folder, own);
    expect(warm.steps.find((one) => one.step === "layer green")?.why).toBe(
      "1 of 8 files had no kept values for these places and options",
    );
    const said = outputOf(folder);
    await run(folder);
    expect(said).toEqual(outputOf(folder));
  }, 240_000);

  test("every kept result damaged in turn by one bit: seen, made again, same bytes", async () => {
    const folder = study();
    const own = join(folder, "kept");
    await run(folder, own);
    const right = outputOf(folder);
    for (const name of readdirSync(own)) {
      const bytes = readFileSync(join(own, name));
      bytes[(bytes.length * 7) >> 3] ^= 1;
      writeFileSync(join(own, name), bytes);
    }
    const again = await run(folder, own);
    expect(ran(again)).toEqual(ALL);
    expect(outputOf(folder)).toEqual(right);
    for (const name of readdirSync(own)) if (Math.abs(name.charCodeAt(0)) % 2 === 0) rmSync(join(own, name));
    await run(folder, own);
    expect(outputOf(folder)).toEqual(right);
    expect(readdirSync(own).filter((name) => name.endsWith(".part"))).toEqual([]);
  }, 240_000);

  test("two pipelines share kept results and are told apart when asked why", async () => {
    const [one, two] = [study(), study()];
    const own = join(one, "kept");
    await run(one, own);
    edit(join(two, "data/pipeline.yaml"), "season: Dec to Feb", "season: Jan to Feb");
    const other = await run(two, own);
    expect(ran(other)).toEqual(["covariate frost", ...BEHIND]);
    expect(other.steps.find((step) => step.step === "covariate frost")?.why).toBe(
      "first run with these kept results",
    );
    expect(ran(await run(one, own))).toEqual([]);
  }, 240_000);
});

describe("the digest of content", () => {
  test("equal content, however built, is equal; what differs differs", () => {
    expect(contentDigest({ a: 1, b: [2, undefined] })).toBe(
      contentDigest({ b: [2, undefined], a: 1, c: undefined }),
    );
    expect(contentDigest(new Map([["a", 1]]))).toBe(contentDigest(new Map([["a", 1]])));
    const different = [
      0,
      -0,
      Number.NaN,
      "0",
      "NaN",
      null,
      undefined,
      true,
      "true",
      1n,
      "1n",
      [],
      {},
      [[]],
      [undefined],
      [null],
      new Map(),
      new Set(),
      { a: 1 },
      { a: "1" },
      ["a", 1],
      ["a,1"],
      ['a","1'],
      new Map([["a", 1]]),
      new Map([["a", "1"]]),
      new Float64Array(1),
      new Float64Array(2),
      new Uint8Array(8),
      new Float64Array([-0]),
      new Float32Array(2),
    ];
    expect(new Set(different.map(contentDigest)).size).toBe(different.length);
  });

  test("what has no content is a bug, not a key", () => {
    expect(() => contentDigest({ refit: () => 0 })).toThrow("a function has no content");
  });
});

test("a result that another Node packed is made again; the reason is said in words", async () => {
  const reuse = reuseIn(join(home.path, "words"));
  const first = stepsIn(reuse, "p", "s");
  expect(
    await first.once(
      "x",
      () => ({ a: 1 }),
      () => new Map([["n", Number.NaN]]),
    ),
  ).toEqual(new Map([["n", Number.NaN]]));
  const second = stepsIn(reuse, "p", "s");
  expect(
    await second.once(
      "x",
      () => ({ a: 1 }),
      () => new Map(),
    ),
  ).toEqual(new Map([["n", Number.NaN]]));
  const third = stepsIn(reuse, "another program", "s");
  await third.once(
    "x",
    () => ({ a: 1 }),
    () => 3,
  );
  expect(third.notes).toEqual([{ step: "x", outcome: "ran", why: "covey itself changed" }]);
  expect(changeText({ a: "1", b: "1", c: "1" }, { a: "2", b: "2", d: "1" })).toBe(
    "a and b changed; d is new; c is gone",
  );
  const parts = { "covey itself": contentDigest("p"), a: contentDigest(1) };
  await reuse.put(`step x ${contentDigest(parts)}`, new TextEncoder().encode("not packed by V8"));
  const fourth = stepsIn(reuse, "p", "s");
  expect(
    await fourth.once(
      "x",
      () => ({ a: 1 }),
      () => 4,
    ),
  ).toBe(4);
});
