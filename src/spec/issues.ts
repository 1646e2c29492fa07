import { z } from "zod";
import { nearestName } from "../math/nearest-name.ts";
import type { KeyPath } from "./path.ts";
import type { Problem } from "./problems.ts";
import { bareSchema, descend, describedAs, exampleOf, shapeOf } from "./schema-walk.ts";
import type { YamlText } from "./yaml.ts";

type Issue = z.core.$ZodIssue;

const quoted = (value: string) => JSON.stringify(value.length > 60 ? `${value.slice(0, 57)}…` : value);

function valueIn(root: unknown, path: readonly PropertyKey[]): unknown {
  let value = root;
  for (const part of path) {
    if (typeof value !== "object" || value === null || !Object.hasOwn(value, part)) return undefined;
    value = (value as Record<PropertyKey, unknown>)[part];
  }
  return value;
}

/** A value as an error shows it. */
function foundText(yaml: YamlText, path: KeyPath): string {
  const value = valueIn(yaml.value, path);
  if (value === undefined) return "no such key";
  if (value === null) return "nothing";
  if (typeof value === "string") return value === "" ? "empty text" : quoted(value);
  if (Array.isArray(value)) return value.length === 0 ? "an empty list" : `a list of ${value.length}`;
  if (typeof value === "object") {
    const names = Object.keys(value);
    return names.length === 0 ? "an empty mapping" : `a mapping with ${names.map(quoted).join(", ")}`;
  }
  return yaml.source(path) ?? String(value);
}

