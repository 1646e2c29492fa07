import type { DuckDBConnection } from "@duckdb/node-api";
import { type Day, isoDay } from "../data/day.ts";
import { compileDateFormat, recogniseFormats } from "../stations/dates.ts";
import type { LoadedTable } from "../stations/loaded-table.ts";
import { numberSql } from "../stations/raw-columns.ts";
import { SENTINELS } from "../stations/suspect-values.ts";

/** What a column of a table holds, without a guess of what it is for. */
export interface ColumnFacts {
  readonly name: string;
  readonly type: "number" | "date" | "text" | "empty";
  /** Cells that are not empty. */
  readonly count: number;
  readonly empty: number;
  readonly distinct: number;
  /** Up to twelve distinct texts, sorted. */
  readonly examples: readonly string[];
  /** Of a number column, sentinels left out; NaN otherwise. */
  readonly least: number;
  readonly mean: number;
  readonly greatest: number;
  /** Of a date column: formats that fit every text (several if they cannot be told apart). */
  readonly formats: readonly string[];
  readonly first: Day;
  readonly last: Day;
  /** Whether all dates are firsts of months, or days 1, 11, 21, or some other days. */
  readonly spacing: "day" | "dekad" | "month" | "year" | undefined;
  /** Texts among numbers, and numbers that often stand for a missing value. */
  readonly suspicious: readonly { readonly text: string; readonly count: number }[];
}

/** More distinct texts than this are not looked at one by one. */
const MOST_TEXTS = 200_000;

/** Looks at every column of the table `raw`. */
export async function columnFacts(
  database: DuckDBConnection,
  table: LoadedTable,
): Promise<readonly ColumnFacts[]> {
  const facts: ColumnFacts[] = [];
  for (const [i, name] of table.dialect.header.entries())
    facts.push(await oneColumn(database, table, i, name));
  return facts;
}

async function oneColumn(
  database: DuckDBConnection,
  table: LoadedTable,
  index: number,
  name: string,
): Promise<ColumnFacts> {
  const source = `(SELECT c${index} AS t, ${numberSql(`c${index}`, table.dialect.decimal)} AS v FROM raw WHERE c${index} <> '')`;
  const marks = [...new Set(SENTINELS)].filter((one) => Math.abs(one) > 88 && one !== 99).join(", ");
  const real = `isfinite(v) AND v NOT IN (${marks})`;
  const rows = async (sql: string) => (await database.runAndReadAll(sql)).getRowsJson();
  const [[count, distinct, numbers, least, mean, greatest]] = (
    await rows(`SELECT count(*)::INTEGER, count(DISTINCT t)::INTEGER, (count(*) FILTER (isfinite(v)))::INTEGER,
      min(v) FILTER (${real}), avg(v) FILTER (${real}), max(v) FILTER (${real}) FROM ${source}`)
  ).map((row) => row.map((cell) => (cell === null ? Number.NaN : Number(cell))));
  const texts = (await rows(`SELECT DISTINCT t FROM ${source} ORDER BY t LIMIT ${MOST_TEXTS}`)).map(
    ([text]) => String(text),
  );
  const dates = dateFacts(texts, name);
  const type =
    count === 0 ? "empty" : dates !== undefined ? "date" : numbers >= 0.8 * count ? "number" : "text";
  const suspicious =
    type !== "number"
      ? []
      : (
          await rows(`SELECT t, count(*)::INTEGER AS n FROM ${source}
            WHERE NOT coalesce(isfinite(v), false) OR v IN (${marks}) GROUP BY t ORDER BY n DESC, t LIMIT 10`)
        ).map(([text, n]) => ({ text: String(text), count: Number(n) }));
  const numeric = type === "number";
  return {
    name,
    type,
    count,
    empty: table.rows - count,
    distinct,
    examples: texts.slice(0, 12),
    least: numeric ? least : Number.NaN,
    mean: numeric ? mean : Number.NaN,
    greatest: numeric ? greatest : Number.NaN,
    ...(dates ?? { formats: [], first: Number.NaN, last: Number.NaN, spacing: undefined }),
    suspicious,
  };
}

type DateFacts = Pick<ColumnFacts, "formats" | "first" | "last" | "spacing">;

function dateFacts(texts: readonly string[], name: string): DateFacts | undefined {
  if (texts.length === 0) return undefined;
  const step = Math.max(1, Math.floor(texts.length / 300));
  const sample = texts.filter((_, i) => i % step === 0);
  // A few odd texts must not hide that a column holds dates: most of the sample decides, and the reading tells of the rest.
  const likely = recogniseFormats(sample.filter((text) => /\d/.test(text) && text.length >= 4));
  const named = /date|day|month|year|time|datum|tag|jahr|monat/i.test(name);
  // Plain numbers are years or compact dates only where the name says so, or all eight digits make real dates.
  const formats = likely.filter((format) => /[^A-Za-z]/.test(format) || named || format === "yyyyMMdd");
  if (formats.length === 0) return undefined;
  const read = compileDateFormat(formats[0]);
  let [first, last, firsts, dekads] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY, true, true];
  for (const text of texts) {
    const day = read(text);
    if (Number.isNaN(day)) continue;
    first = Math.min(first, day);
    last = Math.max(last, day);
    const dom = isoDay(day).slice(-2);
    firsts &&= dom === "01";
    dekads &&= dom === "01" || dom === "11" || dom === "21";
  }
  const days = /d|D/.test(formats[0].replace(/'[^']*'/g, ""));
  const months = formats[0].includes("MM");
  const many = texts.length > 2;
  const spacing = !days
    ? months
      ? "month"
      : "year"
    : many && firsts
      ? "month"
      : many && dekads
        ? "dekad"
        : "day";
  return { formats, first, last, spacing };
}
