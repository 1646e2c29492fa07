import type { Cast } from "../cast.ts";
import type { Figure } from "../figure.ts";
import type { ReportInput } from "../input.ts";
import { percent, sentence } from "../numbers.ts";
import { ink } from "../palette.ts";
import type { Size } from "../size.ts";
import { chart } from "../vega.ts";

/** Share of variance of each component beside what a stick broken at random would give it. */
export async function variance(
  { components }: ReportInput,
  _cast: Cast,
  size: Size,
): Promise<Figure | undefined> {
  if (components === undefined || components.share.length === 0) return undefined;
  const shown = Math.min(components.share.length, 20);
  const total = components.sd.reduce((sum, sd) => sum + sd * sd, 0);
  const chance = components.parallel;
  const data = Array.from({ length: shown }, (_, j) => ({
    component: j + 1,
    share: 100 * components.share[j],
    stick: 100 * components.brokenStick[j],
    parallel: chance === undefined ? null : (100 * chance[j]) / total,
    kept: j < components.kept,
  }));
  const title = "Share of variance by component";
  const x = { field: "component", type: "ordinal", title: "component", axis: { labelAngle: 0 } } as const;
  const y = (field: string) =>
    ({ field, type: "quantitative", title: "share of variance (%)", scale: { zero: true } }) as const;
  const last = data[data.length - 1];
  const reference = chance === undefined ? "stick" : "parallel";
  const svg = await chart(
    "component-variance",
    title,
    `${components.kept} kept. ${data
      .slice(0, 8)
      .map(
        (one, j) =>
          `Component ${one.component}: ${percent(components.share[j])}, by a broken stick ${percent(components.brokenStick[j])}`,
      )
      .join("; ")}`,
    {
      width: Math.min(size.width - 150, Math.max(360, Math.min(640, 48 * shown))),
      height: 230,
      data: { values: data },
      layer: [
        {
          mark: { type: "bar", width: { band: 0.62 }, color: ink("mark") },
          encoding: {
            x,
            y: y("share"),
            fillOpacity: { condition: { test: "datum.kept", value: 0.85 }, value: 0.15 },
            stroke: { value: ink("mark") },
          },
        },
        {
          mark: { type: "line", color: ink("less"), strokeDash: [5, 3], strokeWidth: 2 },
          encoding: { x, y: y(reference) },
        },
        {
          mark: { type: "point", filled: true, color: ink("less"), size: 36, opacity: 1 },
          encoding: { x, y: y(reference) },
        },
        {
          data: { values: [last] },
          mark: { type: "text", align: "left", dx: 12, color: ink("ink"), fontSize: 12 },
          encoding: {
            x,
            y: y(reference),
            text: { value: chance === undefined ? "broken stick" : "by chance alone" },
          },
        },
      ],
    },
  );
  return {
    name: "component-variance",
    title,
    caption: `Bars: the share of the covariates' variance that each component carries; solid ones are kept. Dashed: ${chance === undefined ? "the shares of a stick broken at random" : "what independent columns give by chance (parallel analysis)"}. ${sentence(components.keptBecause)}.`,
    svg,
  };
}
