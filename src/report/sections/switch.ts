import { type Html, html, type Piece } from "../html.ts";

/** One of several ways to look at the same thing. */
export interface Option {
  readonly key: string;
  readonly text: string;
  readonly body: Piece;
}

/**
 * Several ways to look, of which the script shows one at a time; without it all stand below each other, each under its
 * name. Switches of the same name move together, wherever they stand on the page.
 */
export function switchBlock(name: string, legend: string, options: readonly Option[]): Html {
  if (options.length === 1) return html`${options[0].body}`;
  return html`<div class="switch" data-switch="${name}" data-legend="${legend}">${options.map((one) => html`<div class="option" data-option="${one.key}" data-text="${one.text}">${one.body}</div>`)}</div>`;
}
