import {
  isAlias,
  isMap,
  isNode,
  isScalar,
  isSeq,
  LineCounter,
  type Node,
  parseDocument,
  type Scalar,
} from "yaml";
import { type ErrorFacts, InputError, type Place } from "../errors.ts";
import { cellText, type KeyPath, pathKey } from "./path.ts";
import { guardText } from "./yaml-guard.ts";

export interface Position {
  readonly line: number;
  readonly column: number;
}

/** Plain values of a YAML text, with where each key and value stands and how each scalar was written. */
export interface YamlText {
  readonly file: string;
  readonly value: unknown;
  /** Where the value begins (for a mapping or list: its key); undefined if the path does not exist. */
  readonly valueAt: (path: KeyPath) => Position | undefined;
  /** Where the key is written. */
  readonly keyAt: (path: KeyPath) => Position | undefined;
  /** A scalar as it was written, without quotes; undefined for mappings and lists. */
  readonly source: (path: KeyPath) => string | undefined;
}

/** Values after aliases are written out. A pipeline of a hundred covariates has about 2,000. */
const MOST_VALUES = 50_000;
const DEEPEST = 30;
const RESERVED = ["__proto__", "constructor", "prototype"];
// Controls, line and paragraph separators, and marks that turn the direction of text around.
const CONTROL = /[\p{Cc}\u2028\u2029\u202A-\u202E\u2066-\u2069\uFEFF]/u;
const DECIMAL = /^[-+]?(?:0|[1-9]\d*)(?:\.\d*)?(?:[eE][-+]?\d+)?$|^[-+]?\.\d+(?:[eE][-+]?\d+)?$/;

/**
 * Reads YAML 1.2 (core schema) as plain values. Anchors and aliases are written out, within bounds.
 *
 * Throws InputErrors `spec.yaml`, `spec.documents`, `spec.empty`, `spec.tag`, `spec.alias`, `spec.too-large`,
 * `spec.too-deep`, `spec.duplicate-key`, `spec.key`, `spec.reserved-key`, `spec.control-character`, `spec.number`,
 * `spec.unquoted`.
 */
