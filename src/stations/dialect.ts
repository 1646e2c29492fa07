import iconv from "iconv-lite";
import { InputError } from "../errors.ts";

export type Encoding = "utf-8" | "utf-16le" | "utf-16be" | "windows-1252";

/** How a text table is written, told from its first lines. */
export interface Dialect {
  readonly encoding: Encoding;
  readonly bom: boolean;
  readonly delimiter: string;
  readonly decimal: "." | ",";
  /** Physical line of the header, 1-based; lines above it are remarks. */
  readonly headerLine: number;
  readonly header: readonly string[];
  /** Lines to pass over before the first row of data: remarks, header, a row of units. */
  readonly skip: number;
  /** The cells of a row of units beneath the header, if there is one. */
  readonly units: readonly string[] | undefined;
}

const DELIMITERS = [",", ";", "\t", "|"] as const;
const NUMBER = /^[-+]?(\d+([.,]\d*)?|[.,]\d+)([eE][-+]?\d+)?$/;

/**
 * The encoding by byte-order mark, else UTF-8 where the bytes are valid UTF-8, else Windows-1252 (of which Latin-1's
 * printable characters are a part). `cut`: the bytes are only the head of a file, so a last character may be incomplete.
 */
export function encodingOf(bytes: Uint8Array, cut: boolean): { encoding: Encoding; bom: boolean } {
  if (bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf) return { encoding: "utf-8", bom: true };
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return { encoding: "utf-16le", bom: true };
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return { encoding: "utf-16be", bom: true };
  const end = cut ? Math.max(0, bytes.length - 4) : bytes.length;
  try {
    // `stream` forgives the cut-off last character only.
    new TextDecoder("utf-8", { fatal: true }).decode(bytes.subarray(0, end), { stream: cut });
    return { encoding: "utf-8", bom: false };
  } catch {
    return { encoding: "windows-1252", bom: false };
  }
}

export function decodeText(bytes: Uint8Array, encoding: Encoding): string {
  return iconv.decode(bytes, encoding);
}

/** The cells of one line; quotes as in RFC 4180, blanks around cells taken off. */
export function splitLine(line: string, delimiter: string): string[] {
  const cells: string[] = [];
  let [cell, quoted] = ["", false];
  for (let i = 0; i < line.length; i++) {
    const mark = line[i];
    if (quoted) {
      if (mark !== '"') cell += mark;
      else if (line[i + 1] === '"') {
        cell += '"';
        i++;
      } else quoted = false;
    } else if (mark === '"' && cell.trim() === "") {
      quoted = true;
      cell = "";
    } else if (mark === delimiter) {
      cells.push(cell.trim());
      cell = "";
    } else cell += mark;
  }
  cells.push(cell.trim());
  return cells;
}

/**
 * Tells the dialect from a file's head. The header is the first line that holds all `wanted` columns; without any, the
 * first line with as many cells as most lines have. `dateColumn` serves to know a row of units (no digit in its date).
 * Throws `stations.empty-file`, `stations.column-missing` and `stations.repeated-column`.
 */
export function sniffDialect(
  head: Uint8Array,
  cut: boolean,
  file: string,
  wanted: readonly string[],
  dateColumn: string | undefined,
): Dialect {
  const { encoding, bom } = encodingOf(head, cut);
  const text = decodeText(head, encoding).replace(/^\uFEFF/, "");
  const lines = text.split(/\r\n|\n|\r/);
  if (cut && lines.length > 1) lines.pop();
  if (lines.every((line) => line.trim() === "")) throw emptyFile(file);
  const found = wanted.length > 0 ? headerByNames(lines, wanted) : headerByShape(lines);
  const { delimiter, at } = found ?? headerByShape(lines);
  const header = splitLine(lines[at], delimiter);
  for (const name of wanted) checkColumn(header, name, file, at + 1);
  const below = unitsRow(lines, at, delimiter, header, dateColumn);
  return {
    encoding,
    bom,
    delimiter,
    decimal: decimalMark(lines.slice(below.skip), delimiter, header.indexOf(dateColumn ?? "")),
    headerLine: at + 1,
    header,
    ...below,
  };
}

