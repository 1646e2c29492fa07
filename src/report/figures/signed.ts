import { label } from "../figure.ts";
import { type Html, html } from "../html.ts";
import { px } from "../numbers.ts";
import { ink } from "../palette.ts";

/**
 * A value from −1 to 1 as a square whose area is its size: filled where positive, hollow where negative, so that the
 * sign can be read without colour.
 */
export function signedSquare(value: number, cx: number, cy: number, cell: number): Html {
  if (!Number.isFinite(value)) return html``;
  const side = (cell - 2) * Math.sqrt(Math.min(1, Math.abs(value)));
  if (value >= 0)
    return html`<rect x="${px(cx - side / 2)}" y="${px(cy - side / 2)}" width="${px(side)}" height="${px(side)}" fill="${ink("more")}"/>`;
  const stroke = Math.max(1, Math.min(2, cell / 12));
  const inner = Math.max(0.5, side - stroke);
  return html`<rect x="${px(cx - inner / 2)}" y="${px(cy - inner / 2)}" width="${px(inner)}" height="${px(inner)}" fill="none" stroke="${ink("less")}" stroke-width="${px(stroke)}"/>`;
}

/** Two decimals without the zero in front: `.71`, `−.05`. */
export function shortR(value: number): string {
  if (!Number.isFinite(value)) return "";
  const text = Math.abs(value).toFixed(2);
  return (value < 0 && text !== "0.00" ? "−" : "") + (text.startsWith("0") ? text.slice(1) : text);
}

export function signedLegend(x: number, y: number, brief = false): Html {
  return html`${signedSquare(0.8, x + 8, y - 4, 16)}${label(x + 22, y, "positive (filled)", { fill: "muted" })}${signedSquare(-0.8, x + 144, y - 4, 16)}${label(x + 158, y, brief ? "negative (hollow)" : "negative (hollow); larger square, closer relation", { fill: "muted" })}`;
}
