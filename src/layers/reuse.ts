import { createHash } from "node:crypto";
import type { AnyPlace } from "../data/place.ts";
import type { Effects } from "../effects/effects.ts";
import type { LayerOptions, PlaceUse } from "./options.ts";
import { type SidePaths, sideList } from "./side.ts";

/** Raised whenever the meaning of kept values changes, so that older ones are not taken for new. */
const VERSION = 2;

/** Values and valid shares of one place, image by image. */
export interface Kept {
  readonly values: readonly number[];
  readonly shares: readonly number[];
  /** Shares that quality refused, image by image; absent where no quality is asked. */
  readonly refused?: readonly number[];
  readonly outside: number;
  readonly pixels: number;
}

/** What is kept of one file: by place. */
export type KeptFile = ReadonlyMap<string, Kept>;

function digest(value: unknown): string {
  return createHash("sha256").update(JSON.stringify(value)).digest("hex");
}

/** The key of a file's kept values: content of the file and of what stands beside it, and how values are formed. */
export async function fileKey(
  path: string,
  side: SidePaths,
  options: LayerOptions,
  effects: Effects,
  qualityFiles: readonly string[] = [],
  version?: string,
): Promise<string> {
  // A file at an address is told by its version; fetching all of it to hash it would undo what ranges save.
  const sums: string[] = version === undefined ? [] : [version];
  for (const one of [...(version === undefined ? [path] : []), ...sideList(side), ...qualityFiles])
    sums.push((await effects.files.identity(one)).sha256);
  const { scale, offset, fill, valid, system, date, band, variable, select, quality } = options;
  // Dates do not change values, but they say which bands are read.
  const bands = "name" in date || "table" in date ? (band ?? 1) : "all";
  // Added only where they are said, so that what was kept before there were any is still found.
  const more = [variable, select, quality].some((one) => one !== undefined)
    ? [variable, select, quality]
    : [];
  const parts = [VERSION, sums, scale, offset, fill, valid, system, bands, ...more];
  return `layer-${digest(parts.map((one) => one ?? null))}`;
}

/** The key of a place within a file: its geometry and how it is read; the threshold of valid area is applied later. */
export function placeKey(place: AnyPlace, use: PlaceUse): string {
  const geometry =
    place.type === "point"
      ? place.position
      : place.type === "area"
        ? place.polygons
        : [place.fixes, place.weigh, place.least];
  return digest([place.type, geometry, use.by, use.by === "radius" ? use.metres : null]);
}

/** JSON has no NaN: null stands for it. */
export async function readKept(key: string, effects: Effects): Promise<KeptFile> {
  const bytes = await effects.reuse.get(key);
  if (bytes === undefined) return new Map();
  try {
    const parsed: unknown = JSON.parse(new TextDecoder().decode(bytes));
    return new Map(
      Object.entries(parsed as object)
        .filter(isEntry)
        .map(([name, one]) => [name, revive(one)]),
    );
  } catch {
    // A damaged store is no reason to stop: the values are read from the file again.
    return new Map();
  }
}

interface Written {
  readonly values: readonly (number | null)[];
  readonly shares: readonly number[];
  readonly refused?: readonly number[];
  readonly outside: number;
  readonly pixels: number;
}

function isEntry(entry: [string, unknown]): entry is [string, Written] {
  const one = entry[1];
  return (
    typeof one === "object" && one !== null && "values" in one && Array.isArray(one.values) && "shares" in one
  );
}

function revive(one: Written): Kept {
  return { ...one, values: one.values.map((value) => value ?? Number.NaN) };
}

export async function writeKept(key: string, kept: KeptFile, effects: Effects): Promise<void> {
  await effects.reuse.put(key, new TextEncoder().encode(JSON.stringify(Object.fromEntries(kept))));
}
