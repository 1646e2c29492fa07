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

interface RunFlags extends Common {
  readonly through: string;
  readonly workers?: number;
  readonly reuse?: string;
  readonly explain?: boolean;
}

interface SimulateFlags extends Common {
  readonly covariate: readonly string[];
  readonly effects: string;
  readonly residual?: string;
  readonly replicates: number;
  readonly workers?: number;
  readonly output?: string;
}

const version = readVersion();
const stop = new AbortController();
process.once("SIGINT", () => stop.abort());
process.once("SIGTERM", () => stop.abort());
// A reader that has seen enough (`covey look … | head`) closes the pipe: no mistake of anybody's, and nothing to say.
for (const stream of [process.stdout, process.stderr])
  stream.on("error", (error: NodeJS.ErrnoException) => {
    if (error.code !== "EPIPE") throw error;
    process.exit();
  });

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
    "stop after a stage: aggregate, diagnose, reduce, screen or compare",
    "compare",
  )
  .option("--workers <number>", "worker threads; 1 for none", wholeNumber)
  .option("--reuse <folder>", "keep results here, so that later runs redo only what depends on what changed")
  .option("--explain", "say of every step whether it ran or was reused, and why")
  .option("--json", "print the result as JSON")
  .option("--quiet", "no progress, no summary")
  .addHelpText("after", "\nExample:\n  covey run pipelines/roost.yaml")
  .action(async (file: string, options: RunFlags) => {
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
        explain: options.explain ?? false,
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
  .option("--findings", "every finding whole, with what to do about it")
  .option("--json", "print the plan as JSON")
  .addHelpText("after", "\nExample:\n  covey check pipelines/roost.yaml --windows")
  .action(async (file: string, options: Common & { windows?: boolean; findings?: boolean }) => {
    const { checkCommand } = await import("./commands/check.ts");
    const { windows = false, findings = false, json = false } = options;
    const asked = { windows, findings, json };
    print(await checkCommand(file, asked, await terminalFor(options)), options);
  });

program
  .command("look")
  .argument("<file>", "a table (CSV, TSV, gzip) or a layer (GeoTIFF, NetCDF)")
  .description("tell what a data file holds, and the stanza to paste into a pipeline")
  .option("--json", "print what was found as JSON")
  .option("--picture <file>", "write a small picture of a layer (PNG)")
  .option("--places <file>", "places to draw in it (GeoJSON), as squares of 10 km that give no roost away")
  .option("--exact", "draw the places where they are")
  .addHelpText("after", "\nExample:\n  covey look sample-data/layers/green_2009_05.tif")
  .action(async (file: string, options: Common & { picture?: string; places?: string; exact?: boolean }) => {
    const { lookCommand } = await import("./commands/look.ts");
    print(
      await lookCommand(file, { ...options, json: options.json ?? false }, await terminalFor(options)),
      options,
    );
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
  .command("simulate")
  .argument("<pipeline>", "pipeline file (YAML)")
  .description("draw studies from this one's design and tell which effects it can detect and which not")
  .requiredOption(
    "--covariate <name>",
    "a candidate that is to act on survival; can be given again for several",
    (name: string, before: readonly string[] = []) => [...before, name],
  )
  .option("--effects <sizes>", "sizes of its effect, logit per sd", "0,0.1,0.2,0.3,0.4,0.5,0.6,0.8")
  .option("--residual <sd>", "what no covariate tells between years, sd on the logit; estimated if left out")
  .option("--replicates <number>", "studies drawn for each size", wholeNumber, 200)
  .option("--workers <number>", "worker threads; 1 for none", wholeNumber)
  .option("--output <folder>", "where to write; the pipeline's output with -simulated if left out")
  .option("--json", "print the result as JSON")
  .option("--quiet", "no progress, no summary")
  .addHelpText("after", '\nExample:\n  covey simulate pipelines/roost.yaml --covariate "winter rain"')
  .action(async (file: string, options: SimulateFlags) => {
    const [{ effectSizes, residualSd, simulateCommand }, terminal] = [
      await import("./commands/simulate.ts"),
      await terminalFor(options),
    ];
    const asked = {
      covariates: options.covariate,
      effects: effectSizes(options.effects),
      residual: options.residual === undefined ? undefined : residualSd(options.residual),
      replicates: options.replicates,
      workers: options.workers ?? terminal.workers,
      output: options.output,
      json: options.json ?? false,
      from: process.cwd(),
    };
    print(await simulateCommand(file, asked, terminal), options);
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
