import { createHash } from "node:crypto";
import {
  appendFileSync,
  mkdirSync,
  mkdtempSync,
  rmSync,
  symlinkSync,
  truncateSync,
  writeFileSync,
} from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import fc from "fast-check";
import { afterAll, beforeAll, expect, test } from "vitest";
import { CoveyError } from "../../src/errors.ts";
import { filesBelow } from "../../src/pipeline/effects/files.ts";

const top = mkdtempSync(join(tmpdir(), "covey-test-"));
const data = join(top, "data");
const files = () => filesBelow(data);

beforeAll(() => {
  const put = (path: string, text: string) => {
    mkdirSync(join(top, path, ".."), { recursive: true });
    writeFileSync(join(top, path), text);
  };
  for (const name of ["b.csv", "B.csv", "a.csv", "ä.csv", "sub/deep/c.csv", "sub/a.txt", "odd [1] (x).csv"])
    put(`data/${name}`, name);
  put("outside/secret.csv", "secret");
  put("data/bom.csv", "\ufeffday,rain\n");
  symlinkSync("a.csv", join(data, "inner.csv"));
  symlinkSync("sub", join(data, "subway"));
  symlinkSync(join(top, "outside/secret.csv"), join(data, "leak.csv"));
  symlinkSync(join(top, "outside"), join(data, "leaks"));
  symlinkSync(data, join(data, "sub/loop"));
  symlinkSync("nowhere.csv", join(data, "dangling.dat"));
});
afterAll(() => rmSync(top, { recursive: true }));

async function nameOf(act: () => unknown): Promise<string> {
  try {
    await act();
  } catch (error) {
    if (error instanceof CoveyError) return `${error.tag} ${error.facts.name}`;
    throw error;
  }
  return "no error";
}

test("lists are sorted by code unit, without repeats; a literal name is taken as written", async () => {
  expect(await files().list(["*a.csv", "[bB].csv", "a.csv", "ä.csv"])).toEqual([
    "B.csv",
    "a.csv",
    "b.csv",
    "ä.csv",
  ]);
  expect(await files().list(["odd [1] (x).csv"])).toEqual(["odd [1] (x).csv"]);
  expect(await files().list(["./a.csv", "sub/*/*.csv"])).toEqual(["a.csv", "sub/deep/c.csv"]);
  expect(await files().list(["nothing*.csv", "no.csv"])).toEqual([]);
});

test("links inside the folder are followed, circles are not", async () => {
  expect(await files().list(["inner.csv", "subway/*.txt"])).toEqual(["inner.csv", "subway/a.txt"]);
  expect(await files().readText("inner.csv")).toBe("a.csv");
  expect(await files().list(["sub/**/*.txt"])).toEqual(["sub/a.txt"]);
});

test("links out of the folder are refused when asked for, and by a pattern that meets them", async () => {
  for (const path of ["leak.csv", "leaks/secret.csv"]) {
    expect(await nameOf(() => files().readBytes(path)), path).toBe("input files.outside");
    expect(await nameOf(() => files().absolute(path)), path).toBe("input files.outside");
    expect(await nameOf(() => files().identity(path)), path).toBe("input files.outside");
    expect(await nameOf(() => files().open(path)), path).toBe("input files.outside");
    expect(await nameOf(() => files().list([path])), path).toBe("input files.outside");
  }
  expect(await nameOf(() => files().list(["l*.csv"]))).toBe("input files.outside");
  expect(await nameOf(() => files().list(["leaks/*.csv"]))).toBe("input files.outside");
  expect(await files().list(["le*/*.csv"])).toEqual([]);
  expect(await files().list(["**/secret.csv"])).toEqual([]);
});

test("paths that climb out, absolute paths and addresses are refused", async () => {
  for (const path of [
    "../outside/secret.csv",
    "sub/../../outside/*.csv",
    "/etc/passwd",
    "..",
    "",
    "c:/x",
    "a\0b",
    "sub\\..\\..\\x",
  ])
    for (const act of [() => files().list([path]), () => files().readText(path), () => files().open(path)])
      expect(await nameOf(act), path).toBe("input files.outside");
  expect(await nameOf(() => files().readText("https://example.org/a.csv"))).toBe("input files.remote");
});

test("no path, however odd, reads what is outside", async () => {
  const parts = fc.constantFrom(
    "..",
    ".",
    "sub",
    "leaks",
    "outside",
    "secret.csv",
    "",
    "~",
    "*",
    "a.csv",
    "loop",
    "subway",
  );
  await fc.assert(
    fc.asyncProperty(fc.array(parts, { minLength: 1, maxLength: 6 }), async (path) => {
      try {
        expect(await files().readText(path.join("/"))).not.toBe("secret");
      } catch (error) {
        expect(error).toBeInstanceOf(CoveyError);
      }
    }),
  );
});

test("missing: the user's mistake if never listed, the machine's if it vanished", async () => {
  expect(await nameOf(() => files().readBytes("no.csv"))).toBe("input files.missing");
  expect(await nameOf(() => files().readBytes("a.csv/b"))).toBe("input files.missing");
  expect(await nameOf(() => files().readBytes("sub"))).toBe("input files.not-a-file");
  expect(await nameOf(() => filesBelow(join(top, "no")))).toBe("input files.data-folder");
  expect(await nameOf(() => filesBelow(join(data, "a.csv")))).toBe("input files.data-folder");
  const held = files();
  writeFileSync(join(data, "brief.csv"), "x");
  await held.list(["brief.csv"]);
  rmSync(join(data, "brief.csv"));
  expect(await nameOf(() => held.readBytes("brief.csv"))).toBe("machine machine.vanished");
});

test("reads at positions are exact, beyond the end files.short-read", async () => {
  const file = files().open("sub/deep/c.csv");
  expect(file.size).toBe(14);
  expect(new TextDecoder().decode(file.read(4, 4))).toBe("deep");
  expect(file.read(14, 0)).toHaveLength(0);
  for (const [offset, length] of [
    [10, 5],
    [14, 1],
    [99, 1],
    [-1, 2],
  ])
    expect(await nameOf(() => file.read(offset, length)), `${offset} ${length}`).toBe(
      "input files.short-read",
    );
  file.close();
  file.close();
});

test("a file that is written to or cut while it is open is told, not read on", async () => {
  const path = join(data, "live.bin");
  writeFileSync(path, "0123456789");
  const growing = files().open("live.bin");
  appendFileSync(path, "x");
  expect(await nameOf(() => growing.close())).toBe("machine files.changed");
  const shrinking = files().open("live.bin");
  truncateSync(path, 3);
  expect(await nameOf(() => shrinking.read(0, 10))).toBe("machine files.changed");
  expect(await nameOf(() => shrinking.close())).toBe("machine files.changed");
});

test("text loses its byte order mark; identity is the SHA-256 of all bytes, over several blocks too", async () => {
  expect(await files().readText("bom.csv")).toBe("day,rain\n");
  const bytes = Buffer.alloc((1 << 21) + 12345, "covey");
  writeFileSync(join(data, "big.bin"), bytes);
  expect(await files().identity("big.bin")).toEqual({
    path: "big.bin",
    bytes: bytes.length,
    sha256: createHash("sha256").update(bytes).digest("hex"),
  });
});
