import type { Period } from "../data/period.ts";
import type { AnyPlace } from "../data/place.ts";
import type { ValueKind } from "../data/series.ts";
import type { QualityRule } from "./quality.ts";

/** What one image of a stack stands for; `bounds`: what the time bounds of a NetCDF file say. */
export type ImageCover =
  | "day"
  | "month"
  | "year"
  | "dekad"
  | "bounds"
  /** With `anew` the composites are counted from 1 January in each year, so that the last of a year is short. */
  | { readonly days: number; readonly anew?: boolean };

/** A table with a row for each file: its name, the first and the last day it stands for. */
export interface DateTable {
  readonly table: string;
  /** Columns; without `last` the layer's `covers` says how long each image counts. */
  readonly file: string;
  readonly first: string;
  readonly last?: string;
}

/** How the dates of a stack's images are known. */
export type ImageDates =
  /** In the file name: `green_{yyyy}_{MM}`, `A{yyyy}{DDD}`, `snow_{yyyy}`; the stem or a part of it. */
  | { readonly name: string }
  /** A multi-band file: one band per step, the first dated, the following each one step later. */
  | { readonly first: string; readonly step: "month" | "day" | "year" }
  /** In each band's description, by a pattern like `{yyyy}-{MM}`. */
  | { readonly band: string }
  | DateTable
  /** As a table gave them, once it has been read. */
  | { readonly table: string; readonly periods: ReadonlyMap<string, Period> }
  /** On the time axis of a NetCDF file, by the CF conventions. */
  | { readonly axis: "time" };

/** A companion stack of quality numbers on the same grid, applied pixel by pixel before averaging. */
export interface QualityOptions {
  /** Its files; the layer's own where left out, with another band or variable. */
  readonly files?: readonly string[];
  /** How they are dated; as the layer where left out. */
  readonly date?: ImageDates;
  /** Band of GeoTIFF files, from 1. */
  readonly band?: number;
  /** Variable of NetCDF files. */
  readonly variable?: string;
  /** All must hold. */
  readonly pass: readonly QualityRule[];
}

export interface LayerOptions {
  readonly files: readonly string[];
  readonly date: ImageDates;
  readonly covers: ImageCover;
  /** Override what the file says; applied after fill and valid range: value × scale + offset. */
  readonly scale?: number;
  readonly offset?: number;
  /** Raw value that means missing, beside the file's own nodata. */
  readonly fill?: number;
  /** Least and greatest value that pass, after scale and offset. */
  readonly valid?: readonly [number, number];
  readonly unit: string;
  readonly kind: ValueKind;
  /** Coordinate system if the file does not say, e.g. `EPSG:32632` or a proj string. */
  readonly system?: string;
  /** Which band of files dated by their name, from 1; needed only where they have several. */
  readonly band?: number;
  /** Which variable of NetCDF files; needed only where they have several. */
  readonly variable?: string;
  /** Which entry of each further dimension (level, member), by its coordinate's value. */
  readonly select?: Readonly<Record<string, string | number>>;
  readonly quality?: QualityOptions;
  /** Whether addresses among the files may be read over the network. */
  readonly network?: "allow";
}

/** How a layer is read at a place. */
export type PlaceUse =
  | { readonly by: "nearest" }
  | { readonly by: "bilinear" }
  /** Mean over the area, pixels weighted by the fraction inside times their true area. */
  | { readonly by: "area"; readonly validArea: number }
  /** Mean over a circle around a point. */
  | { readonly by: "radius"; readonly metres: number; readonly validArea: number };

/** A place and how the layer is read there. */
export interface Wanted {
  readonly place: AnyPlace;
  readonly use: PlaceUse;
}
