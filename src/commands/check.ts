import { intervalWords } from "../data/occasion.ts";
import { loadPipeline } from "../pipeline/load.ts";
import { type Plan, planRun } from "../pipeline/plan.ts";
import { findingLines, wholeFindingLines } from "../terminal/findings.ts";
import { timelineLines } from "../terminal/timeline.ts";
import { windowPlanLines } from "../terminal/window-plan.ts";
import type { Lines, Terminal } from "./io.ts";

export interface CheckCommandOptions {
  /** Every window with its days, not only the summary by covariate. */
  readonly windows: boolean;
  /** Every finding whole, not a line for each kind. */
  readonly findings: boolean;
  readonly json: boolean;
}

/** `covey check PIPELINE`: the plan, the windows and the findings, without reading pixels or fitting models. */
export async function checkCommand(
  file: string,
  options: CheckCommandOptions,
  terminal: Terminal,
): Promise<Lines> {
  const loaded = loadPipeline(file);
  const plan = await planRun(loaded, terminal.signal);
  const { style, width } = terminal;
  if (options.json)
    return [
      JSON.stringify(
        {
          windows: plan.windows.map((one) => {
            const t = plan.ingested.intervals.findIndex(({ name }) => name === one.interval);
            const daysAvailable = plan.covered.get(one.covariate)?.[t];
            return { ...one, ...(daysAvailable === undefined ? {} : { daysAvailable }) };
          }),
          layers: plan.layers.map(({ name, files, systems }) => ({ name, files: files.length, systems })),
          findings: plan.findings,
        },
        null,
        2,
      ),
    ];
  const captures = plan.ingested.captures;
  return [
    style.strong(loaded.spec.study.title),
    `${plan.ingested.occasions.length} occasions, ${intervalWords(plan.ingested.occasions.length - 1, plan.ingested.intervals.length)}` +
      (captures === undefined
        ? ", no captures: only the covariate set is built"
        : `, ${captures.counts.length === 1 ? "1 stratum" : `${captures.counts.length} strata`}`),
    `${plan.ingested.stationSeries.length} station series from ${new Set(plan.ingested.stationSeries.map((one) => one.site)).size} stations`,
    ...plan.layers.map(
      (one) =>
        `layer ${one.name}: ${one.files.length} files, ${one.images.length} images, ${one.systems.join(", ")}`,
    ),
    "",
    ...calendar(plan, terminal),
    ...windowPlanLines(plan.windows, plan.covered, { style, width, every: options.windows }),
    "",
    ...findingLines(plan.findings, {
      style,
      lines: 40,
      width,
      ...(options.findings ? {} : { whole: "check --findings" }),
    }),
    ...(options.findings ? ["", ...wholeFindingLines(plan.findings, style, width)] : []),
  ];
}

/** The windows of the interval in the middle of the study, and an empty line. */
function calendar({ windows, ingested }: Plan, { style, width }: Terminal): Lines {
  const middle = ingested.intervals[Math.floor(ingested.intervals.length / 2)];
  if (middle === undefined) return [];
  const own = windows.filter((one) => one.interval === middle.name);
  const lines = timelineLines(own, middle, { style, width });
  return lines.length === 0 ? [] : [...lines, ""];
}
