import type { ScreenResult } from "../../screen/screen.ts";
import type { Size } from "../size.ts";

/** Room for the names at the ends of the lines. */
const PATH_NAMES = 182;

/** Width of the two figures along the path, so that they line up below each other. */
export function pathWidth({ width, narrow }: Size): number {
  return Math.min(700, width - PATH_EXTENT - (narrow ? 166 : PATH_NAMES));
}

export const LAMBDA_TITLE = "penalty λ (log scale, weaker to the right)";

/** The penalty falls from left to right, as the path is walked. */
export function lambdaScale(screened: ScreenResult) {
  const { steps } = screened.path;
  const [first, last] = [steps[0].lambda, steps[steps.length - 1].lambda];
  // one step alone still needs a range
  const domain: [number, number] = first > last ? [first, last] : [first * 1.1, first / 1.1];
  return { type: "log" as const, domain, nice: false as const };
}

/** Room for a label, px. */
const LABEL = 34;

/**
 * The axis both figures share: labels at 1, 2 and 5 times powers of ten, or where they would touch at the powers alone; no
 * grid, and the same room on the left.
 */
export function lambdaAxis(screened: ScreenResult, size: Size) {
  const [high, low] = lambdaScale(screened).domain;
  const decade = pathWidth(size) / Math.log10(high / low);
  // the least gap of 1-2-5 is that of a factor 2
  const leads = decade * Math.log10(2) >= LABEL ? [1, 2, 5] : [1];
  const values: number[] = [];
  for (let power = Math.floor(Math.log10(low)); power <= Math.log10(high); power++)
    for (const lead of leads) {
      const value = Number((lead * 10 ** power).toPrecision(3));
      if (value >= low && value <= high) values.push(value);
    }
  return { values, format: "~g", grid: false };
}

export const PATH_EXTENT = 58;
