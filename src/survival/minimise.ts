/** 1 − the golden ratio's inverse. */
const GOLDEN = (3 - Math.sqrt(5)) / 2;

/**
 * The σ ≥ 0 at which a function of σ² is least: a coarse look at 0 and at doubling σ, then parabolas guarded by golden
 * sections between the neighbours of the least (Brent 1973, chapter 5). Returns σ, 0 exactly where nothing is lower.
 */
export function leastOnHalfLine(value: (sigma: number) => number, near: number, tolerance = 1e-7): number {
  const grid = [0, 0.05, 0.1, 0.2, 0.4, 0.8, 1.6, 3.2];
  const known = new Map<number, number>();
  const at = (sigma: number): number => {
    const before = known.get(sigma);
    if (before !== undefined) return before;
    const now = value(sigma);
    known.set(sigma, Number.isNaN(now) ? Number.POSITIVE_INFINITY : now);
    return known.get(sigma) ?? now;
  };
  // walk from the grid point nearest the guess, so that far-off points are looked at only if the way leads there
  const guess = Math.sqrt(near);
  let k = grid.reduce((best, s, i) => (Math.abs(s - guess) < Math.abs(grid[best] - guess) ? i : best), 0);
  for (;;) {
    if (k > 0 && at(grid[k - 1]) <= at(grid[k])) k--;
    else if (k < grid.length - 1 && at(grid[k + 1]) < at(grid[k])) k++;
    else break;
  }
  const low = k === 0 ? 0 : grid[k - 1] ** 2;
  const high = (k === grid.length - 1 ? 2 * grid[k] : grid[k + 1]) ** 2;
  const start = k === 0 ? GOLDEN * high : grid[k] ** 2;
  const variance = brent((v) => at(Math.sqrt(v)), low, start, high, tolerance);
  const sigma = Math.sqrt(variance);
  // σ² this near the bound cannot be told from it
  if (low === 0 && at(0) <= at(sigma) + 1e-11 * (1 + Math.abs(at(0)))) return 0;
  return sigma;
}

/** Brent's minimiser on [low, high] from `start`, to an absolute `tolerance` in x. */
function brent(
  f: (x: number) => number,
  low: number,
  start: number,
  high: number,
  tolerance: number,
): number {
  let [a, b] = [low, high];
  let [x, w, v] = [start, start, start];
  let [fx, fw, fv] = [f(x), f(x), f(x)];
  let [step, before] = [0, 0];
  for (let iteration = 0; iteration < 100; iteration++) {
    const middle = 0.5 * (a + b);
    const least = tolerance + 1e-8 * Math.abs(x);
    if (Math.abs(x - middle) <= 2 * least - 0.5 * (b - a)) break;
    let golden = true;
    if (Math.abs(before) > least) {
      const r = (x - w) * (fx - fv);
      let q = (x - v) * (fx - fw);
      let p = (x - v) * q - (x - w) * r;
      q = 2 * (q - r);
      if (q > 0) p = -p;
      q = Math.abs(q);
      const last = before;
      before = step;
      if (Math.abs(p) < Math.abs(0.5 * q * last) && p > q * (a - x) && p < q * (b - x)) {
        step = p / q;
        golden = false;
        if (x + step - a < 2 * least || b - (x + step) < 2 * least) step = x < middle ? least : -least;
      }
    }
    if (golden) {
      before = x < middle ? b - x : a - x;
      step = GOLDEN * before;
    }
    const u = x + (Math.abs(step) >= least ? step : step > 0 ? least : -least);
    const fu = f(u);
    if (fu <= fx) {
      if (u < x) b = x;
      else a = x;
      [v, w, x] = [w, x, u];
      [fv, fw, fx] = [fw, fx, fu];
      continue;
    }
    if (u < x) a = u;
    else b = u;
    if (fu <= fw || w === x) {
      [v, w] = [w, u];
      [fv, fw] = [fw, fu];
    } else if (fu <= fv || v === x || v === w) {
      v = u;
      fv = fu;
    }
  }
  return x;
}
