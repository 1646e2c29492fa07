import type { FileIdentity } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import type { FileSet } from "./disk.ts";
import { sha256 } from "./hash.ts";
import { jsonBytes } from "./json.ts";

/** The record's name within an output folder. */
export const RECORD_FILE = "run-record.json";

/** The number of the record's layout. */
const LAYOUT = 1;

/** What is needed to make the same bytes again, and to see whether they are still the same. */
export interface RunRecord {
  readonly layout: number;
  /** Version of covey. */
  readonly covey: string;
  /** Major version of Node. */
  readonly node: number;
  readonly seed: number;
  /** The pipeline file's text, sensitive places redacted (see `redactPipeline`). */
  readonly pipeline: string;
  readonly inputs: readonly FileIdentity[];
  readonly outputs: readonly FileIdentity[];
}

export interface RecordFacts {
  readonly version: string;
  readonly nodeMajor: number;
  readonly seed: number;
  readonly pipeline: string;
  readonly inputs: readonly FileIdentity[];
  /** All output files but the record itself. */
  readonly outputs: FileSet;
}

/** The record as JSON. It holds no time, no user and no machine, so that equal runs write equal bytes. */
export function runRecord(facts: RecordFacts): Uint8Array {
  const record: RunRecord = {
    layout: LAYOUT,
    covey: facts.version,
    node: facts.nodeMajor,
    seed: facts.seed,
    pipeline: facts.pipeline,
    inputs: [...facts.inputs].sort(byPath).map(identityOf),
    outputs: [...facts.outputs]
      .filter(([path]) => path !== RECORD_FILE)
      .map(([path, bytes]) => ({ path, bytes: bytes.length, sha256: sha256(bytes) }))
      .sort(byPath),
  };
  return jsonBytes(record);
}

function identityOf({ path, bytes, sha256, version }: FileIdentity): FileIdentity {
  return { path, bytes, sha256, ...(version === undefined ? {} : { version }) };
}

/** The files with their record added. */
export function withRecord(facts: RecordFacts): FileSet {
  return new Map([...facts.outputs, [RECORD_FILE, runRecord(facts)]]);
}

/** Reads a record back. Throws `publish.record-unreadable`. */
export function recordOf(bytes: Uint8Array, file: string): RunRecord {
  let value: unknown;
  try {
    value = JSON.parse(new TextDecoder("utf-8", { fatal: true }).decode(bytes));
  } catch (error) {
    throw unreadable(file, "text that is not JSON", error);
  }
  if (!isRecord(value)) throw unreadable(file, "JSON with other contents");
  return value;
}

function isRecord(value: unknown): value is RunRecord {
  if (!isObject(value)) return false;
  return (
    value.layout === LAYOUT &&
    typeof value.covey === "string" &&
    typeof value.node === "number" &&
    typeof value.seed === "number" &&
    typeof value.pipeline === "string" &&
    isIdentities(value.inputs) &&
    isIdentities(value.outputs) &&
    // A record that was tampered with must not lead `verify` to files elsewhere.
    value.outputs.every(({ path }) => isBelow(path))
  );
}

/** A plain path downwards. */
function isBelow(path: string): boolean {
  return !/^[\\/]|\\|\0|^[a-z]:/i.test(path) && !path.split("/").some((part) => part === ".." || part === "");
}

function isIdentities(value: unknown): value is readonly FileIdentity[] {
  if (!Array.isArray(value)) return false;
  return value.every(
    (one) =>
      isObject(one) &&
      typeof one.path === "string" &&
      typeof one.bytes === "number" &&
      typeof one.sha256 === "string",
  );
}

function isObject(value: unknown): value is Record<string, unknown> {
  return typeof value === "object" && value !== null && !Array.isArray(value);
}

function unreadable(file: string, found: string, cause?: unknown): InputError {
  return new InputError(
    {
      name: "publish.record-unreadable",
      expected: `a run record of layout ${LAYOUT}`,
      found,
      where: { file },
      remedy: "restore the record from a copy, or run the pipeline into another output",
    },
    cause,
  );
}

function byPath(a: FileIdentity, b: FileIdentity): number {
  return a.path < b.path ? -1 : a.path > b.path ? 1 : 0;
}
