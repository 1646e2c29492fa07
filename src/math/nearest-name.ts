/** Letters, digits and nothing else tell names apart here: case, spaces, hyphens and underscores are set aside. */
function plain(name: string): string {
  return name.toLowerCase().replace(/[\s_-]+/g, "");
}

/**
 * The least number of insertions, deletions, replacements and swaps of two neighbouring letters that turn `a` into
 * `b`, no part being edited twice (Damerau 1964, Levenshtein 1966; the restricted form, "optimal string alignment").
 */
export function editDistance(a: string, b: string): number {
  let before: number[] = [];
  let previous = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const same = a[i - 1] === b[j - 1];
      let least = Math.min(previous[j] + 1, row[j - 1] + 1, previous[j - 1] + (same ? 0 : 1));
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1])
        least = Math.min(least, before[j - 2] + 1);
      row.push(least);
    }
    before = previous;
    previous = row;
  }
  return previous[b.length];
}

/** Longer names are not compared letter by letter: the work grows with the product of the lengths. */
const LONGEST = 80;

/**
 * The known name that was probably meant: the least edit distance, at most a third of the longer name's letters and
 * at most 3; of equals the first by code unit. Undefined if none is near.
 */
export function nearestName(wanted: string, known: Iterable<string>): string | undefined {
  const from = plain(wanted);
  if (from.length > LONGEST) return undefined;
  let best: { readonly name: string; readonly distance: number } | undefined;
  for (const name of [...known].sort((a, b) => (a < b ? -1 : a > b ? 1 : 0))) {
    const to = plain(name);
    if (to.length > LONGEST) continue;
    const limit = Math.min(3, Math.floor(Math.max(from.length, to.length) / 3));
    const distance = editDistance(from, to);
    if (distance <= limit && (best === undefined || distance < best.distance)) best = { name, distance };
  }
  return best?.name;
}