/** YAML of an example, on one line. */
export function exampleText(value: unknown): string {
  if (Array.isArray(value)) return `[${value.map(exampleText).join(", ")}]`;
  if (typeof value === "object" && value !== null)
    return `{ ${Object.entries(value)
      .map(([key, one]) => `${key}: ${exampleText(one)}`)
      .join(", ")} }`;
  if (typeof value !== "string") return String(value);
  // Quoted where YAML would not read the same text back.
  return /^[-\d.+]+$|^(?:true|false|null|~)?$|^[{[*&!|>%@`"'#]|: |\.\*$/.test(value)
    ? JSON.stringify(value)
    : value;
}

const like = (example: unknown, otherwise: string) =>
  example === undefined ? otherwise : `write it like ${exampleText(example)}`;

function wrongType(
  issue: Issue & { readonly code: "invalid_type" },
  schema: z.ZodType,
  path: KeyPath,
  yaml: YamlText,
) {
  const value = valueIn(yaml.value, path);
  const expected = describedAs(schema);
  const found = foundText(yaml, path);
  const example = exampleOf(schema);
  const last = path[path.length - 1];
  if (value === undefined && path.length > 0 && typeof last === "string")
    return {
      name: "spec.missing-key",
      path,
      expected: `the key ${quoted(last)}: ${expected}`,
      found,
      remedy:
        example === undefined ? `add a line "${last}: …"` : `add it, e.g. ${last}: ${exampleText(example)}`,
    };
  if (issue.expected === "string" && (typeof value === "number" || typeof value === "boolean"))
    return {
      name: "spec.unquoted",
      path,
      expected,
      found: `the ${typeof value} ${found}`,
      remedy: `quote it: "${found}"`,
    };
  const base = { name: "spec.wrong-type", path, expected, found };
  if (value === null)
    return { ...base, remedy: like(example, "write a value after the colon, or remove the key") };
  const wantsNumber = issue.expected === "number" || issue.expected === "int";
  if (wantsNumber && typeof value === "string") {
    if (/^-?\d+,\d+$/.test(value))
      return { ...base, remedy: `write the decimals after a point: ${value.replace(",", ".")}` };
    if (/^-?\d+(?:\.\d+)?$/.test(value)) return { ...base, remedy: "take the quotation marks away" };
  }
  if (wantsNumber && typeof value === "number")
    return { ...base, expected: `${expected}, a whole number`, remedy: "round it" };
  if ((issue.expected === "array" || issue.expected === "tuple") && typeof value === "string")
    return { ...base, remedy: `put it in brackets: [${exampleText(value)}]` };
  if (issue.expected === "object" || issue.expected === "record")
    return { ...base, remedy: like(example, "write it as keys with values") };
  return { ...base, remedy: like(example, "write a value of that kind") };
}

function notAChoice(values: readonly unknown[], schema: z.ZodType, path: KeyPath, yaml: YamlText) {
  const value = valueIn(yaml.value, path);
  const words = values.map(String);
  const near = typeof value === "string" ? nearestName(value, words) : undefined;
  const last = path[path.length - 1];
  if (value === undefined && typeof last === "string")
    return {
      name: "spec.missing-key",
      path,
      expected: `the key ${quoted(last)}: ${describedAs(schema)}`,
      found: "no such key",
      remedy: `add it, e.g. ${last}: ${exampleText(values[0])}`,
    };
  return {
    name: "spec.not-a-choice",
    path,
    expected: describedAs(schema),
    found: foundText(yaml, path),
    remedy:
      near === undefined
        ? `write ${words.length === 1 ? words[0] : "one of them"}`
        : `did you mean ${quoted(near)}?`,
  };
}

function unknownKeys(names: readonly string[], schema: z.ZodType, path: KeyPath): Problem[] {
  const known = Object.keys(shapeOf(schema) ?? {});
  return names.map((name) => {
    const near = nearestName(name, known);
    return {
      name: "spec.unknown-key",
      path: [...path, name],
      atKey: true,
      expected: `one of the keys ${known.map(quoted).join(", ")}`,
      found: quoted(name),
      remedy: near === undefined ? "remove it, or use one of those keys" : `did you mean ${quoted(near)}?`,
    };
  });
}

function boundText(issue: Issue & { readonly code: "too_small" | "too_big" }): string {
  const small = issue.code === "too_small";
  const limit = small ? issue.minimum : issue.maximum;
  if (issue.origin === "array")
    return small ? `at least ${limit} entr${limit === 1 ? "y" : "ies"}` : `at most ${limit} entries`;
  if (issue.origin === "string") return small ? "some text" : `at most ${limit} characters`;
  if (issue.inclusive === true) return small ? `at least ${limit}` : `at most ${limit}`;
  return small ? `more than ${limit}` : `less than ${limit}`;
}

/**
 * The branch of a union that the user meant: one whose fixed words (such as `layout`) agree; then the fewest keys
 * that are unknown to it, fixed words counting three; then the fewest complaints. Undefined if none is of the kind
 * of value that was written.
 */
function meantBranch(branches: readonly (readonly Issue[])[], value: unknown): number | undefined {
  let best: { readonly index: number; readonly score: number } | undefined;
  branches.forEach((issues, index) => {
    const atRoot = issues.some((issue) => issue.path.length === 0 && issue.code === "invalid_type");
    if (atRoot || issues.length === 0) return;
    const score = issues.reduce((sum, issue) => {
      if (issue.code === "unrecognized_keys") return sum + 100 * issue.keys.length;
      // A fixed word that is written, but differs: the user says which branch it is not.
      if (
        issue.code === "invalid_value" &&
        issue.path.length === 1 &&
        valueIn(value, issue.path) !== undefined
      )
        return sum + (issue.values.length === 1 ? 300 : 1);
      return sum + (valueIn(value, issue.path) === undefined ? 40 : 1);
    }, 0);
    if (best === undefined || score < best.score) best = { index, score };
  });
  return best?.index;
}

function unionProblems(
  issue: Issue & { readonly code: "invalid_union" },
  schema: z.ZodType,
  path: KeyPath,
  yaml: YamlText,
): Problem[] {
  const union = bareSchema(schema);
  const value = valueIn(yaml.value, path);
  const branches = issue.errors;
  const index = meantBranch(branches, value);
  if (index !== undefined && union instanceof z.ZodUnion && typeof value === "object" && value !== null)
    return branches[index].flatMap((one) =>
      issueProblems(one, union.options[index] as z.ZodType, path, yaml),
    );
  const words = branches.flatMap((one) =>
    one.flatMap((inner) =>
      inner.code === "invalid_value" && inner.path.length === 0 ? inner.values.map(String) : [],
    ),
  );
  const near = typeof value === "string" ? nearestName(value, words) : undefined;
  const last = path[path.length - 1];
  const example = exampleOf(schema);
  if (value === undefined && typeof last === "string")
    return [
      {
        name: "spec.missing-key",
        path,
        expected: `the key ${quoted(last)}: ${describedAs(schema)}`,
        found: "no such key",
        remedy:
          example === undefined ? `add a line "${last}: …"` : `add it, e.g. ${last}: ${exampleText(example)}`,
      },
    ];
  return [
    {
      name: typeof value === "string" ? "spec.not-a-choice" : "spec.wrong-type",
      path,
      expected: describedAs(schema),
      found: foundText(yaml, path),
      remedy:
        near === undefined ? like(example, "write it in one of those ways") : `did you mean ${quoted(near)}?`,
    },
  ];
}

/** One issue of the schema library as problems in the program's own words. `base` is where `schema` is applied. */
export function issueProblems(issue: Issue, schema: z.ZodType, base: KeyPath, yaml: YamlText): Problem[] {
  const inner = issue.path as KeyPath;
  const path = [...base, ...inner];
  const at = descend(schema, inner);
  switch (issue.code) {
    case "unrecognized_keys":
      return unknownKeys(issue.keys, at, path);
    case "invalid_type":
      return [wrongType(issue, at, path, yaml)];
    case "invalid_value":
      return [notAChoice(issue.values, at, path, yaml)];
    case "invalid_union":
      return unionProblems(issue, at, path, yaml);
    case "too_small":
    case "too_big":
      return [
        {
          name: "spec.out-of-range",
          path,
          expected: `${describedAs(at)}, ${boundText(issue)}`,
          found: foundText(yaml, path),
          remedy: like(exampleOf(at), "write a value within that range"),
        },
      ];
    case "invalid_key":
      return [
        {
          name: "spec.key",
          path,
          atKey: true,
          expected: "a name of at most 300 characters on one line, without blanks around it",
          found: quoted(String(inner[inner.length - 1])),
          remedy: "choose another name",
        },
      ];
    default:
      return [
        {
          name: "spec.format",
          path,
          expected: describedAs(at),
          found: foundText(yaml, path),
          remedy: like(exampleOf(at), "write it in that form"),
        },
      ];
  }
}

/**
 * All problems of a value against a schema. A missing key is not told where an unknown key beside it is probably
 * the same key misspelt.
 */
export function schemaProblems(issues: readonly Issue[], schema: z.ZodType, yaml: YamlText): Problem[] {
  const all = issues.flatMap((issue) => issueProblems(issue, schema, [], yaml));
  const siblings = (problem: Problem) =>
    all.filter((other) => other.name === "spec.unknown-key" && sameParent(other.path, problem.path));
  return all.filter(
    (problem) =>
      problem.name !== "spec.missing-key" ||
      !siblings(problem).some(
        (other) => nearestName(String(other.path.at(-1)), [String(problem.path.at(-1))]) !== undefined,
      ),
  );
}

function sameParent(a: KeyPath, b: KeyPath): boolean {
  return a.length === b.length && a.slice(0, -1).every((part, i) => part === b[i]);
}
