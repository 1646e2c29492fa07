import type { TableLook } from "./look-table.ts";
import { stem, yamlText } from "./stanza.ts";

/** Tables that one stanza reads. */
export interface Group {
  readonly section: string;
  readonly paths: readonly string[];
  /** Lines below the section's key. */
  readonly lines: readonly string[];
}

/** More files than this are named by a pattern. */
const MOST_NAMED = 6;

/** Tables of records that are written alike become one entry; every other table stands for itself. */
export function groupTables(looks: readonly TableLook[], all: readonly string[]): readonly Group[] {
  const alike = new Map<string, TableLook[]>();
  for (const look of looks) {
    const records = look.kind === "records" || look.kind === "wide records";
    const key = records ? recordsKey(look) : look.path;
    alike.set(key, [...(alike.get(key) ?? []), look]);
  }
  return [...alike.values()].map((members): Group => {
    const [section, ...lines] = members[0].stanza.trimEnd().split("\n");
    const paths = members.map((one) => one.path);
    return {
      section: section.replace(":", ""),
      paths,
      lines: paths.length === 1 ? lines : lines.flatMap((line) => sharedLine(line, members, paths, all)),
    };
  });
}

/** The stanza and the folder, but not what differs from file to file. */
function recordsKey({ path, stanza }: TableLook): string {
  const rest = stanza.split("\n").filter((line) => !/^( {2}- files:| {4}missing:)/.test(line));
  const own = rest.map((line) => (line.startsWith("    station: { always:") ? "always" : line));
  return [path.slice(0, path.lastIndexOf("/") + 1), ...own].join("\n");
}

function sharedLine(
  line: string,
  members: readonly TableLook[],
  paths: readonly string[],
  all: readonly string[],
): string[] {
  if (line.startsWith("  - files:"))
    return [`  - files: [${filesText(paths, all)}]`, ...missingLines(members)];
  if (line.startsWith("    missing:")) return [];
  if (line.startsWith("    station: { always:")) return [`    station: ${stationText(paths.map(stem))}`];
  return [line];
}

/** What any of the files seems to use for a missing value. */
function missingLines(members: readonly TableLook[]): string[] {
  const items = members.flatMap(
    ({ stanza }) => /^ {4}missing: \[(.*)\]/m.exec(stanza)?.[1].split(", ") ?? [],
  );
  const each = [...new Set(items)].sort();
  return each.length === 0 ? [] : [`    missing: [${each.join(", ")}]  # suspected: check them`];
}

/** The files by name, or by a pattern where they are many and the pattern hits no others. */
function filesText(paths: readonly string[], all: readonly string[]): string {
  const [before, after] = around(paths);
  const hits = all.filter((path) => {
    const inner = path.slice(before.length, path.length - after.length);
    return path.startsWith(before) && path.endsWith(after) && !inner.includes("/");
  });
  const plain = !/[[\]{}()!*?]/.test(before + after);
  if (paths.length > MOST_NAMED && plain && hits.length === paths.length)
    return JSON.stringify(`${before}*${after}`);
  return paths.map(yamlText).join(", ");
}

/** One file per station tells the station by its name; one per year is a single station's. */
function stationText(stems: readonly string[]): string {
  const [before, after] = around(stems);
  const inner = stems.map((one) => one.slice(before.length, one.length - after.length));
  // Years share their first digits, which therefore stand in `before`.
  const years = stems.every(
    (one) => /(?<!\d)(19|20)\d{2}(?!\d)/.test(one) && inner.every((part) => /^\d+$/.test(part)),
  );
  if (years) {
    const rest = before.replace(/[^A-Za-z]*\d*$/, "") || "station";
    return `{ always: ${yamlText(rest)} }  # one file per year, and no column of stations: write its id`;
  }
  const pattern = inner.every((part) => part !== "") ? `${before}{id}${after}` : "{id}";
  return `{ name: ${JSON.stringify(pattern)} }  # one file per station`;
}

/** What all texts begin and end with. */
function around(texts: readonly string[]): readonly [string, string] {
  const [first] = texts;
  let before = first.length;
  for (const text of texts) while (!text.startsWith(first.slice(0, before))) before--;
  let after = Math.min(...texts.map((text) => text.length)) - before;
  for (const text of texts) while (after > 0 && !text.endsWith(first.slice(first.length - after))) after--;
  return [first.slice(0, before), after > 0 ? first.slice(first.length - after) : ""];
}
