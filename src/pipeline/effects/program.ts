import { createHash } from "node:crypto";
import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { fileURLToPath } from "node:url";

/**
 * The SHA-256 of this program: its own code and its package file, which pins every library to one version, and the
 * version of Node. A kept result of another program is never taken for one of this.
 */
export function programDigest(): string {
  const top = fileURLToPath(new URL("../../", import.meta.url));
  const sum = createHash("sha256").update(process.version);
  const code = readdirSync(top, { recursive: true, encoding: "utf8" }).filter((name) =>
    /\.(js|ts)$/.test(name),
  );
  for (const name of code.map((one) => one.replaceAll("\\", "/")).sort())
    if (!name.endsWith(".d.ts")) sum.update(`\n${name}\n`).update(readFileSync(join(top, name)));
  return sum.update(readFileSync(join(top, "../package.json"))).digest("hex");
}
