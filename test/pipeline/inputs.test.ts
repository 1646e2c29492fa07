import { expect, test } from "vitest";
import type { Files } from "../../src/effects/effects.ts";
import { recording } from "../../src/pipeline/inputs.ts";

function counted() {
  let hashed = 0;
  let stamp = "as it was";
  const files: Files = {
    list: async (patterns) => patterns,
    readBytes: async () => new Uint8Array(0),
    readText: async () => "",
    open: () => {
      throw new Error("not opened here");
    },
    absolute: (path) => `/data/${path}`,
    identity: async (path) => {
      hashed++;
      return { path, bytes: 1, sha256: `sum ${hashed}` };
    },
  };
  const inputs = recording(files, () => stamp);
  return { inputs, hashes: () => hashed, touch: () => (stamp = "written to") };
}

test("a file is hashed once a run, however often its identity is asked", async () => {
  const { inputs, hashes } = counted();
  await inputs.files.identity("a.tif");
  await inputs.files.identity("a.tif");
  await inputs.files.readText("b.csv");
  expect(await inputs.identities()).toEqual([
    { path: "a.tif", bytes: 1, sha256: "sum 1" },
    { path: "b.csv", bytes: 1, sha256: "sum 2" },
  ]);
  expect(hashes()).toBe(2);
});

test("a file that was written to after it was hashed makes no record", async () => {
  const { inputs, touch } = counted();
  await inputs.files.identity("a.tif");
  touch();
  await expect(inputs.identities()).rejects.toMatchObject({ facts: { name: "files.changed" } });
});
