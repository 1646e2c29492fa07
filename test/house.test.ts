import { readdirSync, readFileSync, statSync } from "node:fs";
import { dirname, join, posix, relative } from "node:path";
import { fileURLToPath } from "node:url";
import { parseSync } from "oxc-parser";
import { describe, expect, test } from "vitest";

/** Which folders of src a folder may import; `data`, `math` and `errors.ts` are open to all. */
const PURE = ["data", "math", "errors"];
const EDGES: Readonly<Record<string, readonly string[]>> = {
  cli: ["commands"],
  index: ["commands", "pipeline", "spec"],
  commands: ["pipeline", "inspect", "spec", "terminal", "publish", "effects"],
  pipeline: [
    "spec",
    "workers",
    "report",
    "publish",
    "tables",
    "simulate",
    "compare",
    "screen",
    "survival",
    "solve",
    "components",
    "collinearity",
    "covariates",
    "aggregate",
    "layers",
    "stations",
    "study",
    "effects",
  ],
  terminal: ["spec", "tables", "effects"],
  inspect: ["layers", "stations", "study", "effects"],
  spec: [
    "study",
    "stations",
    "layers",
    "aggregate",
    "covariates",
    "collinearity",
    "components",
    "survival",
    "screen",
  ],
  workers: ["layers", "screen", "compare", "simulate", "effects"],
  report: [
    "tables",
    "simulate",
    "compare",
    "screen",
    "survival",
    "components",
    "collinearity",
    "covariates",
    "aggregate",
    "layers",
    "stations",
    "study",
  ],
  publish: ["tables", "effects"],
  tables: [
    "simulate",
    "compare",
    "screen",
    "survival",
    "components",
    "collinearity",
    "covariates",
    "aggregate",
    "layers",
    "stations",
    "study",
  ],
  simulate: ["screen", "compare", "survival"],
  compare: ["screen", "survival", "components", "collinearity"],
  screen: ["survival", "solve", "effects"],
  survival: ["solve", "study"],
  solve: [],
  components: ["collinearity"],
  collinearity: [],
  covariates: ["aggregate"],
  aggregate: [],
  layers: ["effects"],
  stations: ["effects"],
  study: ["effects"],
  effects: [],
  data: [],
  math: [],
  errors: [],
};
/** Edges on which only types may pass: nothing of the room is run there. */
const TYPES_ONLY: readonly (readonly [string, string])[] = [
  ["spec", "*"],
  ["report", "*"],
  ["tables", "*"],
  ["covariates", "aggregate"],
];
/** Real functions the page and the tables may call all the same. */
const RUN_ALLOWED: readonly (readonly [string, string])[] = [["report", "tables"]];

const SRC = fileURLToPath(new URL("../src", import.meta.url));

interface Edge {
  readonly from: string;
  readonly to: string;
  readonly typeOnly: boolean;
}

function sources(folder: string): string[] {
  return readdirSync(folder).flatMap((name) => {
    const path = join(folder, name);
    return statSync(path).isDirectory() ? sources(path) : /\.ts$/.test(name) ? [path] : [];
  });
}

/** The folder of a file below src, or the file's own name at the top. */
function room(file: string): string {
  const parts = file.split("/");
  return parts.length === 1 ? parts[0].replace(/\.ts$/, "") : parts[0];
}

