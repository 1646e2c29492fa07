import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { isoDay } from "../../src/data/day.ts";
import { toRows } from "../../src/data/matrix.ts";
import { readCaptures } from "../../src/study/captures.ts";
import type { CountCaptures, DatedCaptures, ZeroOneCaptures } from "../../src/study/options.ts";
import { countsOf, reference } from "../support/reference.ts";
import { inMemory, lines, yearly } from "./support.ts";

const LOST = { column: "fate", values: ["died"] };
const DATED: DatedCaptures = {
  layout: "dated",
  file: "c.csv",
  animal: "ring",
  date: "date",
  format: "yyyy-MM-dd",
  strata: ["age_at_ringing"],
  lost: LOST,
};
const ZERO_ONE: ZeroOneCaptures = {
  layout: "zero-one",
  file: "c.csv",
  animal: "ring",
  strata: ["age_at_ringing"],
  lost: LOST,
};
const COUNTS: CountCaptures = {
  layout: "counts",
  file: "c.csv",
  releasedAt: "at",
  released: "released",
  strata: ["age_at_ringing"],
};
const file = (...rows: readonly string[]) => inMemory({ "c.csv": lines(...rows) });

interface Dipper {
  readonly data: {
    readonly releases: readonly number[];
    readonly m_array_rows: readonly (readonly number[])[];
    readonly years: readonly number[];
  };
}

describe("European dipper, both sexes (Lebreton, Burnham, Clobert & Anderson 1992, Ecol. Monogr. 62:67–118)", () => {
  const { releases, m_array_rows, years } = reference<Dipper>("A_dipper").data;
  const published = countsOf(releases, m_array_rows, "all animals");

  test("histories that follow the published table give the published table", async () => {
    // Whoever stands at an occasion, newly ringed or met again, is shared out to the next occasions by the table.
    const histories: string[][] = [];
    const present: string[][][] = years.map(() => []);
    years.forEach((_, i) => {
      const arrived = present[i].length;
      // 39 more were ringed in 1987 (294 in all; from memory), which no count can show.
      const newly = i < releases.length ? releases[i] - arrived : 39;
      for (let k = 0; k < newly; k++) {
        const history = years.map(() => "0");
        histories.push(history);
        present[i].push(history);
      }
      const pool = [...present[i]];
      for (const history of pool) history[i] = "1";
      m_array_rows[i]?.forEach((m, k) => {
        for (const history of pool.splice(0, m)) present[i + 1 + k].push(history);
      });
    });
    expect(histories.length).toBe(294);
    const rows = histories.map((history, k) => `${k},${history.join(",")}`);
    const { counts, occasions, intervals, animals, perOccasion } = await readCaptures(
      { layout: "zero-one", file: "c.csv", animal: "ring", strata: [] },
      undefined,
      file(`ring,${years.join(",")}`, ...rows),
    );
    expect(counts).toEqual([{ ...published, animals: 294 }]);
    expect(animals).toBe(294);
    expect(occasions.map((one) => one.name)).toEqual(years.map(String));
    expect(intervals?.map((one) => [one.name, one.length])[5]).toEqual(["1986 to 1987", 1]);
    // Newly ringed per year as they follow from the table: R_i less those met again at i.
    expect(perOccasion.map((one) => one.newlyMarked)).toEqual([22, 49, 52, 45, 41, 46, 39]);
    expect(perOccasion.map((one) => one.seenAgain)).toEqual([0, 11, 26, 35, 47, 52, 54]);
  });

  test("the counts layout gives the published table, empty cells before the release", async () => {
    const rows = releases.map((r, i) => [years[i], r, ...Array(i).fill(""), ...m_array_rows[i]].join(","));
    const { counts, intervals, animals } = await readCaptures(
      { ...COUNTS, strata: [], lengths: [1, 1, 2, 1, 1, 0.5] },
      undefined,
      file(`at,released,${years.slice(1).join(",")}`, ...rows),
    );
    expect(counts).toEqual([published]);
    expect(animals).toBeNaN();
    expect(intervals?.map((one) => one.length)).toEqual([1, 1, 2, 1, 1, 0.5]);
  });
});

