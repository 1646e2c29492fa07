import { listWords } from "../../data/words.ts";
import type { RateEstimate } from "../../survival/fit.ts";
import type { Cast } from "../cast.ts";
import type { Figure } from "../figure.ts";
import type { ReportInput } from "../input.ts";
import { counted, show } from "../numbers.ts";
import { ink } from "../palette.ts";
import { extent } from "../scale.ts";
import type { Size } from "../size.ts";
import { chart } from "../vega.ts";
import { isDated } from "./axis-time.ts";
import { type Counting, chosenBy } from "./counting.ts";

const MS_PER_DAY = 86_400_000;

/** Apparent annual survival by interval: on its own, and by what was chosen counting years or counting animals. */
export function survival(counting: Counting) {
  return (input: ReportInput, _cast: Cast, size: Size) => survivalOf(input, counting, size);
}

async function survivalOf(input: ReportInput, counting: Counting, size: Size): Promise<Figure | undefined> {
  const { screened } = input;
  const chosen = chosenBy(input, counting);
  if (screened === undefined || chosen === undefined) return undefined;
  const { intervalFit } = screened;
  const dated = isDated(input);
  const at = (t: number) =>
    dated ? ((input.intervals[t].start + input.intervals[t].end) / 2) * MS_PER_DAY : t + 1;
  const span = dated
    ? [input.intervals[0].start * MS_PER_DAY, input.intervals[input.intervals.length - 1].end * MS_PER_DAY]
    : [];
  const row = (one: RateEstimate) => ({
    stratum: one.stratum,
    x: at(one.interval),
    value: one.value,
    // without a standard error there is no bar, and the point is hollow
    low: Number.isFinite(one.se) && Number.isFinite(one.low) ? one.low : null,
    high: Number.isFinite(one.se) && Number.isFinite(one.high) ? one.high : null,
    // one that could be almost anything is no more told by the data than one at a bound
    sure: Number.isFinite(one.se) && one.high - one.low < 0.95,
  });
  const own = intervalFit.survival.map(row);
  const modelled = chosen.fit.survival.map(row);
  const strata = [...new Set(own.map((one) => one.stratum))];
  const x = {
    field: "x",
    ...(dated
      ? {
          type: "temporal" as const,
          scale: { type: "utc" as const, domain: span, nice: false },
          axis: {
            labelExpr: "utcFormat(datum.value, '%Y')",
            tickCount: {
              interval: "year" as const,
              step: input.intervals.length > 24 || size.narrow ? 5 : 2,
            },
          },
        }
      : {
          type: "quantitative" as const,
          scale: { domain: [0.5, input.intervals.length + 0.5] },
          axis: { tickMinStep: 1, format: "d" },
        }),
    title: dated ? "interval (set at its middle)" : "interval (in order)",
  };
  const y = (field: string) =>
    ({ field, type: "quantitative", scale: { domain: [0, 1] }, title: "apparent annual survival" }) as const;
  const name = counting === "years" ? "survival" : "survival-by-animals";
  const title = "Apparent annual survival";
  const [low, high] = extent(own.map((one) => one.value));
  const unsure = own.filter((one) => !one.sure).length;
  const words =
    chosen.names.length === 0
      ? "the same in every interval (no covariate stands)"
      : `by ${listWords(chosen.names)}`;
  const svg = await chart(
    name,
    title,
    `${strata.length > 1 ? `${counted(strata.length, "stratum", "strata")}: ${listWords(strata)}. ` : ""}One survival per interval runs from ${show(low)} to ${show(high)} over ${counted(input.intervals.length, "interval")}${unsure > 0 ? `, ${unsure} that the data hardly tell` : ""}; the model chosen counting ${counting}: ${words}, ${strata
      .map((stratum) => {
        const [a, b] = extent(modelled.filter((one) => one.stratum === stratum).map((one) => one.value));
        return `${strata.length > 1 ? `${stratum} ` : ""}${show(a)} to ${show(b)}`;
      })
      .join("; ")}`,
    {
      data: {
        values: [
          ...own.map((one) => ({ ...one, of: "own" })),
          ...modelled.map((one) => ({ ...one, of: "model" })),
        ],
      },
      facet: {
        row: {
          field: "stratum",
          type: "nominal",
          sort: strata,
          title: null,
          header:
            strata.length > 1
              ? { labelAngle: 0, labelOrient: "top", labelAnchor: "start" }
              : { labels: false },
        },
      },
      spec: {
        width: Math.min(860, size.width - 80),
        height: strata.length > 1 ? 190 : 280,
        layer: [
          {
            transform: [{ filter: "datum.of === 'model' && datum.low !== null" }],
            mark: { type: "area", color: ink("mark"), opacity: 0.18 },
            encoding: { x, y: y("low"), y2: { field: "high" } },
          },
          {
            transform: [{ filter: "datum.of === 'model'" }],
            mark: { type: "line", color: ink("mark"), strokeWidth: 2.2 },
            encoding: { x, y: y("value") },
          },
          {
            transform: [{ filter: "datum.of === 'own' && datum.low !== null" }],
            mark: { type: "rule", color: ink("ink"), strokeWidth: 1.3 },
            encoding: { x, y: y("low"), y2: { field: "high" } },
          },
          {
            transform: [{ filter: "datum.of === 'own'" }],
            mark: { type: "point", size: 44, opacity: 1, stroke: ink("ink"), strokeWidth: 1.5 },
            encoding: {
              x,
              y: y("value"),
              fill: { condition: { test: "datum.sure", value: ink("ink") }, value: ink("panel") },
            },
          },
        ],
      },
    } as never, // layer-in-facet specs are right but their inferred unions are not assignable one by one
  );
  return {
    name,
    title,
    caption: `Points with bars: one survival per interval, 95 % intervals made on the logit scale; a hollow point lies at a bound, is not separable, or could be almost anything. Line and band: the model chosen counting ${counting}, survival ${words}, with its 95 % interval, which knows nothing of the choosing.${strata.length > 1 ? " Strata stand apart." : ""} Apparent survival counts death and permanent emigration together.`,
    svg,
  };
}
