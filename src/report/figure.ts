import type { Cast, Member, ThemeLook } from "./cast.ts";
import { type Html, html, type Piece } from "./html.ts";
import type { ReportInput } from "./input.ts";
import { px } from "./numbers.ts";
import { ink, type Token } from "./palette.ts";
import type { Size } from "./size.ts";

/** A figure as the page shows it and as it is exported: one SVG with its caption. */
export interface Figure {
  readonly name: string;
  readonly title: string;
  readonly caption: string;
  readonly svg: string;
}

/** Draws one figure, or says that there is nothing to draw. */
export type Draw = (
  input: ReportInput,
  cast: Cast,
  size: Size,
) => Figure | undefined | Promise<Figure | undefined>;

export const FONT = "Helvetica, Arial, 'Liberation Sans', sans-serif";

/** The outermost element: a picture whose label says in numbers what it shows. */
export function drawing(width: number, height: number, title: string, says: string, body: Piece): string {
  return html`<svg xmlns="http://www.w3.org/2000/svg" width="${px(width)}" height="${px(height)}" viewBox="0 0 ${px(width)} ${px(height)}" role="img" aria-label="${title}. ${says}" font-family="${FONT}" font-size="12">${body}</svg>`
    .text;
}

export interface TextLook {
  readonly fill?: Token;
  readonly anchor?: "start" | "middle" | "end";
  readonly size?: number;
  readonly weight?: number;
  readonly turn?: number;
}

export function label(x: number, y: number, text: string, look: TextLook = {}): Html {
  const turn = look.turn === undefined ? "" : ` rotate(${look.turn})`;
  return html`<text transform="translate(${px(x)},${px(y)})${turn}" fill="${ink(look.fill ?? "ink")}" text-anchor="${look.anchor ?? "start"}" font-size="${look.size ?? 12}"${look.weight !== undefined && html` font-weight="${look.weight}"`}>${text}</text>`;
}

export function rect(x: number, y: number, width: number, height: number, fill: Token, opacity = 1): Html {
  return html`<rect x="${px(x)}" y="${px(y)}" width="${px(Math.max(0, width))}" height="${px(Math.max(0, height))}" fill="${ink(fill)}"${opacity < 1 && html` opacity="${opacity}"`}/>`;
}

export function segment(
  x1: number,
  y1: number,
  x2: number,
  y2: number,
  stroke: Token,
  width = 1,
  dash?: string,
): Html {
  return html`<path d="M${px(x1)},${px(y1)}L${px(x2)},${px(y2)}" fill="none" stroke="${ink(stroke)}" stroke-width="${width}"${dash !== undefined && html` stroke-dasharray="${dash}"`}/>`;
}

export function marker(theme: ThemeLook, x: number, y: number, size = 4): Html {
  return html`<path d="${theme.marker}" transform="translate(${px(x)},${px(y)}) scale(${size})" fill="${ink(theme.token)}"/>`;
}

/** Everything that belongs to one covariate, so that it can be lit together. */
export function belongs(member: Member | undefined, body: Piece): Html {
  return member === undefined ? html`<g>${body}</g>` : html`<g data-covariate="${member.index}">${body}</g>`;
}

/** About how wide a text is, px: enough to keep labels apart. */
export function textWidth(text: string, size = 12): number {
  return 0.55 * size * text.length;
}

/** Text cut to a width, with an ellipsis; the whole name stands in the tables. */
export function fitted(text: string, width: number, size = 12): string {
  const letters = Math.floor(width / (0.52 * size));
  return text.length <= letters ? text : `${text.slice(0, Math.max(1, letters - 1))}…`;
}