describe("three layouts of the same animals", () => {
  const animals = (occasions: number) =>
    fc.array(
      fc.record({
        caught: fc
          .array(fc.boolean(), { minLength: occasions, maxLength: occasions })
          .filter((caught) => caught.includes(true)),
        lost: fc.boolean(),
        stratum: fc.constantFrom("adult", "young"),
        night: fc.integer({ min: 0, max: 4 }),
        repeat: fc.boolean(),
      }),
      { minLength: 1, maxLength: 30 },
    );
  const study = fc
    .integer({ min: 2, max: 6 })
    .chain((count) => fc.record({ count: fc.constant(count), animals: animals(count), seed: fc.integer() }));

  test("give the same counts, in any order of animals and rows, lost ones included", async () => {
    await fc.assert(
      fc.asyncProperty(study, async ({ count, animals, seed }) => {
        const occasions = yearly(count);
        const years = occasions.map((one) => one.name);
        const header = `ring,age_at_ringing,fate,${years.join(",")}`;
        const wide = animals.map(
          (one, k) => `00${k},${one.stratum},${one.lost ? "died" : ""},${one.caught.map(Number).join(",")}`,
        );
        const dated = animals.flatMap((one, k) => {
          const last = one.caught.lastIndexOf(true);
          return one.caught.flatMap((caught, t) => {
            if (!caught) return [];
            const row = (night: number, fate: string) =>
              `00${k},${isoDay(occasions[t].first + night)},${one.stratum},${fate}`;
            const first = one.repeat ? [row(0, "released")] : [];
            return [...first, row(one.night, one.lost && t === last ? "died" : "released")];
          });
        });
        // By hand, with no part of the program: who was released at i and next met at j.
        const table = [...new Set(animals.map((one) => one.stratum))].flatMap((stratum) =>
          years.slice(0, -1).map((year, i) => {
            const released = animals.filter(
              (one) =>
                one.stratum === stratum && one.caught[i] && !(one.lost && one.caught.lastIndexOf(true) === i),
            );
            const next = years
              .slice(1)
              .map((_, j) => released.filter((one) => one.caught.indexOf(true, i + 1) === j + 1).length);
            return `${stratum},${year},${released.length},${next.join(",")}`;
          }),
        );
        const shuffled = [...dated].sort((a, b) => hash(a, seed) - hash(b, seed));
        const zeroOne = await readCaptures(ZERO_ONE, occasions, file(header, ...wide));
        const reversed = await readCaptures(ZERO_ONE, occasions, file(header, ...[...wide].reverse()));
        const byDate = await readCaptures(
          DATED,
          occasions,
          file("ring,date,age_at_ringing,fate", ...shuffled),
        );
        const counts = await readCaptures(
          COUNTS,
          occasions,
          file(`age_at_ringing,at,released,${years.slice(1).join(",")}`, ...table),
        );
        expect(reversed.counts).toEqual(zeroOne.counts);
        expect(byDate.counts).toEqual(zeroOne.counts);
        expect(byDate.perOccasion).toEqual(zeroOne.perOccasion);
        expect(counts.counts).toEqual(zeroOne.counts.map((one) => ({ ...one, animals: Number.NaN })));
      }),
      { numRuns: 100 },
    );
  });

  test("a row for several animals equals as many rows", async () => {
    const [one, many] = await Promise.all([
      readCaptures(
        { ...ZERO_ONE, number: "n" },
        undefined,
        file("ring,n,age_at_ringing,fate,1,2,3", "a,3,adult,,1,0,1"),
      ),
      readCaptures(
        ZERO_ONE,
        undefined,
        file("ring,age_at_ringing,fate,1,2,3", ...["a", "b", "c"].map((mark) => `${mark},adult,,1,0,1`)),
      ),
    ]);
    const [[group], singles] = [one.histories ?? [], many.histories ?? []];
    expect({ ...one, histories: singles }).toEqual(many);
    expect([group.number, singles.length]).toEqual([3, 3]);
    expect(singles).toEqual(Array.from({ length: 3 }, () => ({ ...group, number: 1 })));
  });
});

function hash(text: string, seed: number): number {
  let value = seed | 0;
  for (const char of text) value = (Math.imul(value, 31) + char.charCodeAt(0)) | 0;
  return value;
}

