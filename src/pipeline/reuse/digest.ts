import { createHash } from "node:crypto";

/**
 * The SHA-256 (hex) of a value's content: equal for equal content, however it came to be. Objects count by their keys in
 * order of code unit (a key whose value is undefined counts as absent), lists and Maps by order, typed arrays by type and
 * bytes, numbers so that −0, NaN and the infinities differ. An object's digest is made of its parts' digests and kept for
 * as long as the object lives; values must therefore not be changed, as is the rule of the house.
 * Throws a plain Error (a bug) for functions and symbols: content that no bytes can stand for.
 */
export function contentDigest(value: unknown): string {
  if (typeof value !== "object" || value === null) return hash(scalarText(value));
  const held = known.get(value);
  if (held !== undefined) return held;
  const made = objectDigest(value);
  known.set(value, made);
  return made;
}

const known = new WeakMap<object, string>();

function objectDigest(value: object): string {
  if (ArrayBuffer.isView(value)) {
    const bytes = new Uint8Array(value.buffer, value.byteOffset, value.byteLength);
    return hash(`bytes ${value.constructor.name}`, bytes);
  }
  if (Array.isArray(value)) return hash(`list ${value.map(partText).join()}`);
  if (value instanceof Map)
    return hash(`map ${[...value].map(([key, one]) => `${partText(key)}:${partText(one)}`).join()}`);
  if (value instanceof Set) return hash(`set ${[...value].map(partText).join()}`);
  const entries = Object.entries(value).filter(([, one]) => one !== undefined);
  entries.sort(([a], [b]) => (a < b ? -1 : 1));
  return hash(`object ${entries.map(([key, one]) => `${JSON.stringify(key)}:${partText(one)}`).join()}`);
}

/** A part within its whole: short things as they are, the rest by digest. */
function partText(value: unknown): string {
  return typeof value === "object" && value !== null ? contentDigest(value) : scalarText(value);
}

function scalarText(value: unknown): string {
  switch (typeof value) {
    case "string":
      return JSON.stringify(value);
    case "number":
      return Object.is(value, -0) ? "-0" : String(value);
    case "bigint":
      return `${value}n`;
    case "boolean":
    case "undefined":
      return String(value);
    case "object":
      return "null";
    default:
      throw new Error(`a ${typeof value} has no content to tell it by`);
  }
}

function hash(text: string, bytes?: Uint8Array): string {
  const sum = createHash("sha256").update(text);
  return (bytes === undefined ? sum : sum.update("\n").update(bytes)).digest("hex");
}
