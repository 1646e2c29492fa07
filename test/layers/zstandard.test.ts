import { createHash } from "node:crypto";
import { pathToFileURL } from "node:url";
import { Encoder } from "@toondepauw/node-zstd";
import { beforeAll, describe, expect, test } from "vitest";
import { InputError } from "../../src/errors.ts";
import {
  readyForZstandard,
  unpackZstandard,
  walkFrame,
  zstandardDecoders,
} from "../../src/layers/zstandard.ts";
import { randomStream } from "../../src/math/random.ts";
import { builtFile, ensureBuilt } from "../pipeline/built.ts";
import { peakMemoryOf } from "../support/peak-memory.ts";

beforeAll(readyForZstandard);

/** Noisy numbers that neither pack to nothing nor not at all. */
function content(length: number): Uint8Array {
  const random = randomStream(1, "zstandard", length);
  return Uint8Array.from({ length }, (_, i) => ((i >> 3) + random.below(7)) & 255);
}
const packed = (bytes: Uint8Array) => new Uint8Array(new Encoder(9).encodeSync(Buffer.from(bytes)));
const sum = (bytes: Uint8Array) => createHash("sha256").update(bytes).digest("hex");
const broken = (work: () => unknown) => {
  try {
    work();
  } catch (error) {
    return error instanceof InputError ? error.facts.name : String(error);
  }
  return "none";
};

describe("Zstandard (RFC 8878)", () => {
  test("every decoder that is to be had gives the same bytes", async () => {
    const bytes = content(300_000);
    const decoders = Object.entries(await zstandardDecoders());
    expect(decoders.filter(([, decode]) => decode !== undefined).length).toBeGreaterThan(0);
    for (const [name, decode] of decoders)
      if (decode !== undefined)
        expect([name, sum(decode(packed(bytes), bytes.length))]).toEqual([name, sum(bytes)]);
  });

  test("the walk finds the frame's blocks of at most 128 KiB", () => {
    const frame = walkFrame(packed(content(300_000)), "x.tif");
    expect(frame.blocks.length).toBe(3);
    expect(frame.blocks.every((block) => block.most <= 2 ** 17)).toBe(true);
    expect(frame.end).toBe(packed(content(300_000)).length);
  });

  test("what is needed comes out the same however much of it is", () => {
    const bytes = content(300_000);
    const file = packed(bytes);
    for (const need of [1, 131_071, 131_072, 131_073, 262_144, 262_145, 300_000]) {
      const out = unpackZstandard(file, need, bytes.length, "x.tif");
      expect(out.length).toBeGreaterThanOrEqual(need);
      expect(sum(out.subarray(0, need))).toBe(sum(bytes.subarray(0, need)));
    }
    expect(unpackZstandard(file, 1000, bytes.length, "x.tif").length).toBe(2 ** 17);
    expect(sum(file)).toBe(sum(packed(bytes)));
  });

  test("a frame of gigabytes is refused without unpacking it", () => {
    ensureBuilt("layers/zstandard.ts");
    const { said, marks } = peakMemoryOf(`
      import { readyForZstandard, unpackZstandard, walkFrame } from ${JSON.stringify(
        pathToFileURL(builtFile("layers/zstandard.ts")).href,
      )};
      await readyForZstandard();
      // 2 GiB of zeros: one block of a repeated byte after the other.
      const blocks = 16384;
      const bomb = new Uint8Array(6 + 4 * blocks);
      bomb.set([0x28, 0xb5, 0x2f, 0xfd, 0x00, 0x50]);
      for (let i = 0; i < blocks; i++) {
        const header = (i === blocks - 1 ? 1 : 0) | (1 << 1) | ((2 ** 17) << 3);
        bomb.set([header & 255, (header >> 8) & 255, (header >> 16) & 255, 0], 6 + 4 * i);
      }
      console.log(walkFrame(bomb, "x.tif").blocks.reduce((total, one) => total + one.most, 0));
      mark("before");
      const nameOf = (need, most) => {
        try {
          return String(unpackZstandard(bomb, need, most, "x.tif").length);
        } catch (error) {
          return error.facts?.name ?? String(error);
        }
      };
      console.log(nameOf(65536 * 4, 65536 * 4));
      console.log(nameOf(2 ** 18 + 1, 2 ** 18));
      mark("after");`);
    expect(said.split("\n")).toEqual([String(2 ** 31), String(2 ** 18), "layers.broken-file"]);
    expect(marks[1][1] - marks[0][1]).toBeLessThan(100_000);
  });

  test.each([
    ["nothing", new Uint8Array(0)],
    ["no frame", new Uint8Array(40).fill(7)],
    ["a frame cut short", packed(content(5000)).slice(0, -3)],
    ["a header only", packed(content(5000)).slice(0, 9)],
    ["a reserved kind of block", Uint8Array.of(0x28, 0xb5, 0x2f, 0xfd, 0, 0x50, 7, 0, 0, 0)],
  ])("%s", (_, bytes) =>
    expect(broken(() => unpackZstandard(bytes, 100, 5000, "x.tif"))).toBe("layers.broken-file"),
  );
});
