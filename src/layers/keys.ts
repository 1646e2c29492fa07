import { brokenFile, type Directory } from "./ifd.ts";

/** The GeoKeys of a file (GeoTIFF 1.1, OGC 19-008 §7.1): numbers and texts by key id. */
export interface GeoKeys {
  readonly numbers: ReadonlyMap<number, number>;
  readonly texts: ReadonlyMap<number, string>;
}

export const NO_KEYS: GeoKeys = { numbers: new Map(), texts: new Map() };

/** Reads tags 34735 (directory), 34736 (doubles) and 34737 (texts). */
export function readKeys(directory: Directory, path: string): GeoKeys {
  const table = directory.numbers(34735);
  if (table === undefined || table.length < 4) return NO_KEYS;
  const doubles = directory.numbers(34736) ?? new Float64Array(0);
  const ascii = directory.text(34737) ?? "";
  const numbers = new Map<number, number>();
  const texts = new Map<number, string>();
  const count = table[3];
  if (table.length < 4 + 4 * count)
    throw brokenFile(path, `${count} GeoKeys in a table of ${table.length} numbers`);
  for (let i = 0; i < count; i++) {
    const [id, where, length, value] = table.subarray(4 + 4 * i, 8 + 4 * i);
    if (where === 0) numbers.set(id, value);
    else if (where === 34736 && value < doubles.length) numbers.set(id, doubles[value]);
    else if (where === 34735 && value < table.length) numbers.set(id, table[value]);
    else if (where === 34737) texts.set(id, ascii.slice(value, value + length).replace(/[|\0]+$/, ""));
  }
  return { numbers, texts };
}
