import type { ValueKind } from "../data/series.ts";
import { quantile7 } from "../math/quantile.ts";
import { type Block, type DraftFinding, NO_DAY } from "./block.ts";
import type { DateColumn } from "./options.ts";
import { convertUnit, isTemperature, sameDimension } from "./units.ts";

/**
 * Looks whether the values fit another unit better than the one declared. Only the middle 90 % counts, so that odd values do
 * not decide. The rules are rough on purpose (common practice, no source): they ask a person, they change nothing.
 */
export function suspectUnit(
  blocks: readonly Block[],
  sentinels: ReadonlySet<number>,
  unit: string,
  kind: ValueKind,
  covers: DateColumn["covers"],
): DraftFinding | undefined {
  const sample = sampleOf(blocks, sentinels);
  // A handful of values says nothing about a unit.
  if (sample.length < 30) return undefined;
  const guess = isTemperature(unit)
    ? temperatureGuess(sample, unit)
    : kind === "total" && covers === "day" && sameDimension(unit, "mm")
      ? rainGuess(sample, unit)
      : undefined;
  if (guess === undefined) return undefined;
  const { variable } = blocks[0];
  const [low, high] = [quantile7(sample, 0.05), quantile7(sample, 0.95)];
  const shown = (value: number) => String(Number(value.toPrecision(4)));
  return {
    kind: "unit",
    subject: variable,
    message: `${variable} is declared in ${unit}, but nine in ten of its values lie between ${shown(low)} and ${shown(high)}: ${guess.looks}.`,
    at: { source: blocks[0].source, row: 0 },
    value: unit,
    count: sample.length,
    remedy: guess.remedy,
  };
}

interface Guess {
  readonly looks: string;
  readonly remedy: string;
}

function temperatureGuess(sample: Float64Array, unit: string): Guess | undefined {
  const celsius = convertUnit(sample, unit, "degC", "reading");
  const [low, high] = [quantile7(celsius, 0.05), quantile7(celsius, 0.95)];
  const [rawLow, rawHigh] = [quantile7(sample, 0.05), quantile7(sample, 0.95)];
  const plausible = (a: number, b: number) => a > -60 && b < 50 && b - a > 1;
  if (plausible(low, high)) return undefined;
  const as = (name: string): Guess => ({
    looks: `they look like ${name}`,
    remedy: `write \`unit: ${name}\` if that is what the file holds`,
  });
  // Whole Kelvin, Fahrenheit and tenths overlap least in this order.
  for (const name of ["K", "degF", "degC"]) {
    const [a, b] = convertUnit([rawLow, rawHigh], name, "degC", "reading");
    if (plausible(a, b)) return as(name);
  }
  return plausible(rawLow / 10, rawHigh / 10)
    ? { looks: "they look like tenths", remedy: "write `scale: 0.1` if the file holds tenths of a degree" }
    : undefined;
}

/** Daily rain: 1 in 100 wet days above 300 mm hardly occurs outside the rainiest places on Earth. */
function rainGuess(sample: Float64Array, unit: string): Guess | undefined {
  const wet = convertUnit(sample, unit, "mm", "reading").filter((value) => value > 0);
  if (wet.length < 30 || quantile7(wet, 0.99) <= 300) return undefined;
  const tenths = sample.every((value) => Number.isInteger(value));
  return {
    looks: tenths ? "wet days this wet look like tenths" : "wet days are this wet almost nowhere",
    remedy: tenths
      ? "write `scale: 0.1` if the file holds tenths"
      : "check the unit, or `covers:` if a row is a month",
  };
}

/** At most about 20,000 values, evenly from all blocks, scaled. */
function sampleOf(blocks: readonly Block[], sentinels: ReadonlySet<number>): Float64Array {
  const total = blocks.reduce((sum, block) => sum + block.raw.length, 0);
  const step = Math.max(1, Math.floor(total / 20_000));
  const out: number[] = [];
  for (const block of blocks)
    for (let row = 0; row < block.raw.length; row += step) {
      const value = block.raw[row];
      if (!Number.isNaN(value) && block.starts[row] !== NO_DAY && !sentinels.has(value))
        out.push(value * block.scale);
    }
  return Float64Array.from(out);
}
