import { isAbsolute, join, relative } from "node:path";
import { listWords } from "../data/words.ts";
import { applyRecorded } from "../pipeline/apply.ts";
import { loadPipeline } from "../pipeline/load.ts";
import { findingLines } from "../terminal/findings.ts";
import { summaryLines } from "../terminal/summary.ts";
import type { Lines, Terminal } from "./io.ts";

export interface ApplyCommandOptions {
  readonly workers: number;
  readonly json: boolean;
  /** The working directory, to print paths people can type. */
  readonly from: string;
}

const short = (value: number) => String(Number(value.toPrecision(4)));

/** `covey apply RECORDED PIPELINE`: covariates of new years on the scale that an earlier output recorded. */
export async function applyCommand(
  recorded: string,
  file: string,
  options: ApplyCommandOptions,
  terminal: Terminal,
): Promise<Lines> {
  const loaded = loadPipeline(file);
  const done = await applyRecorded(recorded, loaded, terminal, {
    workers: options.workers,
    progress: terminal.progress,
    signal: terminal.signal,
  });
  const { matrix, outside, leftOut, study } = done;
  if (options.json) {
    const { folder } = done;
    const said = { folder, intervals: matrix.rows, covariates: matrix.names, outside, leftOut };
    return [JSON.stringify({ ...said, findings: study.findings }, null, 2)];
  }
  const near = relative(options.from, join(done.folder, "tables"));
  const tables = near.startsWith("..") || isAbsolute(near) ? join(done.folder, "tables") : near;
  const names = leftOut.map((one) => one.name);
  const { style, width } = terminal;
  const sections = [
    {
      title: "on the recorded scale",
      rows: [
        ["intervals", listWords(matrix.rows)],
        ["covariates", String(matrix.names.length)],
        ...(names.length === 0 ? [] : [["not recorded", `${listWords(names)}: left out`]]),
      ] as [string, string][],
    },
    {
      title: outside.length === 0 ? "all within the recorded range" : "outside the recorded range",
      rows: outside.map(({ covariate, interval, value, unit, least, greatest }): [string, string] => [
        covariate,
        `${interval}: ${short(value)} ${unit}, recorded ${short(least)} to ${short(greatest)}`,
      ]),
    },
  ];
  return [
    ...summaryLines(
      { title: loaded.spec.study.title, sections, closing: [`tables: ${tables}`] },
      style,
      width,
    ),
    ...findingLines(study.findings, { style, lines: 8, width }),
  ];
}
