import type { Cast } from "../cast.ts";
import type { Figure } from "../figure.ts";
import type { ReportInput } from "../input.ts";
import { brief, counted, show } from "../numbers.ts";
import { ink } from "../palette.ts";
import type { Size } from "../size.ts";
import { chart, covariateMark, nameAxis } from "../vega.ts";

/** From 1, the least there is. A plain array: the plot library takes no readonly one. */
const domainOf = (edge: number): number[] => [1, edge];

/** Variance inflation by covariate, on a logarithmic scale; infinity has its own place at the right. */
export async function inflation(input: ReportInput, cast: Cast, size: Size): Promise<Figure | undefined> {
  const rows = input.diagnosis?.inflation ?? [];
  if (rows.length < 2) return undefined;
  const finite = rows.map((one) => one.inflation).filter(Number.isFinite);
  const most = Math.max(input.warn.inflation, ...finite) * 1.3;
  const anyInfinite = finite.length < rows.length;
  const edge = anyInfinite ? most * 3 : most;
  const data = [...rows]
    .sort((a, b) => b.inflation - a.inflation || (a.name < b.name ? -1 : 1))
    .map((one) => {
      const member = cast.byName.get(one.name);
      return {
        row: one.name,
        value: Number.isFinite(one.inflation) ? Math.max(1, one.inflation) : edge,
        text: show(one.inflation),
        colour: ink(member?.theme.token ?? "ink"),
        shape: member?.theme.marker ?? "circle",
        mark: covariateMark(member?.index ?? -1),
      };
    });
  const above = rows.filter((one) => one.inflation > input.warn.inflation);
  const title = "Variance inflation";
  const says = `${above.length} of ${counted(rows.length, "covariate")} above ${brief(input.warn.inflation)}; ${data
    .slice(0, 12)
    .map((one) => `${one.row} ${one.text}`)
    .join(", ")}`;
  const y = {
    field: "row",
    type: "nominal",
    sort: null,
    title: null,
    axis: { ...nameAxis(size), ticks: false, domain: false, labelColor: ink("ink") },
  } as const;
  const x = {
    field: "value",
    type: "quantitative",
    scale: { type: "log", domain: domainOf(edge), nice: false },
    title: `variance inflation factor (log scale${anyInfinite ? "; ∞ at the right edge" : ""})`,
    axis: { tickCount: 5, format: "~g" },
  } as const;
  const description = { field: "mark" } as const;
  const svg = await chart("inflation", title, says, {
    width: Math.min(500, size.width - size.names - 48),
    height: { step: rows.length > 40 ? 14 : 22 },
    data: { values: data },
    layer: [
      {
        mark: { type: "rule", color: ink("less"), strokeDash: [5, 3] },
        encoding: { x: { datum: input.warn.inflation, type: "quantitative" } },
      },
      {
        mark: { type: "rule", strokeWidth: 1.5, opacity: 0.55 },
        encoding: {
          y,
          x,
          x2: { datum: 1 },
          color: { field: "colour", type: "nominal", scale: null },
          description,
        },
      },
      {
        mark: { type: "point", filled: true, size: 70, opacity: 1 },
        encoding: {
          y,
          x,
          color: { field: "colour", type: "nominal", scale: null },
          shape: { field: "shape", type: "nominal", scale: null },
          description,
        },
      },
      {
        mark: {
          type: "text",
          align: "left",
          dx: 9,
          fontSize: 11,
          color: ink("panel"),
          stroke: ink("panel"),
          strokeWidth: 4,
        },
        encoding: { y, x, text: { field: "text" }, description },
      },
      {
        mark: { type: "text", align: "left", dx: 9, fontSize: 11, color: ink("ink") },
        encoding: { y, x, text: { field: "text" }, description },
      },
    ],
  });
  return {
    name: "inflation",
    title,
    caption: `How many times the variance of a covariate's effect grows because the other covariates already tell part of it. The dashed line is the limit of ${brief(input.warn.inflation)}, a convention.`,
    svg,
  };
}
