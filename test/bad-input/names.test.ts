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
  expect(readFileSync(join(ROOT, "ERRORS.md"), "utf8")).toBe(errorTable());
});

test("every error is raised by a case of the corpus or asked for by name in another test", () => {
  const raised = new Set(corpus().flatMap(({ cases }) => cases.map((one) => one.name)));
  const tests = readdirSync(join(ROOT, "test"), { recursive: true, encoding: "utf8" })
    .filter((file) => /\.(test|prove)\.ts$/.test(file) || file.endsWith("spec/bad.ts"))
    .map((file) => readFileSync(join(ROOT, "test", file), "utf8"));
  const asked = (name: string) =>
    tests.some((text) => text.includes(`"${name}"`) || text.includes(` ${name}"`));
  expect(names.filter((name: string) => !raised.has(name) && !asked(name))).toEqual([]);
});
