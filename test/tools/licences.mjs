// The licences of all packages that a user of covey installs: npm run licences. From the lock file and the packages themselves.
import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("../../", import.meta.url));

/** Every package that is not for development only: name, version and licence as its own package file states it. */
export function licences() {
  const { packages } = JSON.parse(readFileSync(`${root}package-lock.json`, "utf8"));
  return Object.entries(packages)
    .filter(([path, one]) => path !== "" && one.dev !== true)
    .map(([path, one]) => {
      const name = path.replace(/^.*node_modules\//, "");
      return {
        name,
        version: one.version,
        licence: stated(path) ?? one.license ?? "none stated",
        optional: one.optional === true,
      };
    })
    .sort((a, b) => (a.name < b.name ? -1 : a.name > b.name ? 1 : a.version < b.version ? -1 : 1));
}

function stated(path) {
  try {
    const { license, licenses } = JSON.parse(readFileSync(`${root}${path}/package.json`, "utf8"));
    if (typeof license === "string") return license;
    return license?.type ?? licenses?.map((one) => one.type).join(" OR ");
  } catch {
    // A binary of another platform is in the lock file but not on this machine.
    return undefined;
  }
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const all = licences();
  for (const { name, version, licence } of all) console.log(`${licence.padEnd(28)} ${name} ${version}`);
  const counts = {};
  for (const { licence } of all) counts[licence] = (counts[licence] ?? 0) + 1;
  const words = Object.entries(counts).map(([licence, n]) => `${licence} ${n}`);
  console.log(`\n${all.length} packages: ${words.join(", ")}`);
}
