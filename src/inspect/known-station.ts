import { parse } from "yaml";
import type { Files } from "../effects/effects.ts";
import { CoveyError } from "../errors.ts";
import type { StationListOptions } from "../stations/options.ts";
import { readStationList } from "../stations/station-list.ts";
import { yamlText } from "./stanza.ts";
import type { Group } from "./start-groups.ts";

interface Known {
  readonly id: string;
  readonly name: string;
}

/** Ids and names of the recognised list of stations; none without a list that can be read. */
export async function stationsOf(groups: readonly Group[], files: Files): Promise<readonly Known[]> {
  const list = groups.find(({ section }) => section === "stations");
  if (list === undefined) return [];
  // The text is a stanza of this room, whose keys are those of the options.
  const { stations } = parse(["stations:", ...list.lines].join("\n")) as { stations: StationListOptions };
  if (stations.id === undefined) return [];
  try {
    return (await readStationList(stations, files)).sites;
  } catch (error) {
    if (error instanceof CoveyError) return [];
    throw error;
  }
}

/** Records whose station is told by the file alone get the id from the list that the file's name holds, or say that none does. */
export function withKnownStations(groups: readonly Group[], known: readonly Known[]): readonly Group[] {
  if (known.length === 0) return groups;
  return groups.map((group) =>
    group.section !== "records"
      ? group
      : { ...group, lines: group.lines.map((line) => knownLine(line, group.paths, known)) },
  );
}

function knownLine(line: string, paths: readonly string[], known: readonly Known[]): string {
  const always = /^ {4}station: \{ always: ("(?:[^"\\]|\\.)*"|[^}]*?) \}/.exec(line);
  if (always !== null) {
    const found = inName(paths[0], known);
    return found === undefined
      ? `    station: { always: ${always[1]} }  # no station of the list in the file's name: write its id`
      : `    station: { always: ${yamlText(found.id)} }  # ${JSON.stringify(found.name)} of the list, by the file's name`;
  }
  const pattern = /^ {4}station: \{ name: "(.*)" \}/.exec(line);
  if (pattern === null) return line;
  const [before, after] = pattern[1].split("{id}");
  const ids = paths.map((path) => {
    const base = path.slice(path.lastIndexOf("/") + 1).replace(/(\.[A-Za-z]+)+$/, "");
    return base.slice(before.length, base.length - after.length);
  });
  const strange = ids.filter((id) => !known.some((one) => one.id === id));
  if (strange.length === 0) return `${line}, all of them in the list`;
  return `${line}; not in the list of stations: ${strange.slice(0, 6).join(", ")}${strange.length > 6 ? " and more" : ""}`;
}

/** The station whose id or name stands in a file's name, the longest if several do. */
function inName(path: string, known: readonly Known[]): Known | undefined {
  const plain = (text: string) =>
    ` ${text
      .toLowerCase()
      .replace(/[^\p{L}\p{N}]+/gu, " ")
      .trim()} `;
  const base = plain(path.slice(path.lastIndexOf("/") + 1).replace(/(\.[A-Za-z]+)+$/, ""));
  const held = known.filter(({ id, name }) => [id, name].some((one) => base.includes(plain(one))));
  return [...held].sort((a, b) => b.id.length + b.name.length - a.id.length - a.name.length)[0];
}
