import { z } from "zod";
import { editDistance, nearestName } from "../math/nearest-name.ts";
import { type KeyPath, pathKey } from "./path.ts";
import type { Problem } from "./problems.ts";
import { bareSchema, descend, describedAs, exampleOf, firstUnion, shapeOf } from "./schema-walk.ts";
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

function missingKey(key: string, schema: z.ZodType, example: unknown, path: KeyPath): Problem {
  return {
    name: "spec.missing-key",
    path,
    expected: `the key ${quoted(key)}: ${describedAs(schema)}`,
    found: "no such key",
    remedy: example === undefined ? `add a line "${key}: …"` : `add it, e.g. ${key}: ${exampleText(example)}`,
  };
}

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
  if (value === undefined && typeof last === "string") return missingKey(last, schema, example, path);
  if (issue.expected === "string" && (typeof value === "number" || typeof value === "boolean")) {
    // Quotation marks help only where the text would then do: not for 5 in place of 5 km.
    if (bareSchema(schema).safeParse(found).success)
      return {
        name: "spec.unquoted",
        path,
        expected,
        found: `the ${typeof value} ${found}`,
        remedy: `quote it: "${found}"`,
      };
    return { name: "spec.format", path, expected, found, remedy: like(example, "write it as text") };
  }
  const base = { name: "spec.wrong-type", path, expected, found };
  if (value === null)
    return { ...base, remedy: like(example, "write a value after the colon, or remove the key") };
  if (issue.expected === "boolean") return { ...base, remedy: "write true or false" };
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
  const kind = describedAs(schema);
  const listed =
    values.length > 1 && !kind.includes(words.join(", ")) ? `${kind}: ${words.join(", ")}` : kind;
  if (value === undefined && typeof last === "string")
    return { ...missingKey(last, schema, values[0], path), expected: `the key ${quoted(last)}: ${listed}` };
  return {
    name: "spec.not-a-choice",
    path,
    expected: listed,
    found: foundText(yaml, path),
    remedy:
      near === undefined
        ? `write ${words.length === 1 ? words[0] : "one of them"}`
        : `did you mean ${quoted(near)}?`,
  };
}

/** More known keys than this would bury the message. */
const MOST_LISTED = 24;