describe("findings of dated captures", () => {
  const HEAD = "ring,date,age_at_ringing,fate";
  const read = (...rows: readonly string[]) => readCaptures(DATED, yearly(3), file(HEAD, ...rows));
  const again = ["x,2001-07-20,adult,", "x,2002-07-20,adult,", "x,2003-07-20,adult,"];

  test("marks that look like numbers stay text", async () => {
    const { animals, counts } = await read(
      "0042,2001-07-20,adult,",
      "42,2002-07-20,adult,",
      "42.0,2003-07-20,adult,",
      ...again,
    );
    expect(animals).toBe(4);
    expect(counts[0].stratum).toBe("age at ringing: adult");
    expect(Array.from(counts[0].released)).toEqual([2, 2]);
    expect(toRows(counts[0].seen)).toEqual([
      [1, 0],
      [0, 1],
    ]);
  });

  test("outside every occasion: before, between, after", async () => {
    const { findings, animals, captures } = await read(
      ...again,
      "a,2001-07-19,adult,",
      "a,2001-07-25,adult,",
      "x,2003-07-25,adult,",
    );
    expect([animals, captures]).toEqual([1, 3]);
    expect(findings.map((one) => [one.kind, one.where?.line, one.message])).toEqual([
      [
        "capture-outside",
        5,
        "a was recorded on 2001-07-19, before the first occasion, 2001; the record does not count",
      ],
      [
        "capture-outside",
        6,
        "a was recorded on 2001-07-25, between occasions 2001 and 2002; the record does not count",
      ],
      [
        "capture-outside",
        7,
        "x was recorded on 2003-07-25, after the last occasion, 2003; the record does not count",
      ],
    ]);
  });

  test("a repeat within an occasion counts once", async () => {
    const { findings, counts } = await read(...again, "x,2002-07-24,adult,");
    expect(findings.map((one) => [one.kind, one.where?.line, one.message])).toEqual([
      ["capture-repeat", 5, "x was caught more than once at occasion 2002; that counts once"],
    ]);
    expect(Array.from(counts[0].released)).toEqual([1, 1]);
  });

  test("seen after its loss: what follows does not count", async () => {
    const { findings, perOccasion, counts } = await read(
      ...again,
      "y,2001-07-20,adult,",
      "y,2002-07-21,adult,died",
      "y,2003-07-20,adult,",
    );
    expect(findings.map((one) => [one.kind, one.where?.line, one.message])).toEqual([
      [
        "capture-after-loss",
        7,
        "y was recorded on 2003-07-20, after its loss (died) on 2002-07-21 in line 6; what follows the loss does not count",
      ],
    ]);
    expect(perOccasion.map((one) => one.lost)).toEqual([0, 1, 0]);
    expect(toRows(counts[0].seen)).toEqual([
      [2, 0],
      [0, 1],
    ]);
    expect(Array.from(counts[0].released)).toEqual([2, 1]);
  });

  test("caught twice in a night, dead the second time: no capture after loss", async () => {
    const { findings, perOccasion } = await read(...again, "y,2001-07-20,adult,died", "y,2001-07-20,adult,");
    expect(findings.map((one) => one.kind)).toEqual(["capture-repeat"]);
    expect(perOccasion[0].lost).toBe(1);
  });

  test("found dead between occasions: released all the same at the capture before", async () => {
    const { counts, perOccasion } = await read(...again, "y,2001-07-20,adult,", "y,2001-12-20,adult,died");
    expect(Array.from(counts[0].released)).toEqual([2, 1]);
    expect(perOccasion.map((one) => one.lost)).toEqual([0, 0, 0]);
  });

  test("strata that change within an animal: the first written stands", async () => {
    const { findings, counts } = await read(...again, "x,2003-07-21,young,");
    expect(findings[0]).toMatchObject({
      kind: "strata-conflict",
      subject: "x",
      message: 'x is "age at ringing: adult" in line 2, "age at ringing: young" in line 5; the first stands',
      count: 1,
    });
    expect(counts.map((one) => one.stratum)).toEqual(["age at ringing: adult"]);
  });

  test("nobody met again: in a stratum, at an occasion", async () => {
    const { findings } = await read("a,2001-07-20,young,", "b,2001-07-20,adult,", "b,2002-07-20,adult,");
    expect(findings.map((one) => [one.kind, one.message])).toEqual([
      ["never-recaptured", "none of the 1 released animals of age at ringing: young was met again"],
      ["never-recaptured", "no animal released before was met at occasion 2003"],
    ]);
  });
});
