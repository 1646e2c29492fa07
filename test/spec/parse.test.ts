import { readdirSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { FINDING_KINDS } from "../../src/data/finding.ts";
import { InputError } from "../../src/errors.ts";
import { parsePipeline, pipelineProblems, readPipeline } from "../../src/spec/parse.ts";
import { BAD_PIPELINES } from "./bad.ts";
import { edited, GOOD } from "./good.ts";

const here = (path: string) => new URL(path, import.meta.url);
const VOCABULARY = readFileSync(here("vocabulary.yaml"), "utf8");

function refusal(text: string): InputError {
  try {
    parsePipeline(text, "p.yaml");
  } catch (error) {
    if (error instanceof InputError) return error;
    throw error;
  }
  throw new Error("the pipeline was accepted");
}

const bad = ({ from, to }: { readonly from: string | null; readonly to: string }) =>
  from === null ? to : edited(from, to);

describe("good pipelines", () => {
  test("the whole vocabulary is understood", () => {
    const spec = parsePipeline(VOCABULARY, "vocabulary.yaml");
    expect(spec.study).toEqual({ title: "An invented maternity roost", sensitive: true, coarsenKm: 10 });
    expect(spec.occasions).toEqual({
      file: "occasions.csv",
      name: "visit",
      start: "from",
      end: "to",
      format: "yyyy-MM-dd",
      lengths: "whole years",
      effort: "net_hours",
    });
    expect(spec.records[0]).toMatchObject({
      layout: "long",
      missing: ["-9999"],
      station: { column: "site" },
    });
    expect(spec.records[1]).toMatchObject({ station: { always: "050114" }, missing: [] });
    expect(spec.layers.greenness).toEqual({
      files: ["layers/green_*.tif"],
      date: { name: "green_{yyyy}_{MM}" },
      covers: "month",
      scale: 0.0001,
      fill: -3000,
      valid: [-0.2, 1],
      unit: "1",
      kind: "mean",
    });
    expect(spec.readyMade).toEqual({
      visits: { file: "intervals.csv", interval: "interval", columns: { disturbance: { unit: "1" } } },
    });
    expect(spec.covariates.map((one) => [one.name, one.source])).toEqual([
      ["winter rain", "stations"],
      ["cold nights", "stations"],
      ["hot spell", "stations"],
      ["interval rain", "stations"],
      ["last summer", "stations"],
      ["spring green", "layer"],
      ["snow at roost", "layer"],
      ["disturbance", "ready-made"],
    ]);
    expect(spec.covariates[2]).toEqual({
      source: "stations",
      name: "hot spell",
      theme: "temperature",
      variable: "tmax",
      stations: ["Ash"],
      join: "mean of windows",
      window: { type: "span", from: { days: -60, of: "end" }, to: { days: 0, of: "end" }, lag: 0 },
      statistic: { type: "quantile", probability: 0.9 },
      complete: { type: "wmo" },
    });
    expect(spec.covariates[5]).toMatchObject({
      place: "winter range",
      use: { by: "area", validArea: 0.8 },
      window: { type: "season", from: { month: 3, day: 1 }, to: { month: 5, day: 0 } },
    });
    expect(spec.prepare).toEqual({
      derive: [
        {
          name: "contrast",
          theme: "temperature",
          unit: "degC",
          rule: "difference",
          of: ["hot spell", "last summer"],
        },
      ],
      transform: { "winter rain": "square root" },
      detrend: "none",
      incomplete: "leave out",
      standardise: { type: "sample" },
    });
    expect(spec.recapture).toBe("constant");
    expect(spec.findings.duplicate).toEqual({
      do: "stop",
      except: [{ file: "stations/upland.csv", do: "accept", note: "typed twice" }],
    });
    expect(spec.duplicates).toEqual({
      keep: "none",
      except: [{ file: "stations/upland.csv", keep: "first", note: "typed twice" }],
    });
  });

  test("everything that may be left out has the stated default", () => {
    const spec = parsePipeline(
      "covey: 1\nstudy: { title: T }\nready-made: { v: { file: v.csv, interval: i, columns: { a: { unit: m } } } }\n" +
        "covariates: [{ name: a, theme: t, from: v.a }]\n",
      "p.yaml",
    );
    const { findings, ...rest } = spec;
    expect(rest).toEqual({
      schema: 1,
      figures: { svg: true, png: true },
      study: { title: "T", sensitive: false, coarsenKm: 10 },
      data: ".",
      output: "covey-output",
      seed: 1,
      places: {},
      records: [],
      layers: {},
      readyMade: { v: { file: "v.csv", interval: "i", columns: { a: { unit: "m" } } } },
      covariates: [{ source: "ready-made", name: "a", theme: "t", table: "v", column: "a", unit: "m" }],
      prepare: {
        derive: [],
        transform: {},
        detrend: "none",
        incomplete: "leave out",
        standardise: { type: "sample" },
      },
      collinearity: { warn: { correlation: 0.7, inflation: 10, condition: 30 }, cluster: 0.7, decisions: [] },
      components: { keep: { type: "broken stick" }, within: "all", simplify: "none", resamples: 0 },
      survival: {
        strata: [],
        forced: [],
        yearTrend: false,
        sinceMarking: "ignored",
        covariatesActOn: "all intervals",
        split: "none",
      },
      recapture: "choose",
      screen: {
        steps: 100,
        downTo: 0.001,
        gamma: 1,
        chooseBy: "BIC",
        sampleSize: "releases",
        fit: "shrunken",
        permutations: 199,
        resamples: 50,
      },
      duplicates: { keep: "none", except: [] },
    });
    expect(Object.keys(findings)).toEqual([...FINDING_KINDS]);
    expect(findings.gap).toEqual({ do: "warn", except: [] });
    expect(findings.duplicate).toEqual({ do: "stop", except: [] });
    expect(findings["never-recaptured"]).toEqual({ do: "accept", except: [] });
  });

  test("the pipelines that ship are good", () => {
    const folder = here("../../pipelines/");
    const names = readdirSync(folder).filter((name) => name.endsWith(".yaml"));
    expect(names.length).toBeGreaterThan(0);
    for (const name of names)
      expect(pipelineProblems(readFileSync(new URL(name, folder), "utf8"), name)).toEqual([]);
  });

  test("missing values keep the digits they are written with", () => {
    expect(parsePipeline(GOOD, "p.yaml").records[0].missing).toEqual(["-9999", "-99.90", "NA"]);
  });

  test("wide records, zero-one captures and counts", () => {
    const wide = parsePipeline(
      edited(
        "layers:\n",
        '  - { layout: wide, files: [w.csv], date: { column: d, format: yyyy-MM, covers: month }, variable: sun, unit: h, kind: total, columns: { "1": Ash, B: "007" } }\nlayers:\n',
      ),
      "p.yaml",
    );
    expect(wide.records[1]).toEqual({
      layout: "wide",
      files: ["w.csv"],
      date: { column: "d", format: "yyyy-MM", covers: "month" },
      missing: [],
      variable: "sun",
      unit: "h",
      kind: "total",
      day: 0,
      scale: 1,
      columns: { "1": "Ash", B: "007" },
    });
    const dated = "  layout: dated\n  file: captures.csv\n  animal: ring\n  date: date\n";
    const zeroOne = parsePipeline(
      edited(dated, "  layout: zero-one\n  file: c.csv\n  animal: a\n  number: n\n"),
      "p.yaml",
    );
    expect(zeroOne.captures).toEqual({
      layout: "zero-one",
      file: "c.csv",
      animal: "a",
      number: "n",
      strata: ["sex"],
    });
    const counts = parsePipeline(
      edited(
        dated,
        "  layout: counts\n  file: c.csv\n  released at: o\n  released: r\n  columns: ['2', '3']\n",
      ),
      "p.yaml",
    );
    expect(counts.captures).toEqual({
      layout: "counts",
      file: "c.csv",
      releasedAt: "o",
      released: "r",
      columns: ["2", "3"],
      strata: ["sex"],
    });
  });

  test.each([
    ["{ share: 0.8 }", { type: "share", share: 0.8 }],
    ["{ number: 3 }", { type: "number", number: 3 }],
    ["eigenvalue", { type: "eigenvalue" }],
    ["parallel", { type: "parallel", replicates: 1000, quantile: 0.95 }],
    ["{ parallel: { quantile: 0.99 } }", { type: "parallel", replicates: 1000, quantile: 0.99 }],
  ])("components kept: %s", (text, rule) => {
    const spec = parsePipeline(`${GOOD}components: { keep: ${text} }\n`, "p.yaml");
    expect(spec.components.keep).toEqual(rule);
  });

  test.each([
    ["by: nearest", { by: "nearest" }],
    ["by: bilinear", { by: "bilinear" }],
    ["by: area, valid area: 0.5", { by: "area", validArea: 0.5 }],
    ["by: radius, radius: 2.5 km", { by: "radius", metres: 2500, validArea: 0.8 }],
    ["by: radius, radius: 300 m, valid area: 1", { by: "radius", metres: 300, validArea: 1 }],
  ])("a layer read %s", (text, use) => {
    expect(parsePipeline(edited("by: area", text), "p.yaml").covariates[2]).toMatchObject({ use });
  });

  test("split dates, traces, quality flags, limits and bands", () => {
    const text = edited(
      "date: { column: day }",
      "date: { column: year, with: [month, day], format: yyyy M d }",
    )
      .replace(
        "kind: total }",
        "kind: total, trace: { text: T, value: 0.1 }, quality: { column: q, pass: [A] }, limits: [0, 500] }",
      )
      .replace("covers: month", "covers: month\n    band: 2");
    const spec = parsePipeline(text, "p.yaml");
    expect(spec.records[0].date).toEqual({
      column: "year",
      with: ["month", "day"],
      format: "yyyy M d",
      covers: "day",
    });
    expect(spec.records[0]).toMatchObject({
      series: {
        rain: { trace: { text: "T", value: 0.1 }, quality: { column: "q", pass: ["A"] }, limits: [0, 500] },
      },
    });
    expect(spec.layers.snow.band).toBe(2);
  });

  test("images of 16 days", () => {
    expect(parsePipeline(edited("covers: month", "covers: 16 days"), "p.yaml").layers.snow.covers).toEqual({
      days: 16,
    });
  });

  test("a repeated part may be an anchor and its alias", () => {
    const text = edited("window: { season: Nov to Feb }", "window: &winter { season: Nov to Feb }").replace(
      "window: { season: Dec to Feb }",
      "window: *winter",
    );
    const { covariates } = parsePipeline(text, "p.yaml");
    expect(covariates[2]).toMatchObject({ window: { type: "season", from: { month: 11, day: 1 } } });
  });
});

describe("bad pipelines", () => {
  test("there are at least 60, each told apart", () => {
    expect(BAD_PIPELINES.length).toBeGreaterThanOrEqual(60);
    expect(new Set(BAD_PIPELINES.map(({ title }) => title)).size).toBe(BAD_PIPELINES.length);
  });

  test.each(BAD_PIPELINES)("$title", ({ from, to, name, message }) => {
    const error = refusal(bad({ from, to }));
    expect(error.message).toBe(message);
    expect(error.facts.name).toBe(name);
    expect(error.exitCode).toBe(2);
  });

  test("where the found text is quoted, line and column point at it", () => {
    let checked = 0;
    for (const one of BAD_PIPELINES) {
      const text = bad(one);
      const { found, where } = refusal(text).facts;
      const word = /^"([\w .-]+)"$/.exec(found)?.[1];
      if (word === undefined || where?.line === undefined || where.column === undefined) continue;
      const rest = text.split("\n")[where.line - 1].slice(where.column - 1);
      expect(rest.replace(/^"/, "").startsWith(word), `${one.title}: ${rest}`).toBe(true);
      checked++;
    }
    expect(checked).toBeGreaterThan(40);
  });

  test("all problems are listed in the order of the file", () => {
    const text = edited("animal: ring", "anmial: ring")
      .replace("steps: 50", "steps: 1")
      .replace("kind: total", "kind: x");
    const facts = pipelineProblems(text, "p.yaml");
    expect(facts.map(({ name, where }) => [name, where?.line])).toEqual([
      ["spec.unknown-key", 10],
      ["spec.not-a-choice", 23],
      ["spec.out-of-range", 53],
    ]);
    expect(refusal(text).message).toMatch(/\(and 2 more problems further down\)$/);
    expect(pipelineProblems(GOOD, "p.yaml")).toEqual([]);
    expect(pipelineProblems("a: [", "p.yaml").map(({ name }) => name)).toEqual(["spec.yaml"]);
  });
});

describe("positions", () => {
  const { positions } = readPipeline(GOOD, "p.yaml");
  test.each([
    [["seed"], 5, 7],
    [["covariates", 0, "window", "season"], 40, 23],
    [["covariates", 2], 43, 5],
    [["layers", "snow", "files", 0], 27, 13],
    // Not written: the key that would hold it.
    [["covariates", 0, "complete"], 36, 5],
    [["layers", "snow", "scale"], 26, 3],
    [["components", "keep"], 1, 1],
  ])("%j stands at %i:%i", (path, line, column) => {
    expect(positions(path)).toEqual({ line, column });
  });
});
