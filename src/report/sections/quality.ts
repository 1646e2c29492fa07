import type { Cast } from "../cast.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { percent } from "../numbers.ts";
import { grid } from "../parts.ts";

/** How much of the layers their quality numbers refused, from the table that is written beside the page. */
export function qualityBlock({ tables }: Pick<ReportInput, "tables">, cast: Cast): Html | undefined {
  const table = tables.find((one) => one.name === "layer-quality");
  if (table === undefined) return undefined;
  const column = (name: string) => table.columns.findIndex((one) => one.name === name);
  const at = (row: (typeof table.rows)[number], name: string) => row[column(name)];
  const share = (value: unknown) =>
    typeof value === "number" && Number.isFinite(value) ? percent(value) : "–";
  return html`<h3>What quality refused</h3>
<p>Pixels whose quality numbers do not pass are taken out before a place is averaged. Shares are of the place's area that had a value.</p>
${grid(
  cast,
  "Refused by quality",
  [
    { text: "layer" },
    { text: "place" },
    { text: "read by" },
    { text: "images touched", look: "n" },
    { text: "mean refused", look: "n" },
    { text: "most refused", look: "n" },
    { text: "images missing", look: "n" },
  ],
  table.rows.map((row) => ({
    cells: [
      String(at(row, "layer")),
      String(at(row, "place")),
      String(at(row, "by")),
      `${at(row, "images_touched")} of ${at(row, "images")}`,
      share(at(row, "mean_refused")),
      at(row, "worst_image") === undefined
        ? share(at(row, "most_refused"))
        : `${share(at(row, "most_refused"))} (${at(row, "worst_image")})`,
      String(at(row, "images_missing")),
    ],
  })),
)}`;
}
