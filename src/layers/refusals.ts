import type { LayerExtraction } from "./extract.ts";
import type { Wanted } from "./options.ts";

/** What the quality of a layer refused at one place, read one way. */
export interface Refusal {
  readonly layer: string;
  readonly place: string;
  readonly by: string;
  readonly images: number;
  /** Images of which some pixel was refused. */
  readonly touched: number;
  /** Mean and greatest share of the place's area (or fixes) that had a value and was refused. */
  readonly mean: number;
  readonly greatest: number;
  /** First day of the image of which most was refused; NaN if nothing was. */
  readonly worst: number;
  /** Images that count as missing, for whatever reason. */
  readonly missing: number;
}

/** One row for each place of a layer that has quality; none for the others. */
export function refusalsOf(
  layer: string,
  wanted: readonly Wanted[],
  { series, refused }: Pick<LayerExtraction, "series" | "refused">,
): readonly Refusal[] {
  return refused.map((shares, w): Refusal => {
    const { place, use } = wanted[w];
    const greatest = shares.reduce((most, one) => Math.max(most, one), 0);
    return {
      layer,
      place: place.name,
      by: use.by,
      images: shares.length,
      touched: shares.filter((one) => one > 0).length,
      mean: shares.reduce((sum, one) => sum + one, 0) / shares.length,
      greatest,
      worst: greatest > 0 ? series[w].starts[shares.indexOf(greatest)] : Number.NaN,
      missing: series[w].values.filter(Number.isNaN).length,
    };
  });
}
