import { mkdirSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, describe, expect, test } from "vitest";
import { stringify } from "yaml";
import { temporaryFolder } from "../pipeline/covey.ts";
import { type BadInput, corpus, said } from "./case.ts";

// Each case is a change of the good study and the exact message it must lead to. A new case is written without `name` and
// `says`; RECORD_BAD_INPUT=1 writes what the program says into all files, and the difference is to be read before it is
// committed.
const RECORD = process.env.RECORD_BAD_INPUT === "1";
const recorded = new Map<BadInput, Awaited<ReturnType<typeof said>>>();
const home = temporaryFolder();
afterAll(home.remove);
let count = 0;
const files = corpus();

test("the corpus has at least 120 cases, each with a title of its own", () => {
  const titles = files.flatMap(({ file, cases }) => cases.map((one) => `${file}: ${one.case}`));
  expect(titles.length).toBeGreaterThanOrEqual(120);
  expect(new Set(titles).size).toBe(titles.length);
  // What is recorded where nothing was refused.
  expect(files.flatMap(({ cases }) => cases.filter((one) => /^no /.test(one.name)))).toEqual([]);
});

for (const { file, cases } of files)
  describe(file, () => {
    for (const one of cases) {
      test(one.case, async () => {
        const folder = join(home.path, String(count++), "data");
        mkdirSync(folder, { recursive: true });
        const found = await said({ ...one, name: one.name ?? "" }, folder);
        if (RECORD) return void recorded.set(one, found);
        expect(found).toEqual({ name: one.name, says: one.says });
      });
    }
    afterAll(() => {
      if (!RECORD) return;
      const told = cases.map((one) => ({ ...one, ...recorded.get(one) }));
      writeFileSync(new URL(file, import.meta.url), stringify(told, { lineWidth: 0, blockQuote: "literal" }));
    });
  });
