import { execFileSync } from "node:child_process";
import { existsSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";

const ROOT = fileURLToPath(new URL("../..", import.meta.url));

/**
 * Makes sure that the named sources stand compiled in dist, as after a build; `npm test` builds first, so nothing
 * happens then. For running one test by itself.
 */
export function ensureBuilt(...sources: string[]): void {
  if (sources.every((one) => existsSync(builtFile(one)))) return;
  const folder = mkdtempSync(join(tmpdir(), "covey-build-"));
  const config = {
    extends: join(ROOT, "tsconfig.json"),
    compilerOptions: {
      noEmitOnError: false,
      rootDir: join(ROOT, "src"),
      outDir: join(ROOT, "dist"),
      typeRoots: [join(ROOT, "node_modules/@types")],
    },
    files: sources.map((one) => join(ROOT, "src", one)),
    include: [join(ROOT, "src/**/*.d.ts")],
  };
  writeFileSync(join(folder, "tsconfig.json"), JSON.stringify(config));
  try {
    execFileSync(process.execPath, [join(ROOT, "node_modules/typescript/bin/tsc"), "-p", folder], {
      stdio: "pipe",
    });
  } finally {
    rmSync(folder, { recursive: true });
  }
}

/** The compiled file of a source below src. */
export function builtFile(source: string): string {
  return join(ROOT, "dist", source.replace(/\.ts$/, ".js"));
}
