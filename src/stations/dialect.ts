import iconv from "iconv-lite";
import { InputError } from "../errors.ts";
import type { TableOptions } from "./options.ts";

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
  /** What lines of comment begin with, if there are such lines below the header. */
  readonly comment: string | undefined;
}

const DELIMITERS = [",", ";", "\t", "|"] as const;
/** Cells parted by any number of blanks. */
export const BLANKS = " ";
const NAMED = { comma: ",", semicolon: ";", tab: "\t", bar: "|", blanks: BLANKS } as const;
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

/** The cells of one line; quotes as in RFC 4180, blanks around cells taken off. Blanks as delimiter know no quotes. */
export function splitLine(line: string, delimiter: string): string[] {
  if (delimiter === BLANKS) return line.trim().split(/\s+/);
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
 * Everything that `table` says stands instead of the guess.
 * Throws `stations.empty-file`, `stations.not-text`, `stations.column-missing` and `stations.repeated-column`.
 */
export function sniffDialect(
  head: Uint8Array,
  cut: boolean,
  file: string,
  wanted: readonly string[],
  dateColumn: string | undefined,
  table: TableOptions = {},
): Dialect {
  const { encoding, bom } = encodingOf(head, cut);
  const used = table.encoding ?? encoding;
  const text = decodeText(head, used).replace(/^\uFEFF/, "");
  if (text.includes("\0")) throw notText(file);
  const lines = text.split(/\r\n|\n|\r/);
  if (cut && lines.length > 1) lines.pop();
  if (lines.every((line) => line.trim() === "")) throw emptyFile(file);
  const delimiters = table.delimiter === undefined ? undefined : [NAMED[table.delimiter]];
  const { delimiter, at } = placeOfHeader(lines, wanted, delimiters, table.headerRow);
  const rows = table.headerRows ?? 1;
  const split = lines.slice(at, at + rows).map((line) => splitLine(line, delimiter));
  const header = joinedHeader(split);
  const last = at + rows - 1;
  for (const name of wanted) checkColumn(header, name, file, last + 1);
  const below = unitsRow(lines, last, delimiter, header, dateColumn, table.unitsRow);
  const comment = commentMark(lines.slice(below.skip), table.comment);
  const data = lines
    .slice(below.skip)
    .filter((line) => comment === undefined || !line.trimStart().startsWith(comment));
  const decimal = decimalMark(data, delimiter, header.indexOf(dateColumn ?? ""));
  return {
    encoding: used,
    bom: bom && used === encoding,
    delimiter,
    decimal: table.decimal === undefined ? decimal : table.decimal === "comma" ? "," : ".",
    headerLine: last + 1,
    header,
    comment,
    ...below,
  };
}

function placeOfHeader(
  lines: readonly string[],
  wanted: readonly string[],
  delimiters: readonly string[] | undefined,
  row: number | undefined,
): { readonly delimiter: string; readonly at: number } {
  if (row !== undefined) {
    const at = Math.min(row, lines.length) - 1;
    return { delimiter: delimiters?.[0] ?? headerByShape(lines.slice(at), DELIMITERS).delimiter, at };
  }
  const named = (marks: readonly string[]) =>
    wanted.length === 0 ? undefined : headerByNames(lines, wanted, marks);
  if (delimiters !== undefined) return named(delimiters) ?? headerByShape(lines, delimiters);
  // Blanks come last: sentences above the header may hold all the names.
  return named(DELIMITERS) ?? named([BLANKS]) ?? headerByShape(lines, DELIMITERS);
}

/** Several header rows as one: merged cells above stand for the empty ones to their right. */
export function joinedHeader(rows: readonly (readonly string[])[]): readonly string[] {
  if (rows.length === 1) return rows[0];
  const width = Math.max(...rows.map((row) => row.length));
  const above = rows.slice(0, -1).map((row) => {
    let last = "";
    return Array.from({ length: width }, (_, i) => {
      last = (row[i] ?? "") === "" ? last : row[i];
      return last;
    });
  });
  const below = rows[rows.length - 1];
  return Array.from({ length: width }, (_, i) =>
    [...above.map((row) => row[i]), below[i] ?? ""].filter((part) => part !== "").join(" "),
  );
}

/** `#` where lines below the header begin with it. */
function commentMark(lines: readonly string[], said: string | undefined): string | undefined {
  if (said !== undefined) return said === "none" ? undefined : said;
  return lines.some((line) => line.startsWith("#")) ? "#" : undefined;
}

function headerByNames(lines: readonly string[], wanted: readonly string[], delimiters: readonly string[]) {
  for (const [at, line] of lines.slice(0, 500).entries())
    for (const delimiter of delimiters) {
      const cells = splitLine(line, delimiter);
      if (wanted.every((name) => cells.includes(name))) return { delimiter, at };
    }
  return undefined;
}

function headerByShape(
  lines: readonly string[],
  delimiters: readonly string[],
): { delimiter: string; at: number } {
  const sample = lines.slice(0, 500);
  let best = { delimiter: delimiters[0], at: sample.findIndex((line) => line.trim() !== ""), score: 0 };
  // Blanks part the words of every sentence: they are tried only where nothing else parts the lines.
  for (const delimiter of [...delimiters, BLANKS]) {
    if (delimiter === BLANKS && best.score > 0) break;
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
  said: boolean | undefined,
): { skip: number; units: readonly string[] | undefined } {
  const index = dateColumn === undefined ? -1 : header.indexOf(dateColumn);
  const written = at + 1 < lines.length ? splitLine(lines[at + 1], delimiter) : [];
  // Parted by blanks the units of the last columns stand alone: those of the date are left out.
  const short = delimiter === BLANKS && written.every((cell) => !/\d/.test(cell)) ? header.length : 0;
  const cells = [...Array<string>(Math.max(0, short - written.length)).fill(""), ...written];
  if (said === false) return { skip: at + 1, units: undefined };
  if (said === true) return { skip: at + 2, units: header.map((_, i) => cells[i] ?? "") };
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

function notText(file: string): InputError {
  return new InputError({
    name: "stations.not-text",
    expected: "a table of text",
    found: "bytes that no text has",
    where: { file },
    remedy: "name tables only; `look` tells what a file holds",
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
