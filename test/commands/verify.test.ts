import { createHash } from "node:crypto";
import { appendFileSync, mkdtempSync, readFileSync, rmSync, unlinkSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, test } from "vitest";
import { verifyCommand } from "../../src/commands/verify.ts";
import { InputError } from "../../src/errors.ts";
import { nodeDisk } from "../../src/pipeline/effects.ts";
import { openOutput } from "../../src/publish/folder.ts";
import { withRecord } from "../../src/publish/run-record.ts";
import { styleOf } from "../../src/terminal/style.ts";

const terminal = { style: styleOf(false) };
let base: string;
let folder: string;

beforeEach(() => {
  base = mkdtempSync(join(tmpdir(), "covey-verify-"));
  folder = join(base, "out");
  const text = new TextEncoder();
  const outputs = new Map([
    ["report.html", text.encode("<p>page</p>")],
    ["tables/covariates.csv", text.encode("interval,rain\n2001 to 2002,3\n")],
  ]);
  const output = openOutput(nodeDisk(), folder);
  output.publish(
    withRecord({ version: "0.1.0", nodeMajor: 20, seed: 1, pipeline: "covey: 1\n", inputs: [], outputs }),
  );
  output.close();
});

afterEach(() => rmSync(base, { recursive: true, force: true }));

const verify = (json = false) => verifyCommand(folder, { json }, terminal);

describe("verify", () => {
  test("a folder as the run left it", () => {
    const record = createHash("sha256")
      .update(readFileSync(join(folder, "run-record.json")))
      .digest("hex");
    const lines = ["2 recorded files, all as the run left them", `the record itself: sha256 ${record}`];
    expect(verify()).toEqual({ ok: true, lines });
    expect(JSON.parse(verify(true).lines[0])).toMatchObject({ ok: true, record });
  });

  test("a changed number, a lost file and a stranger are named", () => {
    const csv = join(folder, "tables/covariates.csv");
    writeFileSync(csv, readFileSync(csv, "utf8").replace(",3", ",4"));
    unlinkSync(join(folder, "report.html"));
    writeFileSync(join(folder, "notes.txt"), "mine");
    const { ok, lines } = verify();
    expect(ok).toBe(false);
    expect(lines[0]).toBe("2 recorded files; 1 changed, 1 missing, 1 not in the record");
    expect(lines[1]).toBe("  not in the record notes.txt");
    expect(lines[2]).toBe("  missing           report.html");
    expect(lines[3]).toMatch(
      /^ {2}changed {11}tables\/covariates\.csv: expected 29 bytes, sha256 \w{12}…, found 29 bytes/,
    );
    expect(JSON.parse(verify(true).lines[0])).toMatchObject({ ok: false, recorded: 2, recovery: "nothing" });
  });

  test("one appended byte is enough", () => {
    appendFileSync(join(folder, "report.html"), "\n");
    expect(verify().ok).toBe(false);
  });

  test("a folder without a record is the user's error", () => {
    unlinkSync(join(folder, "run-record.json"));
    expect(() => verify()).toThrow(InputError);
    expect(() => verify()).toThrow(/expected an output folder of covey with its run-record\.json/);
  });
});
