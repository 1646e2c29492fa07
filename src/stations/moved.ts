import type { Site } from "../data/series.ts";
import { countText } from "../data/words.ts";
import type { DraftFinding, RowRef } from "./block.ts";

/** Degrees by which coordinates must differ (about 100 m) to be another place; less is rounding. */
const SAME_PLACE = 0.001;

/** A place that rows of a file give for a station. */
export interface SeenPlace extends RowRef {
  readonly id: string;
  readonly longitude: number;
  readonly latitude: number;
  readonly count: number;
}

/** A text column as codes. */
interface Coded {
  readonly codes: Int32Array;
  readonly texts: readonly string[];
}

/** The places of each station in one file, in the order they first appear; rows without coordinates tell nothing. */
export function placesIn(
  stationAt: (row: number) => string,
  longitudes: Coded,
  latitudes: Coded,
  source: number,
): readonly SeenPlace[] {
  const found = new Map<string, { place: Omit<SeenPlace, "count">; count: number }>();
  const number = (text: string) => (text === "" ? Number.NaN : Number(text.replace(",", ".")));
  const [x, y] = [longitudes.texts.map(number), latitudes.texts.map(number)];
  for (let row = 0; row < longitudes.codes.length; row++) {
    const [longitude, latitude] = [x[longitudes.codes[row]], y[latitudes.codes[row]]];
    if (!Number.isFinite(longitude + latitude)) continue;
    const id = stationAt(row);
    const key = `${id}\n${longitude}\n${latitude}`;
    const known = found.get(key);
    if (known === undefined) found.set(key, { place: { id, longitude, latitude, source, row }, count: 1 });
    else known.count++;
  }
  return [...found.values()].map(({ place, count }) => ({ ...place, count }));
}

/** One finding per station whose records give another place than its first one, or than the list of stations. */
export function movedFindings(
  seen: readonly SeenPlace[],
  sites: readonly Site[] | undefined,
): readonly DraftFinding[] {
  const ids = [...new Set(seen.map((one) => one.id))].sort((a, b) => (a < b ? -1 : 1));
  return ids.flatMap((id): DraftFinding[] => {
    const own = seen.filter((one) => one.id === id);
    const listed = sites?.find((one) => one.id === id && Number.isFinite(one.longitude + one.latitude));
    const home = listed ?? own[0];
    const away = own.filter((one) => !same(one, home));
    if (away.length === 0) return [];
    const [first] = away;
    const whence = listed === undefined ? "in its first rows" : "in the list of stations";
    return [
      {
        kind: "moved",
        subject: id,
        message: `Station ${id} stands at ${text(first)} in ${countText(
          away.reduce((sum, one) => sum + one.count, 0),
          "row",
        )}, at ${text(home)} ${whence}: it may have moved, and its values may step.`,
        at: { source: first.source, row: first.row },
        value: text(first),
        count: away.reduce((sum, one) => sum + one.count, 0),
        remedy: "give it a new id from the day it moved, correct the coordinates, or accept it with a note",
      },
    ];
  });
}

type Point = Pick<SeenPlace, "longitude" | "latitude">;

function same(a: Point, b: Point): boolean {
  return Math.abs(a.longitude - b.longitude) <= SAME_PLACE && Math.abs(a.latitude - b.latitude) <= SAME_PLACE;
}

function text({ longitude, latitude }: Point): string {
  return `${longitude}, ${latitude}`;
}
