import { posix } from "node:path";
import type { KeyPath } from "./path.ts";
import type { Problem } from "./problems.ts";
import type { RawPipeline } from "./schema.ts";

/** Every place of the file that names an input. */
function inputPaths(raw: RawPipeline): (readonly [KeyPath, string])[] {
  const paths: (readonly [KeyPath, string | undefined])[] = [
    [["occasions", "file"], raw.occasions?.file],
    [["captures", "file"], raw.captures?.file],
    [["stations", "file"], raw.stations?.file],
  ];
  for (const [name, place] of Object.entries(raw.places))
    if ("file" in place) paths.push([["places", name, "file"], place.file]);
    else if ("fixes" in place) paths.push([["places", name, "fixes"], place.fixes]);
  raw.records.forEach(({ files }, i) => {
    files.forEach((file, j) => {
      paths.push([["records", i, "files", j], file]);
    });
  });
  for (const [name, { files, date, quality, network }] of Object.entries(raw.layers)) {
    files.forEach((file, j) => {
      if (network === "allow" && /^https?:\/\//i.test(file)) return;
      paths.push([["layers", name, "files", j], file]);
    });
    if ("table" in date) paths.push([["layers", name, "date", "table"], date.table]);
    quality?.files?.forEach((file, j) => {
      paths.push([["layers", name, "quality", "files", j], file]);
    });
  }
  for (const [name, { file }] of Object.entries(raw["ready-made"]))
    paths.push([["ready-made", name, "file"], file]);
  return paths.flatMap(([path, file]) => (file === undefined ? [] : [[path, file] as const]));
}

/** Why a path does not stay below the data folder, or undefined if it does. */
export function pathFault(path: string): string | undefined {
  if (/^[a-z][a-z\d+.-]*:\/\//i.test(path)) return "a remote address";
  if (/^(?:[\\/~]|[a-z]:)/i.test(path)) return "an absolute path";
  if (path.includes("\\")) return "a backslash";
  // Also inside braces, where file patterns list alternatives.
  if (path.split(/[/{},()|]/).includes("..")) return "a step out of the folder (..)";
  return undefined;
}

function folderProblems(raw: RawPipeline): Problem[] {
  const slashes = (path: string) => posix.normalize(`${path.replaceAll("\\", "/")}/`);
  const [data, output] = [slashes(raw.data), slashes(raw.output)];
  // The output folder is renamed as a whole at the end of a run: inputs inside it would go with it.
  const holds = output === "./" ? !/^(?:\.\.\/|\/)/.test(data) : data.startsWith(output);
  const above = /^(?:\.\.\/)+$/.test(output) && !data.startsWith(output + "../");
  if (!holds && !above) return [];
  return [
    {
      name: "spec.path",
      path: ["output"],
      expected: "a folder that does not hold the data",
      found: `output ${JSON.stringify(raw.output)} with data ${JSON.stringify(raw.data)}`,
      remedy: "give the results a folder of their own, e.g. output: ../out/roost",
    },
  ];
}

/** Inputs must stay below `data:`, and the output folder must not hold them. */
export function pathProblems(raw: RawPipeline): Problem[] {
  const inputs = inputPaths(raw).flatMap(([path, file]): Problem[] => {
    const fault = pathFault(file);
    return fault === undefined
      ? []
      : [
          {
            name: "spec.path",
            path,
            expected: "a path below `data`, with / between folders",
            found: `${fault}: ${JSON.stringify(file)}`,
            remedy:
              "write the path from the data folder, or move `data` up to a folder that holds all inputs",
          },
        ];
  });
  return [...inputs, ...folderProblems(raw)];
}
