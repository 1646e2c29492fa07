import { createRequire } from "node:module";
import { dirname, join } from "node:path";
import { crc32 } from "node:zlib";
import type { Figure } from "./figure.ts";
import { figures } from "./figures.ts";
import type { ReportInput } from "./input.ts";
import { px } from "./numbers.ts";
import { ink } from "./palette.ts";
import { JOURNAL_WIDTHS, MM_PER_PX, type Size } from "./size.ts";

/** Dots per inch of the PNG files. */
const DPI = 300;
const MM_PER_INCH = 25.4;

/** One file of a figure, `85mm/survival.png`. */
export interface FigureFile {
  readonly path: string;
  readonly bytes: Uint8Array;
}

/** What is written of a figure. */
export interface FigureKinds {
  readonly svg: boolean;
  readonly png: boolean;
}

const BOTH_KINDS: FigureKinds = { svg: true, png: true };

/** Every figure at both journal widths, as SVG and as PNG, with the captions as text beside them. */
export async function figureFiles(
  input: ReportInput,
  kinds: FigureKinds = BOTH_KINDS,
): Promise<readonly FigureFile[]> {
  return drawnAtWidths((size) => figures(input, size), kinds);
}

/** Whatever is drawn, at both journal widths. */
export async function drawnAtWidths(
  draw: (size: Size) => readonly Figure[] | Promise<readonly Figure[]>,
  kinds: FigureKinds = BOTH_KINDS,
): Promise<readonly FigureFile[]> {
  if (!kinds.svg && !kinds.png) return [];
  const out: Promise<readonly FigureFile[]>[] = [];
  // drawn one after the other, painted side by side by the library's own threads
  for (const { mm, size } of JOURNAL_WIDTHS) out.push(filesAt(await draw(size), mm, kinds));
  return (await Promise.all(out)).flat();
}

/** SVG, PNG and captions of figures at one width. */
export async function filesAt(
  drawn: readonly Figure[],
  mm: number,
  kinds: FigureKinds = BOTH_KINDS,
): Promise<readonly FigureFile[]> {
  const text = new TextEncoder();
  const files = drawn.map(async (one): Promise<FigureFile[]> => {
    const svg = atWidth(one.svg, mm);
    const out: FigureFile[] = [];
    if (kinds.svg) out.push({ path: `${mm}mm/${one.name}.svg`, bytes: text.encode(svg) });
    if (kinds.png) out.push({ path: `${mm}mm/${one.name}.png`, bytes: await png(svg, mm) });
    return out;
  });
  const captions = { path: `${mm}mm/captions.txt`, bytes: text.encode(captionsText(drawn)) };
  return [...(await Promise.all(files)).flat(), captions];
}

/**
 * A drawing at a width in mm. One that is narrower than the column keeps the size of its text and stands in the middle of
 * it; one that is wider is shrunk.
 */
export function atWidth(svg: string, mm: number): string {
  const size = /^<svg ([^>]*?) width="([\d.]+)" height="([\d.]+)" viewBox="[^"]*"/.exec(svg);
  if (size === null) throw new Error("a drawing begins with its size");
  const [all, before, w, h] = size;
  const [width, height] = [Number(w), Number(h)];
  const column = Math.max(width, mm / MM_PER_PX);
  const high = (mm * height) / column;
  return `<svg ${before} width="${mm}mm" height="${px(high)}mm" viewBox="${px((width - column) / 2)} 0 ${px(column)} ${h}"${svg.slice(all.length)}`;
}

/** The title and caption of every figure, under the name of its files. */
function captionsText(drawn: readonly Figure[]): string {
  return drawn.map((one, i) => `Figure ${i + 1} (${one.name}). ${one.title}. ${one.caption}\n`).join("\n");
}

/** Pixels of a drawing whose width in mm is known, on white, in the shipped font alone: no system has a say in it. */
async function png(svg: string, mm: number): Promise<Uint8Array> {
  const { renderAsync } = await import("@resvg/resvg-js");
  const fonts = join(dirname(createRequire(import.meta.url).resolve("dejavu-fonts-ttf/package.json")), "ttf");
  const family = "DejaVu Sans Condensed";
  const drawn = await renderAsync(svg, {
    fitTo: { mode: "width", value: Math.round((mm / MM_PER_INCH) * DPI) },
    background: ink("panel"),
    font: {
      fontFiles: [join(fonts, "DejaVuSansCondensed.ttf"), join(fonts, "DejaVuSansCondensed-Bold.ttf")],
      loadSystemFonts: false,
      defaultFontFamily: family,
      sansSerifFamily: family,
    },
  });
  return withDensity(drawn.asPng());
}

/** The file with its density (PNG specification, 3rd edition, 11.3.4.3: `pHYs`), so that it is placed at its width. */
function withDensity(file: Uint8Array): Uint8Array {
  // signature and header take 8 + 25 bytes; the density has to stand before the pixels
  const at = 33;
  const chunk = new Uint8Array(21);
  const view = new DataView(chunk.buffer);
  view.setUint32(0, 9);
  chunk.set(new TextEncoder().encode("pHYs"), 4);
  const perMetre = Math.round((DPI / MM_PER_INCH) * 1000);
  view.setUint32(8, perMetre);
  view.setUint32(12, perMetre);
  chunk[16] = 1;
  view.setUint32(17, crc32(chunk.subarray(4, 17)));
  const out = new Uint8Array(file.length + chunk.length);
  out.set(file.subarray(0, at));
  out.set(chunk, at);
  out.set(file.subarray(at), at + chunk.length);
  return out;
}
