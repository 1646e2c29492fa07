import { createHash } from "node:crypto";
import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { parse } from "csv-parse/sync";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { nodeDisk } from "../../src/pipeline/effects.ts";
import type { Executed } from "../../src/pipeline/execute.ts";
import { verifyOutput } from "../../src/publish/verify.ts";
import { bytesBelow, type Edit, pipelineIn, ROOT, runHere, temporaryFolder } from "./covey.ts";

// The pipelines that ship, over the sample study, with few permutations; written to a temporary folder.
const NAMES = ["roost", "stations-only", "layers-only", "covariates-only"];
/** Two chunks of work, so that two workers have one each. */
const FEW: Edit = [/fit: shrunken \}/, "fit: shrunken, permutations: 19, resamples: 2 }"];

interface Run {
  readonly done: Executed;
  readonly files: ReadonlyMap<string, Buffer>;
}
const runs = new Map<string, Run>();
const folders = NAMES.map(() => temporaryFolder());
const again = temporaryFolder();

afterAll(() => {
  for (const folder of [...folders, again]) folder.remove();
});

beforeAll(async () => {
  for (const [i, name] of NAMES.entries()) {
    const edits = name === "covariates-only" ? [] : [FEW];
    const done = await runHere(pipelineIn(folders[i].path, `pipelines/${name}.yaml`, edits));
    runs.set(name, { done, files: bytesBelow(done.folder) });
  }
}, 300_000);

function runOf(name: string): Run {
  const run = runs.get(name);
  if (run === undefined) throw new Error(`${name} did not run`);
  return run;
}

test("all shipped pipelines are looked at", () => {
  const shipped = readdirSync(join(ROOT, "pipelines")).filter((file) => file.endsWith(".yaml"));
  expect(shipped.sort()).toEqual(NAMES.map((name) => `${name}.yaml`).sort());
});

interface Resource {
  readonly path: string;
  readonly bytes: number;
  readonly hash: string;
  readonly schema: { readonly fields: readonly { name: string; type: string }[]; missingValues: string[] };
}

/** What a cell of a type may look like, by Table Schema; the missing value aside. */
const SHAPES: Readonly<Record<string, RegExp>> = {
  string: /^[\s\S]+$/,
  number: /^(?:-?\d+(?:\.\d+)?(?:e[+-]?\d+)?|-?INF)$/,
  integer: /^-?\d+$/,
  boolean: /^(?:true|false)$/,
};

/** A JSON value as the CSV writes it. */
const plain = (value: unknown) => (value === null ? "" : Object.is(value, -0) ? "-0" : String(value));

