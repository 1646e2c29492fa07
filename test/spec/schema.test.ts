import { readdirSync, readFileSync } from "node:fs";
import { Ajv } from "ajv";
import { describe, expect, test } from "vitest";
import { parse } from "yaml";
import { InputError } from "../../src/errors.ts";
import { pipelineJsonSchema, pipelineSchema, schemaText } from "../../src/spec/schema.ts";
import { readYaml } from "../../src/spec/yaml.ts";
import { BAD_PIPELINES } from "./bad.ts";
import { edited, GOOD } from "./good.ts";

const published = readFileSync(new URL("../../pipelines/schema.json", import.meta.url), "utf8");
// `strict: false`: examples and defaults are notes for editors.
const validate = new Ajv({ strict: false }).compile(JSON.parse(published) as object);

test("the published schema is the code's; else: npm run build && node test/tools/write-schema.mjs", () => {
  expect(published).toBe(schemaText());
});

test("it is draft-07, and every key is described", () => {
  expect(pipelineJsonSchema().$schema).toBe("http://json-schema.org/draft-07/schema#");
  const bare: string[] = [];
  const walk = (node: unknown, path: string) => {
    if (typeof node !== "object" || node === null) return;
    for (const [key, value] of Object.entries(node)) {
      if (key === "properties" && typeof value === "object" && value !== null)
        for (const [name, one] of Object.entries(value as Record<string, object>))
          if (!("description" in one) && !("$ref" in one) && !("allOf" in one)) bare.push(`${path}.${name}`);
      walk(value, `${path}.${key}`);
    }
  };
  walk(pipelineJsonSchema(), "");
  expect(bare).toEqual([]);
});

test("a default that is told is the default that holds", () => {
  let told = 0;
  const walk = (node: unknown) => {
    if (typeof node !== "object" || node === null) return;
    const { default: value, description } = node as {
      readonly default?: unknown;
      readonly description?: string;
    };
    if (value !== undefined && typeof value !== "object") {
      expect(description).toContain(`(if left out: ${String(value)})`);
      told++;
    }
    Object.values(node).forEach(walk);
  };
  walk(pipelineJsonSchema());
  expect(told).toBeGreaterThan(50);
});

describe("an independent validator agrees with the code", () => {
  test("good pipelines pass", () => {
    const folder = new URL("../../pipelines/", import.meta.url);
    const shipped = readdirSync(folder).filter((name) => name.endsWith(".yaml"));
    const files = [
      new URL("vocabulary.yaml", import.meta.url),
      ...shipped.map((name) => new URL(name, folder)),
    ];
    for (const text of [GOOD, ...files.map((file) => readFileSync(file, "utf8"))]) {
      validate(parse(text));
      expect(validate.errors ?? []).toEqual([]);
    }
  });

  test("bad ones fail wherever the fault is one of form", () => {
    let refused = 0;
    for (const { title, from, to } of BAD_PIPELINES) {
      const text = from === null ? to : edited(from, to);
      let value: unknown;
      try {
        value = readYaml(text, "p.yaml").value;
      } catch (error) {
        if (error instanceof InputError) continue;
        throw error;
      }
      const good = pipelineSchema.safeParse(value).success;
      expect(validate(value), title).toBe(good);
      if (!good) refused++;
    }
    expect(refused).toBeGreaterThanOrEqual(60);
  });
});
