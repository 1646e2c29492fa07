import type { CodedColumn } from "./read-columns.ts";

/** Gives texts numbers in the order they first appear, told apart by their 64-bit hashes. */
export interface Coder {
  /** Writes the codes of the next n rows into `out` from `from` on; `textAt` is asked only for texts not seen before. */
  readonly take: (
    hashes: BigUint64Array,
    n: number,
    textAt: (i: number) => string,
    out: Int32Array,
    from: number,
  ) => void;
  /** The column with its texts sorted and without blanks around them, those that are then equal as one. */
  readonly finish: (codes: Int32Array) => CodedColumn;
}

/**
 * An open hash table on the two halves of the hash, kept in typed arrays: a date column has thousands of texts and millions of
 * rows, and a look-up by text or by big integer costs more than reading the row. That two of a hundred thousand texts share
 * 64 bits has a probability of 3e-10.
 */
export function newCoder(): Coder {
  let size = 1 << 16;
  let [low, high] = [new Uint32Array(size), new Uint32Array(size)];
  let slots = new Int32Array(size).fill(-1);
  const texts: string[] = [];
  // The halves by code: the days of one station follow those of another in the same order, so the next code is tried first.
  let [lowOf, highOf] = [new Uint32Array(1 << 16), new Uint32Array(1 << 16)];
  const slotOf = (a: number, b: number) => {
    let at = a & (size - 1);
    while (slots[at] >= 0 && (low[at] !== a || high[at] !== b)) at = (at + 1) & (size - 1);
    return at;
  };
  const grow = () => {
    const old = { low, high, slots };
    size *= 4;
    [low, high] = [new Uint32Array(size), new Uint32Array(size)];
    slots = new Int32Array(size).fill(-1);
    for (let i = 0; i < old.slots.length; i++) {
      if (old.slots[i] < 0) continue;
      const at = slotOf(old.low[i], old.high[i]);
      [low[at], high[at], slots[at]] = [old.low[i], old.high[i], old.slots[i]];
    }
  };
  return {
    take: (hashes, n, textAt, out, from) => {
      const halves = new Uint32Array(hashes.buffer, hashes.byteOffset, 2 * n);
      let [lastA, lastB, last] = [0, 0, -1];
      for (let i = 0; i < n; i++) {
        const [a, b] = [halves[2 * i], halves[2 * i + 1]];
        const next = last + 1;
        if (last >= 0 && a === lastA && b === lastB) {
          // The same text as in the row before.
        } else if (next < texts.length && lowOf[next] === a && highOf[next] === b) {
          [lastA, lastB, last] = [a, b, next];
        } else {
          let at = slotOf(a, b);
          if (slots[at] < 0) {
            if (2 * texts.length > size) {
              grow();
              at = slotOf(a, b);
            }
            [low[at], high[at], slots[at]] = [a, b, texts.length];
            if (texts.length === lowOf.length) {
              [lowOf, highOf] = [lowOf, highOf].map((list) => {
                const wider = new Uint32Array(4 * list.length);
                wider.set(list);
                return wider;
              });
            }
            [lowOf[texts.length], highOf[texts.length]] = [a, b];
            texts.push(textAt(i));
          }
          [lastA, lastB, last] = [a, b, slots[at]];
        }
        out[from + i] = last;
      }
    },
    finish: (codes) => {
      const trimmed = texts.map((text) => text.replace(/^ +| +$/g, ""));
      const sorted = [...new Set(trimmed)].sort();
      const place = new Map(sorted.map((text, i) => [text, i]));
      const into = Int32Array.from(trimmed, (text) => place.get(text) ?? 0);
      for (let i = 0; i < codes.length; i++) codes[i] = into[codes[i]];
      return { codes, texts: sorted };
    },
  };
}
