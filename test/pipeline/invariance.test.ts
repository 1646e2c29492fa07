import { cpSync, readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { silentProgress } from "../../src/effects/effects.ts";
import { randomStream } from "../../src/math/random.ts";
import { nodeEffects } from "../../src/pipeline/effects.ts";
import { loadPipeline } from "../../src/pipeline/load.ts";
import { runStages } from "../../src/pipeline/run.ts";
import { allTables } from "../../src/tables/all-tables.ts";
import type { Cell, Table } from "../../src/tables/table.ts";
import { type Edit, pipelineIn, ROOT, temporaryFolder } from "./covey.ts";
import { near } from "./table-difference.ts";

// What must not matter: the order of the animals, the order of the covariates, the unit a covariate is kept in.
const FEW: Edit = [/fit: shrunken \}/, "fit: shrunken, permutations: 0, resamples: 0 }"];
const folder = temporaryFolder();
afterAll(() => folder.remove());

type Tables = ReadonlyMap<string, Table>;

/** Every table of a run; nothing is written. */
async function tablesOf(edits: readonly Edit[]): Promise<Tables> {
  const loaded = loadPipeline(pipelineIn(folder.path, "pipelines/roost.yaml", [FEW, ...edits]));
  const { signal } = new AbortController();
  const effects = nodeEffects({
    dataFolder: loaded.dataFolder,
    workers: 1,
    progress: silentProgress,
    signal,
    reuseFolder: join(folder.path, "reuse"),
  });
  const { study } = await runStages(loaded, effects);
  return new Map(allTables(study).map((table) => [table.name, table]));
}

/** A column of a table by the values of another. */
function columnBy(tables: Tables, table: string, key: string, column: string): ReadonlyMap<Cell, Cell> {
  const found = tables.get(table);
  if (found === undefined) throw new Error(`no table ${table}`);
  const at = (name: string) => {
    const k = found.columns.findIndex((one) => one.name === name);
    if (k < 0) throw new Error(`${table} has no column ${name}`);
    return k;
  };
  const [k, j] = [at(key), at(column)];
  return new Map(found.rows.map((row) => [row[k], row[j]]));
}

/** Rows that differ by more than rounding, as text. */
function departures(a: ReadonlyMap<Cell, Cell>, b: ReadonlyMap<Cell, Cell>, tolerance: number): string[] {
  const same = (x: Cell, y: Cell) =>
    typeof x === "number" && typeof y === "number" ? Object.is(x, y) || near(x, y, tolerance) : x === y;
  const lost = [...b.keys()].filter((key) => !a.has(key)).map((key) => `${key}: only in the second`);
  return [
    ...lost,
    ...[...a].filter(([key, x]) => !same(x, b.get(key))).map(([key, x]) => `${key}: ${x} and ${b.get(key)}`),
  ];
}

let base: Tables;
beforeAll(async () => {
  base = await tablesOf([]);
}, 300_000);

describe("animals in another order", () => {
  test("every table is the same to the last bit; findings but for the lines they quote", async () => {
    const data = join(folder.path, "data");
    cpSync(join(ROOT, "sample-data"), data, { recursive: true });
    const [head, ...rows] = readFileSync(join(data, "captures.csv"), "utf8").trimEnd().split("\n");
    const random = randomStream(7, "test", 0);
    for (let i = rows.length - 1; i > 0; i--) {
      const j = Math.floor(random.uniform() * (i + 1));
      [rows[i], rows[j]] = [rows[j], rows[i]];
    }
    writeFileSync(join(data, "captures.csv"), `${[head, ...rows].join("\n")}\n`);
    const shuffled = await tablesOf([[/^data: .*$/m, `data: ${JSON.stringify(data)}`]]);
    expect([...shuffled.keys()]).toEqual([...base.keys()]);
    for (const [name, table] of base) {
      if (name === "findings") continue;
      expect([name, shuffled.get(name)]).toEqual([name, table]);
    }
    const told = (tables: Tables) =>
      (tables.get("findings")?.rows ?? [])
        .map(([kind, severity, subject]) => `${kind} ${severity} ${subject}`)
        .sort();
    expect(told(shuffled)).toEqual(told(base));
  }, 300_000);
});

