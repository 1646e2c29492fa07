import { expect, test } from "vitest";
import { InputError } from "../../src/errors.ts";
import { RECORD_FILE, recordOf, runRecord, withRecord } from "../../src/publish/run-record.ts";
import { verifyOutput } from "../../src/publish/verify.ts";
import { MemoryTree, memoryDisk } from "./memory-disk.ts";

const encode = (text: string) => new TextEncoder().encode(text);
const outputs = new Map([
  ["b/page.html", encode("<p>")],
  ["a.csv", encode("x\n1\n")],
]);
const facts = {
  version: "0.1.0",
  nodeMajor: 20,
  seed: 7,
  pipeline: "covey: 1\n",
  inputs: [
    { path: "z.csv", bytes: 3, sha256: "ff" },
    { path: "captures.csv", bytes: 1, sha256: "ee" },
  ],
  outputs,
};

function nameOf(act: () => unknown): string {
  try {
    act();
  } catch (error) {
    if (error instanceof InputError) return error.facts.name;
    throw error;
  }
  return "no error";
}

test("the record is the same bytes whatever order files came in, sorted, and without any time", () => {
  const turned = { ...facts, inputs: [...facts.inputs].reverse(), outputs: new Map([...outputs].reverse()) };
  expect(Buffer.from(runRecord(facts)).equals(runRecord(turned))).toBe(true);
  const record = recordOf(runRecord(facts), "x");
  expect(record.inputs.map((one) => one.path)).toEqual(["captures.csv", "z.csv"]);
  expect(record.outputs).toEqual([
    // The hashes by coreutils' sha256sum.
    { path: "a.csv", bytes: 4, sha256: "daff832f802000e645771a60983c76c963f6ee602a6230e45237bd360e91cc1a" },
    {
      path: "b/page.html",
      bytes: 3,
      sha256: "33f2799467177287a29260780a107ac98ea63dd6165f67fcc0d74767d0a82090",
    },
  ]);
  expect(Object.keys(record)).toEqual(["layout", "covey", "node", "seed", "pipeline", "inputs", "outputs"]);
});

test("verify says what changed, is missing, and is not in the record", () => {
  const tree = new MemoryTree();
  const disk = memoryDisk(tree, 1);
  for (const [path, bytes] of withRecord(facts)) disk.write(`/out/${path}`, bytes);
  expect(verifyOutput(disk, "/out")).toMatchObject({ ok: true, recorded: 2, departures: [] });
  disk.write("/out/a.csv", encode("x\n2\n"));
  disk.remove("/out/b/page.html");
  disk.write("/out/notes.txt", encode("mine"));
  const { ok, departures } = verifyOutput(disk, "/out");
  expect(ok).toBe(false);
  expect(departures.map((one) => [one.path, one.what])).toEqual([
    ["a.csv", "changed"],
    ["b/page.html", "missing"],
    ["notes.txt", "not in the record"],
  ]);
  expect(departures[0].expected).toMatch(/^4 bytes, sha256 [0-9a-f]{12}…$/);
  expect(departures[0].found).not.toBe(departures[0].expected);
});

test("publish.record-missing and publish.record-unreadable", () => {
  const disk = memoryDisk(new MemoryTree(), 1);
  expect(nameOf(() => verifyOutput(disk, "/none"))).toBe("publish.record-missing");
  disk.write("/out/a.csv", encode("x"));
  expect(nameOf(() => verifyOutput(disk, "/out"))).toBe("publish.record-missing");
  const good = new TextDecoder().decode(runRecord(facts));
  for (const text of [
    "",
    "{",
    "[]",
    "null",
    "{}",
    good.replace('"layout": 1', '"layout": 2'),
    good.replace('"bytes": 4', '"bytes": "4"'),
  ]) {
    disk.write(`/out/${RECORD_FILE}`, encode(text));
    expect(
      nameOf(() => verifyOutput(disk, "/out")),
      text,
    ).toBe("publish.record-unreadable");
  }
  disk.write(`/out/${RECORD_FILE}`, new Uint8Array([0x7b, 0xff]));
  expect(nameOf(() => verifyOutput(disk, "/out"))).toBe("publish.record-unreadable");
});
