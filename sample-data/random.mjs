import mt19937 from "@stdlib/random-base-mt19937";
import normalQuantile from "@stdlib/stats-base-dists-normal-quantile";

/** A stream of random numbers of its own for each name, so that a change to one part leaves the others alone. */
export function stream(seed, name) {
  const words = [seed, ...Array.from(name, (char) => char.charCodeAt(0))];
  const next = mt19937.factory({ seed: Uint32Array.from(words) });
  const uniform = () => {
    let value = next.normalized();
    while (value === 0) value = next.normalized();
    return value;
  };
  return {
    uniform,
    normal: () => normalQuantile(uniform(), 0, 1),
    /** A whole number from low to high, both included. */
    whole: (low, high) => low + Math.floor(uniform() * (high - low + 1)),
    /** Exponential with the given mean. */
    exponential: (mean) => -mean * Math.log(uniform()),
    chance: (probability) => uniform() < probability,
  };
}
