import type { Cast } from "../cast.ts";
import { type Figure, fitted } from "../figure.ts";
import type { ReportInput } from "../input.ts";
import { counted, show } from "../numbers.ts";
import { ink } from "../palette.ts";
import { extent, spread } from "../scale.ts";
import type { Size } from "../size.ts";
import { CHOSEN_LAMBDA, chart, covariateMark } from "../vega.ts";
import { LAMBDA_TITLE, lambdaAxis, lambdaScale, PATH_EXTENT, pathWidth } from "./lambda.ts";

const HEIGHT = 380;
/** How many lines get their name; the others are told by pointing and in the table. */
const NAMED = 20;

/** Each covariate's coefficient along the path, named where it ends. */
export async function paths({ screened }: ReportInput, cast: Cast, size: Size): Promise<Figure | undefined> {
  const width = pathWidth(size);
  if (screened === undefined || screened.path.lambdaMax === 0 || screened.names.length === 0)
    return undefined;
  const { path, names, choice, byAnimals } = screened;
  const last = path.steps[path.steps.length - 1];
  const chosen = path.steps[choice.index];
  const ever = names.map((_, k) => k).filter((k) => path.steps.some((step) => step.coefficients[k] !== 0));
  const look = (k: number) => {
    const member = cast.byName.get(names[k]);
    return {
      mark: covariateMark(member?.index ?? -1),
      colour: ink(member?.theme.token ?? "ink"),
      shape: member?.theme.marker ?? "circle",
    };
  };
  const points = ever.flatMap((k) =>
    path.steps.map((step) => ({
      lambda: step.lambda,
      value: step.coefficients[k],
      name: names[k],
      chosen: chosen.coefficients[k] !== 0,
      ...look(k),
    })),
  );
  const [low, high] = extent([0, ...points.map((one) => one.value)]);
  const room = 0.06 * (high - low || 1);
  const domain: [number, number] = [low - room, high + room];
  const named = [...ever]
    .sort(
      (a, b) =>
        Number(chosen.coefficients[b] !== 0) - Number(chosen.coefficients[a] !== 0) ||
        Math.abs(last.coefficients[b]) - Math.abs(last.coefficients[a]),
    )
    .slice(0, NAMED);
  const unit = (domain[1] - domain[0]) / HEIGHT;
  const heights = spread(
    named.map((k) => last.coefficients[k]),
    14.5 * unit,
    domain[0],
    domain[1],
  );
  const labels = named.map((k, i) => ({
    name: fitted(names[k], size.narrow ? 100 : 140),
    value: last.coefficients[k],
    at: heights[i],
    lambda: last.lambda,
    chosen: chosen.coefficients[k] !== 0,
    ...look(k),
  }));
  const x = {
    field: "lambda",
    type: "quantitative",
    scale: lambdaScale(screened),
    title: LAMBDA_TITLE,
    axis: lambdaAxis(screened, size),
  } as const;
  const y = (field: string) =>
    ({
      field,
      type: "quantitative",
      scale: { domain, nice: false, zero: false },
      title: "effect on logit survival, per sd",
      axis: { minExtent: PATH_EXTENT, maxExtent: PATH_EXTENT },
    }) as const;
  const color = { field: "colour", type: "nominal", scale: null } as const;
  const description = { field: "mark" } as const;
  const title = "Coefficients along the path";
  const says = `${counted(ever.length, "covariate")} of ${names.length} enter. At the chosen penalty ${show(chosen.lambda)}: ${byAnimals.names.map((name) => `${name} ${show(chosen.coefficients[names.indexOf(name)])}`).join(", ") || "none"}`;
  const svg = await chart("coefficient-paths", title, says, {
    width,
    height: HEIGHT,
    layer: [
      {
        data: { values: [{}] },
        mark: { type: "rule", color: ink("muted") },
        encoding: { y: { datum: 0, type: "quantitative", scale: { domain } } },
      },
      {
        data: { values: [{ lambda: chosen.lambda }] },
        mark: { type: "rule", color: ink("mark"), strokeWidth: 1.5 },
        encoding: { x, description: { value: CHOSEN_LAMBDA } },
      },
      {
        data: { values: points },
        mark: { type: "line", strokeJoin: "round" },
        encoding: {
          x,
          y: y("value"),
          detail: { field: "name" },
          color,
          description,
          strokeWidth: { condition: { test: "datum.chosen", value: 2.6 }, value: 1.1 },
        },
      },
      {
        data: { values: labels },
        mark: { type: "rule", strokeWidth: 0.8, opacity: 0.7 },
        encoding: {
          x: { value: width },
          x2: { value: width + 14 },
          y: y("value"),
          y2: { field: "at" },
          color,
          description,
        },
      },
      {
        data: { values: labels },
        mark: { type: "point", filled: true, size: 55, opacity: 1 },
        encoding: {
          x: { value: width + 20 },
          y: y("at"),
          color,
          shape: { field: "shape", type: "nominal", scale: null },
          description,
        },
      },
      {
        data: { values: labels },
        mark: { type: "text", align: "left", fontSize: 12, color: ink("ink") },
        encoding: { x: { value: width + 29 }, y: y("at"), text: { field: "name" }, description },
      },
    ],
  });
  return {
    name: "coefficient-paths",
    title,
    caption: `Effect of each covariate on logit apparent annual survival, per standard deviation, as the penalty falls from left to right. Thick: not zero at the chosen penalty (vertical line).${ever.length > NAMED ? ` Of ${ever.length} lines the ${NAMED} largest are named.` : ""}`,
    svg,
  };
}
