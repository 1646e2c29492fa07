import proj4 from "proj4";
import { dayOf } from "./dates.mjs";
import { LAPSE, meanOver } from "./weather.mjs";

// An island that does not exist, laid over open sea, so that no true roost can be meant.

export const GRID = { width: 24, height: 20, west: 330_000, north: 6_160_000, pixel: 2000, epsg: 32632 };

const UTM = "+proj=utm +zone=32 +datum=WGS84 +units=m +no_defs";

export function toDegrees(x, y) {
  return proj4(UTM, "WGS84", [x, y]).map((value) => Math.round(value * 1e5) / 1e5);
}

export const ROOST = [350_700, 6_141_300];
/** Outline and lake of the winter range. */
export const RANGE = [
  [
    [343_500, 6_134_200],
    [357_800, 6_133_100],
    [361_200, 6_140_900],
    [356_300, 6_149_700],
    [346_900, 6_148_400],
    [341_800, 6_141_500],
  ],
  [
    [352_300, 6_143_200],
    [351_900, 6_146_100],
    [354_800, 6_146_400],
    [355_600, 6_143_900],
  ],
];

function insideRing(ring, x, y) {
  let inside = false;
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    const [xi, yi] = ring[i];
    const [xj, yj] = ring[j];
    if (yi > y !== yj > y && x < ((xj - xi) * (y - yi)) / (yj - yi) + xi) inside = !inside;
  }
  return inside;
}

/** Centre, elevation (m) and membership of each pixel, row-major from the north-west. */
export const PIXELS = Array.from({ length: GRID.width * GRID.height }, (_, at) => {
  const x = GRID.west + GRID.pixel * ((at % GRID.width) + 0.5);
  const y = GRID.north - GRID.pixel * (Math.floor(at / GRID.width) + 0.5);
  const shore = ((x - 354_000) / 23_500) ** 2 + ((y - 6_140_500) / 19_800) ** 2;
  const lake = insideRing(RANGE[1], x, y);
  const elevation = Math.max(
    2,
    60 +
      330 * Math.exp(-(((x - 364_000) / 9000) ** 2) - ((y - 6_152_000) / 8000) ** 2) +
      (y - 6_130_000) / 160,
  );
  return { x, y, elevation, land: shore < 1 && !lake, inRange: insideRing(RANGE[0], x, y) && !lake };
});

/** Share of the year's greenness, 0 in midwinter, 1 in early summer. */
const LEAF = [0.03, 0.05, 0.14, 0.38, 0.76, 1, 0.98, 0.9, 0.7, 0.42, 0.16, 0.05];
/** How much of the spring's and the summer's factor shows in a month. */
const SPRING = [0, 0.1, 0.7, 1, 0.9, 0.4, 0.15, 0.05, 0, 0, 0, 0];

/** Greenness of one month, raw (value = raw × 0.0001), and its true mean over the winter range. */
export function greenness(random, factors, year, month) {
  const { spring, green, summer } = factors.get(year);
  const shared =
    0.032 * SPRING[month - 1] * (0.75 * green + 0.65 * spring) -
    0.012 * Number(month >= 7 && month <= 9) * summer +
    0.006 * random.normal();
  const raw = new Int16Array(PIXELS.length);
  let sum = 0;
  let count = 0;
  PIXELS.forEach(({ x, y, elevation, land, inRange }, at) => {
    const texture = 0.05 * Math.sin(x / 5200) * Math.cos(y / 4100);
    const value =
      0.24 + texture + 0.52 * LEAF[month - 1] * (1 - elevation / 1500) + shared + 0.014 * random.normal();
    const cloud = random.chance(month >= 3 && month <= 10 ? 0.004 : 0.03) && !inRange;
    raw[at] = land && !cloud ? Math.round(value * 10_000) : -3000;
    if (inRange) {
      sum += value;
      count++;
    }
  });
  return { raw, overRange: sum / count };
}

/** Snow cover of one month, whole percent, 255 where missing, from the month's mean temperature at 100 m. */
export function snowCover(random, regional, year, month) {
  const last = (month === 12 ? dayOf(year + 1, 1, 1) : dayOf(year, month + 1, 1)) - 1;
  const temperature = meanOver(regional, dayOf(year, month, 1), last) + 0.5 * random.normal();
  return Uint8Array.from(PIXELS, ({ elevation, land }) => {
    const here = temperature + LAPSE * (elevation - 100) + 0.35 * random.normal();
    const share = 100 / (1 + Math.exp(1.15 * (here - 0.2)));
    return land ? Math.round(share < 1.5 ? 0 : share) : 255;
  });
}

export function placesFile() {
  const ring = (corners, clockwise) => {
    const closed = [...corners, corners[0]].map(([x, y]) => toDegrees(x, y));
    let twice = 0;
    for (let i = 1; i < closed.length; i++)
      twice += closed[i - 1][0] * closed[i][1] - closed[i][0] * closed[i - 1][1];
    return twice > 0 === clockwise ? closed.reverse() : closed;
  };
  const features = [
    {
      type: "Feature",
      properties: { name: "roost", sensitive: true },
      geometry: { type: "Point", coordinates: toDegrees(...ROOST) },
    },
    {
      type: "Feature",
      properties: { name: "winter range", sensitive: true },
      // RFC 7946, 3.1.6: outlines run counterclockwise, holes clockwise.
      geometry: { type: "Polygon", coordinates: [ring(RANGE[0], false), ring(RANGE[1], true)] },
    },
  ];
  const lines = features.map((feature) => `    ${JSON.stringify(feature)}`);
  return `{\n  "type": "FeatureCollection",\n  "features": [\n${lines.join(",\n")}\n  ]\n}\n`;
}
