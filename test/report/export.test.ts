import { decode } from "fast-png";
import { beforeAll, describe, expect, test } from "vitest";
import { atWidth, type FigureFile, figureFiles, filesAt } from "../../src/report/export.ts";
import { drawing, label, rect } from "../../src/report/figure.ts";
import { figures } from "../../src/report/figures.ts";
import { html } from "../../src/report/html.ts";
import { JOURNAL_WIDTHS } from "../../src/report/size.ts";
import { reportInput } from "./fixture.ts";

const SMALL = { covariates: 6, permutations: 3, hostile: `<img onerror="x">` };

let files: readonly FigureFile[];
beforeAll(async () => {
  files = await figureFiles(await reportInput(SMALL));
}, 240_000);

/** Width, height and density where the PNG specification puts them: the header first, here followed by the density. */
function headOf(bytes: Uint8Array) {
  const view = new DataView(bytes.buffer, bytes.byteOffset);
  const resolution = { x: view.getUint32(41), y: view.getUint32(45), unit: bytes[49] };
  return { width: view.getUint32(16), height: view.getUint32(20), resolution };
}

const bytesOf = (path: string) => files.find((one) => one.path === path)?.bytes ?? new Uint8Array();
const text = (path: string) => new TextDecoder().decode(bytesOf(path));

describe("figures for a journal", () => {
  test("each is there at both widths, as SVG and as PNG", () => {
    const names = (folder: string, type: string) =>
      files
        .filter(({ path }) => path.startsWith(folder) && path.endsWith(type))
        .map(({ path }) => path.slice(folder.length, -type.length));
    const svg = names("85mm/", ".svg");
    expect(svg.length).toBeGreaterThanOrEqual(14);
    for (const [folder, type] of [
      ["85mm/", ".png"],
      ["170mm/", ".svg"],
      ["170mm/", ".png"],
    ])
      expect(names(folder, type)).toEqual(svg);
  });

  // 85 mm and 170 mm at 300 dots per inch: 85 / 25.4 · 300 = 1003.9
  test.each([
    ["85mm", 1004],
    ["170mm", 2008],
  ])("%s: %d pixels wide, and the file says at which density", (folder, width) => {
    for (const { path, bytes } of files)
      if (path.startsWith(folder) && path.endsWith(".png")) {
        const image = /survival|time-ribbon/.test(path) ? decode(bytes, { checkCrc: true }) : headOf(bytes);
        expect([path, image.width]).toEqual([path, width]);
        // dots per metre, unit 1
        expect(image.resolution).toEqual({ x: 11811, y: 11811, unit: 1 });
        expect([path, image.height < 1.6 * image.width * (folder === "85mm" ? 3 : 1.4)]).toEqual([
          path,
          true,
        ]);
      }
  });

  test("SVG files have a width in mm, the text of the drawing, and nothing that looks like markup", () => {
    const paths = files.filter(({ path }) => path.endsWith(".svg"));
    for (const { path } of paths) {
      const [folder] = path.split("mm/");
      expect(text(path)).toMatch(
        new RegExp(
          `^<svg xmlns="http://www.w3.org/2000/svg" width="${folder}mm" height="[\\d.]+mm" viewBox="`,
        ),
      );
      expect(text(path)).not.toContain("<img");
    }
  });

  test("no text is smaller than 10 px, which are 5.8 pt, and no drawing wider than its column", () => {
    for (const { path } of files.filter((one) => one.path.endsWith(".svg"))) {
      const svg = text(path);
      const column = path.startsWith("85mm") ? 413 : 826;
      const width = Number(/viewBox="[-\d.]+ 0 ([\d.]+)/.exec(svg)?.[1]);
      expect([path, width <= column + 12]).toEqual([path, true]);
      const sizes = [...svg.matchAll(/font-size="([\d.]+)(?:px)?"/g)].map((match) => Number(match[1]));
      expect([path, Math.min(...sizes) >= 10]).toEqual([path, true]);
    }
  });

  test("a narrower drawing keeps the size of its text in the middle of the column", () => {
    const svg = atWidth(drawing(200, 100, "t", "1", html``), 85);
    const [, x, width] = /viewBox="([-\d.]+) 0 ([\d.]+) 100"/.exec(svg)?.map(Number) ?? [];
    expect(width).toBeCloseTo(413.05, 1);
    expect(x).toBeCloseTo((200 - width) / 2, 1);
  });

  test("letters are painted without any font of the system", async () => {
    const blank = drawing(400, 40, "t", "1", html`${rect(0, 0, 400, 40, "panel")}`);
    const written = drawing(400, 40, "t", "1", html`${label(10, 25, "winter rain ĉ λ °")}`);
    const dark = async (svg: string) => {
      const done = await filesAt([{ name: "a", title: "t", caption: "c", svg }], 85);
      const { data, channels } = decode(done[1].bytes);
      let count = 0;
      for (let i = 0; i < data.length; i += channels) if (data[i] < 128) count++;
      return count;
    };
    expect(await dark(blank)).toBe(0);
    expect(await dark(written)).toBeGreaterThan(500);
  });

  test("same input, same bytes", async () => {
    const [{ size }] = JOURNAL_WIDTHS;
    const drawn = await figures(await reportInput(SMALL), size);
    const some = drawn.filter(({ name }) => name === "survival" || name === "inflation");
    const again = (await filesAt(some, 85)).filter(({ path }) => !path.endsWith(".txt"));
    expect(again).toHaveLength(4);
    for (const { path, bytes } of again)
      expect([path, Buffer.compare(bytes, bytesOf(path))]).toEqual([path, 0]);
  });

  test("captions stand beside the figures, one for each", () => {
    const captions = text("85mm/captions.txt");
    const count = files.filter(({ path }) => path.startsWith("85mm/") && path.endsWith(".svg")).length;
    expect(captions.split("\nFigure ").length).toBe(count);
    expect(captions).toContain("(survival). Apparent annual survival. Points with bars:");
  });
});
