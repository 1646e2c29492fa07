import type { RawFinding } from "../data/finding.ts";
import type { Series, Site } from "../data/series.ts";
import type { Effects } from "../effects/effects.ts";
import { InputError, placed } from "../errors.ts";
import { assembleVariable } from "./assemble.ts";
import { type Block, type DraftFinding, placeFindings, type Source } from "./block.ts";
import { crossedFindings } from "./crossed.ts";
import { withDatabase } from "./database.ts";
import { compileDateFormat } from "./dates.ts";
import { gapFindings } from "./gaps.ts";
import { unknownStations } from "./known-stations.ts";
import { movedFindings, type SeenPlace } from "./moved.ts";
import type { DuplicateRule, RecordOptions } from "./options.ts";
import { readFile } from "./read-file.ts";
import { streakFindings } from "./streaks.ts";
import { suspectFindings } from "./suspect-values.ts";
import { checkUnit } from "./units.ts";
import { daysOfReadings } from "./within-day.ts";

/**
 * Reads all `records:` entries and merges them into one series per station and variable, ordered by variable as first named,
 * then station id by code unit. What a person should know comes back as findings, with file and physical line.
 * Throws InputErrors `stations.*` for what cannot be read at all: no file, a missing column, a format no date has, …
 */
export async function readRecords(
  records: readonly RecordOptions[],
  stations: readonly Site[] | undefined,
  duplicates: DuplicateRule,
  effects: Pick<Effects, "files" | "progress" | "checkInterrupted">,
): Promise<{
  readonly series: readonly Series[];
  readonly findings: readonly RawFinding[];
  readonly rows: number;
}> {
  checkOptions(records);
  const plan: { readonly entry: number; readonly file: string }[] = [];
  for (const [entry, options] of records.entries()) {
    const files = await effects.files.list(options.files);
    if (files.length === 0) throw noFiles(options, entry);
    for (const file of files) plan.push({ entry, file });
  }
  const blocks: Block[] = [];
  const drafts: DraftFinding[] = [];
  const sources: Source[] = [];
  const places: SeenPlace[] = [];
  let rows = 0;
  const step = effects.progress.start("reading station records", plan.length);
  await withDatabase(async (database) => {
    for (const { entry, file } of plan) {
      effects.checkInterrupted();
      const read = await readFile(database, effects.files, records[entry], entry, file, sources.length);
      blocks.push(...read.blocks);
      drafts.push(...read.findings);
      sources.push(read.source);
      places.push(...read.places);
      rows += read.rows;
      step.tick();
    }
  });
  step.done();
  drafts.push(...unknownStations(blocks, stations));
  drafts.push(...movedFindings(places, stations));
  const daily: Block[] = [];
  for (const group of groupBy(blocks, (block) => `${block.entry}\n${block.variable}`)) {
    drafts.push(...suspectFindings(group));
    if (group[0].readings === undefined) daily.push(...group);
    else {
      const { block, findings } = daysOfReadings(group, duplicates);
      drafts.push(...findings);
      daily.push(block);
    }
  }
  const assembled = groupBy(daily, (block) => block.variable).map((group) =>
    assembleVariable(group, duplicates, sources),
  );
  const traced = assembled.flatMap((one) => one.traced);
  drafts.push(...assembled.flatMap((one) => one.findings));
  drafts.push(...traced.flatMap(gapFindings), ...crossedFindings(traced), ...traced.flatMap(streakFindings));
  return {
    series: traced.map((one) => one.series),
    findings: await placeFindings(drafts, sources),
    rows,
  };
}

/** Units and date patterns are looked at before any file is opened. */
function checkOptions(records: readonly RecordOptions[]): void {
  for (const [entry, options] of records.entries()) {
    const at = (key: string) => ({ cell: `records[${entry}].${key}` });
    placed(at("date.format"), () => compileDateFormat(options.date.format));
    if (options.layout !== "long") placed(at("unit"), () => checkUnit(options.unit));
    else
      for (const [variable, { unit }] of Object.entries(options.series))
        placed(at(`series.${variable}.unit`), () => checkUnit(unit));
  }
}

function noFiles(options: RecordOptions, entry: number): InputError {
  return new InputError({
    name: "stations.no-files",
    expected: `files that match ${options.files.map((one) => JSON.stringify(one)).join(", ")}`,
    found: "none",
    where: { cell: `records[${entry}].files` },
    remedy: "paths are below `data:`; * stands for any part of a name, ** for any folders",
  });
}

/** Groups in order of first appearance. */
function groupBy<T>(items: readonly T[], key: (item: T) => string): T[][] {
  const groups = new Map<string, T[]>();
  for (const item of items) {
    const group = groups.get(key(item));
    if (group === undefined) groups.set(key(item), [item]);
    else group.push(item);
  }
  return [...groups.values()];
}
