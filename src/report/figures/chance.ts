import type { Cast } from "../cast.ts";
import type { Figure } from "../figure.ts";
import type { ReportInput } from "../input.ts";
import { counted, pText, show } from "../numbers.ts";
import { ink } from "../palette.ts";
import type { Size } from "../size.ts";
import { chart } from "../vega.ts";

/** Bars from 0 to the largest gain; permutations in which nothing stood have a bar of their own. */
const BARS = 20;

/** The gain of the choice by years among the gains that the same procedure finds with years permuted. */
export async function chance(
  { screened }: ReportInput,
  _cast: Cast,
  size: Size,
): Promise<Figure | undefined> {
  const permutation = screened?.permutation;
  if (screened === undefined || permutation === undefined) return undefined;
  const { gains, gain } = permutation;
  const nothing = gains.filter((one) => one === 0).length;
  const top = Math.max(gain, ...gains);
  const width = top > 0 ? top / BARS : 1;
  const counts = new Array<number>(BARS).fill(0);
  for (const one of gains) if (one > 0) counts[Math.min(BARS - 1, Math.floor(one / width))]++;
  const bars = [
    { from: -2 * width, to: -width, count: nothing },
    ...counts.map((count, i) => ({ from: i * width, to: (i + 1) * width, count })),
  ].filter((one) => one.count > 0);
  const reach = gains.filter((one) => one > 0 && one >= gain).length;
  const domain: number[] = [-2 * width, top * 1.02];
  const title = "The choice by years among permutations of years";
  const x = (field: string) =>
    ({
      field,
      type: "quantitative",
      title: "gain over no covariate, after its price",
      scale: { domain, nice: false },
      axis: { grid: false },
    }) as const;
  const svg = await chart(
    "chance",
    title,
    `Nothing stood in ${nothing} of ${permutation.replicates} permutations; the gain of the study's own choice is ${show(gain)}, and ${reach} did at least as well where something stood; family-wise p ${pText(permutation.p)}`,
    {
      width: Math.min(560, size.width - 120),
      height: 150,
      layer: [
        {
          data: { values: bars },
          mark: { type: "rect", color: ink("less") },
          encoding: {
            x: x("from"),
            x2: { field: "to" },
            y: { field: "count", type: "quantitative", title: "permutations", scale: { zero: true } },
            y2: { datum: 0 },
          },
        },
        {
          data: { values: [{ gain }] },
          mark: { type: "rule", color: ink("mark"), strokeWidth: 2.5 },
          encoding: { x: x("gain") },
        },
        {
          data: { values: [{ gain }] },
          mark: {
            type: "text",
            text: "the study",
            color: ink("ink"),
            fontSize: 12,
            align: gain > top / 2 ? "right" : "left",
            dx: gain > top / 2 ? -6 : 6,
            baseline: "top",
          },
          encoding: { x: x("gain"), y: { value: 0 } },
        },
      ],
    },
  );
  return {
    name: "chance",
    title,
    caption: `Bars: the gain of the whole procedure in ${counted(permutation.replicates, "permutation")} of years, where there is nothing to be found; the bar left of 0 counts the ${nothing} in which nothing stood. Line: the gain of the study's own choice.`,
    svg,
  };
}
