import { cpSync, mkdirSync, readdirSync, readFileSync, rmSync, symlinkSync, writeFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";
import { gzipSync } from "node:zlib";
import { parse } from "yaml";
import { applyCommand } from "../../src/commands/apply.ts";
import type { Terminal } from "../../src/commands/io.ts";
import { lookCommand } from "../../src/commands/look.ts";
import { stageNamed } from "../../src/commands/run.ts";
import { effectSizes, residualSd, simulateCommand } from "../../src/commands/simulate.ts";
import { startCommand } from "../../src/commands/start.ts";
import { verifyCommand } from "../../src/commands/verify.ts";
import { silentProgress } from "../../src/effects/effects.ts";
import { CoveyError, placeText } from "../../src/errors.ts";
import { requireReuseFolder } from "../../src/pipeline/effects/reuse.ts";
import { nodeDisk, nodeEffects } from "../../src/pipeline/effects.ts";
import { loadPipeline } from "../../src/pipeline/load.ts";
import { planRun } from "../../src/pipeline/plan.ts";
import { runStages } from "../../src/pipeline/run.ts";
import { openOutput } from "../../src/publish/folder.ts";
import { styleOf } from "../../src/terminal/style.ts";

/** One change of the good study. Of the last seven keys one is given. */
export interface Change {
  readonly in: string;
  readonly replace?: string;
  readonly with?: string;
  /** The file's whole new text. */
  readonly write?: string;
  /** The file's bytes, as hexadecimal digits. */
  readonly bytes?: string;
  /** Lines put at the end. */
  readonly add?: string;
  /** How many times `add` is put there; once if not given. */
  readonly times?: number;
  /** How the text, changed or not, is saved: latin1, utf16le, gzip, cut (first half of the bytes). */
  readonly save?: "latin1" | "utf16le" | "gzip" | "cut";
  readonly remove?: boolean;
  /** A symbolic link to this. */
  readonly link?: string;
}

/** A case of the corpus as it stands in a YAML file of this folder. */
export interface BadInput extends Partial<Change> {
  readonly case: string;
  readonly changes?: readonly Change[];
  /** Command and arguments; `check pipeline.yaml` if not given. */
  readonly command?: string;
  /** The error's name, or `finding KIND` where the pipeline's policy decides what it does. */
  readonly name: string;
  readonly says: string;
}

const HERE = fileURLToPath(new URL(".", import.meta.url));

/** The corpus: files of cases in this folder, by name. */
export function corpus(): readonly { readonly file: string; readonly cases: readonly BadInput[] }[] {
  return readdirSync(HERE)
    .filter((name) => name.endsWith(".yaml"))
    .sort()
    .map((file) => ({ file, cases: parse(readFileSync(join(HERE, file), "utf8")) as BadInput[] }));
}

function apply(folder: string, change: Change): void {
  const file = join(folder, change.in);
  mkdirSync(dirname(file), { recursive: true });
  if (change.remove === true) rmSync(file, { recursive: true });
  else if (change.link !== undefined) {
    rmSync(file, { force: true });
    symlinkSync(change.link, file);
  } else writeFileSync(file, changed(file, change));
}

/** The bytes of a file after a change. */
function changed(file: string, change: Change): Uint8Array {
  if (change.bytes !== undefined) return Buffer.from(change.bytes.replaceAll(/\s/g, ""), "hex");
  let text = change.write ?? readFileSync(file, "latin1");
  const before = text;
  const inFile = (piece: string) => Buffer.from(piece, "utf8").toString("latin1");
  if (change.write !== undefined) text = inFile(change.write);
  if (change.replace !== undefined) {
    text = text.replace(inFile(change.replace), () => inFile(change.with ?? ""));
    if (text === before) throw new Error(`${change.in} of the good study does not hold ${change.replace}`);
  }
  if (change.add !== undefined) text += inFile(change.add).repeat(change.times ?? 1);
  const bytes = Buffer.from(text, "latin1");
  if (change.save === "cut") return bytes.subarray(0, bytes.length >> 1);
  if (change.save === "gzip") return gzipSync(bytes);
  return change.save === undefined ? bytes : Buffer.from(bytes.toString("utf8"), change.save);
}

const terminal: Terminal = {
  style: styleOf(false),
  width: 80,
  progress: silentProgress,
  signal: new AbortController().signal,
  workers: 1,
  version: "0.0.0",
  nodeMajor: 20,
};

/** What the program says of a case: `name` and text of the error, or of the finding the case asks for. */
export async function said(
  one: BadInput,
  folder: string,
): Promise<{ readonly name: string; readonly says: string }> {
  cpSync(join(HERE, "good"), folder, { recursive: true });
  const own = "in" in one && one.in !== undefined ? [one as Change] : [];
  for (const change of [...own, ...(one.changes ?? [])]) apply(folder, change);
  const bare = (text: string) =>
    text
      .replaceAll(`${folder}/`, "")
      .replaceAll(folder, ".")
      .replaceAll(`${dirname(folder)}/`, "../");
  try {
    const findings = await command(one.command ?? "check pipeline.yaml", folder);
    const kind = /^finding (.*)$/.exec(one.name)?.[1];
    const found = findings.find((each) => each.kind === kind);
    if (found === undefined)
      return { name: `no ${one.name}`, says: findings.map((each) => each.kind).join() };
    const where = placeText(found.where);
    return {
      name: `finding ${found.kind}`,
      says: bare(`${found.severity}: ${where === "" ? "" : `${where}: `}${found.message}; ${found.remedy}`),
    };
  } catch (error) {
    if (error instanceof CoveyError) return { name: error.facts.name, says: bare(error.message) };
    throw error;
  }
}

type Told = readonly { kind: string; severity: string; message: string; remedy: string; where?: object }[];

/** Does what the command line does, in this process and without writing a page. */
async function command(line: string, folder: string): Promise<Told> {
  const [verb, ...words] = line.match(/"[^"]*"|\S+/g)?.map((word) => word.replaceAll('"', "")) ?? [];
  const path = (word: string) => (word.startsWith("/") ? word : join(folder, word));
  const option = (name: string) => (words.includes(name) ? words[words.indexOf(name) + 1] : undefined);
  const asked = { workers: 1, json: false, from: folder };
  switch (verb) {
    case "check": {
      return (await planRun(loadPipeline(path(words[0])), terminal.signal)).findings;
    }
    case "run": {
      const through = stageNamed(option("--through") ?? "compare");
      const loaded = loadPipeline(path(words[0]));
      const kept = option("--reuse");
      if (kept !== undefined) requireReuseFolder(path(kept), loaded.outputFolder);
      const output = openOutput(nodeDisk(), loaded.outputFolder);
      try {
        const effects = nodeEffects({ ...terminal, workers: 1, dataFolder: loaded.dataFolder });
        return (await runStages(loaded, effects, through)).study.findings;
      } finally {
        output.close();
      }
    }
    case "look":
      await lookCommand(path(words[0]), { json: false }, terminal);
      return [];
    case "start":
      await startCommand(path(words[0]), { to: path(option("--to") ?? "first.yaml") }, terminal);
      return [];
    case "verify": {
      const { lines, ok } = verifyCommand(path(words[0]), { json: false }, terminal);
      const message = lines.join(" | ");
      return ok ? [] : [{ kind: "verify", severity: "exit 2", message, remedy: "" }];
    }
    case "apply":
      await applyCommand(path(words[0]), path(words[1]), asked, terminal);
      return [];
    case "simulate": {
      const residual = option("--residual");
      await simulateCommand(
        path(words[0]),
        {
          ...asked,
          covariates: [option("--covariate") ?? "winter rain"],
          effects: effectSizes(option("--effects") ?? "0"),
          residual: residual === undefined ? undefined : residualSd(residual),
          replicates: 1,
          output: option("--output"),
        },
        terminal,
      );
      return [];
    }
    default:
      throw new Error(`no command ${verb}`);
  }
}
