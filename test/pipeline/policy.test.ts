import { describe, expect, test } from "vitest";
import { FINDING_KINDS, type RawFinding } from "../../src/data/finding.ts";
import { judge, stopIfAsked } from "../../src/pipeline/policy.ts";
import type { Spec } from "../../src/spec/spec.ts";

const warn = Object.fromEntries(
  FINDING_KINDS.map((kind) => [kind, { do: "warn", except: [] }]),
) as unknown as Spec["findings"];
const gap: RawFinding = {
  kind: "gap",
  subject: "rain at Ash",
  message: "lacks 3 days",
  where: { file: "stations/ash.csv", line: 12 },
  remedy: "fill it",
};

describe("findings and the pipeline's policy", () => {
  test("a kind has the severity the file says, an exception for its file or subject comes first", () => {
    const policy: Spec["findings"] = {
      ...warn,
      gap: {
        do: "stop",
        except: [
          { file: "stations/ash.csv", do: "accept", note: "known" },
          { subject: "rain at Beck", do: "warn", note: "known too" },
        ],
      },
    };
    const severities = judge(
      [
        gap,
        { ...gap, subject: "rain at Beck", where: { file: "other.csv" } },
        { ...gap, where: { file: "other.csv" } },
      ],
      policy,
    ).map((one) => one.severity);
    expect(severities).toEqual(["accept", "warn", "stop"]);
  });

  test("the first stop is told with its place and the number of others; warnings stop nothing", () => {
    const stop = { ...gap, severity: "stop" as const };
    expect(() => stopIfAsked([{ ...gap, severity: "warn" }])).not.toThrow();
    expect(() => stopIfAsked([stop, stop, stop])).toThrow(
      'stations/ash.csv:12: expected no finding of kind "gap", found rain at Ash: lacks 3 days (and 2 more that stop the run); fill it; or say findings: { gap: warn }, or add an exception with a note',
    );
  });
});
