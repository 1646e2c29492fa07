import { stemOf } from "../layers/dates.ts";

/** Ways dates stand in names, the longest first, and what an image so named most often covers. */
const SHAPES: readonly (readonly [RegExp, string, string])[] = [
  [/(?<!\d)(19|20)\d{2}([-_.]?)(0[1-9]|1[0-2])\2(0[1-9]|[12]\d|3[01])(?!\d)/, "{yyyy}$2{MM}$2{dd}", "day"],
  [/(?<!\d)(19|20)\d{2}([-_.]?)([0-2]\d{2}|3[0-5]\d|36[0-6])(?!\d)/, "{yyyy}$2{DDD}", "day"],
  [/(?<!\d)(19|20)\d{2}([-_.]?)(0[1-9]|1[0-2])(?!\d)/, "{yyyy}$2{MM}", "month"],
  [/(?<!\d)(19|20)\d{2}(?!\d)/, "{yyyy}", "year"],
];

/** The date pattern that a text seems to follow, and what it likely covers; undefined if it holds no date. */
export function guessPattern(
  text: string,
): { readonly pattern: string; readonly covers: string; readonly glob: string } | undefined {
  for (const [shape, replacement, covers] of SHAPES) {
    const match = shape.exec(text);
    if (match === null) continue;
    const [before, after] = [text.slice(0, match.index), text.slice(match.index + match[0].length)];
    return {
      pattern: before + match[0].replace(shape, replacement) + after,
      covers,
      glob: `${before}*${after}`,
    };
  }
  return undefined;
}

/**
 * YAML for `layers:` in a pipeline file; what had to be guessed is said in a comment. `spacing` is what the images beside this
 * one say of how long each counts, if they say anything.
 */
export function layerStanza(
  path: string,
  descriptions: readonly string[],
  unit: string,
  systemKnown: boolean,
  spacing?: { readonly text: string },
): string {
  const stem = stemOf(path);
  const folder = path.slice(0, path.lastIndexOf("/") + 1);
  const ending = path.slice(folder.length + stem.length);
  const inName = guessPattern(stem);
  const inBands = guessPattern(descriptions[0] ?? "");
  const name = stem.replace(/[^A-Za-z].*$/, "").toLowerCase() || "layer";
  const quote = (text: string) => JSON.stringify(text);
  const lines = [`layers:`, `  ${name}:`];
  if (inName !== undefined && descriptions.length === 1) {
    lines.push(
      `    files: [${quote(folder + inName.glob + ending)}]`,
      `    date: { name: ${quote(inName.pattern)} }`,
      spacing === undefined
        ? `    covers: ${inName.covers} # guessed from the name${inName.covers === "day" ? "; composites: 16 days anew each year" : ""}`
        : `    covers: ${spacing.text} # guessed from how the files follow each other`,
    );
  } else if (inBands !== undefined) {
    lines.push(
      `    files: [${quote(path)}]`,
      `    date: { band: ${quote(inBands.pattern)} }`,
      `    covers: ${inBands.covers} # guessed from the band's description`,
    );
  } else {
    lines.push(
      `    files: [${quote(path)}]`,
      `    date: { first: "2000-01", step: month } # neither name nor bands hold a date: write band 1's`,
      `    covers: month`,
    );
  }
  lines.push(
    unit === "" ? `    unit: "1" # the file does not say` : `    unit: ${quote(unit)}`,
    `    kind: mean # mean, total, minimum or maximum`,
  );
  if (!systemKnown) lines.push(`    system: EPSG:0000 # the file does not say; its provider's page does`);
  return `${lines.join("\n")}\n`;
}
