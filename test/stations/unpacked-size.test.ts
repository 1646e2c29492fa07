import { deflateRawSync, gzipSync } from "node:zlib";
import { expect, test } from "vitest";
import { InputError } from "../../src/errors.ts";
import { checkPacked, readHead, readWhole } from "../../src/stations/packed.ts";
import { checkZipSize, mostUnpacked } from "../../src/stations/unpacked-size.ts";
import { folder } from "./memory-files.ts";

/** A ZIP file's local header and data (APPNOTE 6.3.10, section 4.3.7), with the size it claims to unpack to. */
function entry(name: string, packed: Uint8Array, claimed: number): Buffer {
  const header = Buffer.alloc(30);
  header.write("PK\x03\x04", "latin1");
  header.writeUInt16LE(8, 8);
  header.writeUInt32LE(packed.length, 18);
  header.writeUInt32LE(claimed, 22);
  header.writeUInt16LE(name.length, 26);
  return Buffer.concat([header, Buffer.from(name), packed]);
}

const nameOf = (error: unknown) => (error instanceof InputError ? error.facts.name : error);
const flood = Buffer.alloc(40 << 20);

test("a gzip file that unpacks a thousandfold is refused by every way of reading", async () => {
  const { files } = folder({ "flood.csv.gz": gzipSync(flood) });
  for (const read of [
    async () => readHead(files, "flood.csv.gz"),
    () => readWhole(files, "flood.csv.gz"),
    () => checkPacked(files, "flood.csv.gz"),
  ])
    expect(await read().then(() => "read", nameOf)).toBe("stations.unpacks-too-large");
});

test("a table that packs well is no trap", async () => {
  const text = Buffer.from("0101,2003-01,50.5,1.5\n".repeat(300_000));
  const packed = gzipSync(text);
  expect(text.length / packed.length).toBeGreaterThan(100);
  const { files } = folder({ "even.csv.gz": packed });
  await checkPacked(files, "even.csv.gz");
  expect((await readWhole(files, "even.csv.gz")).length).toBe(text.length);
});

test("a workbook whose entries unpack to a flood is refused, whatever size they claim, one by one or together", () => {
  const refused = (...sizes: readonly number[]) => {
    const parts = sizes.map((size, i) => entry(`${i}.xml`, deflateRawSync(flood.subarray(0, size)), 10));
    try {
      checkZipSize(Buffer.concat(parts), "book.xlsx");
      return false;
    } catch (error) {
      expect(nameOf(error)).toBe("stations.unpacks-too-large");
      return true;
    }
  };
  expect(mostUnpacked(0)).toBe(16 << 20);
  expect(refused(1000, 1 << 20)).toBe(false);
  expect(refused(40 << 20)).toBe(true);
  expect(refused(15 << 20, 15 << 20)).toBe(true);
  expect(() => checkZipSize(Buffer.from("PK\x03\x04 torn"), "book.xlsx")).not.toThrow();
});
