import type { Cast } from "../cast.ts";
import type { Figure } from "../figure.ts";
import type { ReportInput } from "../input.ts";
import { show } from "../numbers.ts";
import { ink } from "../palette.ts";
import type { Size } from "../size.ts";
import { chart, covariateMark, nameAxis } from "../vega.ts";

const WAYS = [
  { key: "lasso", text: "lasso, shrunken", shape: "square", colour: ink("mark") },
  { key: "refit", text: "refit of its selection", shape: "circle", colour: ink("ink") },
  { key: "components", text: "components, carried back", shape: "triangle-up", colour: ink("less") },
] as const;

/** The effect of each covariate three ways, side by side. */
export async function effects(
  { comparison }: ReportInput,
  cast: Cast,
  size: Size,
): Promise<Figure | undefined> {
  const rows = comparison?.agreement.effects ?? [];
  if (rows.length === 0) return undefined;
  const points = rows.flatMap((one) =>
    WAYS.filter(({ key }) => Number.isFinite(one[key]) && one[key] !== 0).map(({ key, text }, i) => ({
      name: one.name,
      value: one[key],
      way: text,
      shift: i,
      mark: covariateMark(cast.byName.get(one.name)?.index ?? -1),
    })),
  );
  if (points.length === 0) return undefined;
  const used = WAYS.filter((way) => points.some((one) => one.way === way.text));
  const title = "Effects three ways";
  const y = {
    field: "name",
    type: "nominal",
    sort: null,
    title: null,
    axis: { ticks: false, domain: false, grid: true, labelColor: ink("ink"), ...nameAxis(size) },
  } as const;
  const scale = { domain: used.map((one) => one.text), range: used.map((one) => one.colour) };
  const shapes = { domain: used.map((one) => one.text), range: used.map((one) => one.shape as string) };
  const legend = {
    title: null,
    orient: "top",
    direction: size.narrow ? "vertical" : "horizontal",
    labelColor: ink("ink"),
    labelFontSize: 12,
    symbolSize: 70,
    labelLimit: 260,
  } as const;
  const svg = await chart(
    "effects",
    title,
    rows
      .slice(0, 20)
      .map(
        (one) =>
          `${one.name}: lasso ${show(one.lasso)}, refit ${show(one.refit)}, components ${show(one.components)}`,
      )
      .join("; "),
    {
      width: Math.min(600, size.width - size.names - 54),
      height: { step: rows.length > 40 ? 16 : 24 },
      data: { values: points },
      layer: [
        { mark: { type: "rule", color: ink("muted") }, encoding: { x: { datum: 0, type: "quantitative" } } },
        {
          mark: { type: "point", filled: true, size: 62, opacity: 0.9 },
          encoding: {
            y,
            x: {
              field: "value",
              type: "quantitative",
              title: "effect on logit survival, per sd of the covariate",
              axis: { tickCount: 6 },
            },
            color: { field: "way", type: "nominal", scale, legend },
            shape: { field: "way", type: "nominal", scale: shapes, legend },
            description: { field: "mark" },
          },
        },
      ],
    },
  );
  return {
    name: "effects",
    title,
    caption:
      "Effect of each covariate on logit apparent annual survival, per standard deviation: the lasso at its chosen penalty, the refit of what it chose without penalty, and the kept components carried back to the covariates. Where a way gives a covariate no effect it has no mark.",
    svg,
  };
}
