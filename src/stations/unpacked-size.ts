import { inflateRawSync } from "node:zlib";
import { InputError } from "../errors.ts";

/** What any file may unpack to, and what it may for each of its packed bytes: deflate reaches 1,030, tables of numbers 5 to 30. */
const ALWAYS_BYTES = 1 << 24;
const MOST_TIMES = 250;

/** The bytes that `packed` bytes may unpack to; what goes beyond is taken for a trap, not a table. */
export function mostUnpacked(packed: number): number {
  return ALWAYS_BYTES + MOST_TIMES * packed;
}

/** The error of a packed file that unpacks to more than `mostUnpacked`. */
export function unpacksTooLarge(file: string, packed: number): InputError {
  return new InputError({
    name: "stations.unpacks-too-large",
    expected: `a file of ${packed} packed bytes to unpack to at most ${mostUnpacked(packed)}`,
    found: "more",
    where: { file },
    remedy: "if this is no trap, unpack the file and name the unpacked one",
  });
}

/** Whether an error says that `maxOutputLength` was reached. */
export function isTooLarge(error: unknown): boolean {
  return error instanceof Error && "code" in error && error.code === "ERR_BUFFER_TOO_LARGE";
}

const LOCAL_HEADER = Buffer.from("PK\x03\x04", "latin1");
const LOCAL_HEADER_BYTES = 30;
const DEFLATED = 8;

/**
 * Refuses a ZIP file (a workbook is one) whose entries unpack to more than `mostUnpacked` together. Every entry is unpacked as
 * far as allowed: the sizes that the file states may lie, and so may its directory, so entries are found by their local
 * headers (ZIP, APPNOTE 6.3.10, section 4.3.7). Throws `stations.unpacks-too-large`; what is broken is left for the reader.
 */
export function checkZipSize(bytes: Buffer, file: string): void {
  let left = mostUnpacked(bytes.length);
  for (let at = bytes.indexOf(LOCAL_HEADER); at >= 0; at = bytes.indexOf(LOCAL_HEADER, at + 4)) {
    if (at + LOCAL_HEADER_BYTES > bytes.length || bytes.readUInt16LE(at + 8) !== DEFLATED) continue;
    const data = at + LOCAL_HEADER_BYTES + bytes.readUInt16LE(at + 26) + bytes.readUInt16LE(at + 28);
    left -= unpackedSize(bytes.subarray(data), left, () => unpacksTooLarge(file, bytes.length));
  }
}

function unpackedSize(packed: Uint8Array, most: number, refuse: () => InputError): number {
  try {
    return inflateRawSync(packed, { maxOutputLength: Math.max(1, most) }).length;
  } catch (error) {
    if (isTooLarge(error)) throw refuse();
    return 0;
  }
}
