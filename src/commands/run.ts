import { isAbsolute, join, relative } from "node:path";
import { listWords } from "../data/words.ts";
import { InputError } from "../errors.ts";
import { nearestName } from "../math/nearest-name.ts";
import { type Executed, execute } from "../pipeline/execute.ts";
import { loadPipeline } from "../pipeline/load.ts";
import { PAGE_FILE } from "../pipeline/output.ts";
import { STAGES, type Stage } from "../pipeline/run.ts";
import { findingLines } from "../terminal/findings.ts";
import { stepLines } from "../terminal/steps.ts";
import { type SummarySection, summaryLines } from "../terminal/summary.ts";
import type { Lines, Terminal } from "./io.ts";

type Screened = NonNullable<Executed["study"]["screened"]>;
type Verdict = NonNullable<Executed["study"]["comparison"]>["verdict"];

export interface RunCommandOptions {
  readonly through: Stage;
  readonly workers: number;
  readonly reuse?: string;
  readonly json: boolean;
  /** Say of every step whether it ran or was reused, and why. */
  readonly explain?: boolean;
  /** The working directory, to print paths people can type. */
  readonly from: string;
}

/** `covey run PIPELINE`: everything from raw files to the page. */
export async function runCommand(
  file: string,
  options: RunCommandOptions,
  terminal: Terminal,
): Promise<Lines> {
  const loaded = loadPipeline(file);
  const done = await execute(loaded, terminal, {
    workers: options.workers,
    progress: terminal.progress,
    signal: terminal.signal,
    through: options.through,
    ...(options.reuse === undefined ? {} : { reuseFolder: options.reuse }),
  });
  const page = shownPath(join(done.folder, PAGE_FILE), options.from);
  if (options.json) return [JSON.stringify(asJson(done, page), null, 2)];
  const closing = [...neutralisedLines(done.neutralised), `page: ${page}`];
  const findings = findingLines(done.study.findings, {
    style: terminal.style,
    lines: 6,
    width: terminal.width,
    whole: "tables/findings.csv",
  });
  const room = 24 - findings.length;
  return [
    ...summaryLines(
      { title: loaded.spec.study.title, sections: sections(done), closing },
      terminal.style,
      terminal.width,
      room,
    ),
    ...findings,
    ...(options.explain === true ? stepLines(done.steps, terminal.style, terminal.width) : []),
  ];
}

/** Said, since the files differ from the data by these apostrophes. */
function neutralisedLines(count: number): Lines {
  if (count === 0) return [];
  const cells = count === 1 ? "1 text cell" : `${count} text cells`;
  return [`${cells} of the CSV files begin with an apostrophe, or a spreadsheet would run them`];
}

/** The stage of that name. Throws `run.unknown-stage`. */
export function stageNamed(name: string): Stage {
  const stage = STAGES.find((one) => one === name);
  if (stage !== undefined) return stage;
  const near = nearestName(name, STAGES);
  throw new InputError({
    name: "run.unknown-stage",
    expected: `one of ${STAGES.join(", ")}`,
    found: JSON.stringify(name),
    where: { cell: "--through" },
    remedy: near === undefined ? "name one of the stages" : `did you mean ${JSON.stringify(near)}?`,
  });
}

function shownPath(path: string, from: string): string {
  const short = relative(from, path);
  return short.startsWith("..") || isAbsolute(short) ? path : short;
}

function sections(done: Executed): SummarySection[] {
  const { study, ingested } = done;
  const captures = ingested.captures;
  const read: [string, string][] = [
    ["intervals", intervalCounts(ingested.occasions.length - 1, study.intervals.length)],
    ["covariates", `${study.matrix.names.length} in the matrix, ${study.leftOut.length} left out`],
  ];
  if (captures !== undefined && Number.isFinite(captures.animals))
    read.push(["animals", `${captures.animals}, ${captures.captures} captures that count`]);
  const reused = done.steps.filter((one) => one.outcome === "reused").length;
  if (reused > 0)
    read.push(["reused", `${reused} of ${done.steps.length} steps; --explain says which and why`]);
  const out: SummarySection[] = [{ title: `done in ${done.seconds.toFixed(1)} s`, rows: read }];
  const clusters = study.diagnosis?.clusters.filter((one) => one.members.length > 1) ?? [];
  if (clusters.length > 0)
    out.push({
      title: "same story",
      rows: clusters.map((one) => [
        one.closest,
        listWords(one.members.filter((name) => name !== one.closest)),
      ]),
    });
  if (study.screened !== undefined)
    out.push({ title: "found", rows: foundRows(study.screened, study.comparison?.verdict) });
  return out;
}

/** `20`; where some are split into years, `19, cut into 20 years`. */
function intervalCounts(between: number, parts: number): string {
  return parts === between ? String(between) : `${between}, cut into ${parts} years`;
}

/** The answer in lines short enough for a terminal; the page has the sentences. */
function foundRows(screened: Screened, verdict: Verdict | undefined): [string, string][] {
  const { byYears, byAnimals, rivals } = screened;
  const rival = (name: string) => rivals.find((one) => one.chosen === name)?.others ?? [];
  const years = byYears.names.map((name) => [name, ...rival(name)].join(" or "));
  const rows: [string, string][] = [
    ["counting years", byYears.names.length === 0 ? "no covariate stands" : listWords(years)],
  ];
  if (byYears.names.length > 0)
    rows.push(["", `${Math.round(100 * byYears.deviance.share)} % of the deviance between years`]);
  if (verdict !== undefined)
    rows.push([
      "evidence",
      verdict.tested === undefined ? verdict.grade : `${verdict.grade}: ${verdict.tested}`,
    ]);
  rows.push(["counting animals", byAnimals.names.length === 0 ? "nothing" : listWords(byAnimals.names)]);
  rows.push(["recapture", screened.recapture.chosen]);
  return rows;
}

function asJson(done: Executed, page: string) {
  const { study } = done;
  return {
    page,
    folder: done.folder,
    intervals: study.intervals.length,
    covariates: study.matrix.names,
    leftOut: study.leftOut,
    verdict: study.comparison?.verdict,
    chosenByYears: study.screened?.byYears.names,
    chosenByAnimals: study.screened?.byAnimals.names,
    findings: study.findings,
    neutralised: done.neutralised,
    steps: done.steps,
  };
}