function edgesOf(file: string, code: string): Edge[] {
  const { module } = parseSync(file, code);
  const from: Edge[] = [];
  const add = (specifier: string, typeOnly: boolean) => {
    if (!specifier.startsWith(".")) return;
    from.push({ from: file, to: posix.normalize(posix.join(dirname(file), specifier)), typeOnly });
  };
  for (const entry of module.staticImports)
    add(entry.moduleRequest.value, entry.entries.length > 0 && entry.entries.every((one) => one.isType));
  for (const entry of module.staticExports)
    for (const one of entry.entries) if (one.moduleRequest) add(one.moduleRequest.value, one.isType);
  for (const entry of module.dynamicImports) {
    const text = code.slice(entry.moduleRequest.start, entry.moduleRequest.end);
    if (/^["'].*["']$/.test(text)) add(text.slice(1, -1), false);
  }
  return from;
}

function complaints(edges: readonly Edge[]): string[] {
  return edges.flatMap((edge) => {
    const [from, to] = [room(edge.from), room(edge.to)];
    if (from === to) return [];
    if (!(from in EDGES)) return [`${edge.from}: no such room in the table`];
    if (!PURE.includes(to) && !EDGES[from].includes(to)) return [`${edge.from} must not import ${edge.to}`];
    const typesOnly = TYPES_ONLY.some(([a, b]) => a === from && (b === "*" || b === to));
    const open = PURE.includes(to) || RUN_ALLOWED.some(([a, b]) => a === from && b === to);
    if (typesOnly && !open && !edge.typeOnly) return [`${edge.from} may import only types from ${edge.to}`];
    return [];
  });
}

/** A circle among files, if there is one. */
function circle(edges: readonly Edge[]): string[] | undefined {
  const next = new Map<string, string[]>();
  for (const { from, to } of edges) next.set(from, [...(next.get(from) ?? []), to]);
  const state = new Map<string, "open" | "done">();
  const walk = (file: string, path: readonly string[]): string[] | undefined => {
    if (state.get(file) === "open") return [...path.slice(path.indexOf(file)), file];
    if (state.get(file) === "done") return undefined;
    state.set(file, "open");
    for (const to of next.get(file) ?? []) {
      const found = walk(to, [...path, file]);
      if (found) return found;
    }
    state.set(file, "done");
    return undefined;
  };
  for (const file of next.keys()) {
    const found = walk(file, []);
    if (found) return found;
  }
  return undefined;
}

const FILES = sources(SRC)
  .map((path) => relative(SRC, path).split("\\").join("/"))
  .sort();
const ALL = FILES.flatMap((file) => edgesOf(file, readFileSync(join(SRC, file), "utf8")));

describe("the house", () => {
  test("imports between folders stay on the edges of the table", () => {
    expect(ALL.length).toBeGreaterThan(50);
    expect(complaints(ALL)).toEqual([]);
  });

  test("no circles, type imports counted", () => {
    expect(circle(ALL)).toBeUndefined();
  });

  test("a planted forbidden import, type import and circle are seen", () => {
    const planted = edgesOf("solve/newton.ts", 'import { x } from "../survival/likelihood.ts";');
    expect(complaints(planted)).toEqual(["solve/newton.ts must not import survival/likelihood.ts"]);
    const run = edgesOf("tables/x.ts", 'import { x } from "../compare/x.ts";');
    expect(complaints(run)).toEqual(["tables/x.ts may import only types from compare/x.ts"]);
    const type = edgesOf("aggregate/x.ts", 'import type { X } from "../stations/x.ts";');
    expect(complaints(type)).toEqual(["aggregate/x.ts must not import stations/x.ts"]);
    const lazy = edgesOf("math/x.ts", 'const x = await import("../cli.ts");');
    expect(complaints(lazy)).toEqual(["math/x.ts must not import cli.ts"]);
    const ring = [
      ...edgesOf("data/a.ts", 'export * from "./b.ts";'),
      ...edgesOf("data/b.ts", 'import "./a.ts";'),
    ];
    expect(circle(ring)).toEqual(["data/a.ts", "data/b.ts", "data/a.ts"]);
  });

  test("no file is over 400 lines, half are under 120", () => {
    const lengths = FILES.map((file) => readFileSync(join(SRC, file), "utf8").split("\n").length - 1);
    expect(FILES.filter((_, i) => lengths[i] > 400)).toEqual([]);
    expect(lengths.filter((n) => n < 120).length / lengths.length).toBeGreaterThanOrEqual(0.5);
  });

  test("only cli.ts prints or exits, and only effects read the clock or unseeded chance", () => {
    const forbidden = /\bconsole\.|process\.(exit|stdout|stderr|env)|Math\.random|Date\.now|new Date\(\)/;
    const hits = FILES.filter(
      (file) =>
        !["cli.ts", "pipeline/effects.ts"].includes(file) &&
        forbidden.test(readFileSync(join(SRC, file), "utf8")),
    );
    expect(hits).toEqual([]);
  });
});
