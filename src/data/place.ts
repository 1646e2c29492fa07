/** Longitude, latitude in WGS 84 degrees. */
export type Position = readonly [number, number];

/** A ring is closed (first position = last). The first ring of a polygon is its outline, the others are holes. */
export type Ring = readonly Position[];
export type Polygon = readonly Ring[];

/** A named place on the ground. */
export type Where =
  | { readonly type: "point"; readonly name: string; readonly position: Position }
  | { readonly type: "area"; readonly name: string; readonly polygons: readonly Polygon[] };
