import { recordedScores } from "../components/recorded.ts";
import { type Applied, applyPreparation } from "../covariates/apply.ts";
import { rawColumns } from "../covariates/columns.ts";
import type { Finding, RawFinding } from "../data/finding.ts";
import type { Progress } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import type { FileSet } from "../publish/disk.ts";
import { openOutput } from "../publish/folder.ts";
import { redactPipeline } from "../publish/redact.ts";
import { withRecord } from "../publish/run-record.ts";
import { tableFiles } from "../publish/table-files.ts";
import { allTables } from "../tables/all-tables.ts";
import { scoresTable } from "../tables/collinearity-tables.ts";
import { outOfRangeTable } from "../tables/range-table.ts";
import type { StudyResult } from "../tables/study-result.ts";
import type { Table } from "../tables/table.ts";
import { makeCovariates } from "./covariates.ts";
import { stampAt } from "./effects/files.ts";
import { nodeDisk, nodeEffects } from "./effects.ts";
import { ingest } from "./ingest.ts";
import { recording } from "./inputs.ts";
import type { Loaded } from "./load.ts";
import type { Maker } from "./output.ts";
import { judge, stopIfAsked } from "./policy.ts";
import { COMPONENTS_FILE, RECIPES_FILE, type Recorded, readRecorded } from "./recorded.ts";
import { positionRule, shownInputs } from "./sensitive.ts";

export interface ApplyOptions {
  readonly workers: number;
  readonly progress: Progress;
  readonly signal: AbortSignal;
}

/** What came of a recorded preparation on new intervals. */
export interface AppliedRun extends Applied {
  readonly study: StudyResult;
  readonly recorded: Recorded;
  /** Where the tables are. */
  readonly folder: string;
}

/**
 * Covariates of new intervals on the scale that an earlier output recorded, published as a run is. Of the new pipeline
 * its `prepare:` section is not used: the recorded one stands in its place.
 * Throws `apply.same-folder` and what `readRecorded`, the rooms and `applyPreparation` throw.
 */
export async function applyRecorded(
  recordedFolder: string,
  loaded: Loaded,
  maker: Maker,
  options: ApplyOptions,
): Promise<AppliedRun> {
  const disk = nodeDisk();
  const recorded = readRecorded(disk, recordedFolder);
  if (disk.resolve(loaded.outputFolder) === recorded.folder) throw sameFolder(loaded);
  const world = nodeEffects({ ...options, dataFolder: loaded.dataFolder });
  const inputs = recording(world.files, stampAt);
  const output = openOutput(disk, loaded.outputFolder);
  try {
    const { study, applied } = await newStudy(loaded, recorded, { ...world, files: inputs.files });
    const read = [...(await inputs.identities()), recorded.identity];
    output.publish(await filesOf(loaded, study, applied, recorded, read, maker), world.checkInterrupted);
    return { ...applied, study, recorded, folder: loaded.outputFolder };
  } finally {
    output.close();
  }
}

async function newStudy(loaded: Loaded, recorded: Recorded, effects: Parameters<typeof ingest>[1]) {
  const { spec } = loaded;
  const findings: Finding[] = [];
  const judged = (found: readonly RawFinding[]) => {
    const next = judge(found, spec.findings);
    findings.push(...next);
    stopIfAsked(next);
  };
  const ingested = await ingest(spec, effects);
  judged(ingested.findings);
  const made = makeCovariates(loaded, ingested, () => true);
  judged(made.flatMap((one) => one.findings));
  const covariates = made.map((one) => one.covariate);
  const columns = rawColumns(covariates, spec.prepare.derive, ingested.intervals, undefined);
  const applied = applyPreparation(recorded.preparation, columns, ingested.intervals);
  judged(applied.findings);
  const study: StudyResult = {
    occasions: ingested.occasions,
    intervals: ingested.intervals,
    caught: ingested.captures?.perOccasion ?? [],
    covariates,
    matrix: applied.matrix,
    leftOut: applied.leftOut,
    diagnosis: undefined,
    components: undefined,
    screened: undefined,
    resampling: undefined,
    comparison: undefined,
    goodness: undefined,
    findings,
  };
  return { study, applied };
}

async function filesOf(
  { spec, text }: Loaded,
  study: StudyResult,
  applied: Applied,
  recorded: Recorded,
  inputs: Parameters<typeof withRecord>[0]["inputs"],
  maker: Maker,
): Promise<FileSet> {
  const written = await tableFiles(
    [...allTables(study), ...newScores(recorded, applied), outOfRangeTable(applied.outside)],
    {
      package: {
        name: spec.study.title,
        title: spec.study.title,
        description: "Covariates of new intervals on the scale of an earlier run, made by covey.",
      },
      parquet: ["covariates", "covariates-standardised"],
    },
    nodeDisk(),
  );
  const pipeline = spec.study.sensitive ? redactPipeline(text, positionRule(spec.study)) : text;
  return withRecord({
    version: maker.version,
    nodeMajor: maker.nodeMajor,
    seed: spec.seed,
    pipeline,
    inputs: shownInputs(inputs, spec),
    // The recipes go along, so that the new folder can be applied to still newer years.
    outputs: new Map([
      ...written.files,
      [RECIPES_FILE, recorded.bytes],
      ...(recorded.components === undefined ? [] : [[COMPONENTS_FILE, recorded.components.bytes] as const]),
    ]),
  });
}

/** The new intervals on the recorded components. */
function newScores({ components }: Recorded, { matrix }: Applied): readonly Table[] {
  if (components === undefined) return [];
  const { of } = components;
  const scores = recordedScores(of, matrix.standard, matrix.names);
  return [scoresTable({ labels: of.labels, scores }, matrix.rows)];
}

function sameFolder({ file, spec }: Loaded): InputError {
  return new InputError({
    name: "apply.same-folder",
    expected: "another output folder than the recorded one, which would be replaced",
    found: spec.output,
    where: { file, cell: "output" },
    remedy: "write another output into the new pipeline",
  });
}
