import type { Position } from "../../data/place.ts";
import type { Site } from "../../data/series.ts";
import { listWords } from "../../data/words.ts";
import { type Cast, unitText } from "../cast.ts";
import { drawing, type Figure, label, rect, segment, textWidth } from "../figure.ts";
import { type Html, html } from "../html.ts";
import type { MapLayer, ReportInput } from "../input.ts";
import { brief, counted, px } from "../numbers.ts";
import { ink } from "../palette.ts";
import { pngUri } from "../png.ts";
import { extent, line, roundBelow, ticks, tickText } from "../scale.ts";
import type { Size } from "../size.ts";

const LEFT = 62;
const TOP = 10;
/** Kilometres of a degree of latitude, mean radius. */
const KM_PER_DEGREE = 111.195;

/** Low and high end of the layer's colours: from pale to deep, so that lightness alone tells the order. */
const RAMP = [
  [246, 243, 228],
  [176, 205, 178],
  [92, 154, 139],
  [36, 96, 104],
  [18, 45, 66],
] as const;

/** Places and stations over a layer, with a scale bar; plate carrée, true to scale at the middle latitude. */
export function placesMap(input: ReportInput, cast: Cast, size: Size): Figure | undefined {
  const sites = input.stations.filter(
    (one) => Number.isFinite(one.longitude) && Number.isFinite(one.latitude),
  );
  const positions: Position[] = [
    ...sites.map((one): Position => [one.longitude, one.latitude]),
    ...input.places.flatMap((one) => (one.type === "point" ? [one.position] : one.polygons.flat(2))),
  ];
  if (positions.length === 0) return undefined;
  const frame = frameOf(positions, input.map, size.width - LEFT - legendRoom(size));
  const { x, y, width, height } = frame;
  const body = [
    rect(LEFT, TOP, width, height, "wash"),
    input.map === undefined ? html`` : layerImage(input.map, frame),
    graticule(frame),
    input.places.map((place) =>
      place.type === "area"
        ? html`<g data-covariates="${placeUse(input, cast, place.name)}"><path d="${place.polygons.flatMap((rings) => rings.map((ring) => `M${ring.map(([lon, lat]) => `${px(x(lon))},${px(y(lat))}`).join("L")}Z`)).join("")}" fill="${ink("mark")}" fill-opacity="0.12" fill-rule="evenodd" stroke="${ink("panel")}" stroke-width="4.5"/><path d="${place.polygons.flatMap((rings) => rings.map((ring) => `M${ring.map(([lon, lat]) => `${px(x(lon))},${px(y(lat))}`).join("L")}Z`)).join("")}" fill="none" stroke="${ink("mark")}" stroke-width="2"/></g>`
        : html``,
    ),
    input.places.map((place) =>
      place.type === "point"
        ? html`<g data-covariates="${placeUse(input, cast, place.name)}">${pointPlace(place.position, frame, input.coarsenedKm)}</g>`
        : html``,
    ),
    sites.map(
      (one) =>
        html`<path data-covariates="${stationUse(input, cast, one)}" d="M0,-6L6,5H-6Z" transform="translate(${px(x(one.longitude))},${px(y(one.latitude))})" fill="${ink("ink")}" stroke="${ink("panel")}" stroke-width="1.5"/>`,
    ),
    names(input, frame),
    scaleBar(frame),
    input.map === undefined ? html`` : legend(input.map, frame),
  ];
  const where =
    input.coarsenedKm > 0
      ? ` Places are shown no finer than ${brief(input.coarsenedKm)} km, because the study is marked sensitive.`
      : "";
  const placeWords = input.places.map((one) => `${one.name} (${one.type})`);
  return {
    name: "map",
    title: "Where the study looks",
    caption: `Stations (triangles) and places (${listWords(placeWords)})${input.map === undefined ? "" : ` over ${input.map.title}`}; longitude and latitude in degrees, WGS 84.${where}`,
    svg: drawing(
      LEFT + width + legendRoom(size),
      TOP + height + 34,
      "Map of places and stations",
      `${counted(sites.length, "station")}: ${listWords(sites.map((one) => one.name))}; ${counted(input.places.length, "place")}: ${listWords(placeWords)}; from ${frame.west.toFixed(2)}° to ${frame.east.toFixed(2)}° longitude and ${frame.south.toFixed(2)}° to ${frame.north.toFixed(2)}° latitude.${where}`,
      body,
    ),
  };
}

