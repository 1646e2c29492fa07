/** `occasions:` of the pipeline file. A CSV with a row per occasion. */
export interface OccasionOptions {
  readonly file: string;
  /** Column with the occasion's name. */
  readonly name: string;
  /** Columns with the first and last day (ISO dates unless `format` says otherwise). */
  readonly start: string;
  readonly end: string;
  readonly format: string;
  /** `whole years`: a length within 18 days of a whole number of years counts as that number. */
  readonly lengths: "exact" | "whole years";
  /** Column with the effort. */
  readonly effort?: string;
}

export interface LostOptions {
  readonly column: string;
  readonly values: readonly string[];
}

/** A row per capture: animal, date, and columns that are constant within the animal. */
export interface DatedCaptures {
  readonly layout: "dated";
  readonly file: string;
  readonly animal: string;
  readonly date: string;
  readonly format: string;
  readonly strata: readonly string[];
  readonly lost?: LostOptions;
}

/** A row per animal (or group of animals), a 0/1 column per occasion. */
export interface ZeroOneCaptures {
  readonly layout: "zero-one";
  readonly file: string;
  readonly animal: string;
  /** Column that says how many animals share the row; 1 if absent. */
  readonly number?: string;
  /** Occasion columns in order; by default the columns named as the occasions are. */
  readonly columns?: readonly string[];
  readonly strata: readonly string[];
  readonly lost?: LostOptions;
  /** Lengths of the intervals in years where there are no dated occasions; 1 each by default. */
  readonly lengths?: readonly number[];
}

/** Release–recapture counts: a row per release occasion, columns of later occasions. */
export interface CountCaptures {
  readonly layout: "counts";
  readonly file: string;
  /** Column that names the release occasion. */
  readonly releasedAt: string;
  /** Column with the number released. */
  readonly released: string;
  /** Columns of next recapture, in order of occasion; by default named as the occasions are. */
  readonly columns?: readonly string[];
  readonly strata: readonly string[];
  /** Lengths of the intervals in years where there are no dated occasions; 1 each by default. */
  readonly lengths?: readonly number[];
}

export type CaptureOptions = DatedCaptures | ZeroOneCaptures | CountCaptures;

/** A place that moves: a CSV with a row per dated position. */
export interface MovingPlaceOptions {
  readonly fixes: string;
  /** Column with the date, the time of day behind it (UTC, or with its offset). */
  readonly date: string;
  /** Pattern of the date without the time of day. */
  readonly format: string;
  readonly longitude: string;
  readonly latitude: string;
  /** Column that tells animals apart. */
  readonly animal?: string;
  /** Rows that are used, by column and value. */
  readonly where: Readonly<Record<string, string>>;
  readonly weigh: "fixes" | "time";
  readonly least: number;
}

/** A place: a feature of a GeoJSON file (point, polygon, multipolygon), a point written out, or one that moves. */
export type PlaceOptions =
  | MovingPlaceOptions
  | { readonly file: string; readonly where: Readonly<Record<string, string>> }
  | { readonly longitude: number; readonly latitude: number };

/** One entry of `ready-made:`: values that already stand one per interval. */
export interface ReadyMadeOptions {
  readonly file: string;
  /** Column with the interval's name, e.g. `2001 to 2002`. */
  readonly interval: string;
  /** Column → what it holds. */
  readonly columns: Readonly<Record<string, { readonly unit: string }>>;
}