function headerByNames(lines: readonly string[], wanted: readonly string[]) {
  for (const [at, line] of lines.slice(0, 500).entries())
    for (const delimiter of DELIMITERS) {
      const cells = splitLine(line, delimiter);
      if (wanted.every((name) => cells.includes(name))) return { delimiter, at };
    }
  return undefined;
}

function headerByShape(lines: readonly string[]): { delimiter: string; at: number } {
  const sample = lines.slice(0, 500);
  let best = { delimiter: ",", at: sample.findIndex((line) => line.trim() !== ""), score: 0 };
  for (const delimiter of DELIMITERS) {
    const widths = sample.map((line) => (line.trim() === "" ? 0 : splitLine(line, delimiter).length));
    const tally = new Map<number, number>();
    for (const width of widths) if (width > 1) tally.set(width, (tally.get(width) ?? 0) + 1);
    // Most lines win; among equals the wider table (a decimal comma can split every cell of a semicolon table in two,
    // but then not every line has the same number of cells).
    for (const [width, count] of tally) {
      const score = count + width / 1000;
      if (score > best.score) best = { delimiter, at: widths.indexOf(width), score };
    }
  }
  return best;
}

function unitsRow(
  lines: readonly string[],
  at: number,
  delimiter: string,
  header: readonly string[],
  dateColumn: string | undefined,
): { skip: number; units: readonly string[] | undefined } {
  const index = dateColumn === undefined ? -1 : header.indexOf(dateColumn);
  const cells = at + 1 < lines.length ? splitLine(lines[at + 1], delimiter) : [];
  const isUnits =
    cells.length === header.length &&
    cells.some((cell) => cell !== "") &&
    (index < 0 ? cells.every((cell) => !/^[-+]?\d/.test(cell)) : !/\d/.test(cells[index])) &&
    cells.every((cell) => !NUMBER.test(cell) || cell === "1");
  // A row of words only is a row of units only if a row with figures follows it.
  const next = at + 2 < lines.length ? splitLine(lines[at + 2], delimiter) : [];
  return isUnits && next.some((cell) => /\d/.test(cell))
    ? { skip: at + 2, units: cells }
    : { skip: at + 1, units: undefined };
}

/**
 * Comma where more cells read `2,5` than `2.5` (dates apart: `2001.05` is none); `1,234` alone is thousands in a
 * comma-separated table.
 */
function decimalMark(lines: readonly string[], delimiter: string, dateIndex: number): "." | "," {
  let [points, commas, thousands] = [0, 0, 0];
  for (const line of lines)
    for (const [i, cell] of splitLine(line, delimiter).entries()) {
      if (i === dateIndex) continue;
      if (/^[-+]?\d*\.\d+$/.test(cell)) points++;
      else if (/^[-+]?\d{1,3}(,\d{3})+$/.test(cell)) thousands++;
      else if (/^[-+]?\d*,\d+$/.test(cell)) commas++;
    }
  if (points + commas > 0) return commas > points ? "," : ".";
  return thousands > 0 && delimiter !== "," ? "," : ".";
}

/** Throws `stations.column-missing` or `stations.repeated-column`. */
export function checkColumn(header: readonly string[], name: string, file: string, line: number): void {
  const first = header.indexOf(name);
  if (first < 0)
    throw new InputError({
      name: "stations.column-missing",
      expected: `a column named ${JSON.stringify(name)}`,
      found: `the columns ${header.map((one) => JSON.stringify(one)).join(", ")}`,
      where: { file, line },
      remedy: "name a column that is there; `look` shows what the file holds",
    });
  const second = header.indexOf(name, first + 1);
  if (second >= 0)
    throw new InputError({
      name: "stations.repeated-column",
      expected: `the column ${JSON.stringify(name)} once`,
      found: `it twice, as columns ${first + 1} and ${second + 1}`,
      where: { file, line, column: second + 1 },
      remedy: "rename one of the two in the file",
    });
}

function emptyFile(file: string): InputError {
  return new InputError({
    name: "stations.empty-file",
    expected: "a header row and rows of data",
    found: "an empty file",
    where: { file, line: 1 },
    remedy: "remove the file from `files:` or put its content back",
  });
}
