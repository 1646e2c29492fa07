import { type CoveyError, placeText } from "../errors.ts";
import { fill, pad, plain, type Style } from "./style.ts";

const HEADS = { input: "input", machine: "machine", interrupted: "stopped" } as const;

/** An error as lines: its name, then what was expected, what was found, where, and what to do. */
export function errorLines(error: CoveyError, style: Style, width = 80): string[] {
  const { name, expected, found, where, remedy } = error.facts;
  const rows: readonly (readonly [string, string])[] = [
    ["where", placeText(where)],
    ["expected", expected],
    ["found", found],
    ["what to do", remedy],
  ];
  const label = Math.max(...rows.map(([text]) => text.length)) + 4;
  const body = rows
    .filter(([, text]) => text !== "")
    .flatMap(([head, text]) =>
      fill(plain(text), width - label).map(
        (line, i) => `${style.faint(pad(i === 0 ? `  ${head}` : "", label))}${line}`,
      ),
    );
  return [`${style.alarm(HEADS[error.tag])}  ${style.strong(plain(name))}`, ...body];
}
