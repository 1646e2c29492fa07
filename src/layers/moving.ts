import type { Period } from "../data/period.ts";
import type { Fix, MovingPlace } from "../data/place.ts";
import type { Footprint } from "./area.ts";
import { footprintOf } from "./footprint.ts";
import type { Grid } from "./grid.ts";
import type { PlaceUse } from "./options.ts";
import type { System } from "./system.ts";

/** A fix with what it counts. */
export interface WeightedFix {
  readonly fix: Fix;
  readonly weight: number;
}

/**
 * The fixes of a period and their weights. By fixes each counts 1. By time each counts the days it stands for: from half
 * way to the animal's fix before it to half way to the one after, no further than the period; so a burst of fixes
 * counts no more than the hours it lasted. Fixes of one animal at the same moment share its time.
 */
export function fixesIn(place: MovingPlace, period: Period): readonly WeightedFix[] {
  const { fixes } = place;
  const from = firstAt(fixes, period.start);
  const to = firstAt(fixes, period.end);
  const inside = fixes.slice(from, to);
  if (place.weigh === "fixes") return inside.map((fix) => ({ fix, weight: 1 }));
  const byAnimal = new Map<string, Fix[]>();
  for (const fix of inside) {
    const own = byAnimal.get(fix.animal);
    if (own === undefined) byAnimal.set(fix.animal, [fix]);
    else own.push(fix);
  }
  const weights = new Map<Fix, number>();
  for (const own of byAnimal.values())
    own.forEach((fix, i) => {
      const begin = i === 0 ? period.start : (own[i - 1].time + fix.time) / 2;
      const end = i === own.length - 1 ? period.end : (fix.time + own[i + 1].time) / 2;
      weights.set(fix, end - begin);
    });
  return inside.map((fix) => ({ fix, weight: weights.get(fix) ?? 0 }));
}

/** Index of the first fix at or after a time; fixes are in order of time. */
function firstAt(fixes: readonly Fix[], time: number): number {
  let low = 0;
  let high = fixes.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (fixes[middle].time < time) low = middle + 1;
    else high = middle;
  }
  return low;
}

/**
 * Where a place that moves is read in one period: the footprints of its fixes (pixel, four pixels or circle round each),
 * each with its weight, so that the mean is that of the fixes' own means where all is valid. Undefined with fewer
 * fixes than the place asks for.
 */
export function movingFootprint(
  place: MovingPlace,
  use: PlaceUse,
  period: Period,
  grid: Grid,
  system: System,
): Footprint | undefined {
  const fixes = fixesIn(place, period);
  if (fixes.length < Math.max(1, place.least)) return undefined;
  const parts = fixes.map(({ fix, weight }) => ({
    weight,
    footprint: footprintOf({ type: "point", name: place.name, position: fix.position }, use, grid, system),
  }));
  const total = parts.reduce((sum, one) => sum + one.weight, 0);
  const cells = parts.reduce((sum, one) => sum + one.footprint.columns.length, 0);
  const columns = new Int32Array(cells);
  const rows = new Int32Array(cells);
  const weights = new Float64Array(cells);
  let at = 0;
  for (const { footprint, weight } of parts) {
    columns.set(footprint.columns, at);
    rows.set(footprint.rows, at);
    footprint.weights.forEach((one, i) => {
      weights[at + i] = (weight * one) / footprint.total;
    });
    at += footprint.columns.length;
  }
  return {
    columns,
    rows,
    weights,
    total,
    outside: total > 0 ? parts.reduce((sum, one) => sum + one.weight * one.footprint.outside, 0) / total : 1,
    pixels: parts.reduce((most, one) => Math.max(most, one.footprint.pixels), 0),
  };
}
