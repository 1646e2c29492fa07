/** True where a pixel's quality lets its value pass. */
export type PixelTest = (column: number, row: number) => boolean;

/** One rule of quality: some bits of the quality number, read as a number of their own, must have one of some values. */
export interface QualityRule {
  /** First and last bit, counted from 0, the lowest; the whole number where left out. */
  readonly bits?: readonly [number, number];
  readonly values: readonly number[];
}

/**
 * A test of quality numbers: every rule must hold. With bits a to b the field is (n >> a) modulo 2^(b − a + 1), as
 * products of the sensors define theirs (lowest bit first). Bits of negative numbers are those of their two's complement
 * in 32 bits. Numbers that are missing pass nothing.
 */
export function qualityTest(rules: readonly QualityRule[]): (raw: number) => boolean {
  const parts = rules.map(({ bits, values }) => {
    const set = new Set(values);
    if (bits === undefined) return (raw: number) => set.has(raw);
    const [first, last] = bits;
    const divisor = 2 ** first;
    const modulus = 2 ** (last - first + 1);
    // Division instead of shifts: those of the language end at 32 bits.
    return (raw: number) => set.has(Math.floor((raw < 0 ? raw + 2 ** 32 : raw) / divisor) % modulus);
  });
  return (raw) => !Number.isNaN(raw) && parts.every((part) => part(raw));
}
