// Changes bytes as a torn, mistyped or hostile file would have them, from a seeded sequence: one seed, the same inputs.

/** Uniform numbers in [0, 1): Numerical Recipes' quick generator (Press et al. 1992, section 7.1), top bits. */
export function sequence(seed) {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(1664525, state) + 1013904223) >>> 0;
    return state / 2 ** 32;
  };
}

/** Pieces that readers trip over: numbers at the edge, marks of the formats, text that is code to somebody. */
const PIECES = [
  "0 -1 1e309 -0 NaN Infinity 9007199254740993 4294967296 1e-320 0x10 2001-02-30 0000-00-00 99999-12-31",
  `, ; " "" ' : { } [ ] & * ! | > # % @ \` -- --- ... <<`,
  "&a *a !!js/function __proto__ constructor toString null true ~ =1+1 ../.. \u202e \ufeff é 日本 \u0000 \u007f",
]
  .join(" ")
  .split(" ")
  .concat(["\n", "\r\n", "\t", " ", "\n\n\n"])
  .map((text) => Buffer.from(text));
const BYTES = [0, 1, 2, 4, 8, 0x7f, 0x80, 0xff];

/** One changed copy of `bytes`; `other` lends pieces. */
export function mutate(bytes, other, random) {
  const pick = (n) => Math.floor(random() * n);
  const join = (...parts) => Buffer.concat(parts.map((one) => Buffer.from(one)));
  let out = Buffer.from(bytes);
  const rounds = 1 + pick(4);
  for (let i = 0; i < rounds; i++) {
    const at = pick(out.length + 1);
    const to = Math.min(out.length, at + 1 + pick(random() < 0.5 ? 4 : 200));
    switch (pick(8)) {
      case 0:
        if (at < out.length) out[at] ^= 1 << pick(8);
        break;
      case 1:
        if (at < out.length) out[at] = BYTES[pick(BYTES.length)];
        break;
      case 2:
        out = join(out.subarray(0, at), out.subarray(to));
        break;
      case 3:
        out = join(out.subarray(0, to), out.subarray(at));
        break;
      case 4:
        out = join(out.subarray(0, at), PIECES[pick(PIECES.length)], out.subarray(at));
        break;
      case 5:
        out = join(out.subarray(0, at), PIECES[pick(PIECES.length)], out.subarray(to));
        break;
      case 6: {
        const from = pick(other.length + 1);
        out = join(out.subarray(0, at), other.subarray(from, from + 1 + pick(100)), out.subarray(to));
        break;
      }
      default:
        if (random() < 0.2) out = out.subarray(0, at);
    }
  }
  return out;
}