describe.each(NAMES)("pipelines/%s.yaml", (name) => {
  const text = (path: string) => runOf(name).files.get(path)?.toString("utf8") ?? "";

  test("nothing stops the run, and the output agrees with its record", () => {
    const { done } = runOf(name);
    expect(done.study.findings.filter((one) => one.severity === "stop")).toEqual([]);
    const verified = verifyOutput(nodeDisk(), done.folder);
    expect(verified.departures).toEqual([]);
    expect(verified.recorded).toBe(runOf(name).files.size - 1);
  });

  test("page, record, package, figures and tables are there", () => {
    const paths = [...runOf(name).files.keys()];
    const tables = ["covariates", "covariates-standardised", "covariate-dictionary", "interval-values"];
    const more = ["intervals", "correlations", "inflation", "condition-indices", "findings"];
    const fitted = ["recapture-parts", "lasso-path", "selection", "apparent-survival", "comparison"];
    const due = [...tables, ...more, ...(name === "covariates-only" ? [] : fitted)];
    expect(paths).toEqual(
      expect.arrayContaining([
        "report.html",
        "run-record.json",
        "datapackage.json",
        ...due.flatMap((table) => [`tables/${table}.csv`, `tables/${table}.json`]),
        "tables/covariates.parquet",
        "tables/covariates-standardised.parquet",
        "figures/85mm/time-ribbon.png",
      ]),
    );
    expect(paths.includes("tables/selection.csv")).toBe(name !== "covariates-only");
    for (const [path, bytes] of runOf(name).files) expect([path, bytes.length > 0]).toEqual([path, true]);
  });

  test("the page says the verdict, and holds no place where a number failed", () => {
    const page = text("report.html");
    expect(page).toContain(runOf(name).done.study.intervals[0].name);
    const verdict = runOf(name).done.study.comparison?.verdict;
    expect(verdict === undefined).toBe(name === "covariates-only");
    // a number and its per cent sign stay on one line
    for (const sentence of [verdict?.headline ?? "", verdict?.animals ?? "", verdict?.caution ?? ""])
      expect(page).toContain(sentence.replace(/(\d) %/g, "$1\u00a0%"));
    const visible = page.replace(/<script[\s\S]*?<\/script>/g, "").replace(/<style[\s\S]*?<\/style>/g, "");
    expect(visible.replace(/<[^>]*>/g, " ")).not.toMatch(/\b(?:undefined|NaN|\[object)/);
    for (const [path, bytes] of runOf(name).files)
      if (path.endsWith(".svg"))
        expect([path, /NaN|undefined/.test(bytes.toString())]).toEqual([path, false]);
  });

  test("every CSV is what datapackage.json says: size, hash, columns, types, missing values", () => {
    const { resources } = JSON.parse(text("datapackage.json")) as { resources: Resource[] };
    const csv = [...runOf(name).files.keys()].filter((path) => path.endsWith(".csv"));
    expect(resources.map((one) => one.path).sort()).toEqual(csv);
    const faults = resources.flatMap(({ path, bytes, hash, schema }) => {
      const content = runOf(name).files.get(path) ?? Buffer.alloc(0);
      expect([path, content.length, `sha256:${createHash("sha256").update(content).digest("hex")}`]).toEqual([
        path,
        bytes,
        hash,
      ]);
      const [head, ...rows] = parse(content.toString("utf8"), { relax_column_count: false }) as string[][];
      expect([path, head]).toEqual([path, schema.fields.map((field) => field.name)]);
      return rows.flatMap((row, i) =>
        schema.fields.flatMap(({ name: column, type }, k) =>
          schema.missingValues.includes(row[k]) || SHAPES[type].test(row[k])
            ? []
            : [`${path} row ${i + 1} ${column}: ${row[k]} is no ${type}`],
        ),
      );
    });
    expect(faults).toEqual([]);
  });

  test("the JSON of a table holds the rows of its CSV", () => {
    for (const path of runOf(name).files.keys()) {
      if (!/^tables\/.*\.csv$/.test(path)) continue;
      const [head, ...rows] = parse(text(path)) as string[][];
      const json = JSON.parse(text(path.replace(/csv$/, "json"))) as Record<string, unknown>[];
      const asText = json.map((row) => head.map((column) => plain(row[column])));
      expect([path, asText]).toEqual([path, rows]);
    }
  });
});

test("no latitude of the sensitive places stands in any file", () => {
  const places = readFileSync(join(ROOT, "sample-data/places.geojson"), "utf8");
  const latitudes = places.match(/\b55\.\d{3,}/g) ?? [];
  expect(latitudes.length).toBeGreaterThan(10);
  const told = NAMES.flatMap((name) =>
    [...runOf(name).files].flatMap(([path, bytes]) =>
      latitudes.filter((digits) => bytes.includes(digits)).map((digits) => `${name} ${path}: ${digits}`),
    ),
  );
  expect(told).toEqual([]);
});

test("one worker or two: the same bytes of every file", async () => {
  const two = await runHere(pipelineIn(again.path, "pipelines/roost.yaml", [FEW]), 2);
  const first = runOf("roost").files;
  const second = bytesBelow(two.folder);
  expect([...second.keys()]).toEqual([...first.keys()]);
  const different = [...first].filter(([path, bytes]) => !second.get(path)?.equals(bytes));
  expect(different.map(([path]) => path)).toEqual([]);
}, 300_000);
