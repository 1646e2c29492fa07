import type { Finding, Severity } from "../data/finding.ts";
import { placeText } from "../errors.ts";
import { cut, pad, plain, type Style } from "./style.ts";

const ORDER: readonly Severity[] = ["stop", "warn", "accept"];

export interface FindingLinesOptions {
  readonly style: Style;
  /** Lines at most, the head included. */
  readonly lines?: number;
  readonly width?: number;
}

interface Group {
  readonly severity: Severity;
  readonly kind: string;
  readonly findings: readonly Finding[];
}

/**
 * Findings as few lines: a head with the counts by severity, then a line for each severity and kind, stops first, with
 * the number of findings, how many values they stand for, and the first one as an example. Accepted ones are only
 * counted in the head.
 */
export function findingLines(findings: readonly Finding[], options: FindingLinesOptions): string[] {
  const { style, lines = 12, width = 80 } = options;
  if (findings.length === 0) return ["findings: none"];
  const count = (severity: Severity) => findings.filter((one) => one.severity === severity).length;
  const counts = ORDER.map((severity) => [severity, count(severity)] as const).filter(([, n]) => n > 0);
  const head = `findings: ${counts.map(([severity, n]) => `${n} ${WORDS[severity]}`).join(", ")}`;
  const groups = groupsOf(findings.filter((one) => one.severity !== "accept"));
  const room = Math.max(0, lines - 1);
  const shown = groups.length <= room ? groups : groups.slice(0, Math.max(0, room - 1));
  const rest = groups.slice(shown.length);
  const kindWidth = Math.max(0, ...shown.map((one) => one.kind.length));
  const numberWidth = Math.max(0, ...shown.map((one) => tally(one).length));
  const body = shown.map((group) => groupLine(group, { style, width, kindWidth, numberWidth }));
  const left = rest.reduce((sum, one) => sum + one.findings.length, 0);
  if (rest.length > 0 && room > 0)
    body.push(
      cut(`  … ${left} more of ${rest.length} kinds: ${rest.map((one) => one.kind).join(", ")}`, width),
    );
  return [cut(head, width), ...body];
}

const WORDS: Readonly<Record<Severity, string>> = {
  stop: "that stop the run",
  warn: "to look at",
  accept: "accepted",
};

function groupsOf(findings: readonly Finding[]): Group[] {
  const groups = new Map<string, Finding[]>();
  for (const one of findings) {
    const key = `${ORDER.indexOf(one.severity)} ${one.kind}`;
    groups.set(key, [...(groups.get(key) ?? []), one]);
  }
  return [...groups]
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .map(([, held]) => ({ severity: held[0].severity, kind: held[0].kind, findings: held }));
}

/** `3`, or `3 (412)` where the three stand for 412 values. */
function tally(group: Group): string {
  const stands = group.findings.reduce((sum, one) => sum + (one.count ?? 1), 0);
  const n = group.findings.length;
  return stands === n ? `${n}` : `${n} (${stands})`;
}

interface Layout {
  readonly style: Style;
  readonly width: number;
  readonly kindWidth: number;
  readonly numberWidth: number;
}

function groupLine(group: Group, { style, width, kindWidth, numberWidth }: Layout): string {
  const [first] = group.findings;
  const where = placeText(first.where);
  const example = plain(`${where === "" ? "" : `${where}: `}${first.message}`);
  const lead = `${pad(group.kind, kindWidth)}  ${tally(group).padStart(numberWidth)}  `;
  const more = group.findings.length > 1 ? " …" : "";
  const space = width - 6 - lead.length - more.length;
  const mark = group.severity === "stop" ? style.alarm("stop") : style.caution("warn");
  return `${mark}  ${lead}${cut(example, space)}${more}`;
}
