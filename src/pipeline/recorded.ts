import { join } from "node:path";
import { type RecordedComponents, readComponents } from "../components/recorded.ts";
import { type RecordedPreparation, readPreparation } from "../covariates/recorded.ts";
import type { FileIdentity } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import type { Disk } from "../publish/disk.ts";
import { recoverOutput } from "../publish/folder.ts";
import { sha256 } from "../publish/hash.ts";
import { RECORD_FILE } from "../publish/run-record.ts";
import { verifyOutput } from "../publish/verify.ts";

/** The recipes' name within an output folder. */
export const RECIPES_FILE = "recipes.json";
/** The components' name, where the run made any. */
export const COMPONENTS_FILE = "components.json";

export interface Recorded {
  readonly preparation: RecordedPreparation;
  readonly bytes: Uint8Array;
  /** Undefined where the run made no components, or was of a version that did not record them. */
  readonly components: { readonly of: RecordedComponents; readonly bytes: Uint8Array } | undefined;
  /** As it goes into the next record: the folder's own path would tell of the machine. */
  readonly identity: FileIdentity;
  /** Absolute. */
  readonly folder: string;
}

/**
 * The preparation that an earlier run recorded, once it is certain that the recipes are those the run wrote.
 * Throws `publish.record-missing`, `apply.no-recipes`, `apply.recipes-changed` and `covariates.recipes-unreadable`.
 */
export function readRecorded(disk: Disk, path: string): Recorded {
  recoverOutput(disk, path);
  const folder = disk.resolve(path);
  const { departures } = verifyOutput(disk, folder);
  const changed = (path: string) => {
    const departure = departures.find((one) => one.path === path);
    if (departure !== undefined)
      throw new InputError({
        name: "apply.recipes-changed",
        expected: `the ${path} that the run wrote (${departure.expected || `named in ${RECORD_FILE}`})`,
        found: `${departure.what}: ${departure.found}`,
        where: { file: join(folder, path) },
        remedy: "restore the file, or run its pipeline again",
      });
  };
  const file = join(folder, RECIPES_FILE);
  if (disk.kind(file) !== "file")
    throw new InputError({
      name: "apply.no-recipes",
      expected: `an output folder that holds ${RECIPES_FILE}`,
      found: "none",
      where: { file: folder },
      remedy: "run its pipeline again: runs of this version record their recipes",
    });
  changed(RECIPES_FILE);
  changed(COMPONENTS_FILE);
  const bytes = disk.read(file);
  const beside = join(folder, COMPONENTS_FILE);
  const recorded = disk.kind(beside) === "file" ? disk.read(beside) : undefined;
  return {
    preparation: readPreparation(parsed(bytes), file),
    bytes,
    components:
      recorded === undefined ? undefined : { of: readComponents(parsed(recorded), beside), bytes: recorded },
    identity: { path: `recorded/${RECIPES_FILE}`, bytes: bytes.length, sha256: sha256(bytes) },
    folder,
  };
}

/** Undefined where the bytes are no JSON. */
function parsed(bytes: Uint8Array): unknown {
  try {
    return JSON.parse(new TextDecoder().decode(bytes));
  } catch {
    return undefined;
  }
}
