/** Fractions of the pixels of a window that lie inside an area. */
export interface Coverage {
  /** First column and row of the window, and its size. */
  readonly left: number;
  readonly top: number;
  readonly columns: number;
  readonly rows: number;
  /** Row-major, `rows` × `columns`, 0 to 1. */
  readonly fractions: Float64Array;
  /** Covered area per pixel row of the whole area, also of what lies beyond the window, from row `rowTop` on. */
  readonly rowTop: number;
  readonly rowTotals: Float64Array;
}

/** Rings in pixel coordinates (x, y in turn, closed); the first of each area is its outline, the others are holes. */
export type PixelPolygon = readonly Float64Array[];

/** Twice the signed area of a closed ring by the shoelace formula, about its first point to keep digits. */
export function signedArea(ring: Float64Array): number {
  const [x0, y0] = ring;
  let sum = 0;
  for (let i = 0; i + 3 < ring.length; i += 2)
    sum += (ring[i] - x0) * (ring[i + 3] - y0) - (ring[i + 2] - x0) * (ring[i + 1] - y0);
  return sum;
}

/**
 * Exact coverage by signed areas. For each edge, the area between it and the right border of the pixel it passes
 * through goes to that pixel, and its height to all pixels further right; summed along a row this gives the fraction
 * inside, with the sign of the ring's turn. Outlines are turned to count +, holes −. A part left of the window counts
 * for its whole height, one to the right not at all, so nothing outside needs clipping. `width` and `height` bound
 * the pixels wanted; the row totals reach over the whole area.
 */
export function coverageOf(polygons: readonly PixelPolygon[], width: number, height: number): Coverage {
  const { left, top, columns, rows, rowTop, allRows, reference } = windowOf(polygons, width, height);
  const bottom = top + rows;
  const stride = columns + 1;
  const sums = new Float64Array(rows * stride);
  const rowTotals = new Float64Array(allRows);
  for (const polygon of polygons)
    polygon.forEach((ring, index) => {
      const turn = (signedArea(ring) < 0 ? -1 : 1) * (index === 0 ? 1 : -1);
      for (let i = 0; i + 3 < ring.length; i += 2)
        addEdge(ring[i], ring[i + 1], ring[i + 2], ring[i + 3], turn);
    });

  function addEdge(x1: number, y1: number, x2: number, y2: number, turn: number): void {
    if (y1 === y2) return;
    // In pixel coordinates y grows downwards, and an edge going up the page (y falling) has the inside on its right
    // for a ring of positive shoelace area; so the sign is turned once here.
    const sign = y2 > y1 ? -turn : turn;
    const [xa, ya, xb, yb] = y2 > y1 ? [x1, y1, x2, y2] : [x2, y2, x1, y1];
    const slope = (xb - xa) / (yb - ya);
    const last = Math.ceil(yb) - 1;
    let y = ya;
    let x = xa;
    for (let row = Math.floor(ya); row <= last; row++) {
      const yEnd = Math.min(row + 1, yb);
      const xEnd = yEnd === yb ? xb : xa + (yEnd - ya) * slope;
      const dy = yEnd - y;
      rowTotals[row - rowTop] += sign * dy * (reference - (x + xEnd) / 2);
      if (row >= top && row < bottom) addRow((row - top) * stride, x - left, xEnd - left, sign * dy);
      y = yEnd;
      x = xEnd;
    }
  }

  /** One edge within one row, from x to xEnd (in columns of the window), of signed height dy. */
  function addRow(at: number, x: number, xEnd: number, dy: number): void {
    const [a, b] = x < xEnd ? [x, xEnd] : [xEnd, x];
    if (a >= columns) return;
    if (b <= 0) {
      sums[at] += dy;
      return;
    }
    if (Math.floor(a) === Math.ceil(b) - 1 || a === b) {
      const cell = Math.floor(a);
      const inside = cell + 1 - (a + b) / 2;
      sums[at + cell] += dy * inside;
      sums[at + cell + 1] += dy * (1 - inside);
      return;
    }
    const perColumn = dy / (b - a);
    let from = a;
    if (from < 0) {
      sums[at] += perColumn * -from;
      from = 0;
    }
    while (from < b && from < columns) {
      const cell = Math.floor(from);
      const to = Math.min(cell + 1, b);
      const part = perColumn * (to - from);
      const inside = cell + 1 - (from + to) / 2;
      sums[at + cell] += part * inside;
      sums[at + cell + 1] += part * (1 - inside);
      from = to;
    }
  }

  const fractions = new Float64Array(rows * columns);
  for (let row = 0; row < rows; row++) {
    let sum = 0;
    for (let column = 0; column < columns; column++) {
      sum += sums[row * stride + column];
      fractions[row * columns + column] = sum;
    }
  }
  return { left, top, columns, rows, fractions, rowTop, rowTotals };
}

/** The pixels that the areas may touch, within the wanted ones and (rows) altogether. */
export function windowOf(polygons: readonly PixelPolygon[], width: number, height: number) {
  const box = boundsOf(polygons);
  const left = clamp(Math.floor(box.left), 0, width);
  const top = clamp(Math.floor(box.top), 0, height);
  const rowTop = Number.isFinite(box.top) ? Math.floor(box.top) : 0;
  return {
    left,
    top,
    columns: clamp(Math.ceil(box.right), left, width) - left,
    rows: clamp(Math.ceil(box.bottom), top, height) - top,
    rowTop,
    allRows: Number.isFinite(box.bottom) ? Math.max(0, Math.ceil(box.bottom) - rowTop) : 0,
    // Row totals are areas against one vertical line; the middle of the area keeps the terms small.
    reference: (box.left + box.right) / 2,
  };
}

function boundsOf(polygons: readonly PixelPolygon[]) {
  let [left, top, right, bottom] = [
    Number.POSITIVE_INFINITY,
    Number.POSITIVE_INFINITY,
    Number.NEGATIVE_INFINITY,
    Number.NEGATIVE_INFINITY,
  ];
  for (const polygon of polygons)
    for (const ring of polygon)
      for (let i = 0; i + 1 < ring.length; i += 2) {
        left = Math.min(left, ring[i]);
        right = Math.max(right, ring[i]);
        top = Math.min(top, ring[i + 1]);
        bottom = Math.max(bottom, ring[i + 1]);
      }
  return { left, top, right, bottom };
}

function clamp(value: number, low: number, high: number): number {
  return Math.min(high, Math.max(low, value));
}
