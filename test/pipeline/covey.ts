import { spawn } from "node:child_process";
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { dirname, join, relative, resolve } from "node:path";
import { fileURLToPath } from "node:url";
import { parse } from "csv-parse/sync";
import { silentProgress } from "../../src/effects/effects.ts";
import { type Executed, execute } from "../../src/pipeline/execute.ts";
import { loadPipeline } from "../../src/pipeline/load.ts";
import type { Stage } from "../../src/pipeline/run.ts";

export const ROOT = fileURLToPath(new URL("../..", import.meta.url));
const CLI = join(ROOT, "dist/cli.js");

/** A folder below the system's temporary one, and what removes it. */
export function temporaryFolder(): { readonly path: string; readonly remove: () => void } {
  const path = mkdtempSync(join(tmpdir(), "covey-whole-"));
  return { path, remove: () => rmSync(path, { recursive: true, force: true }) };
}

/** One replacement in a pipeline's text; it must hit. */
export type Edit = readonly [find: RegExp, replacement: string];

/**
 * Writes a copy of a pipeline file into `folder`: its data folder made absolute, its output `folder`/out, then the
 * edits. Gives the path of the copy.
 */
export function pipelineIn(
  folder: string,
  source: string,
  edits: readonly Edit[] = [],
  name = "pipeline.yaml",
): string {
  const from = resolve(ROOT, source);
  const data = /^data: (.*)$/m.exec(readFileSync(from, "utf8"))?.[1] ?? ".";
  const all: Edit[] = [
    [/^data: .*$/m, `data: ${JSON.stringify(resolve(dirname(from), data))}`],
    [/^output: .*$/m, "output: out"],
    ...edits,
  ];
  const text = all.reduce(
    (before, [find, replacement]) => {
      if (!find.test(before)) throw new Error(`${source} holds no ${find}`);
      return before.replace(find, replacement);
    },
    readFileSync(from, "utf8"),
  );
  const to = join(folder, name);
  writeFileSync(to, text);
  return to;
}

/** A run within this process. */
export function runHere(pipeline: string, workers = 1, through: Stage = "compare"): Promise<Executed> {
  const options = { workers, through, progress: silentProgress, signal: new AbortController().signal };
  return execute(loadPipeline(pipeline), { version: "0.0.0", nodeMajor: 20 }, options);
}

export interface Ended {
  /** 128 + number for a process that a signal ended, as a shell says it. */
  readonly code: number;
  readonly stdout: string;
  readonly stderr: string;
}

export interface SpawnOptions {
  readonly cwd?: string;
  /** Called once the child has started, to send it a signal. */
  readonly started?: (pid: number) => void;
  /** Close the reading end of the child's stdout at once. */
  readonly deaf?: boolean;
}

/** Types a command: the compiled program in a process of its own, its output in pipes. */
export function covey(args: readonly string[], options: SpawnOptions = {}): Promise<Ended> {
  return new Promise((done, fail) => {
    const child = spawn(process.execPath, [CLI, ...args], { cwd: options.cwd ?? ROOT });
    let [stdout, stderr] = ["", ""];
    child.stdout.setEncoding("utf8").on("data", (text: string) => {
      stdout += text;
    });
    child.stderr.setEncoding("utf8").on("data", (text: string) => {
      stderr += text;
    });
    if (options.deaf === true) child.stdout.destroy();
    child.on("error", fail);
    child.on("spawn", () => {
      if (child.pid !== undefined) options.started?.(child.pid);
    });
    child.on("close", (code, signal) => {
      done({ code: code ?? (signal === "SIGKILL" ? 137 : 130), stdout, stderr });
    });
  });
}

/** Every file below a folder with its bytes, paths sorted by code unit. */
export function bytesBelow(folder: string): ReadonlyMap<string, Buffer> {
  const paths = readdirSync(folder, { recursive: true, withFileTypes: true })
    .filter((one) => one.isFile())
    .map((one) => relative(folder, join(one.parentPath, one.name)).replaceAll("\\", "/"))
    .sort();
  return new Map(paths.map((path) => [path, readFileSync(join(folder, path))]));
}

export type Row = Readonly<Record<string, string>>;

/** A CSV by rows, cells as they are written. */
export function readRows(file: string): readonly Row[] {
  return parse(readFileSync(file, "utf8"), { columns: true }) as Row[];
}

/** A table of an output folder. */
export function tableOf(output: string, name: string): readonly Row[] {
  return readRows(join(output, "tables", `${name}.csv`));
}
