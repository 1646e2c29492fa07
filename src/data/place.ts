/** Longitude, latitude in WGS 84 degrees. */
export type Position = readonly [number, number];

/** A ring is closed (first position = last). The first ring of a polygon is its outline, the others are holes. */
export type Ring = readonly Position[];
export type Polygon = readonly Ring[];

/** Where an animal was at a moment. */
export interface Fix {
  /** Days since 1970-01-01 UTC; the fraction is the time of day. */
  readonly time: number;
  readonly position: Position;
  /** Empty where the table does not tell animals apart. */
  readonly animal: string;
}

/** A named place on the ground. */
export type Where =
  | { readonly type: "point"; readonly name: string; readonly position: Position }
  | { readonly type: "area"; readonly name: string; readonly polygons: readonly Polygon[] };

/** A place that moves: where animals were, in order of time. */
export interface MovingPlace {
  readonly type: "moving";
  readonly name: string;
  readonly fixes: readonly Fix[];
  /** What a fix counts in the mean of an image: one, or the time it stands for. */
  readonly weigh: "fixes" | "time";
  /** Images with fewer fixes in their period are not read. */
  readonly least: number;
}

export type AnyPlace = Where | MovingPlace;
