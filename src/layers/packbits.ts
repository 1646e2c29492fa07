/**
 * PackBits (TIFF 6.0 §9): a signed count n, then n + 1 literal bytes (n ≥ 0) or one byte 1 − n times (n < 0);
 * −128 says nothing. Returns the bytes written, at most out.length.
 */
export function unpackPackBits(packed: Uint8Array, out: Uint8Array): number {
  let at = 0;
  let written = 0;
  while (at < packed.length && written < out.length) {
    const count = packed[at++];
    if (count < 128) {
      const run = Math.min(count + 1, out.length - written, packed.length - at);
      out.set(packed.subarray(at, at + run), written);
      at += run;
      written += run;
    } else if (count > 128 && at < packed.length) {
      const run = Math.min(257 - count, out.length - written);
      out.fill(packed[at++], written, written + run);
      written += run;
    }
  }
  return written;
}
