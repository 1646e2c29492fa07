import { readCsv } from "../data/csv.ts";
import type { RawFinding } from "../data/finding.ts";
import type { Occasion } from "../data/occasion.ts";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import type { CaptureResult } from "./capture-result.ts";
import { readCountsTable } from "./counts-table.ts";
import { readDated } from "./dated.ts";
import type { CaptureOptions } from "./options.ts";
import { readZeroOne } from "./zero-one.ts";

/**
 * Reads captures in any of the three layouts into release–recapture counts. Marks are text, whatever they look like.
 * Occasions are required by the dated layout; the other two take them from their columns where there are none.
 * Errors are named in the layouts' own files, and `study.no-captures`.
 */
export async function readCaptures(
  options: CaptureOptions,
  occasions: readonly Occasion[] | undefined,
  files: Files,
): Promise<CaptureResult> {
  const table = readCsv(await files.readText(options.file), options.file);
  if (table.rows.length === 0)
    throw new InputError({
      name: "study.no-captures",
      expected: "a header and at least one row of captures",
      found: table.header.length === 0 ? "an empty file" : "a header only",
      where: { file: options.file },
      remedy: "name the file that holds the captures",
    });
  const read = () => {
    if (options.layout === "dated") return readDated(options, table, occasions);
    if (options.layout === "zero-one") return readZeroOne(options, table, occasions);
    return readCountsTable(options, table, occasions);
  };
  const result = read();
  return { ...result, findings: [...result.findings, ...unseen(result)] };
}

/** Strata, and occasions over all strata, at which nobody was ever met again. */
function unseen(result: CaptureResult): readonly RawFinding[] {
  const sum = (values: Iterable<number>) => Array.from(values).reduce((total, value) => total + value, 0);
  const strata = result.counts
    .filter((one) => sum(one.released) > 0 && sum(one.seen.data) === 0)
    .map(
      (one): RawFinding => ({
        kind: "never-recaptured",
        subject: one.stratum,
        message: `none of the ${sum(one.released)} released animals of ${one.stratum} was met again`,
        remedy: "check the marks in the file; join the stratum with another if it is true",
      }),
    );
  const times = result.occasions.slice(1).flatMap(({ name }, j): RawFinding[] => {
    let [atRisk, seen] = [0, 0];
    for (const { released, seen: table } of result.counts)
      for (let i = 0; i <= j; i++) {
        atRisk += released[i];
        seen += table.data[i * table.columns + j];
      }
    if (atRisk === 0 || seen > 0) return [];
    return [
      {
        kind: "never-recaptured",
        subject: name,
        message: `no animal released before was met at occasion ${name}`,
        remedy: "check the captures of that occasion; if nobody looked, drop the occasion",
      },
    ];
  });
  return [...strata, ...times];
}
