import type { Polygon } from "../data/place.ts";
import { InputError } from "../errors.ts";
import { type CellArea, cellAreas } from "./cells.ts";
import { type Coverage, coverageOf, type PixelPolygon, windowOf } from "./coverage.ts";
import type { Grid } from "./grid.ts";
import { projectRing } from "./project.ts";
import { unwrap } from "./rings.ts";
import { type System, turnsOf } from "./system.ts";

/** The pixels a place is read from, row by row, and how much each counts. */
export interface Footprint {
  readonly columns: Int32Array;
  readonly rows: Int32Array;
  readonly weights: Float64Array;
  /** Weight of the whole place, the part outside the layer included. */
  readonly total: number;
  /** Share of the place that lies outside the layer, 0 to 1. */
  readonly outside: number;
  /** The area in pixels (1 for points), to tell places that are smaller than one. */
  readonly pixels: number;
}

/** Windows of more pixels than this are refused: they would take gigabytes, and a coarser layer tells as much. */
const MOST_PIXELS = 25_000_000;
/** Fractions below this are rounding of the sums. */
const LEAST_FRACTION = 1e-12;

/**
 * The pixels of an area, weighted by the fraction inside times the true area of the cell. `total` also holds what
 * lies beyond the layer, at the cell area its row has (geographic) or the nearest row has (projected).
 */
export function areaFootprint(
  polygons: readonly Polygon[],
  grid: Grid,
  system: System,
  place: string,
): Footprint {
  const runs = polygons.map((polygon) => polygon.map(unwrap));
  const covers = turnsOf(system).map((turn) => {
    const parts: PixelPolygon[] = runs.map((polygon) =>
      polygon.map((ring) =>
        projectRing(
          ring.map(([lon, lat]) => [lon + turn, lat] as const),
          grid,
          system,
          place,
        ),
      ),
    );
    refuseHuge(parts, grid, place);
    return coverageOf(parts, grid.width, grid.height);
  });
  const [own] = covers;
  const area = cellAreas(grid, system);
  const insideRows = new Float64Array(own.rowTotals.length);
  const kept = covers.map((cover) => keepPixels(cover, area, place, insideRows, own.rowTop));
  const inside = kept.reduce((sum, one) => sum + one.sum, 0);
  let outside = 0;
  for (let i = 0; i < own.rowTotals.length; i++) {
    const rest = own.rowTotals[i] - insideRows[i];
    if (rest <= 1e-10) continue;
    const row = system.geographic ? own.rowTop + i : clamp(own.rowTop + i, grid.height - 1);
    outside += rest * area(clamp(own.left, grid.width - 1), row);
  }
  return {
    columns: joined(
      kept.map((one) => one.columns),
      Int32Array,
    ),
    rows: joined(
      kept.map((one) => one.rows),
      Int32Array,
    ),
    weights: joined(
      kept.map((one) => one.weights),
      Float64Array,
    ),
    total: inside + outside,
    outside: inside > 0 ? outside / (inside + outside) : 1,
    pixels: own.rowTotals.reduce((sum, one) => sum + one, 0),
  };
}

/** The pixels that a coverage touches; adds the covered area of each row to `insideRows`. */
function keepPixels(
  cover: Coverage,
  area: CellArea,
  place: string,
  insideRows: Float64Array,
  rowTop: number,
) {
  let count = 0;
  for (const fraction of cover.fractions) if (fraction >= LEAST_FRACTION) count++;
  const columns = new Int32Array(count);
  const rows = new Int32Array(count);
  const weights = new Float64Array(count);
  let sum = 0;
  let at = 0;
  for (let r = 0; r < cover.rows; r++)
    for (let c = 0; c < cover.columns; c++) {
      const fraction = cover.fractions[r * cover.columns + c];
      if (fraction > 1 + 1e-9 || fraction < -1e-9) throw overlapping(place, fraction);
      if (fraction < LEAST_FRACTION) continue;
      columns[at] = cover.left + c;
      rows[at] = cover.top + r;
      weights[at] = fraction * area(columns[at], rows[at]);
      sum += weights[at];
      insideRows[rows[at] - rowTop] += fraction;
      at++;
    }
  return { columns, rows, weights, sum };
}

function overlapping(place: string, fraction: number): InputError {
  return new InputError({
    name: "layers.area-overlaps-itself",
    expected: "parts that do not overlap and holes within their outlines (RFC 7946)",
    found: `a pixel that is ${fraction.toFixed(6)} inside`,
    where: { cell: `place ${place}` },
    remedy: "mend the area in the program that drew it (dissolve its parts)",
  });
}

function refuseHuge(parts: readonly PixelPolygon[], grid: Grid, place: string): void {
  const { columns, rows, allRows } = windowOf(parts, grid.width, grid.height);
  if (columns * rows <= MOST_PIXELS && allRows <= MOST_PIXELS) return;
  throw new InputError({
    name: "layers.area-too-fine",
    expected: `an area of at most ${MOST_PIXELS / 1e6} million pixels`,
    found: `one that spans ${columns} × ${rows} pixels`,
    where: { cell: `place ${place}` },
    remedy: "make a coarser layer first, e.g. gdalwarp -r average, or take a smaller area",
  });
}

function clamp(value: number, most: number): number {
  return Math.min(most, Math.max(0, value));
}

function joined<Kind extends Int32Array | Float64Array>(
  parts: readonly Kind[],
  Type: new (length: number) => Kind,
): Kind {
  const out = new Type(parts.reduce((sum, one) => sum + one.length, 0));
  let at = 0;
  for (const part of parts) {
    out.set(part, at);
    at += part.length;
  }
  return out;
}
