import type { LoggerInterface } from "vega";
import type { TopLevelSpec } from "vega-lite";
import { drawing, FONT, textWidth } from "./figure.ts";
import { markup } from "./html.ts";
import { ink } from "./palette.ts";
import type { Size } from "./size.ts";

const CONFIG = {
  font: FONT,
  background: null,
  padding: 6,
  axis: {
    labelColor: ink("muted"),
    titleColor: ink("ink"),
    gridColor: ink("rule"),
    domainColor: ink("rule"),
    tickColor: ink("rule"),
    labelFontSize: 12,
    titleFontSize: 12,
    titleFontWeight: "normal",
    titlePadding: 10,
  },
  header: {
    labelColor: ink("ink"),
    labelFontSize: 13,
    labelFontWeight: "bold",
    titleColor: ink("ink"),
    labelAnchor: "start",
  },
  view: { stroke: null },
} as const;

/** Names beside an axis, in a column of known width. */
export function nameAxis({ names }: Size) {
  return { labelLimit: names - 6, minExtent: names, maxExtent: names };
}

/** The description of the line at the chosen penalty, beside which the page's slider moves another. */
export const CHOSEN_LAMBDA = "chosen lambda";

/** What the library offers for measuring text, which its types leave out. */
interface TextMetrics {
  width: (item: { readonly fontSize?: number }, text: string) => number;
}

/** The description under which a mark is recognised as a covariate's. */
export function covariateMark(index: number): string {
  return `covariate:${index}`;
}

/** The library prints its errors and goes on with half a chart; here they are thrown, and nothing is printed. */
const STRICT: LoggerInterface = {
  level: () => 0,
  error(...args) {
    throw args.find((one) => one instanceof Error) ?? new Error(args.join(" "));
  },
  warn: () => STRICT,
  info: () => STRICT,
  debug: () => STRICT,
};

/**
 * A chart as static SVG. Definition ids are counted from the start and prefixed with the figure's name, so that the
 * same figure is the same bytes and figures on one page do not clip each other. Texts for screen readers are our
 * own: the library's are in local time.
 */
export async function chart(name: string, title: string, says: string, spec: TopLevelSpec): Promise<string> {
  const [vega, { compile }] = await Promise.all([import("vega"), import("vega-lite")]);
  vega.resetSVGDefIds();
  // without a canvas it takes every letter for 0.8 em, half as wide again as letters are
  (vega as unknown as { readonly textMetrics: TextMetrics }).textMetrics.width = (item, text) =>
    textWidth(text, item.fontSize);
  const merged = { ...spec, config: { ...CONFIG, ...spec.config } } as TopLevelSpec; // the spread loses the union
  const { spec: full } = compile(merged, { logger: STRICT });
  const view = new vega.View(vega.parse(full), { renderer: "none", logger: STRICT });
  const svg = await view.toSVG();
  view.finalize();
  const size = /width="([\d.]+)" height="([\d.]+)"/.exec(svg);
  const body = svg.slice(svg.indexOf(">") + 1, svg.lastIndexOf("</svg>"));
  return drawing(Number(size?.[1] ?? 0), Number(size?.[2] ?? 0), title, says, markup(cleaned(body, name)));
}

function cleaned(body: string, name: string): string {
  // only inside tags: a covariate's name may look like an attribute
  return body.replace(/<[^>]*>/g, (tag) =>
    tag
      .replace(/aria-label="covariate:(\d+)"/, 'data-covariate="$1"')
      .replace('aria-label="chosen lambda"', 'data-lambda=""')
      .replace(/ (?:aria-[a-z]+|role|class|pointer-events)="[^"]*"/g, "")
      .replace(/ font-family="[^"]*"/g, "")
      .replace(/ opacity="1"/g, "")
      .replace(/ id="([^"]+)"/g, ` id="${name}-$1"`)
      .replace(/url\(#([^)]+)\)/g, `url(#${name}-$1)`)
      .replace(/-?\d+\.\d{3,}/g, (number) => String(Math.round(Number(number) * 100) / 100)),
  );
}