export function readYaml(text: string, file: string): YamlText {
  guardText(text, file);
  const lines = new LineCounter();
  const document = parseDocument(text, {
    lineCounter: lines,
    prettyErrors: false,
    // Repeated keys are found below: the library's own check takes the square of their number.
    uniqueKeys: false,
    merge: false,
    schema: "core",
    version: "1.2",
  });
  const position = (offset: number): Position => {
    const { line, col } = lines.linePos(offset);
    return { line: Math.max(1, line), column: Math.max(1, col) };
  };
  const refuse = (facts: Omit<ErrorFacts, "where">, offset: number, path: KeyPath = []): never => {
    const cell: Place = path.length === 0 ? {} : { cell: cellText(path) };
    throw new InputError({ ...facts, where: { file, ...position(offset), ...cell } });
  };

  const [error] = document.errors;
  if (error !== undefined) {
    if (error.code === "MULTIPLE_DOCS")
      refuse(
        {
          name: "spec.documents",
          expected: "one YAML document",
          found: "a second one, after a line of ---",
          remedy: "keep each pipeline in a file of its own",
        },
        error.pos[0],
      );
    if (error.code === "TAB_AS_INDENT")
      refuse(
        {
          name: "spec.yaml",
          expected: "lines indented by spaces",
          found: "a tab",
          remedy: "put two spaces in place of each tab",
        },
        error.pos[0],
      );
    if (error.code === "BLOCK_AS_IMPLICIT_KEY")
      refuse(
        {
          name: "spec.yaml",
          expected: "one key and its value on a line",
          found: "a second colon",
          remedy: "quote the text if the colon belongs to it, or begin a new line",
        },
        error.pos[0],
      );
    refuse(
      {
        name: "spec.yaml",
        expected: "YAML that can be read",
        found: `a slip: ${error.message}`,
        remedy: "mend the line; brackets, quotes and indentation are the usual causes",
      },
      error.pos[0],
    );
  }

  const anchors = new Map<string, Node>();
  const starts = new Map<string, Position>();
  const keyStarts = new Map<string, Position>();
  const sources = new Map<string, string>();
  let count = 0;

  const readKey = (node: unknown, path: KeyPath, fallback: number): string => {
    const offset = (isNode(node) ? node.range?.[0] : undefined) ?? fallback;
    if (!isScalar(node) || node.tag !== undefined || node.value === null || node.value === "")
      return refuse(
        {
          name: "spec.key",
          expected: "a key that is plain text",
          found: isScalar(node) ? "an empty or tagged key" : "a key that is a list, mapping or alias",
          remedy: 'write "key: value" with a word as the key',
        },
        offset,
        path,
      );
    // A key such as 2001 or 050114 is taken as it is written, never as the number.
    const key = typeof node.value === "string" ? node.value : (node.source ?? String(node.value));
    if (CONTROL.test(key)) refuseControl(key, offset, path);
    if (RESERVED.includes(key))
      refuse(
        {
          name: "spec.reserved-key",
          expected: "a key that means nothing to the program itself",
          found: JSON.stringify(key),
          remedy: "choose another name",
        },
        offset,
        path,
      );
    return key;
  };

  const refuseControl = (value: string, offset: number, path: KeyPath): never => {
    const code = (CONTROL.exec(value)?.[0].codePointAt(0) ?? 0).toString(16).toUpperCase().padStart(4, "0");
    return refuse(
      {
        name: "spec.control-character",
        expected: "text that can be printed",
        found: `the control character U+${code}`,
        remedy: "take the character out",
      },
      offset,
      path,
    );
  };

  const readScalar = (node: Scalar, path: KeyPath, offset: number): unknown => {
    const { value } = node;
    const written = node.source ?? String(value);
    sources.set(pathKey(path), written);
    if (typeof value === "string") {
      if (CONTROL.test(value.replaceAll("\n", ""))) refuseControl(value.replaceAll("\n", ""), offset, path);
      return value;
    }
    if (typeof value !== "number") return value;
    if (!Number.isFinite(value) || (Number.isInteger(value) && !Number.isSafeInteger(value)))
      refuse(
        {
          name: "spec.number",
          expected: "a finite number that can be held exactly",
          found: written,
          remedy: `write another number, or quote it if it is a name: "${written}"`,
        },
        offset,
        path,
      );
    if (!DECIMAL.test(written))
      refuse(
        {
          name: "spec.unquoted",
          expected: "a decimal number, or text in quotation marks",
          found: `${written}, which YAML reads as the number ${value}`,
          remedy: `quote it if it is an identifier: "${written}"; write ${value} if it is a number`,
        },
        offset,
        path,
      );
    return value;
  };

  const read = (node: Node | null, path: KeyPath, fallback: number): unknown => {
    const offset = node?.range?.[0] ?? fallback;
    starts.set(pathKey(path), position(offset));
    if (path.length > DEEPEST || ++count > MOST_VALUES)
      refuse(
        {
          name: "spec.alias",
          expected: "at most 50000 values, nested at most 30 deep, once aliases are written out",
          found: "more",
          remedy: "write the values out in place of anchors (&) and aliases (*)",
        },
        offset,
        path,
      );
    if (node === null) return null;
    if (isAlias(node)) {
      const target = anchors.get(node.source);
      if (target === undefined)
        return refuse(
          {
            name: "spec.alias",
            expected: "an alias of an anchor that stands above it",
            found: `*${node.source}`,
            remedy: `quote the text if it begins with a star: "*${node.source}"`,
          },
          offset,
          path,
        );
      return read(target, path, offset);
    }
    if (node.anchor !== undefined) anchors.set(node.anchor, node);
    if (node.tag !== undefined)
      refuse(
        {
          name: "spec.tag",
          expected: "a value without a YAML tag",
          found: node.tag,
          remedy: "leave the tag out; quote text that begins with an exclamation mark",
        },
        offset,
        path,
      );
    if (isScalar(node)) return readScalar(node, path, offset);
    if (isSeq<Node | null>(node)) return node.items.map((item, i) => read(item, [...path, i], offset));
    if (!isMap<Node, Node | null>(node)) return null;
    const out: Record<string, unknown> = {};
    for (const pair of node.items) {
      const keyOffset = pair.key?.range?.[0] ?? offset;
      const key = readKey(pair.key, path, offset);
      const inner = [...path, key];
      if (Object.hasOwn(out, key))
        refuse(
          {
            name: "spec.duplicate-key",
            expected: "each key once",
            found: `${JSON.stringify(key)} twice`,
            remedy: "remove or rename one of the two",
          },
          keyOffset,
          inner,
        );
      keyStarts.set(pathKey(inner), position(keyOffset));
      out[key] = read(pair.value, inner, keyOffset);
    }
    return out;
  };

  const contents = document.contents as Node | null;
  if (contents === null || (isScalar(contents) && contents.value === null))
    refuse(
      {
        name: "spec.empty",
        expected: "a pipeline",
        found: "an empty file",
        remedy: "begin with the line covey: 1",
      },
      0,
    );
  const value = read(contents, [], 0);
  return {
    file,
    value,
    valueAt: (path) => starts.get(pathKey(path)),
    keyAt: (path) => keyStarts.get(pathKey(path)),
    source: (path) => sources.get(pathKey(path)),
  };
}
