/**
 * How pixels lie on the ground: x = x0 + a·column + b·row, y = y0 + d·column + e·row, with (0, 0) the outer corner of
 * the first pixel and (0.5, 0.5) its centre. North-up grids have b = d = 0, a > 0, e < 0; south-up ones e > 0.
 */
export interface Affine {
  readonly x0: number;
  readonly a: number;
  readonly b: number;
  readonly y0: number;
  readonly d: number;
  readonly e: number;
}

/** A size and where it lies, in the units of its coordinate system. */
export interface Grid {
  readonly width: number;
  readonly height: number;
  readonly affine: Affine;
}

export type Pair = readonly [number, number];

/** System coordinates of a position in pixels. */
export function toSystem({ x0, a, b, y0, d, e }: Affine, column: number, row: number): Pair {
  return [x0 + a * column + b * row, y0 + d * column + e * row];
}

/** Position in pixels of system coordinates. */
export function toPixel({ x0, a, b, y0, d, e }: Affine, x: number, y: number): Pair {
  // Without rotation plain divisions lose no digits to a determinant.
  if (b === 0 && d === 0) return [(x - x0) / a, (y - y0) / e];
  const det = a * e - b * d;
  return [(e * (x - x0) - b * (y - y0)) / det, (a * (y - y0) - d * (x - x0)) / det];
}

/** The same grid at another size (an overview or a mask of fewer pixels). */
export function resized(grid: Grid, width: number, height: number): Grid {
  const [fx, fy] = [grid.width / width, grid.height / height];
  const { x0, a, b, y0, d, e } = grid.affine;
  return { width, height, affine: { x0, a: a * fx, b: b * fy, y0, d: d * fx, e: e * fy } };
}
