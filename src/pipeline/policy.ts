import type { Finding, RawFinding } from "../data/finding.ts";
import { InputError } from "../errors.ts";
import type { Spec } from "../spec/spec.ts";

/** Gives findings the severity that the pipeline file says, exceptions (file or subject) first. */
export function judge(findings: readonly RawFinding[], policy: Spec["findings"]): Finding[] {
  return findings.map((one) => {
    const rule = policy[one.kind];
    const exception = rule.except.find(
      ({ file, subject }) =>
        (file === undefined || file === one.where?.file) &&
        (subject === undefined || subject === one.subject),
    );
    return { ...one, severity: exception?.do ?? rule.do };
  });
}

/** Throws `findings.stop` if any finding stops the run, with the first one's place and how many others there are. */
export function stopIfAsked(findings: readonly Finding[]): void {
  const stops = findings.filter((one) => one.severity === "stop");
  if (stops.length === 0) return;
  const [first] = stops;
  const more = stops.length > 1 ? ` (and ${stops.length - 1} more that stop the run)` : "";
  throw new InputError({
    name: "findings.stop",
    expected: `no finding of kind "${first.kind}"`,
    found: `${first.subject}: ${first.message}${more}`,
    ...(first.where === undefined ? {} : { where: first.where }),
    remedy: `${first.remedy}; or say findings: { ${first.kind}: warn }, or add an exception with a note`,
  });
}
