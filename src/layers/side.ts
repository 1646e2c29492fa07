import type { Files } from "../effects/effects.ts";

/** Files beside a GeoTIFF that say more of it. */
export interface SidePaths {
  readonly metadata: string | undefined;
  readonly world: string | undefined;
  readonly mask: string | undefined;
}

export const NO_SIDE: SidePaths = { metadata: undefined, world: undefined, mask: undefined };

/**
 * Finds NAME.tif.aux.xml, NAME.tfw (or .tifw, .wld) and NAME.tif.msk for many files at once: each folder is listed
 * once, not each name asked for.
 */
export async function findSideFiles(
  paths: readonly string[],
  files: Files,
): Promise<(path: string) => SidePaths> {
  const folders = [...new Set(paths.map((path) => path.slice(0, path.lastIndexOf("/") + 1)))];
  const endings = ["aux.xml", "msk", "tfw", "tifw", "wld", "TFW", "TIFW", "WLD"];
  const patterns = folders.flatMap((folder) => endings.map((end) => `${escapePattern(folder)}*.${end}`));
  const there = new Set(await files.list(patterns));
  const pick = (candidates: readonly string[]) => candidates.find((name) => there.has(name));
  return (path) => {
    const stem = path.replace(/\.[^./]*$/, "");
    return {
      metadata: pick([`${path}.aux.xml`]),
      mask: pick([`${path}.msk`]),
      world: pick(["tfw", "TFW", "tifw", "TIFW", "wld", "WLD"].map((end) => `${stem}.${end}`)),
    };
  };
}

/** Marks that mean something in file patterns are taken as letters. */
function escapePattern(text: string): string {
  return text.replace(/[\\*?[\]{}()!+@]/g, "\\$&");
}

/** All side files of a path, for its identity. */
export function sideList(side: SidePaths): readonly string[] {
  return [side.metadata, side.world, side.mask].filter((one) => one !== undefined);
}
