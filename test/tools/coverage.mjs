// Lines and branches of src/ that the suite reaches, by room: npm run coverage. One zone; only what runs within the tests' own
// process counts, so src/cli.ts and all that the tests of whole commands reach in processes of their own does not.
import { spawnSync } from "node:child_process";
import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("../../", import.meta.url));
const reporters = ["--coverage.reporter=json-summary", "--coverage.include=src/**/*.ts"];
const args = [
  "--no",
  "vitest",
  "run",
  "--reporter=dot",
  "--coverage",
  ...reporters,
  ...process.argv.slice(2),
];
const { status } = spawnSync("npx", args, {
  cwd: root,
  stdio: "inherit",
  env: { ...process.env, TZ: "UTC" },
});

const { total, ...files } = JSON.parse(readFileSync(`${root}coverage/coverage-summary.json`, "utf8"));
const rooms = new Map();
for (const [file, { lines, branches }] of Object.entries(files)) {
  const below = file.slice(file.indexOf("/src/") + 5);
  const room = below.includes("/") ? `${below.slice(0, below.indexOf("/"))}/` : below;
  const sum = rooms.get(room) ?? { lines: { total: 0, covered: 0 }, branches: { total: 0, covered: 0 } };
  for (const [kind, one] of [
    ["lines", lines],
    ["branches", branches],
  ]) {
    sum[kind].total += one.total;
    sum[kind].covered += one.covered;
  }
  rooms.set(room, sum);
}
const share = ({ covered, total }) => (total === 0 ? "–" : `${((100 * covered) / total).toFixed(1)} %`);
const row = (name, { lines, branches }) =>
  `| ${name} | ${lines.total} | ${share(lines)} | ${share(branches)} |`;
console.log("\n| room | lines | reached | branches reached |\n|---|---|---|---|");
for (const name of [...rooms.keys()].sort()) console.log(row(name, rooms.get(name)));
console.log(row("all", total));
process.exitCode = status ?? 1;
