import type { TableColumn } from "./table.ts";

// Short builders, so that a table's columns read as a list.

export function text(name: string, title: string, description: string): TableColumn {
  return { name, title, type: "text", description };
}

export function number(name: string, title: string, unit: string, description: string): TableColumn {
  return { name, title, type: "number", unit, description };
}

export function whole(name: string, title: string, unit: string, description: string): TableColumn {
  return { name, title, type: "integer", unit, description };
}

export function truth(name: string, title: string, description: string): TableColumn {
  return { name, title, type: "truth", description };
}

/** A column name from a person's words: lower case, other characters as one underscore. */
export function slug(words: string): string {
  return words
    .normalize("NFKD")
    .replace(/\p{M}+/gu, "")
    .toLowerCase()
    .replace(/[^a-z0-9]+/g, "_")
    .replace(/^_+|_+$/g, "");
}

/** Slugs made unique by a number where two covariates differ only in signs a column name cannot hold. */
export function uniqueSlugs(names: readonly string[]): string[] {
  const used = new Set<string>();
  return names.map((name) => {
    const base = slug(name) || "column";
    let candidate = base;
    for (let i = 2; used.has(candidate); i++) candidate = `${base}_${i}`;
    used.add(candidate);
    return candidate;
  });
}
