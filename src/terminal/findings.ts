import type { Finding, Severity } from "../data/finding.ts";
import { placeText } from "../errors.ts";
import { cut, fill, pad, plain, type Style } from "./style.ts";

const ORDER: readonly Severity[] = ["stop", "warn", "accept"];

export interface FindingLinesOptions {
  readonly style: Style;
  /** Lines at most, the head included. */
  readonly lines?: number;
  readonly width?: number;
  /** Where every finding stands whole: the end of the head, e.g. `tables/findings.csv`. */
  readonly whole?: string;
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
  const { style, lines = 12, width = 80, whole } = options;
  if (findings.length === 0) return ["findings: none"];
  const count = (severity: Severity) => findings.filter((one) => one.severity === severity).length;
  const counts = ORDER.map((severity) => [severity, count(severity)] as const).filter(([, n]) => n > 0);
  const tallies = counts.map(([severity, n]) => `${n} ${WORDS[severity]}`).join(", ");
  const head = `findings: ${tallies}${whole === undefined ? "" : `; all of them: ${whole}`}`;
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
  const example = oneLine(group.findings[0]);
  const lead = `${pad(group.kind, kindWidth)}  ${tally(group).padStart(numberWidth)}  `;
  return `${mark(group.severity, style)}  ${lead}${cut(example, width - 6 - lead.length)}`;
}

function mark(severity: Severity, style: Style): string {
  if (severity === "accept") return style.good("accept");
  return severity === "stop" ? style.alarm("stop") : style.caution("warn");
}

/**
 * Every finding whole, broken into lines of at most `width` columns: by severity (stops first, accepted ones last) and
 * kind, each with its place and its message; what to do follows, once where it is the same for several in a row.
 */
export function wholeFindingLines(findings: readonly Finding[], style: Style, width = 80): string[] {
  const filled = (text: string) =>
    fill(text, width - 8).map((line, i) => `${i === 0 ? "      " : "        "}${line}`);
  return groupsOf(findings).flatMap((group) => [
    `${mark(group.severity, style)}  ${style.strong(group.kind)}  ${tally(group)}`,
    ...group.findings.flatMap((one, i) => [
      ...filled(oneLine(one)),
      // the same advice for a whole kind is said once
      ...(one.remedy === "" || one.remedy === group.findings[i + 1]?.remedy
        ? []
        : filled(plain(`what to do: ${one.remedy}`)).map((line) => style.faint(line))),
    ]),
  ]);
}

function oneLine({ where, message }: Finding): string {
  const place = placeText(where);
  return plain(`${place === "" ? "" : `${place}: `}${message}`);
}
