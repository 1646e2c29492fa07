import { reusedMemory } from "./reused-memory.ts";

const CLEAR = 256;
const END = 257;

// A code's string is a stretch of what has been written already: where it starts and how long it is. One table
// serves every call, since decoding never yields.
const startOf = new Int32Array(4097);
const lengthOf = new Int32Array(4097);
const paddedMemory = reusedMemory();

/**
 * TIFF's LZW (TIFF 6.0 §13): codes of 9 to 12 bits, most significant bit first, the width growing one code early.
 * Each new string is the one before and the byte that followed it, so it stands in the output already and nothing
 * but its start and length is kept. Returns the bytes written (at most out.length), or −1 if a code is impossible.
 */
export function unpackLzw(packed: Uint8Array, out: Uint8Array): number {
  // Three bytes always hold a code of up to 12 bits; the padding, whatever it holds, lets the last one be read like any other.
  const bytes = paddedMemory(packed.length + 3);
  bytes.set(packed);
  const bits = packed.length * 8;
  const size = out.length;
  let written = 0;
  let next = 258;
  let width = 9;
  let before = -1;
  let beforeLength = 0;
  let at = 0;
  while (written < size) {
    if (at + width > bits) return written;
    const byte = at >> 3;
    const three = (bytes[byte] << 16) | (bytes[byte + 1] << 8) | bytes[byte + 2];
    const code = (three >> (24 - width - (at & 7))) & ((1 << width) - 1);
    at += width;
    const here = written;
    let length = 1;
    if (code < 256) {
      out[written++] = code;
    } else if (code === CLEAR) {
      next = 258;
      width = 9;
      before = -1;
      continue;
    } else if (code === END) {
      return written;
    } else {
      if (before < 0 || code > next) return -1;
      // The code being defined by this very step is allowed: its string starts with the one before.
      let from = before;
      if (code === next) length = beforeLength + 1;
      else {
        from = startOf[code];
        length = lengthOf[code];
      }
      const stop = Math.min(written + length, size);
      if (length > 32 && from + length <= written) {
        out.copyWithin(written, from, from + stop - written);
        written = stop;
      } else while (written < stop) out[written++] = out[from++];
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
