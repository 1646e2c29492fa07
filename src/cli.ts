#!/usr/bin/env node
import { Command, CommanderError, InvalidArgumentError } from "commander";
import type { Lines, Terminal } from "./commands/io.ts";
import { readVersion } from "./commands/version.ts";

// Only this file prints, sets the exit code and listens to signals. Commands are loaded when they are asked for, so
// that --help and --version stay quick.

interface Common {
  readonly quiet?: boolean;
  readonly json?: boolean;
}

const version = readVersion();
const stop = new AbortController();
process.once("SIGINT", () => stop.abort());
process.once("SIGTERM", () => stop.abort());

const program = new Command("covey")
  .description(
    "From station series and climate layers to interval covariates and a penalised survival screen.",
  )
  .version(version)
  .showHelpAfterError("(covey --help lists the commands)")
  .showSuggestionAfterError()
  .exitOverride();

program
  .command("run")
  .argument("<pipeline>", "pipeline file (YAML)")
  .description("run a pipeline: raw files to a page, tables and a record")
  .option(
    "--through <stage>",
    "stop after a stage: ingest, aggregate, diagnose, reduce, screen or compare",
    "compare",
  )
  .option("--workers <number>", "worker threads; 1 for none", wholeNumber)
  .option("--reuse <folder>", "keep what was read of layers here, so that later runs read only new files")
  .option("--json", "print the result as JSON")
  .option("--quiet", "no progress, no summary")
  .addHelpText("after", "\nExample:\n  covey run pipelines/roost.yaml")
  .action(async (file: string, options: Common & { through: string; workers?: number; reuse?: string }) => {
    const [{ runCommand, stageNamed }, terminal] = [
      await import("./commands/run.ts"),
      await terminalFor(options),
    ];
    const lines = await runCommand(
      file,
      {
        through: stageNamed(options.through),
        workers: options.workers ?? terminal.workers,
        json: options.json ?? false,
        from: process.cwd(),
        ...(options.reuse === undefined ? {} : { reuse: options.reuse }),
      },
      terminal,
    );
    print(lines, options);
  });

program
  .command("check")
  .argument("<pipeline>", "pipeline file (YAML)")
  .description("read a pipeline and its tables, lay out the windows, list the findings; fit nothing")
  .option("--windows", "every window with its first and last day")
  .option("--json", "print the plan as JSON")
  .addHelpText("after", "\nExample:\n  covey check pipelines/roost.yaml --windows")
  .action(async (file: string, options: Common & { windows?: boolean }) => {
    const { checkCommand } = await import("./commands/check.ts");
    const asked = { windows: options.windows ?? false, json: options.json ?? false };
    print(await checkCommand(file, asked, await terminalFor(options)), options);
  });

program
  .command("look")
  .argument("<file>", "a table (CSV, TSV, gzip) or a layer (GeoTIFF)")
  .description("tell what a data file holds, and the stanza to paste into a pipeline")
  .option("--json", "print what was found as JSON")
  .addHelpText("after", "\nExample:\n  covey look sample-data/layers/green_2009_05.tif")
  .action(async (file: string, options: Common) => {
    const { lookCommand } = await import("./commands/look.ts");
    print(await lookCommand(file, { json: options.json ?? false }, await terminalFor(options)), options);
  });

program
  .command("start")
  .argument("<folder>", "a folder of data files")
  .description("write a first pipeline file: what was recognised, and as comments what was not")
  .option("--to <file>", "the pipeline file to write", "pipeline.yaml")
  .option("--quiet", "no progress, no summary")
  .addHelpText("after", "\nExample:\n  covey start sample-data --to first.yaml")
  .action(async (folder: string, options: Common & { to: string }) => {
    const { startCommand } = await import("./commands/start.ts");
    print(await startCommand(folder, { to: options.to }, await terminalFor(options)), options);
  });

program
  .command("apply")
  .argument("<recorded>", "the output folder of an earlier run")
  .argument("<pipeline>", "pipeline file (YAML) with the same covariates over new years")
  .description("put new years on the scale an earlier run recorded, and tell what is out of its range")
  .option("--workers <number>", "worker threads; 1 for none", wholeNumber)
  .option("--json", "print the result as JSON")
  .option("--quiet", "no progress, no summary")
  .addHelpText("after", "\nExample:\n  covey apply out/roost new-years.yaml")
  .action(async (recorded: string, file: string, options: Common & { workers?: number }) => {
    const [{ applyCommand }, terminal] = [await import("./commands/apply.ts"), await terminalFor(options)];
    const asked = {
      workers: options.workers ?? terminal.workers,
      json: options.json ?? false,
      from: process.cwd(),
    };
    print(await applyCommand(recorded, file, asked, terminal), options);
  });

program
  .command("verify")
  .argument("<folder>", "an output folder of run or apply")
  .description(
    "compare an output folder with its run record; exit code 2 if a file was changed, lost or added",
  )
  .option("--json", "print what was found as JSON")
  .addHelpText("after", "\nExample:\n  covey verify out/roost")
  .action(async (folder: string, options: Common) => {
    const { verifyCommand } = await import("./commands/verify.ts");
    const found = verifyCommand(folder, { json: options.json ?? false }, await terminalFor(options));
    print(found.lines, options);
    if (!found.ok) process.exitCode = 2;
  });

function wholeNumber(text: string): number {
  const value = Number(text);
  if (!Number.isInteger(value) || value < 1)
    throw new InvalidArgumentError("expected a whole number from 1 up");
  return value;
}

async function terminalFor(options: Common): Promise<Terminal> {
  const { makeTerminal } = await import("./commands/terminal.ts");
  const quiet = options.quiet === true || options.json === true;
  return makeTerminal({ out: process.stdout, progress: process.stderr, quiet, signal: stop.signal, version });
}

function print(lines: Lines, options: Common): void {
  if (options.quiet !== true || options.json === true) process.stdout.write(`${lines.join("\n")}\n`);
}

try {
  await program.parseAsync();
} catch (error) {
  process.exitCode = await tell(error);
}

/** Says what went wrong and gives the exit code: a user's mistake as lines, a bug with its stack. */
async function tell(error: unknown): Promise<number> {
  if (error instanceof CommanderError) return error.exitCode === 0 ? 0 : 2;
  const { errorText } = await import("./commands/terminal.ts");
  const { text, exitCode } = errorText(error, process.stderr);
  process.stderr.write(`${text}\n`);
  return exitCode;
}
