import { parse } from "yaml";
import { yamlText } from "./stanza.ts";

/** A place that layers could be read at. */
export interface KnownPlace {
  readonly name: string;
  readonly type: "point" | "area";
}

interface Parsed {
  readonly records?: readonly {
    readonly variable?: string;
    readonly kind?: string;
    readonly series?: Readonly<Record<string, { readonly kind: string }>>;
  }[];
  readonly layers?: Readonly<Record<string, unknown>>;
  readonly "ready-made"?: Readonly<Record<string, { readonly columns: Readonly<Record<string, unknown>> }>>;
}

const item = (pairs: readonly (readonly [string, string])[]) =>
  `  - { ${pairs.map(([key, value]) => `${key}: ${value}`).join(", ")} }`;

/** Variables of the records in a text of sections, with their kinds. */
export function kindsIn(sections: string): ReadonlyMap<string, string> {
  const { records } = (parse(sections) ?? {}) as Parsed;
  const kinds = new Map<string, string>();
  for (const one of records ?? []) {
    if (one.variable !== undefined) kinds.set(one.variable, one.kind ?? "mean");
    for (const [name, { kind }] of Object.entries(one.series ?? {})) kinds.set(name, kind);
  }
  return kinds;
}

/**
 * A first covariate for everything the sections read: a variable over the whole interval (totals as sums), a layer at
 * the first place, every ready-made column. To be replaced by windows that mean something to the animals.
 */
export function covariateLines(sections: string, places: readonly KnownPlace[]): readonly string[] {
  // The text was put together from stanzas of this room.
  const { layers = {}, "ready-made": tables = {} } = (parse(sections) ?? {}) as Parsed;
  const kinds = kindsIn(sections);
  const used = new Set<string>();
  const named = (name: string) => {
    let free = name;
    for (let i = 2; used.has(free); i++) free = `${name} ${i}`;
    used.add(free);
    return yamlText(free);
  };
  const whole = [
    ["window", "whole interval"],
    ["complete", "{ share: 0.9 }"],
  ] as const;
  return [
    ...[...kinds].map(([name, kind]) =>
      item([
        ["name", named(name)],
        ["theme", yamlText(name)],
        ["from", yamlText(name)],
        ["stations", "all"],
        ["join", "mean of windows"],
        ["statistic", kind === "total" ? "sum" : "mean"],
        ...whole,
      ]),
    ),
    ...Object.keys(layers).map((name) => {
      if (places.length === 0)
        return `  # the layer ${name} needs a place: write places, then a covariate with at and by`;
      return item([
        ["name", named(`${name} at ${places[0].name}`)],
        ["theme", yamlText(name)],
        ["from", yamlText(name)],
        ["at", yamlText(places[0].name)],
        ["by", places[0].type === "area" ? "area" : "nearest"],
        ["statistic", "mean"],
        ...whole,
      ]);
    }),
    ...Object.entries(tables).flatMap(([table, { columns }]) =>
      Object.keys(columns).map((column) =>
        item([
          ["name", named(column)],
          ["theme", yamlText(column)],
          ["from", yamlText(`${table}.${column}`)],
        ]),
      ),
    ),
  ];
}
