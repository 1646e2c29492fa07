const CLEAR = 256;
const END = 257;

// A code's string is a stretch of what has been written already: where it starts and how long it is. One table
// serves every call, since decoding never yields.
const startOf = new Int32Array(4096);
const lengthOf = new Int32Array(4096);

/**
 * TIFF's LZW (TIFF 6.0 §13): codes of 9 to 12 bits, most significant bit first, the width growing one code early.
 * Each new string is the one before and the byte that followed it, so it stands in the output already and nothing
 * but its start and length is kept. Returns the bytes written (at most out.length), or −1 if a code is impossible.
 */
export function unpackLzw(packed: Uint8Array, out: Uint8Array): number {
  let written = 0;
  let next = 258;
  let width = 9;
  let held = 0;
  let bits = 0;
  let before = -1;
  let beforeLength = 0;
  let at = 0;
  while (written < out.length) {
    while (bits < width) {
      if (at >= packed.length) return written;
      held = ((held << 8) | packed[at++]) & 0xffffff;
      bits += 8;
    }
    const code = (held >>> (bits - width)) & ((1 << width) - 1);
    bits -= width;
    if (code === CLEAR) {
      next = 258;
      width = 9;
      before = -1;
      continue;
    }
    if (code === END) return written;
    const here = written;
    let length = 1;
    if (code < 256) {
      out[written++] = code;
    } else {
      // The code being defined by this very step is allowed (its string starts with the one before).
      if (code > next || (code === next && before < 0) || before < 0) return -1;
      const own = code === next;
      const from = own ? before : startOf[code];
      length = own ? beforeLength + 1 : lengthOf[code];
      const stop = Math.min(written + length, out.length);
      if (length > 24 && from + length <= written) {
        out.copyWithin(written, from, from + (stop - written));
        written = stop;
      } else for (let source = from; written < stop; ) out[written++] = out[source++];
    }
    if (before >= 0 && next < 4096) {
      startOf[next] = before;
      lengthOf[next] = beforeLength + 1;
      next++;
      if (next + 1 >= 1 << width && width < 12) width++;
    }
    before = here;
    beforeLength = length;
  }
  return written;
}
