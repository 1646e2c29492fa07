import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { expect, test } from "vitest";
import { ROOT } from "../pipeline/covey.ts";
// The tool that writes ERRORS.md is a script of plain JavaScript.
import { errorNames, errorTable } from "../tools/error-table.mjs";
import { corpus } from "./case.ts";

const names = errorNames().map((one: { readonly name: string }) => one.name);

test("ERRORS.md lists every error that stands in the sources (else: npm run errors)", () => {
  expect(names.length).toBeGreaterThan(170);
  expect(readFileSync(join(ROOT, "test/bad-input/ERRORS.md"), "utf8")).toBe(errorTable());
});

/** Errors whose tests ask for their words, not for their names. It must not grow. */
const BY_WORDS: readonly string[] = [
  "aggregate.no-position",
  "aggregate.weights-place",
  "components.recorded-unreadable",
  "layers.axis-units",
  "layers.bounds",
  "layers.grid-mapping",
  "layers.no-time-axis",
  "layers.no-time-bounds",
  "layers.one-cell-axis",
  "layers.time-missing",
  "look.file-exists",
  "screen.no-inflation",
  "stations.broken-sheet",
  "stations.no-sheet",
  "stations.rate-of-extremes",
  "survival.no-recapture-part",
];

test("every error is raised by a case of the corpus or asked for by name in another test", () => {
  const raised = new Set(corpus().flatMap(({ cases }) => cases.map((one) => one.name)));
  const tests = readdirSync(join(ROOT, "test"), { recursive: true, encoding: "utf8" })
    .filter(
      (file) =>
        (/\.(test|prove)\.ts$/.test(file) && !file.endsWith("names.test.ts")) || file.endsWith("spec/bad.ts"),
    )
    .map((file) => readFileSync(join(ROOT, "test", file), "utf8"));
  const asked = (name: string) =>
    tests.some((text) => text.includes(`"${name}"`) || text.includes(` ${name}"`));
  expect(names.filter((name: string) => !raised.has(name) && !asked(name))).toEqual(BY_WORDS);
});
