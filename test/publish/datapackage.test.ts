import { readFileSync } from "node:fs";
import { Ajv } from "ajv";
import { expect, test } from "vitest";
import { csvBytes } from "../../src/publish/csv.ts";
import { dataPackage, slug } from "../../src/publish/datapackage.ts";
import { sha256 } from "../../src/publish/hash.ts";
import type { Table } from "../../src/tables/table.ts";
import { column } from "./tables.ts";

const rain: Table = {
  name: "covariates-raw",
  title: "Covariates as they are",
  description: "One row per interval.",
  columns: [
    column("interval", "text"),
    column("winter_rain", "number", "mm"),
    column("n", "integer", "1"),
    column("complete", "truth"),
  ],
  rows: [["2001 to 2002", 812.5, 120, true]],
};
const places: Table = {
  ...rain,
  name: "Plätze & Orte",
  columns: [column("place", "text")],
  rows: [["roost"]],
};
const files = new Map([
  ["tables/covariates-raw.csv", csvBytes(rain).bytes],
  ["tables/places.csv", csvBytes(places).bytes],
]);
const made: unknown = JSON.parse(
  new TextDecoder().decode(
    dataPackage(
      { name: "Invented Roost", title: "An invented roost", description: "Made up." },
      [
        { table: places, path: "tables/places.csv" },
        { table: rain, path: "tables/covariates-raw.csv" },
      ],
      files,
    ),
  ),
);

/**
 * What Data Package v2 (https://datapackage.org/standard/) requires, written by hand from the text of the standard
 * because no package with the published profile was at hand: Data Package "resources" (required, at least one), "name"
 * pattern recommended; Data Resource "name" (required), "path" or "data" (required; POSIX, relative, never `../`),
 * "type" `table`, "bytes" integer, "hash" with its algorithm in front, "encoding", "mediatype"; Table Dialect
 * properties; Table Schema "fields" (required), field "name" (required), "type" of the listed ones,
 * "missingValues" texts.
 */
const profile = {
  type: "object",
  required: ["resources"],
  properties: {
    $schema: { const: "https://datapackage.org/profiles/2.0/datapackage.json" },
    name: { type: "string", pattern: "^[a-z0-9._-]+$" },
    title: { type: "string" },
    description: { type: "string" },
    resources: {
      type: "array",
      minItems: 1,
      items: {
        type: "object",
        required: ["name", "path", "type", "schema", "dialect"],
        properties: {
          $schema: { const: "https://datapackage.org/profiles/2.0/dataresource.json" },
          name: { type: "string", pattern: "^[a-z0-9._-]+$" },
          path: { type: "string", pattern: "^(?=^[^./~])(^((?!\\.{2}).)*$).*$" },
          type: { const: "table" },
          title: { type: "string" },
          description: { type: "string" },
          format: { const: "csv" },
          mediatype: { type: "string", pattern: "^(.+)/(.+)$" },
          encoding: { const: "utf-8" },
          bytes: { type: "integer", minimum: 1 },
          hash: { type: "string", pattern: "^sha256:[a-f0-9]{64}$" },
          dialect: {
            type: "object",
            properties: {
              $schema: { const: "https://datapackage.org/profiles/2.0/tabledialect.json" },
              header: { type: "boolean" },
              delimiter: { type: "string" },
              lineTerminator: { type: "string" },
              quoteChar: { type: "string", maxLength: 1 },
              doubleQuote: { type: "boolean" },
            },
            additionalProperties: false,
          },
          schema: {
            type: "object",
            required: ["fields"],
            properties: {
              $schema: { const: "https://datapackage.org/profiles/2.0/tableschema.json" },
              fields: {
                type: "array",
                minItems: 1,
                items: {
                  type: "object",
                  required: ["name", "type"],
                  properties: {
                    name: { type: "string", minLength: 1 },
                    type: { enum: ["string", "number", "integer", "boolean"] },
                    title: { type: "string" },
                    description: { type: "string" },
                    unit: { type: "string" },
                  },
                  additionalProperties: false,
                },
              },
              missingValues: { type: "array", items: { type: "string" } },
            },
            additionalProperties: false,
          },
        },
        additionalProperties: false,
      },
    },
  },
  additionalProperties: false,
};

test("what is written has all that Data Package v2 requires, and nothing it does not know but `unit`", () => {
  const validate = new Ajv({ allErrors: true }).compile(profile);
  validate(made);
  expect(validate.errors ?? []).toEqual([]);
  // The check can fail: without a field's name, and with a path that climbs out.
  for (const [from, to] of [
    ['"name":"place"', '"title":"place"'],
    ['"path":"tables/places.csv"', '"path":"../places.csv"'],
  ])
    expect(validate(JSON.parse(JSON.stringify(made).replace(from, to)))).toBe(false);
});

test("what is written is valid by the profile its makers publish (of v1, which v2 extends)", () => {
  // lib/profiles/data-package.json of the npm package datapackage 1.1.10 (MIT), Open Knowledge; no package had v2's. Its
  // draft-04 dialect has no keyword that this profile uses otherwise than today's.
  const { $schema, ...published } = JSON.parse(
    readFileSync(new URL("../reference/data-package-profile.json", import.meta.url), "utf8"),
  ) as Record<string, object>;
  expect($schema).toBe("http://json-schema.org/draft-04/schema#");
  const validate = new Ajv({ allErrors: true, strict: false, validateFormats: false }).compile(published);
  validate(made);
  expect(validate.errors ?? []).toEqual([]);
  for (const [from, to] of [
    ['"name":"platze-orte"', '"name":"Places!"'],
    ['"path":"tables/covariates-raw.csv"', '"path":7'],
    ['"resources"', '"sources"'],
  ])
    expect(validate(JSON.parse(JSON.stringify(made).replace(from, to))), to).toBe(false);
});

test("resources by path, with size, hash, types, units and the missing value", () => {
  const { resources } = made as { resources: Record<string, unknown>[] };
  expect(resources.map((one) => one.path)).toEqual(["tables/covariates-raw.csv", "tables/places.csv"]);
  expect(resources.map((one) => one.name)).toEqual(["covariates-raw", "platze-orte"]);
  const bytes = csvBytes(rain).bytes;
  expect(resources[0]).toMatchObject({ bytes: bytes.length, hash: `sha256:${sha256(bytes)}` });
  expect(resources[0].schema).toMatchObject({
    missingValues: [""],
    fields: [
      { name: "interval", type: "string" },
      { name: "winter_rain", type: "number", unit: "mm" },
      { name: "n", type: "integer", unit: "1" },
      { name: "complete", type: "boolean" },
    ],
  });
});

test("a table without its file is a bug", () => {
  const facts = { name: "x", title: "", description: "" };
  expect(() => dataPackage(facts, [{ table: rain, path: "no.csv" }], files)).toThrow("has no file no.csv");
});

test("slug", () => {
  expect(["Rain (mm)", "..", "Ä ö", "a__b", "日本"].map(slug)).toEqual([
    "rain-mm",
    "data",
    "a-o",
    "a__b",
    "data",
  ]);
});

// FIPS 180-4, the example of the secure hash standard for "abc".
test("sha256 of abc", () => {
  expect(sha256("abc")).toBe("ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
});
