import Qty from "js-quantities";
import { InputError } from "../errors.ts";

/**
 * What a number of a unit means. A temperature of 10 degC is 50 degF, but a difference of 10 degC (a range, a sd, degree-days) is
 * one of 18 degF: only readings have a zero point.
 */
export type UnitUse = "reading" | "difference";

/** Zero points of the temperature scales: degC = (x − zero) · step. */
const TEMPERATURE: Readonly<Record<string, { readonly zero: number; readonly step: number }>> = {
  degC: { zero: 0, step: 1 },
  K: { zero: 273.15, step: 1 },
  degF: { zero: 32, step: 5 / 9 },
};

/** How people write units, and the spelling that is kept. */
const SPELLINGS: Readonly<Record<string, string>> = {
  "°C": "degC",
  C: "degC",
  celsius: "degC",
  "°F": "degF",
  F: "degF",
  fahrenheit: "degF",
  kelvin: "K",
  percent: "%",
  inch: "in",
  inches: "in",
  knots: "kt",
};

/**
 * Units whose constant in the library is rounded: the international knot is 1852 m/h, the conventional millimetre of
 * mercury 13595.1 · 9.80665 · 10⁻³ Pa (NIST SP 811, appendix B).
 */
const EXACT: Readonly<Record<string, { readonly times: number; readonly unit: string }>> = {
  kt: { times: 1.852, unit: "km/h" },
  mmHg: { times: 133.322387415, unit: "Pa" },
  inHg: { times: 3386.388640341, unit: "Pa" },
};

const EXAMPLES =
  "degC, degF, K, mm, cm, in, m/s, km/h, hPa, Pa, W/m2, MJ/m2, percent, 1, days, mm/day, degC days";

/** The unit in the library's spelling; temperatures in it are differences. */
function librarySpelling(unit: string): string {
  const text = unit.trim();
  if (text === "1" || text === "") return "1";
  return text
    .split(/([\s·*/]+)/)
    .map((part) => {
      if (/^[\s·*]+$/.test(part)) return "*";
      if (part.includes("/")) return "/";
      // `m2`, `m^2` and `m-2` are all powers.
      const match = /^(.*?[^\d^+-])\^?([-+]?\d+)?$/.exec(part);
      const name = match === null ? part : match[1];
      const power = match?.[2] === undefined ? "" : `^${match[2]}`;
      const spelled = SPELLINGS[name] ?? name;
      if (spelled === "K") return `degK${power}`;
      return `${spelled}${power}`;
    })
    .join("");
}

function scaleOf(unit: string): { readonly zero: number; readonly step: number } | undefined {
  const text = unit.trim();
  return TEMPERATURE[SPELLINGS[text] ?? text];
}

/** The library's quantity of one unit, and what to multiply it with. */
function quantity(unit: string): { readonly one: ReturnType<typeof Qty>; readonly times: number } {
  const exact = EXACT[SPELLINGS[unit.trim()] ?? unit.trim()];
  if (exact !== undefined) return { one: Qty(`1 ${exact.unit}`), times: exact.times };
  try {
    return { times: 1, one: Qty(`1 ${librarySpelling(unit) === "1" ? "" : librarySpelling(unit)}`.trim()) };
  } catch (error) {
    throw new InputError(
      {
        name: "stations.unknown-unit",
        expected: "a unit of measurement",
        found: JSON.stringify(unit),
        remedy: `write a unit such as ${EXAMPLES}`,
      },
      error,
    );
  }
}

/** True if the text is a unit that can be converted. */
export function knownUnit(text: string): boolean {
  try {
    quantity(text);
    return true;
  } catch {
    return false;
  }
}

/** Throws `stations.unknown-unit`, saying what can be written. */
export function checkUnit(text: string): void {
  quantity(text);
}

/** True for degC, degF, K and their other spellings. */
export function isTemperature(unit: string): boolean {
  return scaleOf(unit) !== undefined;
}

/** True if one unit can be converted to the other. */
export function sameDimension(a: string, b: string): boolean {
  return knownUnit(a) && knownUnit(b) && quantity(a).one.isCompatible(quantity(b).one);
}

/**
 * Values in another unit: factor · x by the units library; temperature readings ((x − zero_from) · step_from)/step_to + zero_to.
 * NaN stays NaN. Throws `stations.unknown-unit` and `stations.other-dimension`.
 */
export function convertUnit(values: ArrayLike<number>, from: string, to: string, use: UnitUse): Float64Array {
  const out = Float64Array.from(values);
  const [a, b] = [quantity(from), quantity(to)];
  if (!a.one.isCompatible(b.one))
    throw new InputError({
      name: "stations.other-dimension",
      expected: `a unit that ${JSON.stringify(from)} can be converted to`,
      found: JSON.stringify(to),
      remedy: "ask for a unit of the same dimension (length to length, temperature to temperature)",
    });
  const [source, target] = [scaleOf(from), scaleOf(to)];
  if (source !== undefined && target !== undefined) {
    if (source === target) return out;
    const zero = use === "reading" ? [source.zero, target.zero] : [0, 0];
    for (let i = 0; i < out.length; i++) out[i] = ((out[i] - zero[0]) * source.step) / target.step + zero[1];
    return out;
  }
  const factor = (a.one.to(b.one).scalar * a.times) / b.times;
  if (factor !== 1) for (let i = 0; i < out.length; i++) out[i] *= factor;
  return out;
}
