import { join } from "node:path";
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

export interface Recorded {
  readonly preparation: RecordedPreparation;
  readonly bytes: Uint8Array;
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
  const departure = verifyOutput(disk, folder).departures.find((one) => one.path === RECIPES_FILE);
  const file = join(folder, RECIPES_FILE);
  if (disk.kind(file) !== "file")
    throw new InputError({
      name: "apply.no-recipes",
      expected: `an output folder that holds ${RECIPES_FILE}`,
      found: "none",
      where: { file: folder },
      remedy: "run its pipeline again: runs of this version record their recipes",
    });
  if (departure !== undefined)
    throw new InputError({
      name: "apply.recipes-changed",
      expected: `the ${RECIPES_FILE} that the run wrote (${departure.expected || `named in ${RECORD_FILE}`})`,
      found: `${departure.what}: ${departure.found}`,
      where: { file },
      remedy: "restore the file, or run its pipeline again",
    });
  const bytes = disk.read(file);
  let value: unknown;
  try {
    value = JSON.parse(new TextDecoder().decode(bytes));
  } catch {
    value = undefined;
  }
  return {
    preparation: readPreparation(value, file),
    bytes,
    identity: { path: `recorded/${RECIPES_FILE}`, bytes: bytes.length, sha256: sha256(bytes) },
    folder,
  };
}
