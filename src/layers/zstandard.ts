import * as zlib from "node:zlib";
import { ZSTDDecoder } from "zstddec";
import { brokenFile } from "./ifd.ts";
import { reusedMemory } from "./reused-memory.ts";

/** A Zstandard frame of exactly these bytes; throws on corrupt ones. `most` bounds what may come out. */
type Decode = (frame: Uint8Array, most: number) => Uint8Array;

let decode: Decode | undefined;
const wasm = new ZSTDDecoder();

/**
 * Loads the fastest decoder there is: Node's own (22.15 and later), else the native package, else WebAssembly. All give
 * the same bytes (RFC 8878 leaves a decoder no choice).
 */
export async function readyForZstandard(): Promise<void> {
  if (decode !== undefined) return;
  await wasm.init();
  decode = ofNode() ?? (await native()) ?? inWasm;
}

/** The three decoders, for the test that holds them to each other; undefined where one is not to be had. */
export async function zstandardDecoders(): Promise<Readonly<Record<string, Decode | undefined>>> {
  await wasm.init();
  return { node: ofNode(), native: await native(), wasm: inWasm };
}

function inWasm(frame: Uint8Array, most: number): Uint8Array {
  // An error comes back as a length of less than nothing, and so as no bytes at all.
  return wasm.decode(frame, most);
}

function ofNode(): Decode | undefined {
  // Node 20 does not have it, so its types do not either.
  const found: unknown = "zstdDecompressSync" in zlib ? zlib.zstdDecompressSync : undefined;
  if (typeof found !== "function") return undefined;
  return (frame, most) =>
    new Uint8Array(found(frame, { maxOutputLength: most, chunkSize: Math.max(64, most) }));
}

async function native(): Promise<Decode | undefined> {
  try {
    const { Decoder } = await import("@toondepauw/node-zstd");
    // It takes no bound; callers hand it only frames whose blocks cannot hold much more than is wanted.
    const decoder = new Decoder();
    return (frame) => {
      const bytes = decoder.decodeSync(Buffer.from(frame.buffer, frame.byteOffset, frame.byteLength));
      return new Uint8Array(bytes.buffer, bytes.byteOffset, bytes.byteLength);
    };
  } catch {
    // A machine for which it was not built.
    return undefined;
  }
}

const frameMemory = reusedMemory();

/** No block of a frame holds more (RFC 8878 §3.1.1.2.4). */
const MOST_BLOCK = 2 ** 17;

/** One block of a frame: where its header stands, where it ends, and what it may at most unpack to. */
interface FrameBlock {
  readonly at: number;
  readonly end: number;
  readonly most: number;
}

/** What the headers of a frame and of its blocks say, without unpacking any. */
export interface Frame {
  /** The frame says neither how long its content is nor has it a checksum, so it can be cut after any block. */
  readonly cuttable: boolean;
  /** Place of the byte that says how far back matches may reach; undefined where the frame is one segment. */
  readonly window: number | undefined;
  readonly blocks: readonly FrameBlock[];
  readonly end: number;
}

/**
 * Walks through the frame that `packed` begins with (RFC 8878 §3.1.1). Throws `layers.broken-file` where it does not
 * begin with one or ends early.
 */
export function walkFrame(packed: Uint8Array, path: string): Frame {
  const broken = () =>
    brokenFile(path, `a Zstandard block of ${packed.length} bytes that is cut short or corrupt`);
  if (packed.length < 9) throw broken();
  const view = new DataView(packed.buffer, packed.byteOffset, packed.byteLength);
  if (view.getUint32(0, true) !== 0xfd2fb528) throw brokenFile(path, "a Zstandard block without its frame");
  const descriptor = packed[4];
  const single = (descriptor & 0x20) !== 0;
  const sizeBytes = [single ? 1 : 0, 2, 4, 8][descriptor >> 6];
  const checksum = (descriptor & 4) !== 0;
  let at = 5 + (single ? 0 : 1) + [0, 1, 2, 4][descriptor & 3] + sizeBytes;
  const blocks: FrameBlock[] = [];
  for (let last = false; !last; ) {
    if (at + 3 > packed.length) throw broken();
    const header = packed[at] | (packed[at + 1] << 8) | (packed[at + 2] << 16);
    last = (header & 1) === 1;
    const kind = (header >> 1) & 3;
    const size = header >> 3;
    // Kind 0 is bytes as they are, 1 one byte repeated, 2 packed, 3 reserved.
    if (kind === 3 || size > MOST_BLOCK) throw broken();
    const end = at + 3 + (kind === 1 ? 1 : size);
    if (end > packed.length) throw broken();
    blocks.push({ at, end, most: kind === 2 ? MOST_BLOCK : size });
    at = end;
  }
  if (checksum) at += 4;
  if (at > packed.length) throw broken();
  return { cuttable: sizeBytes === 0 && !checksum, window: single ? undefined : 5, blocks, end: at };
}

/**
 * Unpacks at least the first `need` bytes of a block that holds at most `most`; fewer than `need` come out only if the
 * frame holds fewer. Blocks of the frame that lie wholly behind `need` are left packed where no checksum is lost by it.
 * Throws `layers.broken-file`; nothing much larger than `most` is ever allocated.
 */
export function unpackZstandard(packed: Uint8Array, need: number, most: number, path: string): Uint8Array {
  if (decode === undefined) throw new Error("readyForZstandard comes first");
  const frame = walkFrame(packed, path);
  if (frame.cuttable) {
    let held = 0;
    const enough = frame.blocks.findIndex((block) => {
      held += block.most;
      return held >= need;
    });
    if (enough >= 0 && enough < frame.blocks.length - 1) {
      const { at, end } = frame.blocks[enough];
      const cut = narrowed(packed.subarray(0, end), frame, most);
      cut[at] |= 1; // now the last block
      const bytes = run(decode, cut, frame.blocks.slice(0, enough + 1), most, path);
      if (bytes.length >= need) return bytes;
    }
  }
  return run(decode, narrowed(packed.subarray(0, frame.end), frame, most), frame.blocks, most, path);
}

/**
 * A copy of the frame that asks for less memory. Writers that stream announce a window of megabytes, which decoders allocate for every frame; no match can reach
 * further back than the content is long. Window_Size = 2^(10 + (byte >> 3)) for a mantissa of 0 (RFC 8878 §3.1.1.1.2).
 */
function narrowed(packed: Uint8Array, { window }: Frame, most: number): Uint8Array {
  // A copy: the bytes are the caller's.
  const frame = frameMemory(packed.length);
  frame.set(packed);
  if (window === undefined) return frame;
  // Blocks may be as long as the window at most, and ours may be of the full length.
  const exponent = Math.max(17, Math.ceil(Math.log2(most)));
  const own = (exponent - 10) << 3;
  if (own < frame[window]) frame[window] = own;
  return frame;
}

function run(best: Decode, frame: Uint8Array, blocks: readonly FrameBlock[], most: number, path: string) {
  const bound = blocks.reduce((sum, block) => sum + block.most, 0);
  // Small blocks each count as if full, so honest frames may seem to hold more; WebAssembly keeps to the bound itself.
  const decoder = bound <= most + 4 * MOST_BLOCK ? best : inWasm;
  try {
    const bytes = decoder(frame, most);
    if (bytes.length > 0 && bytes.length <= most) return bytes;
  } catch {
    // The decoders' own words say no more than that it is corrupt.
  }
  throw brokenFile(path, `a Zstandard block that is corrupt or holds more than ${most} bytes`);
}
