import { isAbsolute, relative, resolve } from "node:path";
import { intervalWords } from "../data/occasion.ts";
import { listWords } from "../data/words.ts";
import { InputError } from "../errors.ts";
import { loadPipeline } from "../pipeline/load.ts";
import { type Simulated, type SimulationRequest, simulate } from "../pipeline/simulate.ts";
import { fill, plain } from "../terminal/style.ts";
import { type SummarySection, summaryLines } from "../terminal/summary.ts";
import type { Lines, Terminal } from "./io.ts";

export interface SimulateCommandOptions extends SimulationRequest {
  readonly workers: number;
  readonly json: boolean;
  /** As the user wrote it; relative to `from`. */
  readonly output: string | undefined;
  /** The working directory, to print paths people can type. */
  readonly from: string;
}

/** `covey simulate PIPELINE --covariate NAME`: what this study can detect and what it cannot. */
export async function simulateCommand(
  file: string,
  options: SimulateCommandOptions,
  terminal: Terminal,
): Promise<Lines> {
  const loaded = loadPipeline(file);
  const done = await simulate(loaded, options, terminal, {
    workers: options.workers,
    progress: terminal.progress,
    signal: terminal.signal,
    folder: options.output === undefined ? undefined : resolve(options.from, options.output),
  });
  const near = relative(options.from, done.folder);
  const folder = near.startsWith("..") || isAbsolute(near) ? done.folder : near;
  if (options.json) {
    const { detection, estimated, sentences } = done;
    return [JSON.stringify({ folder, ...detection, estimated, sentences }, null, 2)];
  }
  const said = done.sentences.flatMap((one) => fill(plain(one), terminal.width));
  return summaryLines(
    {
      title: `${loaded.spec.study.title}: what it can detect`,
      sections: sectionsOf(done),
      closing: [...said, `figure: ${folder}/figures/detection.svg`],
    },
    terminal.style,
    terminal.width,
  );
}

const whole = (share: number) => `${Math.round(100 * share)} %`;

function sectionsOf(done: Simulated): SummarySection[] {
  const { detection, estimated, design, seconds } = done;
  const { covariates, directions, replicates, rows } = detection;
  const effects = [...new Set(rows.map((one) => one.effect))];
  const acts = covariates.map((name, i) => `${name} (${directions[i] < 0 ? "lowers" : "raises"} survival)`);
  const error = Math.max(...rows.flatMap((one) => [one.found.se, one.unrelated.se]));
  const from =
    estimated === undefined
      ? "as given"
      : Number.isNaN(estimated.betweenYears)
        ? "no degrees of freedom to estimate it from"
        : `from ĉ between years ${estimated.betweenYears.toFixed(2)}, ${estimated.df} df`;
  return [
    {
      title: `${effects.length * replicates} studies drawn in ${seconds.toFixed(1)} s`,
      rows: [
        ["acts", listWords(acts)],
        [
          "design",
          `${intervalWords(done.between, done.intervals.length)}, ${done.animals} animals marked, ${design.covariates.length === 1 ? "1 candidate" : `${design.covariates.length} candidates`}, recapture ${done.recapture}`,
        ],
        ["residual sd", `${Number(detection.residual.toPrecision(2))} on the logit, ${from}`],
      ],
    },
    {
      title: `effect per sd, and how often (s.e. at most ${Math.ceil(100 * error)} %)`,
      rows: effects.map((effect): [string, string] => {
        const own = rows.filter((one) => one.effect === effect);
        const found = own.map(
          (one) => `${whole(one.found.share)} ${one.rule === "counting years" ? "by years" : "by animals"}`,
        );
        const wrong = own.map((one) => whole(one.unrelated.share));
        return [String(effect), `found ${found.join(", ")}; others chosen ${wrong.join(", ")}`];
      }),
    },
  ];
}

/** Sizes of effects as they are typed: `0,0.2,0.4`. Throws `simulate.effects`. */
export function effectSizes(text: string): readonly number[] {
  const sizes = text.split(",").map((one) => (one.trim() === "" ? Number.NaN : Number(one)));
  if (sizes.every((one) => Number.isFinite(one) && one >= 0 && one <= 10)) return sizes.map(Math.abs);
  throw new InputError({
    name: "simulate.effects",
    expected: "sizes of the effect from 0 to 10, logit per sd, separated by commas",
    found: JSON.stringify(text),
    where: { cell: "--effects" },
    remedy: "write for example --effects 0,0.2,0.4; which way it acts is taken from the study's own estimate",
  });
}

/** A residual sd as it is typed. Throws `simulate.residual`. */
export function residualSd(text: string): number {
  const sd = text.trim() === "" ? Number.NaN : Number(text);
  if (Number.isFinite(sd) && sd >= 0 && sd <= 10) return Math.abs(sd);
  throw new InputError({
    name: "simulate.residual",
    expected: "a standard deviation from 0 to 10, on the logit",
    found: JSON.stringify(text),
    where: { cell: "--residual" },
    remedy: "write for example --residual 0.3, or leave it out to have it estimated",
  });
}
