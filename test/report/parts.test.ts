import { describe, expect, test } from "vitest";
import { listWords } from "../../src/data/words.ts";
import { escapeText, html, markup } from "../../src/report/html.ts";
import { brief, percent, pText, show, whole } from "../../src/report/numbers.ts";
import { ink, PALETTE, TOKENS, withVariables } from "../../src/report/palette.ts";
import { pngUri } from "../../src/report/png.ts";
import { roundBelow, spread, ticks } from "../../src/report/scale.ts";
import { tableDetails } from "../../src/report/table-html.ts";

describe("numbers", () => {
  test.each([
    [666.83766, "666.8"],
    [0.560243, "0.5602"],
    [0.00012346, "0.0001235"],
    [0.000012345, "1.234 × 10⁻⁵"],
    [-3.5, "−3.500"],
    [1234.56, "1235"],
    [43275.04, "43\u202F275"],
    [12345678, "1.235 × 10⁷"],
    [0, "0"],
    [Number.POSITIVE_INFINITY, "∞"],
    [Number.NaN, "–"],
  ])("%d is %s", (value, text) => expect(show(value)).toBe(text));

  test("brief, shares, p and counts", () => {
    expect([brief(0.7), brief(10), brief(100), percent(0.9476), percent(1)]).toEqual([
      "0.7",
      "10",
      "100",
      "94.8 %",
      "100 %",
    ]);
    expect([pText(0.00104912), pText(0.00001), pText(0.05), whole(1234567)]).toEqual([
      "0.001049",
      "< 0.0001",
      "0.05",
      "1\u202F234\u202F567",
    ]);
    expect([listWords([]), listWords(["a"]), listWords(["a", "b", "c"])]).toEqual([
      "nothing",
      "a",
      "a, b and c",
    ]);
  });
});

describe("markup", () => {
  test("inserted text is escaped, also in lists; only markup goes in as it is", () => {
    expect(html`<p title="${'"'}">${["<b>", markup("<i>"), undefined, false, 3]}</p>`.text).toBe(
      '<p title="&quot;">&lt;b&gt;<i>3</p>',
    );
    expect(escapeText("a\u0000b\u000bc&'")).toBe("a\uFFFDb\uFFFDc&amp;&#39;");
  });

  test("a table cell holds the rounded number and, for the copy, the whole one", () => {
    const columns = [
      { name: "x", title: "x", type: "number" as const, unit: "mm", description: "a number" },
      { name: "ok", title: "ok", type: "truth" as const, description: "yes or no" },
    ];
    const rows = [
      [0.123456789, true],
      [Number.NaN, undefined],
    ] as const;
    const { text } = tableDetails({ name: "t", title: "T", description: "d", columns, rows });
    expect(text).toContain('<td class="n" data-v="0.123456789">0.1235</td><td data-v="true">yes</td>');
    expect(text).toContain('<td class="n" data-v=""></td><td data-v=""></td>');
  });
});

/** WCAG 2.2 relative luminance and contrast ratio. */
function contrast(a: string, b: string): number {
  const luminance = (hex: string) => {
    const [r, g, bl] = [1, 3, 5].map((at) => {
      const c = Number.parseInt(hex.slice(at, at + 2), 16) / 255;
      return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
    });
    return 0.2126 * r + 0.7152 * g + 0.0722 * bl;
  };
  const [x, y] = [luminance(a), luminance(b)];
  return (Math.max(x, y) + 0.05) / (Math.min(x, y) + 0.05);
}

describe("palette", () => {
  test("texts reach 4.5:1 and marks 3:1 on every ground (WCAG 2.2, 1.4.3 and 1.4.11)", () => {
    for (const side of ["light", "dark"] as const) {
      for (const text of ["ink", "muted", "mark", "less", "more"] as const)
        for (const ground of ["page", "panel", "wash"] as const)
          expect(
            contrast(PALETTE[text][side], PALETTE[ground][side]),
            `${text} on ${ground}, ${side}`,
          ).toBeGreaterThan(4.5);
      for (const token of TOKENS.filter((name) => name.startsWith("theme")))
        expect(contrast(PALETTE[token][side], PALETTE.panel[side]), `${token}, ${side}`).toBeGreaterThan(3);
    }
  });

  test("colours of a drawing become variables, names that look like colours do not", () => {
    expect(
      withVariables(
        `<path fill="${ink("mark")}"/><text>${ink("mark")} fill=&quot;${ink("mark")}&quot;</text>`,
      ),
    ).toBe(`<path fill="var(--mark)"/><text>${ink("mark")} fill=&quot;${ink("mark")}&quot;</text>`);
    const light = TOKENS.map((name) => PALETTE[name].light);
    expect(new Set(light).size).toBe(light.length);
  });
});

describe("drawing", () => {
  test("ticks are round and inside", () => {
    expect(ticks(0, 1, 5)).toEqual([0, 0.2, 0.4, 0.6, 0.8, 1]);
    expect(ticks(-11.2, -4.9, 3)).toEqual([-10, -8, -6]);
    expect(ticks(3, 3, 5)).toEqual([3]);
    expect([18, 20, 4.9, 0.7, 1].map(roundBelow)).toEqual([10, 20, 2, 0.5, 1]);
  });

  test("labels are moved apart and keep their order", () => {
    const out = spread([1, 1.1, 1.2, 9], 1, 0, 10);
    const gaps = out.slice(1).map((value, i) => value - out[i]);
    for (const gap of gaps) expect(gap).toBeGreaterThanOrEqual(1 - 1e-12);
    expect(out[3]).toBe(9);
  });

  test("a PNG says its size and colour type where the specification puts them", () => {
    const bytes = Buffer.from(pngUri(3, 2, new Uint8Array(24).fill(200)).split(",")[1], "base64");
    expect([...bytes.subarray(0, 8)]).toEqual([137, 80, 78, 71, 13, 10, 26, 10]);
    expect([bytes.readUInt32BE(16), bytes.readUInt32BE(20), bytes[24], bytes[25]]).toEqual([3, 2, 8, 6]);
    // the CRC of an empty IEND chunk, PNG specification, annex on samples
    expect(bytes.readUInt32BE(bytes.length - 4)).toBe(0xae426082);
  });
});
