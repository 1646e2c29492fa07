/** The cells of a CSV, rows and columns by position. */
export type Cells = readonly (readonly string[])[];

const NUMBER = /^-?\d+(?:\.\d+)?(?:e[+-]?\d+)?$/i;
const SHOWN = 12;

/** |a − b| ≤ tolerance · max(|a|, |b|); both within 1e-12 of 0 count as equal, since 0 has no relative neighbour. */
export function near(a: number, b: number, tolerance: number): boolean {
  const larger = Math.max(Math.abs(a), Math.abs(b));
  return larger <= 1e-12 || Math.abs(a - b) <= tolerance * larger;
}

/**
 * Where a table departs from what is expected of it, a line each: `row 3 "lead cell", column: expected …, found …`.
 * Columns are matched by name and may stand in another order or have others beside them; rows go by position. Numbers
 * are compared to a relative tolerance, everything else exactly; an empty cell is no number.
 */
export function tableDifference(expected: Cells, found: Cells, tolerance: number): readonly string[] {
  const [head = [], ...rows] = expected;
  const [foundHead = [], ...foundRows] = found;
  const at = head.map((name) => foundHead.indexOf(name));
  const absent = head.filter((_, k) => at[k] < 0);
  if (absent.length > 0) return [`columns: expected ${absent.join()}, found ${foundHead.join()}`];
  const lines = rows.flatMap((row, i) => {
    const other = foundRows[i];
    if (other === undefined) return [`row ${i + 1}: expected ${row.join()}, found the end of the table`];
    return row.flatMap((cell, k) => {
      const there = other[at[k]];
      const same =
        NUMBER.test(cell) && NUMBER.test(there)
          ? near(Number(cell), Number(there), tolerance)
          : cell === there;
      const lead = `row ${i + 1} ${JSON.stringify(row[0])}, ${head[k]}`;
      return same ? [] : [`${lead}: expected ${cell || "nothing"}, found ${there || "nothing"}`];
    });
  });
  const more = foundRows.slice(rows.length).map((row) => `one row more than expected: ${row.join()}`);
  const all = [...lines, ...more];
  return all.length <= SHOWN ? all : [...all.slice(0, SHOWN), `… and ${all.length - SHOWN} more`];
}
