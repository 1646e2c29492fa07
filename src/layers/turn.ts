/**
 * Lets the process see to other things between two files or some blocks: without it an interruption would not be
 * noticed before all files are read, and memory of native decoders not given back.
 */
export function turn(): Promise<void> {
  return new Promise((resume) => {
    setImmediate(resume);
  });
}

/** Blocks that are unpacked between two turns. */
export const BLOCKS_PER_TURN = 64;
