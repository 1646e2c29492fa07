import { listWords } from "../../data/words.ts";
import type { Cast } from "../cast.ts";
import type { Figure } from "../figure.ts";
import type { ReportInput } from "../input.ts";
import { counted, show } from "../numbers.ts";
import { ink } from "../palette.ts";
import type { Size } from "../size.ts";
import { CHOSEN_LAMBDA, chart } from "../vega.ts";
import { LAMBDA_TITLE, lambdaAxis, lambdaScale, PATH_EXTENT, pathWidth } from "./lambda.ts";

/** The criterion along the path, with the chosen penalty and all that are nearly as good. */
export async function criterion(
  { screened }: ReportInput,
  _cast: Cast,
  size: Size,
): Promise<Figure | undefined> {
  const width = pathWidth(size);
  if (screened === undefined || screened.path.lambdaMax === 0) return undefined;
  const { choice, options, byAnimals } = screened;
  const value = (i: number) => choice.rows[i].criterion;
  const data = choice.rows
    .map((row, i) => ({ lambda: row.lambda, value: value(i), active: row.active }))
    .filter((one) => Number.isFinite(one.value));
  const chosen = choice.rows[choice.index];
  const band = choice.band.map((i) => choice.rows[i].lambda);
  const least = value(choice.index);
  const steps = changes(data, width);
  const title = "The criterion along the path";
  const x = {
    field: "lambda",
    type: "quantitative",
    scale: lambdaScale(screened),
    title: LAMBDA_TITLE,
    axis: lambdaAxis(screened, size),
  } as const;
  const y = {
    field: "value",
    type: "quantitative",
    scale: { zero: false },
    title: `${options.chooseBy} (smaller is better)`,
    axis: { minExtent: PATH_EXTENT, maxExtent: PATH_EXTENT, format: "~f" },
  } as const;
  const spanned = band.length > 1 ? [{ from: Math.max(...band), to: Math.min(...band) }] : [];
  const svg = await chart(
    "criterion",
    title,
    `${options.chooseBy} is least, ${show(least)}, at penalty ${show(chosen.lambda)} with ${counted(chosen.active, "covariate")}: ${listWords(byAnimals.names)}; ${counted(band.length, "step")} of ${choice.rows.length} within 2 units`,
    {
      width,
      height: 200,
      layer: [
        {
          data: { values: spanned },
          mark: { type: "rect", color: ink("mark"), opacity: 0.16 },
          encoding: {
            x: { field: "from", type: "quantitative", scale: lambdaScale(screened) },
            x2: { field: "to" },
          },
        },
        {
          data: { values: data },
          mark: { type: "line", color: ink("ink"), strokeWidth: 2 },
          encoding: { x, y },
        },
        {
          data: { values: [{ lambda: chosen.lambda, value: least }] },
          mark: { type: "rule", color: ink("mark"), strokeWidth: 1.5 },
          encoding: { x, description: { value: CHOSEN_LAMBDA } },
        },
        {
          data: { values: [{ lambda: chosen.lambda, value: least }] },
          mark: { type: "point", filled: true, size: 80, color: ink("mark"), opacity: 1 },
          encoding: { x, y },
        },
        {
          data: {
            values: steps,
          },
          mark: { type: "text", baseline: "bottom", fontSize: 11, color: ink("muted") },
          encoding: { x, y: { value: -4 }, text: { field: "active" } },
        },
      ],
    },
  );
  return {
    name: "criterion",
    title,
    caption: `${options.chooseBy} with n = ${screened.sampleSize} ${options.sampleSize}: a criterion that counts animals. The line marks the chosen penalty, the band every penalty within 2 units of it; the numbers on top say how many covariates stand from there on.`,
    svg,
  };
}

interface Point {
  readonly lambda: number;
  readonly value: number;
  readonly active: number;
}

/** Where the number of covariates changes, as far as the numbers have room beside each other. */
function changes(data: readonly Point[], width: number): Point[] {
  const out: Point[] = [];
  const perStep = width / Math.max(1, data.length - 1);
  let last = Number.NEGATIVE_INFINITY;
  data.forEach((one, i) => {
    if (i > 0 && one.active === data[i - 1].active) return;
    // too close: the later number is the one that stands from there on
    if ((i - last) * perStep < 18) out.pop();
    out.push(one);
    last = i;
  });
  return out;
}