/** Positions in the cast of the covariates that a station fed. */
function stationUse(input: ReportInput, cast: Cast, site: Site): string {
  return indices(
    cast,
    input.covariates
      .filter((one) =>
        one.values.some((value) => value.stations.some((id) => id === site.id || id === site.name)),
      )
      .map((one) => one.name),
  );
}

/** Those that were read of a layer at a place. */
function placeUse(input: ReportInput, cast: Cast, place: string): string {
  return indices(
    cast,
    (input.readAt ?? []).filter((one) => one.place === place).map((one) => one.covariate),
  );
}

function indices(cast: Cast, names: readonly string[]): string {
  return names.flatMap((name) => cast.byName.get(name)?.index ?? []).join(" ");
}

function legendRoom({ narrow }: Size): number {
  return narrow ? 92 : 130;
}

interface Frame {
  readonly x: (longitude: number) => number;
  readonly y: (latitude: number) => number;
  readonly width: number;
  readonly height: number;
  readonly west: number;
  readonly east: number;
  readonly south: number;
  readonly north: number;
  /** Pixels of a kilometre. */
  readonly perKm: number;
}

function frameOf(positions: readonly Position[], map: MapLayer | undefined, room: number): Frame {
  const corners: Position[] =
    map === undefined
      ? []
      : [
          [map.west, map.south],
          [map.east, map.north],
        ];
  const [w, e] = extent([...positions, ...corners].map((one) => one[0]));
  const [s, n] = extent([...positions, ...corners].map((one) => one[1]));
  // a margin keeps markers and names inside; one place alone gets a tenth of a degree around it
  const margin = Math.max(0.05 * Math.max(e - w, n - s), e - w === 0 && n - s === 0 ? 0.1 : 0.02);
  const [west, east, south, north] = [w - margin, e + margin, s - margin, n + margin];
  const shrink = Math.cos((((south + north) / 2) * Math.PI) / 180);
  const perDegree = Math.min(Math.min(760, room) / ((east - west) * shrink), 520 / (north - south));
  const [width, height] = [(east - west) * shrink * perDegree, (north - south) * perDegree];
  return {
    x: line([west, east], [LEFT, LEFT + width]),
    y: line([south, north], [TOP + height, TOP]),
    ...{ width, height, west, east, south, north },
    perKm: perDegree / KM_PER_DEGREE,
  };
}

function layerImage(map: MapLayer, { x, y }: Frame): Html {
  const [low, high] = extent(map.values);
  const rgba = new Uint8Array(4 * map.width * map.height);
  map.values.forEach((value, i) => {
    if (!Number.isFinite(value)) return;
    rgba.set([...rampColour(high > low ? (value - low) / (high - low) : 0.5), 255], 4 * i);
  });
  const [left, right, top, bottom] = [x(map.west), x(map.east), y(map.north), y(map.south)];
  return html`<image href="${pngUri(map.width, map.height, rgba)}" x="${px(left)}" y="${px(top)}" width="${px(right - left)}" height="${px(bottom - top)}" preserveAspectRatio="none" style="image-rendering:pixelated"/>`;
}

function rampColour(share: number): number[] {
  const at = Math.min(RAMP.length - 1.000001, Math.max(0, share * (RAMP.length - 1)));
  const i = Math.floor(at);
  return RAMP[i].map((from, c) => Math.round(from + (at - i) * (RAMP[i + 1][c] - from)));
}

function graticule({ x, y, west, east, south, north, width, height }: Frame): Html[] {
  const degrees = (value: number, [plus, minus]: readonly [string, string]) =>
    `${tickText(Math.abs(value))}°${value === 0 ? "" : ` ${value > 0 ? plus : minus}`}`;
  const below = TOP + height;
  return [
    ...ticks(west, east, 5).flatMap((value) => [
      segment(x(value), below, x(value), below + 5, "muted"),
      label(x(value), below + 18, degrees(value, ["E", "W"]), { anchor: "middle", fill: "muted" }),
    ]),
    ...ticks(south, north, 5).flatMap((value) => [
      segment(LEFT - 5, y(value), LEFT, y(value), "muted"),
      label(LEFT - 8, y(value) + 4, degrees(value, ["N", "S"]), { anchor: "end", fill: "muted" }),
    ]),
    html`<rect x="${LEFT}" y="${TOP}" width="${px(width)}" height="${px(height)}" fill="none" stroke="${ink("muted")}"/>`,
  ];
}

