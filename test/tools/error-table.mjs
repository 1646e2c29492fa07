// The table of errors in ERRORS.md, made from the sources: `npm run errors` after an error was added or its wording changed.
import { readdirSync, readFileSync, writeFileSync } from "node:fs";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("../../", import.meta.url));
const ROOM = /^[a-z][a-z-]*\.[a-z][a-z-]*$/;
/** Strings of the same form that are no errors: worker tasks, files, keys of the pipeline file, fields of a figure. */
const NO_ERROR =
  /^(room|example|datum|date|captures|occasions|ready-made|visits|records|aux|tables)\.|\.(csv|tsv|json|html|yaml|geojson|xml|md|tif|nc|parquet|png|svg|ts|js|xlsx)$/;
const TASKS = [...readFileSync(`${root}src/workers/tasks.ts`, "utf8").matchAll(/"([a-z-]+\.[a-z-]+)"/g)].map(
  (m) => m[1],
);

/** Every error name in the sources, with the file it is raised in, its exit code and what it expects. */
export function errorNames() {
  const found = new Map();
  for (const file of readdirSync(`${root}src`, { recursive: true, encoding: "utf8" }).sort()) {
    if (!file.endsWith(".ts")) continue;
    const text = readFileSync(`${root}src/${file}`, "utf8");
    // Doc comments name errors too; only code raises them.
    const code = text.replace(/\/\*\*[\s\S]*?\*\//g, (comment) => " ".repeat(comment.length));
    for (const { 1: name, index } of code.matchAll(/"([a-z][a-z-]*\.[a-z][a-z-]*)"/g)) {
      if (!ROOM.test(name) || NO_ERROR.test(name) || TASKS.includes(name)) continue;
      const before = code.slice(Math.max(0, index - 60), index);
      const after = code.slice(index, index + 500);
      const isCell = /\bcell:\s*$/.test(before);
      if (isCell) continue;
      const next = after.slice(10).search(/\bname:/);
      const own = next < 0 ? after : after.slice(0, next + 10);
      const expected = /^[\s\S]*?expected:\s*(?:"((?:[^"\\]|\\.)*)"|`((?:[^`\\]|\\.)*)`)/.exec(own);
      const words = (expected?.[1] ?? expected?.[2] ?? "")
        .replaceAll(/\$\{[^}]*\}/g, "…")
        .replaceAll('\\"', '"')
        .replaceAll("\\`", "`");
      const exit =
        name === "run.interrupted"
          ? 130
          : /^machine\.|^files\.changed$|^publish\.lock-lost$/.test(name)
            ? 3
            : 2;
      const known = found.get(name);
      if (known === undefined) found.set(name, { name, exit, expected: words, files: [file] });
      else {
        if (!known.files.includes(file)) known.files.push(file);
        if (known.expected === "") known.expected = words;
      }
    }
  }
  return [...found.values()].sort((a, b) => (a.name < b.name ? -1 : 1));
}

/** The text of ERRORS.md. */
export function errorTable() {
  const rows = errorNames().map(
    ({ name, exit, expected, files }) =>
      `| \`${name}\` | ${exit} | ${expected.replaceAll("|", "\\|") || "(says which)"} | ${files.join(", ")} |`,
  );
  return `# Errors

Every error covey can end with, by its stable name: a program may rely on the name, the wording may get better. A message
says what was expected, what was found and where, and what to do. \`--json\` leaves errors as text on standard error. Made by
\`npm run errors\` from the sources; tests hold that it is complete and that every error is raised.

| name | exit code | expected | raised in src/ |
|---|---|---|---|
${rows.join("\n")}
`;
}

if (process.argv[1] === fileURLToPath(import.meta.url))
  writeFileSync(`${root}test/bad-input/ERRORS.md`, errorTable());
