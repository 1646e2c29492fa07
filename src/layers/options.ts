import type { Where } from "../data/place.ts";
import type { ValueKind } from "../data/series.ts";

/** What one image of a stack stands for. */
export type ImageCover = "day" | "month" | "year" | "dekad" | { readonly days: number };

/** How the dates of a stack's images are known. */
export type ImageDates =
  /** In the file name: `green_{yyyy}_{MM}`, `A{yyyy}{DDD}`, `snow_{yyyy}`; the stem or a part of it. */
  | { readonly name: string }
  /** A multi-band file: one band per step, the first dated, the following each one step later. */
  | { readonly first: string; readonly step: "month" | "day" | "year" }
  /** In each band's description, by a pattern like `{yyyy}-{MM}`. */
  | { readonly band: string };

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
  readonly place: Where;
  readonly use: PlaceUse;
}