function unknownKeys(names: readonly string[], schema: z.ZodType, path: KeyPath, yaml: YamlText): Problem[] {
  const known = Object.keys(shapeOf(schema) ?? {});
  const listed =
    known.slice(0, MOST_LISTED).map(quoted).join(", ") + (known.length > MOST_LISTED ? ", and others" : "");
  return names.map((name) => {
    const whole = /^\d+$/.test(name) && valueIn(yaml.value, [...path, name]) === null;
    const near = nearestName(name, known);
    return {
      name: "spec.unknown-key",
      path: [...path, name],
      atKey: true,
      expected: `one of the keys ${listed}`,
      found: quoted(name),
      remedy: whole
        ? "write decimals after a point: inside braces a comma begins the next key"
        : near === undefined
          ? "remove it, or use one of those keys"
          : `did you mean ${quoted(near)}?`,
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

/** The fixed words of a union's branches that a value does not have, by key, e.g. those of `layout`. */
function fixedWords(branches: readonly (readonly Issue[])[], value: unknown): Map<string, string[]> {
  const words = new Map<string, string[]>();
  for (const issue of branches.flat()) {
    if (issue.code !== "invalid_value" || issue.values.length !== 1 || issue.path.length !== 1) continue;
    const key = String(issue.path[0]);
    words.set(key, [...(words.get(key) ?? []), String(issue.values[0])]);
  }
  // A key that some branch is content with tells the branches apart; its words are no complaint.
  for (const key of words.keys())
    if (
      branches.some((issues) => !issues.some((issue) => issue.path[0] === key)) &&
      valueIn(value, [key]) === undefined
    )
      words.delete(key);
  return words;
}

/** How far a key is from the keys of a mapping: far more than misspelt if it is none of them. */
function strangeness(key: string, known: readonly string[]): number {
  const near = nearestName(key, known);
  return near === undefined ? 100 : 50 + editDistance(key, near);
}

/**
 * The branch of a union that the user meant: one whose fixed words (such as `layout`) agree; then the fewest keys
 * unknown to it, misspelt ones counting less; then the fewest missing ones, then the fewest complaints. Undefined if
 * none is of the kind of value that was written, or none knows any of its keys.
 */
function meantBranch(
  options: readonly z.ZodType[],
  branches: readonly (readonly Issue[])[],
  value: object,
): number | undefined {
  let best: { readonly index: number; readonly score: number } | undefined;
  branches.forEach((issues, index) => {
    const known = Object.keys(shapeOf(options[index]) ?? {});
    const wrongKind = issues.some(
      ({ path, code }) => path.length === 0 && (code === "invalid_type" || code === "invalid_value"),
    );
    const strange = !Array.isArray(value) && !Object.keys(value).some((key) => strangeness(key, known) < 100);
    if (wrongKind || strange) return;
    const score = issues.reduce((sum, issue) => {
      if (issue.code === "unrecognized_keys")
        return issue.keys.reduce((inner, key) => inner + strangeness(key, known), sum);
      if (valueIn(value, issue.path) === undefined) return sum + 40;
      // A fixed word that is written, but differs: the user says which branch it is not.
      const fixed = issue.code === "invalid_value" && issue.values.length === 1 && issue.path.length === 1;
      return sum + (fixed ? 300 : 1);
    }, 0);
    if (best === undefined || score < best.score) best = { index, score };
  });
  return best?.index;
}

/**
 * The schema library says of a union only that nothing fitted, or speaks of a branch of its own choice; so the
 * branches are tried again here, one by one, and the complaints are those of the branch that was meant.
 */
function unionProblems(schema: z.ZodType, path: KeyPath, yaml: YamlText): Problem[] {
  const union = bareSchema(schema);
  const options = union instanceof z.ZodUnion ? (union.options as readonly z.ZodType[]) : [];
  const value = valueIn(yaml.value, path);
  const branches = options.map((option) => option.safeParse(value).error?.issues ?? []);
  const index =
    typeof value === "object" && value !== null ? meantBranch(options, branches, value) : undefined;
  if (index !== undefined) {
    const words = fixedWords(branches, value);
    const fixed = branches[index].find(
      ({ path: [key], code }) => code === "invalid_value" && words.has(String(key)),
    );
    if (fixed !== undefined) {
      const key = String(fixed.path[0]);
      const told = descend(options[index], [key]);
      return [notAChoice(words.get(key) ?? [], told, [...path, key], yaml)];
    }
    return branches[index].flatMap((one) => issueProblems(one, options[index], path, yaml));
  }
  const example = exampleOf(schema);
  const last = path[path.length - 1];
  if (value === undefined && typeof last === "string") return [missingKey(last, schema, example, path)];
  const words = branches.flatMap((issues) =>
    issues.flatMap((issue) =>
      issue.code === "invalid_value" && issue.path.length === 0 ? issue.values.map(String) : [],
    ),
  );
  const near = typeof value === "string" ? nearestName(value, words) : undefined;
  const remedy =
    near === undefined ? like(example, "write it in one of those ways") : `did you mean ${quoted(near)}?`;
  const name = typeof value === "string" ? "spec.not-a-choice" : "spec.wrong-type";
  return [{ name, path, expected: describedAs(schema), found: foundText(yaml, path), remedy }];
}

/** One issue of the schema library as problems in the program's own words. `base` is where `schema` is applied. */
export function issueProblems(issue: Issue, schema: z.ZodType, base: KeyPath, yaml: YamlText): Problem[] {
  const inner = issue.path as KeyPath;
  const path = [...base, ...inner];
  const cut = firstUnion(schema, inner);
  if (cut !== undefined) {
    const upTo = inner.slice(0, cut);
    return unionProblems(descend(schema, upTo), [...base, ...upTo], yaml);
  }
  const at = descend(schema, inner);
  switch (issue.code) {
    case "unrecognized_keys":
      return unknownKeys(issue.keys, at, path, yaml);
    case "invalid_type":
      return [wrongType(issue, at, path, yaml)];
    case "invalid_value":
      return [notAChoice(issue.values, at, path, yaml)];
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
  // Several complaints below one union lead to the same problems.
  const distinct = new Map(
    issues
      .flatMap((issue) => issueProblems(issue, schema, [], yaml))
      .map((problem) => [`${pathKey(problem.path)} ${problem.name} ${problem.expected}`, problem] as const),
  );
  const all = [...distinct.values()];
  const unknown = all.filter(({ name }) => name === "spec.unknown-key");
  const isMisspelt = ({ path }: Problem) =>
    unknown.some(
      (other) =>
        pathKey(other.path.slice(0, -1)) === pathKey(path.slice(0, -1)) &&
        nearestName(String(other.path.at(-1)), [String(path.at(-1))]) !== undefined,
    );
  return all.filter((problem) => problem.name !== "spec.missing-key" || !isMisspelt(problem));
}
