import type { Site } from "../data/series.ts";
import { countText } from "../data/words.ts";
import { type Block, type DraftFinding, NO_DAY, type RowRef } from "./block.ts";

/** Station ids of the records that the list does not hold, and rows without any id; one finding each. */
export function unknownStations(
  blocks: readonly Block[],
  sites: readonly Site[] | undefined,
): readonly DraftFinding[] {
  const known = sites === undefined ? undefined : new Set(sites.map((site) => site.id));
  const tallies = new Map<string, { count: number; first: RowRef }>();
  const seen = new Set<string>();
  for (const block of blocks) {
    // A row counts once, however many variables it holds.
    const { codes, ids } = block.stations;
    const key = `${block.source}:${typeof codes === "number" ? ids[codes] : ""}`;
    if (seen.has(key)) continue;
    seen.add(key);
    const strange = ids.map((id) => id === "" || (known !== undefined && !known.has(id)));
    if (!strange.includes(true)) continue;
    for (let row = 0; row < block.starts.length; row++) {
      const code = typeof codes === "number" ? codes : codes[row];
      if (!strange[code] || (block.starts[row] === NO_DAY && ids[code] !== "")) continue;
      const tally = tallies.get(ids[code]);
      if (tally === undefined) tallies.set(ids[code], { count: 1, first: { source: block.source, row } });
      else tally.count++;
    }
  }
  return [...tallies]
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .map(([id, { count, first }]) => {
      const shared = { kind: "unknown-station" as const, at: first, value: id, count };
      if (id === "")
        return {
          ...shared,
          subject: "rows without a station",
          message: `${countText(count, "row")} without a station id; not used.`,
          remedy: "fill in the id, or remove the rows",
        };
      const near = [...(known ?? [])].find((one) => bare(one) === bare(id));
      const hint = near === undefined ? "" : ` The list has ${JSON.stringify(near)}.`;
      return {
        ...shared,
        subject: id,
        message: `Station ${JSON.stringify(id)} is not in the list of stations (${countText(count, "row")}).${hint}`,
        remedy:
          "add it to the list, or correct the id; quote ids that are numbers, or their leading zeros are lost",
      };
    });
}

/** Without case, leading zeros and signs, for a hint only. */
function bare(id: string): string {
  return id
    .toLowerCase()
    .replace(/[^\p{L}\p{N}]/gu, "")
    .replace(/^0+/, "");
}
