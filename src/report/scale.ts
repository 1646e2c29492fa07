/** Round values within [low, high], 1-2-5 steps, about `count` of them. */
export function ticks(low: number, high: number, count: number): number[] {
  if (!(high > low)) return [low];
  const raw = (high - low) / Math.max(1, count);
  const power = 10 ** Math.floor(Math.log10(raw));
  const lead = raw / power;
  const step = (lead < 1.5 ? 1 : lead < 3.5 ? 2 : lead < 7.5 ? 5 : 10) * power;
  const out: number[] = [];
  for (let i = Math.ceil(low / step - 1e-9) + 0; i * step <= high + 1e-9 * step; i++)
    // "+ 0" above turns −0 into 0; the division keeps 0.3 from becoming 0.30000000000000004
    out.push(step < 1 ? i / Math.round(1 / step) : i * step);
  return out;
}

/** A tick's own text: as many decimals as it needs. */
export function tickText(value: number): string {
  return String(Number(value.toPrecision(6))).replace("-", "−");
}

/** The line from a range of values to a range of pixels. */
export function line(from: readonly [number, number], to: readonly [number, number]): (x: number) => number {
  const span = from[1] - from[0] || 1;
  return (x) => to[0] + ((x - from[0]) / span) * (to[1] - to[0]);
}

/** Smallest and largest finite value; [0, 1] if there is none. */
export function extent(values: Iterable<number>): [number, number] {
  let [low, high] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (const value of values) {
    if (!Number.isFinite(value)) continue;
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  return low > high ? [0, 1] : [low, high];
}

/** Moves positions apart to at least `gap`, keeping their order, within [low, high] where they fit. */
export function spread(wanted: readonly number[], gap: number, low: number, high: number): number[] {
  const order = wanted.map((_, i) => i).sort((a, b) => wanted[a] - wanted[b] || a - b);
  const out = [...wanted];
  let last = low - gap;
  for (const i of order) {
    out[i] = Math.max(wanted[i], last + gap);
    last = out[i];
  }
  let next = high + gap;
  for (const i of [...order].reverse()) {
    out[i] = Math.min(out[i], next - gap);
    next = out[i];
  }
  return out;
}

/** The largest 1, 2 or 5 times a power of ten that is not above a positive value. */
export function roundBelow(value: number): number {
  const power = 10 ** Math.floor(Math.log10(value));
  const lead = value / power;
  return (lead >= 5 ? 5 : lead >= 2 ? 2 : 1) * power;
}
