import type { Cast } from "../cast.ts";
import type { Figure } from "../figure.ts";
import type { ReportInput } from "../input.ts";
import { percent, pText } from "../numbers.ts";
import { ink } from "../palette.ts";
import type { Size } from "../size.ts";
import { chart } from "../vega.ts";

const ROWS: string[] = ["counting years", "counting animals"];
const PERCENT: number[] = [0, 100];

/** What the two selections account for, beside what they account for when the years are permuted. */
export async function evidence(
  { screened }: ReportInput,
  _cast: Cast,
  size: Size,
): Promise<Figure | undefined> {
  const permutation = screened?.permutation;
  if (screened === undefined || permutation === undefined) return undefined;
  const share = (value: number) => (Number.isFinite(value) ? 100 * value : 0);
  const rows = [
    {
      row: "counting years",
      observed: share(screened.byYears.names.length === 0 ? 0 : screened.byYears.deviance.share),
      median: share(permutation.medianShareByYears),
      high: share(permutation.shareByYears95),
    },
    {
      row: "counting animals",
      observed: share(screened.byAnimals.names.length === 0 ? 0 : screened.byAnimals.deviance.share),
      median: share(permutation.medianShareByAnimals),
      high: share(permutation.shareByAnimals95),
    },
  ];
  const title = "The selection against its own chance";
  const y = {
    field: "row",
    type: "nominal",
    sort: ROWS,
    title: null,
    axis: { ticks: false, domain: false, labelColor: ink("ink"), labelLimit: 160 },
  } as const;
  const x = (field: string) =>
    ({
      field,
      type: "quantitative",
      scale: { domain: PERCENT },
      title: "share of the deviance between years (%)",
    }) as const;
  const text = (field: string, value: string, dy: number) => ({
    mark: { type: "text", dy, dx: -4, align: "left", fontSize: 11, color: ink("muted") } as const,
    encoding: { y, x: x(field), text: { value } },
  });
  const svg = await chart(
    "evidence",
    title,
    `Counting years the selection accounts for ${percent(rows[0].observed / 100)}, with years permuted the median is ${percent(permutation.medianShareByYears)}, 95 % of permutations below ${percent(permutation.shareByYears95)}; counting animals ${percent(rows[1].observed / 100)}, permuted ${percent(permutation.medianShareByAnimals)}, 95 % of permutations below ${percent(permutation.shareByAnimals95)}; family-wise p ${pText(permutation.p)} over ${permutation.replicates} permutations`,
    {
      width: Math.min(560, size.width - 140),
      height: { step: 62 },
      data: { values: rows },
      layer: [
        {
          mark: { type: "rule", color: ink("rule"), strokeWidth: 10 },
          encoding: { y, x: x("high"), x2: { datum: 0 } },
        },
        {
          mark: { type: "tick", thickness: 2.5, size: 24, color: ink("less") },
          encoding: { y, x: x("median") },
        },
        {
          mark: { type: "point", filled: true, size: 110, color: ink("mark"), opacity: 1 },
          encoding: { y, x: x("observed") },
        },
        text("median", "permuted, median", 22),
        text("observed", "observed", -16),
      ],
    },
  );
  return {
    name: "evidence",
    title,
    caption: `Dot: what the chosen covariates account for of the deviance between years. Tick: the median of the same procedure over ${permutation.replicates} permutations of years, where there is nothing to be found. Grey bar: 95 % of permutations stay below its end.`,
    svg,
  };
}
