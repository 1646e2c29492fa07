import { type PlannedWindow, planWindows } from "../aggregate/plan.ts";
import type { Finding } from "../data/finding.ts";
import type { Site } from "../data/series.ts";
import { silentProgress } from "../effects/effects.ts";
import { type LayerPlan, planLayers } from "../layers/plan.ts";
import { makeCovariates } from "./covariates.ts";
import { nodeEffects } from "./effects.ts";
import { type Ingested, ingest, methodFindings } from "./ingest.ts";
import type { Loaded } from "./load.ts";
import { judge } from "./policy.ts";

/** What a run would do, found out without reading a pixel or fitting a model. */
export interface Plan {
  readonly windows: readonly PlannedWindow[];
  /** Days with observations by covariate and interval; undefined for layers, whose pixels are not read. */
  readonly covered: ReadonlyMap<string, readonly number[]>;
  readonly layers: readonly LayerPlan[];
  readonly ingested: Ingested;
  readonly findings: readonly Finding[];
  readonly sites: readonly Site[];
}

/** Reads the tables and the headers of the layers, lays out the windows and judges what was found; stops at nothing. */
export async function planRun(loaded: Loaded, signal: AbortSignal): Promise<Plan> {
  const { spec } = loaded;
  const effects = nodeEffects({
    dataFolder: loaded.dataFolder,
    workers: 0,
    progress: silentProgress,
    signal,
  });
  const ingested = await ingest(spec, effects, false);
  const layers: LayerPlan[] = [];
  for (const [name, options] of Object.entries(spec.layers))
    layers.push(await planLayers(name, options, effects.files));
  const windowed = spec.covariates.flatMap((one) =>
    one.source === "ready-made" ? [] : [{ name: one.name, window: one.window }],
  );
  const windows = planWindows(windowed, ingested.intervals);
  const made = makeCovariates(loaded, ingested, (one) => one.source !== "layer");
  const found = made.flatMap((one) => one.findings);
  const leaks = windows.flatMap((one) =>
    one.problem === undefined ||
    found.some((other) => other.kind === one.problem && other.subject === one.covariate)
      ? []
      : [
          {
            kind: one.problem,
            subject: one.covariate,
            message: `${one.interval}: ${one.words ?? "no window"}`,
            where: { cell: one.interval },
            remedy: "choose another window or lag",
          },
        ],
  );
  return {
    windows,
    covered: new Map(
      made.map(({ covariate }) => [covariate.name, covariate.values.map((value) => value.daysCovered)]),
    ),
    layers,
    ingested,
    findings: judge(
      [
        ...ingested.findings,
        ...layers.flatMap((one) => [...one.findings, ...methodFindings(spec, one.name, one)]),
        ...found,
        ...leaks,
      ],
      spec.findings,
    ),
    sites: ingested.sites,
  };
}