/** A point that was coarsened is a square of that side: anything sharper would claim to know more. */
function pointPlace([lon, lat]: Position, { x, y, perKm }: Frame, km: number): Html {
  const side = km * perKm;
  const square =
    km > 0
      ? html`<rect x="${px(x(lon) - side / 2)}" y="${px(y(lat) - side / 2)}" width="${px(side)}" height="${px(side)}" fill="${ink("mark")}" fill-opacity="0.18" stroke="${ink("mark")}" stroke-dasharray="5 3" stroke-width="1.5"/>`
      : html``;
  return html`${square}<circle cx="${px(x(lon))}" cy="${px(y(lat))}" r="6" fill="${ink("mark")}" stroke="${ink("panel")}" stroke-width="2"/>`;
}

interface Box {
  readonly x: number;
  readonly y: number;
  readonly width: number;
}

/** Names on plates beside their marks, at the first of six spots that touches no other plate. */
function names(input: ReportInput, { x, y, width, height }: Frame): Html[] {
  const placed: Box[] = [];
  const marks = [
    ...input.places.map((one) => {
      const ring = one.type === "area" ? one.polygons.flat(2) : [one.position];
      // an area is named at the middle of its northern edge
      const north = ring.reduce((best, at) => (at[1] > best[1] ? at : best));
      return { name: one.name, at: north };
    }),
    ...input.stations
      .filter((one) => Number.isFinite(one.longitude))
      .map((one) => ({ name: one.name, at: [one.longitude, one.latitude] as Position })),
  ];
  return marks.map(({ name, at }) => {
    const plate = textWidth(name) + 10;
    const [px0, py0] = [x(at[0]), y(at[1])];
    const spots: Box[] = [
      { x: px0 + 10, y: py0 - 9, width: plate },
      { x: px0 - 10 - plate, y: py0 - 9, width: plate },
      { x: px0 - plate / 2, y: py0 - 28, width: plate },
      { x: px0 - plate / 2, y: py0 + 11, width: plate },
      { x: px0 + 8, y: py0 - 26, width: plate },
      { x: px0 + 8, y: py0 + 8, width: plate },
    ];
    const free = (spot: Box) =>
      spot.x >= LEFT &&
      spot.x + plate <= LEFT + width &&
      spot.y >= TOP &&
      spot.y + 18 <= TOP + height &&
      placed.every(
        (other) =>
          spot.x > other.x + other.width || other.x > spot.x + plate || Math.abs(spot.y - other.y) > 18,
      );
    const spot = spots.find(free) ?? spots[0];
    placed.push(spot);
    return html`<rect x="${px(spot.x)}" y="${px(spot.y)}" width="${px(plate)}" height="18" rx="3" fill="${ink("panel")}" opacity="0.88"/>${label(spot.x + 5, spot.y + 13, name)}`;
  });
}

function scaleBar({ width, height, perKm }: Frame): Html {
  const km = roundBelow(width / perKm / 3);
  const [x0, y0] = [LEFT + 14, TOP + height - 16];
  return html`<rect x="${px(x0 - 7)}" y="${px(y0 - 20)}" width="${px(km * perKm + 14)}" height="28" rx="3" fill="${ink("panel")}" opacity="0.88"/>${segment(x0, y0, x0 + km * perKm, y0, "ink", 3)}${label(x0 + (km * perKm) / 2, y0 - 6, `${brief(km)} km`, { anchor: "middle" })}`;
}

function legend(map: MapLayer, { width, height }: Frame): Html {
  const [low, high] = extent(map.values);
  const x0 = LEFT + width + 18;
  const [top, bottom] = [TOP + 24, TOP + Math.min(height, 220)];
  const steps = 24;
  const h = (bottom - top) / steps;
  const bar = Array.from({ length: steps }, (_, i) => {
    const [r, g, b] = rampColour(1 - (i + 0.5) / steps);
    return html`<rect x="${px(x0)}" y="${px(top + i * h)}" width="14" height="${px(h + 0.4)}" fill="rgb(${r},${g},${b})"/>`;
  });
  const at = line([low, high], [bottom, top]);
  const unit = unitText(map.unit);
  return html`${label(x0, TOP + 12, unit === "" ? map.variable : `${map.variable}, ${unit}`, { fill: "muted" })}${bar}${ticks(low, high, 5).map((value) => label(x0 + 20, at(value) + 4, tickText(value), { fill: "muted" }))}`;
}
