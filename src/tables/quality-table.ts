import { isoDay } from "../data/day.ts";
import type { Refusal } from "../layers/refusals.ts";
import { number, text, whole } from "./columns.ts";
import type { Table } from "./table.ts";

/** How much the quality of the layers refused. */
export function qualityTable(refusals: readonly Refusal[]): Table {
  const share = "of the place's area, or of its fixes, that had a value and was refused";
  return {
    name: "layer-quality",
    title: "What quality refused",
    description: "One row per layer with quality numbers, place and way of reading.",
    columns: [
      text("layer", "layer", "name of the layer"),
      text("place", "place", "name of the place"),
      text("by", "read by", "how the layer is read at the place"),
      whole("images", "images", "1", "images of the layer"),
      whole("images_touched", "images touched", "1", "images of which some part was refused"),
      number("mean_refused", "mean refused", "1", `mean share ${share}`),
      number("most_refused", "most refused", "1", `greatest share ${share} in one image`),
      text("worst_image", "worst image", "first day of the image of which most was refused"),
      whole("images_missing", "images missing", "1", "images that count as missing, for whatever reason"),
    ],
    rows: refusals.map((one) => [
      one.layer,
      one.place,
      one.by,
      one.images,
      one.touched,
      one.mean,
      one.greatest,
      Number.isNaN(one.worst) ? undefined : isoDay(one.worst),
      one.missing,
    ]),
  };
}
