import { describe, expect, test } from "vitest";
import { readCaptures } from "../../src/study/captures.ts";
import type { CaptureOptions } from "../../src/study/options.ts";
import { errorOf, inMemory, lines, yearly } from "./support.ts";

const DATED: CaptureOptions = {
  layout: "dated",
  file: "c.csv",
  animal: "ring",
  date: "date",
  format: "yyyy-MM-dd",
  strata: ["sex"],
};
const ZERO_ONE: CaptureOptions = { layout: "zero-one", file: "c.csv", animal: "ring", strata: ["sex"] };
const COUNTS: CaptureOptions = {
  layout: "counts",
  file: "c.csv",
  releasedAt: "at",
  released: "released",
  strata: [],
};

interface Case {
  readonly name: string;
  readonly options: CaptureOptions;
  readonly rows: readonly string[];
  readonly message: string;
  /** Number of dated occasions; none by default. */
  readonly occasions?: number;
}

const CASES: readonly Case[] = [
  {
    name: "study.no-captures",
    options: DATED,
    rows: ["ring,date,sex"],
    message:
      "c.csv: expected a header and at least one row of captures, found a header only; name the file that holds the captures",
  },
  {
    name: "study.occasions-needed",
    options: DATED,
    rows: ["ring,date,sex", "a,2001-07-20,f"],
    message:
      "c.csv (captures.layout): expected occasions with dates, since the captures are dated, found no occasions; add `occasions:` to the pipeline",
  },
  {
    name: "study.capture-date",
    options: DATED,
    occasions: 3,
    rows: ["ring,date,sex", "a,20.07.2001,f"],
    message:
      'c.csv:2:2 (date): expected a date written as yyyy-MM-dd, found "20.07.2001"; mend the date, or state how dates are written under captures.format',
  },
  {
    name: "study.animal-missing",
    options: DATED,
    occasions: 3,
    rows: ["ring,date,sex", ",2001-07-20,f"],
    message:
      "c.csv:2:1 (ring): expected the animal's mark, found an empty cell; write the mark, or take the row out if it is not known",
  },
  {
    name: "study.stratum-missing",
    options: DATED,
    occasions: 3,
    rows: ["ring,date,sex", "a,2001-07-20,"],
    message:
      "c.csv:2:3 (sex): expected a value of sex for each capture, found an empty cell; fill the cell, with a word such as `unknown` if need be, or leave the column out of captures.strata",
  },
  {
    name: "study.no-capture-within",
    options: DATED,
    occasions: 3,
    rows: ["ring,date,sex", "a,1901-07-20,f"],
    message:
      "c.csv: expected captures within the 3 occasions, found 1 capture, outside them; check the dates of the occasions and how dates are written (captures.format)",
  },
  {
    name: "study.not-zero-one",
    options: ZERO_ONE,
    rows: ["ring,sex,1,2", "a,f,1,2"],
    message:
      'c.csv:2:4 (2): expected 1 (caught) or 0 (not caught), found "2"; write 0 or 1; for an animal that was lost, use captures.lost',
  },
  {
    name: "study.never-caught",
    options: ZERO_ONE,
    rows: ["ring,sex,1,2", "a,f,0,0"],
    message:
      'c.csv:2:1 (ring): expected an animal caught at least once, found "a"; take the row out: an animal that was never caught tells nothing',
  },
  {
    name: "study.animal-repeated",
    options: ZERO_ONE,
    rows: ["ring,sex,1,2", "a,f,1,0", "a,f,0,1"],
    message:
      'c.csv:3:1 (ring): expected each animal in one row (see line 2), found "a"; join the two rows, or mend the mark',
  },
  {
    name: "study.animal-missing",
    options: ZERO_ONE,
    rows: ["ring,sex,1,2", ",f,1,0"],
    message: "c.csv:2:1 (ring): expected the animal's mark, found an empty cell; write the mark",
  },
  {
    name: "study.stratum-missing",
    options: ZERO_ONE,
    rows: ["ring,sex,1,2", "a,,1,0"],
    message:
      "c.csv:2:2 (sex): expected a value of sex for each animal, found an empty cell; fill the cell, with a word such as `unknown` if need be, or leave the column out of captures.strata",
  },
  {
    name: "study.not-a-count",
    options: { ...ZERO_ONE, number: "n" },
    rows: ["ring,n,sex,1,2", "a,-1,f,1,0"],
    message:
      'c.csv:2:2 (n): expected a whole number of animals, 0 or more, found "-1"; mend the cell; where there are none, write 0',
  },
  {
    name: "study.occasion-columns",
    options: { ...ZERO_ONE, columns: ["1"] },
    rows: ["ring,sex,1,2", "a,f,1,0"],
    message:
      "c.csv:1 (captures.columns): expected at least 2 occasion columns, found 1: 1; name one column for each occasion, in order of time",
  },
  {
    name: "study.lengths",
    options: { ...ZERO_ONE, lengths: [1, 0] },
    rows: ["ring,sex,1,2,3", "a,f,1,0,1"],
    message:
      "captures.lengths: expected 2 interval lengths in years, each above 0, found [1, 0]; give one length for each interval, or leave the key out for 1 year each",
  },
  {
    name: "table.column-missing",
    options: ZERO_ONE,
    occasions: 2,
    rows: ["ring,sex,2001,2003", "a,f,1,0"],
    message:
      'c.csv:1 (captures.columns): expected a column named "2002", found the columns "ring", "sex", "2001", "2003"; name one of the columns that are there',
  },
  {
    name: "study.occasion-columns",
    options: { ...COUNTS, columns: ["2002"] },
    occasions: 3,
    rows: ["at,released,2002,2003", "2001,5,1,1", "2002,5,,1"],
    message:
      "c.csv:1 (captures.columns): expected 2 columns, one for each occasion but the first, found 1: 2002; name one column for each occasion after the first, in order of time",
  },
  {
    name: "study.release-occasion",
    options: COUNTS,
    rows: ["at,released,2,3", "1,5,1,1", "3,5,,1"],
    message:
      'c.csv:3:1 (at): expected an occasion before the last: 1, 2, found "3"; mend the name; releases at the last occasion are left out',
  },
  {
    name: "study.release-repeated",
    options: COUNTS,
    rows: ["at,released,2,3", "1,5,1,1", "1,5,1,1"],
    message:
      'c.csv:3:1 (at): expected each release occasion in one row of all animals (see line 2), found "1"; join the two rows',
  },
  {
    name: "study.release-row-missing",
    options: COUNTS,
    rows: ["at,released,2,3", "1,5,1,1"],
    message:
      'c.csv: expected a row for each release occasion of all animals, found none for "2"; add the row; where nobody was released, write 0',
  },
  {
    name: "study.seen-before-release",
    options: COUNTS,
    rows: ["at,released,2,3", "1,5,1,1", "2,5,1,1"],
    message:
      'c.csv:3:3 (2): expected 0 or nothing: this occasion is not after the release, found "1"; check the order of rows and columns; both run with time',
  },
  {
    name: "study.more-seen-than-released",
    options: COUNTS,
    rows: ["at,released,2,3", "1,5,4,2", "2,5,,1"],
    message:
      'c.csv:2:2 (released): expected at least the 6 animals that were met again, found "5"; mend the row: each released animal is counted once, where it is next met',
  },
  {
    name: "study.not-a-count",
    options: COUNTS,
    rows: ["at,released,2,3", "1,5,1,", "2,5,,1"],
    message:
      "c.csv:2:4 (3): expected a whole number of animals, 0 or more, found an empty cell; mend the cell; where there are none, write 0",
  },
  {
    name: "study.stratum-missing",
    options: { ...COUNTS, strata: ["sex"] },
    rows: ["sex,at,released,2,3", ",1,5,1,1"],
    message:
      "c.csv:2:1 (sex): expected a value of sex in each row, found an empty cell; fill the cell, or leave the column out of captures.strata",
  },
];

describe("captures that are refused", () => {
  test.each(CASES)("$name: $rows", async ({ name, options, rows, message, occasions }) => {
    const files = inMemory({ "c.csv": lines(...rows) });
    const dated = occasions === undefined ? undefined : yearly(occasions);
    expect(await errorOf(readCaptures(options, dated, files))).toEqual({ name, message });
  });
});
