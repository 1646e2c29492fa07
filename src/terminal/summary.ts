import { cut, fill, pad, plain, type Style } from "./style.ts";

/** A titled list of labels with their values. */
export interface SummarySection {
  readonly title: string;
  readonly rows: readonly (readonly [label: string, value: string])[];
}

export interface Summary {
  readonly title: string;
  readonly sections: readonly SummarySection[];
  /** Last lines that are always shown, e.g. where the page is. */
  readonly closing?: readonly string[];
}

/**
 * A summary that fits a terminal of `height` lines (24) and `width` columns (80). If it is too long, values are first cut
 * to one line, then rows are left out from the end of the longest section, with their number said; title, section
 * titles and closing lines stay.
 */
export function summaryLines(summary: Summary, style: Style, width = 80, height = 24): string[] {
  const sections = summary.sections.filter((one) => one.rows.length > 0);
  const label = Math.min(
    Math.floor(width / 3),
    Math.max(0, ...sections.flatMap((one) => one.rows.map(([text]) => plain(text).length))),
  );
  const full = sections.map((one) => one.rows.map((row) => rowLines(row, label, width, style)));
  const closing = (summary.closing ?? []).map((line) => plain(line));
  const room = height - 1 - sections.length - closing.length;
  const lines = full.flat(2).length <= room ? full : shorten(full, room, style);
  return [
    style.strong(cut(plain(summary.title), width)),
    ...sections.flatMap((one, i) => [style.strong(cut(plain(one.title), width)), ...lines[i].flat()]),
    // Not cut: a path that is cut cannot be opened.
    ...closing,
  ];
}

function rowLines([name, value]: readonly [string, string], label: number, width: number, style: Style) {
  const head = pad(cut(plain(name), label), label);
  return fill(plain(value), width - label - 4).map(
    (line, i) => `  ${style.faint(i === 0 ? head : " ".repeat(label))}  ${line}`,
  );
}

/** First one line a row (its cut end shown as `…`), then rows off the longest section until the room is kept. */
function shorten(full: readonly string[][][], room: number, style: Style): string[][][] {
  const single = full.map((rows) => rows.map((lines) => [lines.length > 1 ? `${lines[0]} …` : lines[0]]));
  const keep = single.map((rows) => rows.length);
  const taken = () => keep.reduce((sum, n, i) => sum + n + (n < single[i].length ? 1 : 0), 0);
  while (taken() > Math.max(room, 0) && keep.some((n) => n > 0)) {
    keep[keep.indexOf(Math.max(...keep))]--;
  }
  return single.map((rows, i) => {
    const left = rows.length - keep[i];
    return left === 0 ? rows : [...rows.slice(0, keep[i]), [style.faint(`  … and ${left} more`)]];
  });
}
