import type { ValueKind } from "../data/series.ts";
import type { ColumnFacts } from "./column-facts.ts";

/** What a column is probably for. */
export type Role =
  | "station"
  | "date"
  | "value"
  | "animal"
  | "stratum"
  | "fate"
  | "effort"
  | "occasion"
  | "interval"
  | "start"
  | "end"
  | "id"
  | "name"
  | "longitude"
  | "latitude"
  | "elevation"
  | "other";

/** What the pipeline file would call the file. */
export type TableKind =
  | "records"
  | "wide records"
  | "captures"
  | "zero-one captures"
  | "occasions"
  | "stations"
  | "ready-made"
  | "unknown";

/** A guess of a value column from its name. */
export interface ValueGuess {
  readonly variable: string;
  readonly unit: string;
  readonly kind: ValueKind;
  readonly sure: boolean;
}

const NAMES: readonly (readonly [RegExp, Role])[] = [
  [/^(station|site|stn|gauge|stat_?id|station_?id|site_?id|stations_?id)$/i, "station"],
  [/^(ring|ring_?no|tag|mark|animal|animal_?id|individual|capture_?id)$/i, "animal"],
  [/^(fate|status|outcome)$/i, "fate"],
  [/(effort|net_?hours|trap_?nights|hours)$/i, "effort"],
  [/^(visit|occasion|session)$/i, "occasion"],
  [/^interval$/i, "interval"],
  [/^(from|start|begin|first|first_day)$/i, "start"],
  [/^(to|end|until|last|last_day)$/i, "end"],
  [/^(lon|long|longitude|x)$/i, "longitude"],
  [/^(lat|latitude|y)$/i, "latitude"],
  [/^(elevation|elev|alt|altitude|height|elevation_m)$/i, "elevation"],
  [/^(name|station_?name|site_?name)$/i, "name"],
  [/^(id|code)$/i, "id"],
];

const VALUES: readonly (readonly [RegExp, string, string, ValueKind])[] = [
  [/rain|prec|prcp|^rr$|^pr$/i, "rain", "mm", "total"],
  [/tmax|^tx|max_?temp|temp\w*max/i, "tmax", "degC", "maximum"],
  [/tmin|^tn|min_?temp|temp\w*min/i, "tmin", "degC", "minimum"],
  [/temp|tavg|tmean|^tg$|^t$|^tas$/i, "temperature", "degC", "mean"],
  [/snow/i, "snow", "cm", "mean"],
  [/wind/i, "wind", "m/s", "mean"],
  [/press|^hpa$/i, "pressure", "hPa", "mean"],
  [/humid|^rh$/i, "humidity", "percent", "mean"],
  [/radiat|^rad$/i, "radiation", "W/m2", "mean"],
];

const UNITS: readonly (readonly [RegExp, string])[] = [
  [/[_\s(]cm\)?$/i, "cm"],
  [/[_\s(]mm\)?$/i, "mm"],
  [/[_\s(](in|inch)\)?$/i, "in"],
  [/[_\s(](c|degc|°c)\)?$/i, "degC"],
  [/[_\s(](f|degf|°f)\)?$/i, "degF"],
  [/[_\s(]k\)?$/i, "K"],
];

/** The variable, unit and kind that a column's name suggests. */
export function guessValue(name: string): ValueGuess {
  const unit = UNITS.find(([pattern]) => pattern.test(name))?.[1];
  const known = VALUES.find(([pattern]) => pattern.test(name));
  if (known !== undefined) return { variable: known[1], unit: unit ?? known[2], kind: known[3], sure: true };
  return {
    variable:
      name
        .toLowerCase()
        .replace(/[^a-z0-9]+/g, " ")
        .trim() || name,
    unit: unit ?? "1",
    kind: "mean",
    sure: false,
  };
}

/** A role per column, by its name and by what it holds, and the kind of the whole table. */
export function guessRoles(
  columns: readonly ColumnFacts[],
  rows: number,
): { readonly roles: readonly Role[]; readonly kind: TableKind } {
  const roles = columns.map((column) => byName(column));
  const has = (role: Role) => roles.includes(role);
  const take = (role: Role, test: (column: ColumnFacts, i: number) => boolean) => {
    const i = columns.findIndex((column, at) => roles[at] === "other" && test(column, at));
    if (i >= 0) roles[i] = role;
  };
  if (!has("date")) take("date", ({ type }) => type === "date");
  const flags = columns.filter(
    ({ type, examples }) => type === "number" && examples.every((one) => one === "0" || one === "1"),
  );
  if (!has("date") && flags.length >= 3 && flags.length >= columns.length / 2) {
    for (const [i, column] of columns.entries()) if (flags.includes(column)) roles[i] = "value";
    if (!has("animal")) take("animal", ({ distinct, count }) => distinct === count);
    strata(columns, roles);
    return { roles, kind: "zero-one captures" };
  }
  if (has("interval") && !has("date")) {
    for (const [i, column] of columns.entries())
      if (roles[i] === "other" && column.type === "number") roles[i] = "value";
    if (has("value")) return { roles, kind: "ready-made" };
  }
  if (has("longitude") && has("latitude") && !has("date")) {
    if (!has("id")) roles[roles.indexOf(has("station") ? "station" : "other")] = "id";
    return { roles, kind: "stations" };
  }
  if (has("start") && has("end")) {
    if (!has("occasion")) take("occasion", ({ distinct, count }) => distinct === count);
    return { roles, kind: "occasions" };
  }
  if (has("animal") && has("date")) {
    strata(columns, roles);
    return { roles, kind: "captures" };
  }
  if (!has("date")) return { roles, kind: "unknown" };
  if (!has("station") && has("id")) roles[roles.indexOf("id")] = "station";
  if (!has("station"))
    take("station", ({ type, distinct }) => type === "text" && distinct <= Math.max(1, rows / 5));
  for (const [i, column] of columns.entries())
    if (roles[i] === "other" && column.type === "number") roles[i] = "value";
  const values = columns.filter((_, i) => roles[i] === "value");
  if (values.length === 0) return { roles, kind: "unknown" };
  const wide = !has("station") && values.length > 1 && values.every(({ name }) => !guessValue(name).sure);
  return { roles, kind: wide ? "wide records" : "records" };
}

function strata(columns: readonly ColumnFacts[], roles: Role[]): void {
  for (const [i, { type, distinct }] of columns.entries())
    if (roles[i] === "other" && type === "text" && distinct >= 2 && distinct <= 6) roles[i] = "stratum";
}

function byName({ name, type }: ColumnFacts): Role {
  const role = NAMES.find(([pattern]) => pattern.test(name))?.[1] ?? "other";
  // A column called `from` is one end of an occasion only if it holds dates, and so on.
  if ((role === "start" || role === "end") && type !== "date") return "other";
  if (
    (role === "longitude" || role === "latitude" || role === "elevation" || role === "effort") &&
    type !== "number"
  )
    return "other";
  return role;
}
