import mt19937 from "@stdlib/random-base-mt19937";
import { normalQuantile } from "./distributions.ts";

/** A stream of random numbers that depends on its seed alone. */
export interface Random {
  /** Uniform on (0, 1), both ends excluded. */
  uniform(): number;
  /** Standard normal, by inversion. */
  normal(): number;
  /** A whole number from 0 to n − 1. */
  below(n: number): number;
  /** 0 … n − 1 in random order (Fisher–Yates). */
  permutation(n: number): Int32Array;
}

/**
 * One generator per (study seed, stream, replicate), by the Mersenne Twister's array seeding, so that no result
 * depends on how replicates were shared out among workers.
 */
export function randomStream(seed: number, stream: string, replicate: number): Random {
  const words = [seed >>> 0, replicate >>> 0, ...Array.from(stream, (char) => char.charCodeAt(0))];
  // The package's types leave out `normalized` (53 random bits on [0, 1)), which its factory does return.
  const next = mt19937.factory({ seed: Uint32Array.from(words) }) as unknown as { normalized(): number };
  const uniform = () => {
    let value = next.normalized();
    while (value === 0) value = next.normalized();
    return value;
  };
  const below = (n: number) => Math.floor(uniform() * n);
  return {
    uniform,
    normal: () => normalQuantile(uniform()),
    below,
    permutation: (n) => {
      const order = Int32Array.from({ length: n }, (_, i) => i);
      for (let i = n - 1; i > 0; i--) {
        const j = below(i + 1);
        const held = order[i];
        order[i] = order[j];
        order[j] = held;
      }
      return order;
    },
  };
}