describe("covariates in another order", () => {
  let reversed: Tables;
  beforeAll(async () => {
    const text = readFileSync(join(ROOT, "pipelines/roost.yaml"), "utf8");
    const list = /^covariates:\n((?: {2}- .*\n)+)/m.exec(text)?.[1].split(/(?<=\n)/) ?? [];
    expect(list.length).toBe(14);
    reversed = await tablesOf([
      [/^covariates:\n(?: {2}- .*\n)+/m, `covariates:\n${[...list].reverse().join("")}`],
    ]);
  }, 300_000);

  test("the columns do stand in another order", () => {
    const names = (tables: Tables) => tables.get("covariates")?.columns.map((one) => one.name) ?? [];
    expect(names(reversed)).not.toEqual(names(base));
    expect([...names(reversed)].sort()).toEqual([...names(base)].sort());
  });

  test.each(["chosen_by_animals", "chosen_by_years"])("the same covariates are %s", (column) => {
    const chosen = (tables: Tables) => columnBy(tables, "selection", "covariate", column);
    expect([...chosen(base).values()]).toContain(true);
    expect(departures(chosen(base), chosen(reversed), 0)).toEqual([]);
  });

  test("weights, effects and −2 log L agree to rounding", () => {
    for (const column of ["first_estimate", "weight", "lasso", "refit_animals", "refit_years"]) {
      const of = (tables: Tables) => columnBy(tables, "selection", "covariate", column);
      expect([column, departures(of(base), of(reversed), 1e-6)]).toEqual([column, []]);
    }
    for (const column of ["minus_2_log_l", "bic", "deviance_explained"]) {
      const of = (tables: Tables) => columnBy(tables, "comparison", "candidate", column);
      expect([column, departures(of(base), of(reversed), 1e-9)]).toEqual([column, []]);
    }
  });

  test("inflation and the components' spread do not know the order", () => {
    const inflation = (tables: Tables) => columnBy(tables, "inflation", "covariate", "inflation");
    expect(departures(inflation(base), inflation(reversed), 1e-8)).toEqual([]);
    const sds = (tables: Tables) => columnBy(tables, "components", "component", "sd");
    expect(departures(sds(base), sds(reversed), 1e-8)).toEqual([]);
  });
});

describe("covariates kept in other units", () => {
  let other: Tables;
  beforeAll(async () => {
    other = await tablesOf([
      // millimetres to centimetres
      [/(name: winter rain, .*unit: )mm/, "$1cm"],
      [/(name: interval rain, .*statistic: mean,)/, "$1 unit: cm,"],
      // degrees Celsius to Fahrenheit, which moves the origin too
      [/(name: spring warmth, .*statistic: mean)/, "$1, unit: degF"],
    ]);
  }, 300_000);

  test("the values are in the other unit", () => {
    const rain = (tables: Tables) => columnBy(tables, "covariates", "interval", "winter_rain");
    for (const [interval, value] of rain(base))
      expect(near(Number(value), 10 * Number(rain(other).get(interval)), 1e-12)).toBe(true);
    const warmth = (tables: Tables) => columnBy(tables, "covariates", "interval", "spring_warmth");
    for (const [interval, value] of warmth(base))
      expect(near(Number(value) * 1.8 + 32, Number(warmth(other).get(interval)), 1e-12)).toBe(true);
  });

  test("selection and −2 log L stay, to a relative 1e-9", () => {
    for (const column of ["chosen_by_animals", "chosen_by_years", "refit_animals", "refit_years"]) {
      const of = (tables: Tables) => columnBy(tables, "selection", "covariate", column);
      expect([column, departures(of(base), of(other), 1e-9)]).toEqual([column, []]);
    }
    for (const column of ["survival", "minus_2_log_l", "aicc", "bic"]) {
      const of = (tables: Tables) => columnBy(tables, "comparison", "candidate", column);
      expect([column, departures(of(base), of(other), 1e-9)]).toEqual([column, []]);
    }
  });
});
