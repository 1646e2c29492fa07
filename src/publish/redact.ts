import { isMap, isScalar, type Pair, parseDocument, visit, type YAMLMap } from "yaml";
import type { Position } from "../data/place.ts";
import { InputError } from "../errors.ts";

/** Puts a coarser position in the place of a fine one. The map must use the same, or two grids tell more than one. */
export type Coarsen = (position: Position) => Position;

/** Put in the place of a text that holds coordinates. */
export const WITHHELD = "[place withheld]";

const LONGITUDE = /^(longitude|lon|lng|long|easting|x)$/i;
const LATITUDE = /^(latitude|lat|northing|y)$/i;

/** Two decimal degrees with three or more decimals beside each other, or degrees with minutes. */
const COORDINATES =
  /-?\d{1,3}\.\d{3,}°?\s*[NSEWnsew]?\s*[,;/\s]\s*-?\d{1,3}\.\d{3,}|\d{1,3}\s*°\s*\d{1,2}\s*['′]/;

/**
 * The text of a pipeline file as it may be shown when places are sensitive: coordinates given as numbers
 * (WGS 84 degrees) are coarsened, texts that hold coordinates are withheld, and comments, where
 * coordinates could hide, are left out. Places that stand in files of their own are not part of the text.
 * A value that stands under a key like `longitude` without a latitude beside it is withheld too.
 */
export function redactPipeline(text: string, coarsen: Coarsen): string {
  const document = parseDocument(text, { keepSourceTokens: false });
  if (document.errors.length > 0)
    throw new InputError({
      name: "publish.redact-unreadable",
      expected: "a pipeline file that can be read, so that its places can be coarsened",
      found: document.errors[0].message.split("\n")[0],
      remedy: "mend the YAML",
    });
  document.commentBefore = null;
  document.comment = null;
  visit(document, {
    Node: (_, node) => {
      node.comment = null;
      node.commentBefore = null;
    },
  });
  visit(document, { Map: (_, map) => coarsenMap(map, coarsen) });
  visit(document, {
    Scalar: (_, scalar) => {
      if (typeof scalar.value === "string" && COORDINATES.test(scalar.value)) {
        scalar.value = WITHHELD;
        scalar.type = "QUOTE_DOUBLE";
      }
    },
    Seq: (_, seq) => {
      // A position written as a list, GeoJSON's way.
      const numbers = seq.items.map((item) => (isScalar(item) ? item.value : undefined));
      if (seq.items.length >= 2 && numbers.every(isFine)) {
        const [longitude, latitude] = numbers as [number, number];
        const spot = Math.abs(latitude) <= 90 ? coarsen([longitude, latitude]) : [WITHHELD, WITHHELD];
        seq.items.forEach((item, i) => {
          if (isScalar(item)) setScalar(item, spot[i] ?? 0);
        });
      }
    },
  });
  return `# comments left out and places coarsened: the study is sensitive\n${document.toString({ lineWidth: 0 })}`;
}

/** A number with three or more decimals: what a coordinate looks like and a threshold or scale seldom does. */
function isFine(value: unknown): boolean {
  return typeof value === "number" && /\.\d{3,}$/.test(String(value));
}

function coarsenMap(map: YAMLMap, coarsen: Coarsen): void {
  const find = (pattern: RegExp) => map.items.find((pair) => pattern.test(String(keyOf(pair))));
  const [eastPair, northPair] = [find(LONGITUDE), find(LATITUDE)];
  for (const pair of [eastPair, northPair]) if (looksLikeDegrees(pair)) setPair(pair, WITHHELD);
  const [east, north] = [numberIn(eastPair), numberIn(northPair)];
  if (east === undefined && north === undefined) return;
  if (east !== undefined && north !== undefined && Math.abs(east) <= 360 && Math.abs(north) <= 90) {
    const [longitude, latitude] = coarsen([east, north]);
    setPair(eastPair, longitude);
    setPair(northPair, latitude);
    return;
  }
  if (east !== undefined) setPair(eastPair, WITHHELD);
  if (north !== undefined) setPair(northPair, WITHHELD);
}

function keyOf(pair: Pair): unknown {
  return isScalar(pair.key) ? pair.key.value : pair.key;
}

/** The number a pair holds (also one written as text); undefined for column names, nested maps and the like. */
function numberIn(pair: Pair | undefined): number | undefined {
  if (pair === undefined || isMap(pair.value) || !isScalar(pair.value)) return undefined;
  const { value } = pair.value;
  if (typeof value === "number") return value;
  return typeof value === "string" && /^\s*[-+]?\d+(\.\d+)?\s*$/.test(value) ? Number(value) : undefined;
}

/** Text such as `6.12345 E` or `6° 7′`, which is not a plain number and not a column's name either. */
function looksLikeDegrees(pair: Pair | undefined): boolean {
  if (pair === undefined || !isScalar(pair.value) || typeof pair.value.value !== "string") return false;
  return numberIn(pair) === undefined && /\d[.,]\d|\d\s*°/.test(pair.value.value);
}

function setPair(pair: Pair | undefined, value: string | number): void {
  if (pair !== undefined && isScalar(pair.value)) setScalar(pair.value, value);
}

/** Sets the value; what YAML remembers of how the number was written must go too. */
function setScalar(
  scalar: { value: unknown; source?: string; minFractionDigits?: number; type?: unknown },
  value: string | number,
) {
  scalar.value = value;
  delete scalar.source;
  delete scalar.minFractionDigits;
  delete scalar.type;
}
