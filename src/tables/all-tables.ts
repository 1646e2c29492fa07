import { byStratumTable } from "./by-stratum-table.ts";
import { clustersTable, mergesTable } from "./cluster-tables.ts";
import {
  componentsTable,
  conditionTable,
  correlationsTable,
  inflationTable,
  loadingsTable,
  scoresTable,
} from "./collinearity-tables.ts";
import { agreementTable, comparisonTable, effectsTable, foretoldTables } from "./comparison-tables.ts";
import { loadingIntervalsTable, simplifiedTables } from "./component-tables.ts";
import {
  dictionaryTable,
  intervalValuesTable,
  rawMatrixTable,
  standardMatrixTable,
} from "./covariate-tables.ts";
import { goodnessTable } from "./goodness-table.ts";
import { infilledTables } from "./infilled-table.ts";
import { penalisedTable } from "./penalised-table.ts";
import { qualityTable } from "./quality-table.ts";
import { predictedSurvivalTable, refitEffectsTable } from "./refit-tables.ts";
import { resamplingTable, togetherTable } from "./resampling-tables.ts";
import { sensitivityTables } from "./sensitivity-tables.ts";
import type { StudyResult } from "./study-result.ts";
import { findingsTable, intervalsTable, occasionsTable } from "./study-tables.ts";
import {
  evidenceTable,
  influenceTable,
  pathTable,
  randomIntervalTable,
  recaptureTable,
  selectionTable,
  survivalTable,
} from "./survival-tables.ts";
import type { Table } from "./table.ts";

/** Every table of a study, in the order in which a person would read them. */
export function allTables(study: StudyResult): readonly Table[] {
  const { diagnosis, components, goodness, screened, comparison } = study;
  const byStratum = byStratumTable(study);
  return [
    rawMatrixTable(study),
    standardMatrixTable(study),
    ...(byStratum === undefined ? [] : [byStratum]),
    dictionaryTable(study),
    intervalValuesTable(study),
    ...infilledTables(study.covariates),
    ...(study.occasions.length > 0 ? [occasionsTable(study)] : []),
    intervalsTable(study),
    ...(study.refusals !== undefined && study.refusals.length > 0 ? [qualityTable(study.refusals)] : []),
    ...(diagnosis
      ? [
          correlationsTable(diagnosis),
          inflationTable(diagnosis),
          conditionTable(diagnosis),
          clustersTable(diagnosis),
          mergesTable(diagnosis),
        ]
      : []),
    ...(components
      ? [
          componentsTable(components),
          loadingsTable(components),
          scoresTable(components, study.matrix.rows),
          ...loadingIntervalsTable(components),
          ...simplifiedTables(components, study.matrix.rows),
        ]
      : []),
    ...(goodness ? [goodnessTable(goodness, study.occasions)] : []),
    ...(screened
      ? [
          recaptureTable(screened),
          pathTable(screened),
          selectionTable(screened),
          penalisedTable(screened),
          refitEffectsTable(study, screened),
          predictedSurvivalTable(study, screened),
          survivalTable(screened, study.intervals),
          evidenceTable(screened),
          randomIntervalTable(screened),
          influenceTable(screened, study.intervals),
        ]
      : []),
    ...(study.resampling ? [resamplingTable(study.resampling), togetherTable(study.resampling)] : []),
    ...(comparison
      ? [
          comparisonTable(comparison),
          effectsTable(comparison),
          agreementTable(comparison),
          ...foretoldTables(comparison, study.matrix.rows),
          ...(comparison.sensitivity ? sensitivityTables(comparison.sensitivity) : []),
        ]
      : []),
    findingsTable(study),
  ];
}
