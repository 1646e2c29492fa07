import { spawnSync } from "node:child_process";
import { cpSync, mkdtempSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { afterAll, describe, expect, test } from "vitest";

// The README's own commands, typed in a folder that holds what it says is shipped.
const ROOT = fileURLToPath(new URL("..", import.meta.url));
const readme = readFileSync(join(ROOT, "README.md"), "utf8");
const folder = mkdtempSync(join(tmpdir(), "covey-readme-"));
for (const part of ["pipelines", "sample-data"])
  cpSync(join(ROOT, part), join(folder, part), { recursive: true });
afterAll(() => rmSync(folder, { recursive: true, force: true }));

const commands = [...readme.matchAll(/```sh\n([\s\S]*?)```/g)]
  .flatMap((block) => block[1].trim().split("\n"))
  .filter((line) => line.startsWith("npx --no covey "));

/** Words of a command line, double quotes kept together. */
const words = (line: string) => [...line.matchAll(/"([^"]*)"|(\S+)/g)].map((match) => match[1] ?? match[2]);

const said = new Map<string, string>();

describe("the README", () => {
  test("has commands for all three tasks", () => {
    expect(commands.length).toBeGreaterThanOrEqual(8);
  });

  test.each(commands)("%s", (line) => {
    const args = words(line).slice(3);
    const ended = spawnSync(process.execPath, [join(ROOT, "dist/cli.js"), ...args], {
      cwd: folder,
      encoding: "utf8",
    });
    said.set(line, ended.stdout);
    expect(ended.stderr).toBe("");
    expect(ended.status).toBe(0);
    expect(ended.stdout.length).toBeGreaterThan(20);
  });

  test("its example shows what the demo prints", () => {
    const block = /```text\n([\s\S]*?)```/.exec(readme)?.[1] ?? "";
    const [, printed] = [...said].find(([line]) => line.includes("run pipelines/roost.yaml")) ?? ["", ""];
    const steady = (text: string) => text.replace(/done in [\d.]+ s/, "done in N s").trim();
    expect(steady(printed)).toContain(steady(block));
  });
});
