import { countText } from "../data/words.ts";
import { type DraftFinding, NO_DAY } from "./block.ts";
import type { SeriesColumn } from "./options.ts";
import type { CodedColumn } from "./read-columns.ts";

/**
 * Blanks out, in place, the values whose quality flag is not among those that pass; the finding counts them by flag.
 * The array is the reader's own and nobody else has seen it yet.
 */
export function passFlags(
  values: Float64Array,
  flags: CodedColumn,
  column: SeriesColumn & { readonly variable: string },
  source: number,
  file: string,
  starts: Int32Array,
): DraftFinding[] {
  const pass = flags.texts.map((text) => column.quality?.pass.includes(text) === true);
  const counts = new Float64Array(flags.texts.length);
  let first = -1;
  for (let row = 0; row < values.length; row++) {
    const code = flags.codes[row];
    if (pass[code] || Number.isNaN(values[row]) || starts[row] === NO_DAY) continue;
    if (first < 0) first = row;
    counts[code]++;
    values[row] = Number.NaN;
  }
  if (first < 0) return [];
  const told = flags.texts.flatMap((text, code) =>
    counts[code] > 0 ? [`${text === "" ? "no flag" : text} ${counts[code]}`] : [],
  );
  const count = counts.reduce((sum, n) => sum + n, 0);
  return [
    {
      kind: "flagged",
      subject: `${column.variable} in ${file}`,
      message: `${countText(count, "value")} of ${column.variable} did not pass the quality flags (${told.join(", ")}); read as missing.`,
      at: { source, row: first },
      value: told.join(", "),
      count,
      remedy:
        "none needed if the flags mean what `quality.pass` says; add a flag there to let its values pass",
    },
  ];
}
