/** Larger pieces get memory of their own, so that one large block is not held on to. */
const MOST_HELD = 2 ** 22;

/**
 * Memory for packed bytes that are of no use once they are unpacked: every call gives the beginning of the same piece,
 * and what an earlier call gave is overwritten. New memory for every block costs more than reading it: the system clears each
 * page at its first use, which takes longer than most methods take to unpack it.
 */
export function reusedMemory(): (length: number) => Uint8Array {
  let held = new Uint8Array(0);
  return (length) => {
    if (length > MOST_HELD) return new Uint8Array(length);
    if (held.length < length) held = new Uint8Array(Math.min(MOST_HELD, Math.max(length, 2 * held.length)));
    return held.subarray(0, length);
  };
}
