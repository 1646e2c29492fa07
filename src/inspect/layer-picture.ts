import { encode } from "fast-png";
import type { Position } from "../data/place.ts";
import type { Files } from "../effects/effects.ts";
import { readOverview } from "../layers/overview.ts";
import { unwrap } from "../layers/rings.ts";
import { coarsen } from "../study/coarsen.ts";
import { readFeatures } from "../study/geojson.ts";

type Colour = readonly [number, number, number];

/** From low to high; lightness grows all the way, so it reads without colours too. */
const RAMP: readonly Colour[] = [
  [26, 36, 84],
  [36, 98, 132],
  [84, 152, 128],
  [176, 196, 108],
  [250, 236, 150],
];
const MISSING: Colour = [226, 226, 226];
const HATCH: Colour = [190, 190, 190];
const INK: Colour = [200, 30, 60];
const HALO: Colour = [255, 255, 255];
/** Pixels of the picture along its longer side, at most, and cells of the layer that are read for it. */
const SIDE = 640;
const CELLS = SIDE * SIDE;

export interface PictureOptions {
  /** GeoJSON with places to draw, and the file it was read from. */
  readonly places: { readonly file: string; readonly text: string } | undefined;
  /** Draw places where they are; else as the cell of a grid of this many kilometres that holds them. */
  readonly exact: boolean;
  readonly coarsenKm: number;
}

/**
 * A small picture of a layer's first band as a PNG: low values dark, high ones light, missing pixels hatched in grey.
 * Places are drawn as the square of the coarse grid that holds them, so that a picture gives no roost away; exact places
 * must be asked for.
 */
export async function layerPicture(path: string, files: Files, options: PictureOptions): Promise<Uint8Array> {
  const view = await readOverview(path, {}, CELLS, files);
  const scale = Math.max(1, Math.floor(SIDE / Math.max(view.width, view.height)));
  const [width, height] = [view.width * scale, view.height * scale];
  const data = new Uint8Array(width * height * 3);
  const put = (x: number, y: number, colour: Colour) => {
    if (x >= 0 && y >= 0 && x < width && y < height) data.set(colour, (y * width + x) * 3);
  };
  const valid = view.values.filter((one) => !Number.isNaN(one)).sort();
  // The outer hundredths share one colour, so that a few strays do not flatten all others.
  const [low, high] = [valid[Math.floor(valid.length * 0.01)], valid[Math.ceil(valid.length * 0.99) - 1]];
  for (let y = 0; y < height; y++)
    for (let x = 0; x < width; x++) {
      const value = view.values[Math.floor(y / scale) * view.width + Math.floor(x / scale)];
      const missing = (x + y) % 8 === 0 ? HATCH : MISSING;
      put(x, y, Number.isNaN(value) ? missing : shade((value - low) / (high - low)));
    }
  const outlines = options.places === undefined ? [] : outlinesIn(options.places, options);
  const pixelOf = (position: Position) => view.toPixel(position).map((one) => one * scale);
  for (const [radius, colour] of [
    [2, HALO],
    [1, INK],
  ] as const)
    for (const outline of outlines) drawOutline(outline.map(pixelOf), radius, colour, put);
  return encode({ width, height, data, channels: 3, depth: 8 });
}

function shade(share: number): Colour {
  const at = Math.min(1, Math.max(0, Number.isNaN(share) ? 0.5 : share)) * (RAMP.length - 1);
  const i = Math.min(RAMP.length - 2, Math.floor(at));
  const mix = (part: 0 | 1 | 2) => Math.round(RAMP[i][part] + (at - i) * (RAMP[i + 1][part] - RAMP[i][part]));
  return [mix(0), mix(1), mix(2)];
}

type Put = (x: number, y: number, colour: Colour) => void;

/** A closed line through points; one point alone is drawn as a ring round it. */
function drawOutline(points: readonly (readonly number[])[], radius: number, colour: Colour, put: Put): void {
  const dot = (x: number, y: number) => {
    for (let dy = -radius; dy <= radius; dy++)
      for (let dx = -radius; dx <= radius; dx++)
        if (dx * dx + dy * dy <= radius * radius) put(Math.round(x + dx), Math.round(y + dy), colour);
  };
  if (points.length === 1) {
    const [[x, y]] = points;
    for (let i = 0; i < 48; i++)
      dot(x + 6 * Math.cos((i * Math.PI) / 24), y + 6 * Math.sin((i * Math.PI) / 24));
    return;
  }
  for (let i = 1; i < points.length; i++) {
    const [[x1, y1], [x2, y2]] = [points[i - 1], points[i]];
    const length = Math.hypot(x2 - x1, y2 - y1);
    // Far beyond the picture nothing is drawn, and an edge without a place in the system neither.
    const steps = Number.isFinite(length) ? Math.min(20_000, Math.ceil(length)) : -1;
    for (let s = 0; s <= steps; s++)
      dot(x1 + ((x2 - x1) * s) / Math.max(1, steps), y1 + ((y2 - y1) * s) / Math.max(1, steps));
  }
}

/** Outlines of all points and areas of a GeoJSON file: as they are, or coarsened. */
function outlinesIn(
  { file, text }: { readonly file: string; readonly text: string },
  { exact, coarsenKm }: PictureOptions,
): Position[][] {
  const features = readFeatures(text, file);
  return features.flatMap(({ geometry }) => {
    const rings = ringsOf(geometry.type, geometry.coordinates);
    if (exact) return rings.map((ring) => unwrap(ring));
    // One box per place, round its coarsened corners: the neighbourhood, and nothing of the outline.
    return rings.length === 0 ? [] : [boxAround(rings.flat(), coarsenKm)];
  });
}

const isPosition = (value: unknown): value is Position =>
  Array.isArray(value) && typeof value[0] === "number" && typeof value[1] === "number";

/** Positions of a point, or the rings of areas; nothing for lines and what is no geometry. */
function ringsOf(type: unknown, coordinates: unknown): Position[][] {
  if (!Array.isArray(coordinates)) return [];
  if (type === "Point") return isPosition(coordinates) ? [[coordinates]] : [];
  const list = type === "Polygon" ? [coordinates] : type === "MultiPolygon" ? coordinates : [];
  return list.flat(1).map((ring) => (Array.isArray(ring) ? ring.filter(isPosition) : []));
}

/** Half a coarse cell beyond the coarsened positions on all sides; a degree of latitude has 111.2 km. */
function boxAround(positions: readonly Position[], km: number): Position[] {
  const corners = unwrap(positions.map((one) => coarsen(one, km)));
  const [longitudes, latitudes] = [corners.map(([lon]) => lon), corners.map(([, lat]) => lat)];
  const up = km / 2 / 111.195;
  const [south, north] = [Math.min(...latitudes) - up, Math.max(...latitudes) + up];
  const along = up / Math.max(0.01, Math.cos((((south + north) / 2) * Math.PI) / 180));
  const [west, east] = [Math.min(...longitudes) - along, Math.max(...longitudes) + along];
  return [
    [west, south],
    [east, south],
    [east, north],
    [west, north],
    [west, south],
  ];
}
