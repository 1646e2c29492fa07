import type { Cast, Member } from "./cast.ts";
import type { Figure } from "./figure.ts";
import { type Html, html, markup, type Piece } from "./html.ts";
import { counted } from "./numbers.ts";
import { withVariables } from "./palette.ts";

/** What a section is made from. */
export interface Section {
  readonly id: string;
  readonly title: string;
  readonly body: Piece;
}

/** A covariate's name with its theme's marker; the script makes it light up everywhere. */
export function covariateName(cast: Cast, name: string): Html {
  const member = cast.byName.get(name);
  return member === undefined ? html`<span class="cov">${name}</span>` : chip(member);
}

function chip(member: Member): Html {
  return html`<span class="cov" data-covariate="${member.index}">${themeMark(member.theme)}${member.name}</span>`;
}

export function themeMark(theme: Member["theme"]): Html {
  return html`<svg viewBox="-1.2 -1.2 2.4 2.4" aria-hidden="true"><path d="${theme.marker}" fill="var(--${theme.token})"/></svg>`;
}

/** Names in a row, as `listed` writes them, each of which can be lit. */
export function covariateList(cast: Cast, names: readonly string[]): Piece {
  if (names.length === 0) return "nothing";
  return names.map((name, i) => [
    i === 0 ? "" : i === names.length - 1 ? " and " : ", ",
    covariateName(cast, name),
  ]);
}

/** A figure on its own panel; where the panel is narrower than the drawing stays readable, it scrolls inside. */
export function figureBlock(figures: readonly Figure[], name: string): Html | undefined {
  const figure = figures.find((one) => one.name === name);
  if (figure === undefined) return undefined;
  const width = Number(/ width="([\d.]+)"/.exec(figure.svg)?.[1] ?? 0);
  const sized = withVariables(figure.svg)
    .replace(' xmlns="http://www.w3.org/2000/svg"', "")
    .replace(
      "<svg ",
      `<svg style="max-width:${width}px;min-width:${Math.round(Math.min(width, Math.max(520, 0.8 * width)))}px" `,
    );
  return html`<figure id="figure-${name}"${width <= 760 && html` class="narrow"`}><div class="scroll" tabindex="0" role="group" aria-label="${figure.title}">${markup(sized)}</div><figcaption><b>${figure.title}</b> ${figure.caption}</figcaption></figure>`;
}

/** What the reader must not make the numbers say, where the temptation is. */
export function caution(head: string, text: Piece): Html {
  return html`<p class="caution"><b>${head}.</b> ${text}</p>`;
}

export interface Head {
  readonly text: string;
  readonly unit?: string;
  /** `n` for numbers, `w` for long texts. */
  readonly look?: "n" | "w";
}

export interface Row {
  readonly cells: readonly Piece[];
  /** Of one covariate. */
  readonly covariate?: string;
  readonly best?: boolean;
}

/** A small table of the page. */
export function grid(cast: Cast, caption: string, heads: readonly Head[], rows: readonly Row[]): Html {
  return html`<div class="grid"><div class="scroll" tabindex="0" role="group" aria-label="${caption}"><table><caption>${caption}</caption><thead><tr>${heads.map(headCell)}</tr></thead><tbody>${rows.map(
    (row) => {
      const index = row.covariate === undefined ? undefined : cast.byName.get(row.covariate)?.index;
      return html`<tr${row.best === true && html` class="best"`}${index !== undefined && html` data-covariate="${index}"`}>${row.cells.map((cell, i) => html`<td${look(heads[i])}>${cell}</td>`)}</tr>`;
    },
  )}</tbody></table></div></div>`;
}

/** A table of detail, closed until it is asked for. */
export function foldedGrid(cast: Cast, caption: string, heads: readonly Head[], rows: readonly Row[]): Html {
  return html`<details class="fold"><summary>${caption}<small>${counted(rows.length, "row")}</small></summary><div class="in">${grid(cast, caption, heads, rows)}</div></details>`;
}

function headCell(head: Head): Html {
  const unit = head.unit === undefined || head.unit === "1" ? undefined : head.unit;
  return html`<th scope="col"${look(head)}>${head.text}${unit !== undefined && html` <small>${unit}</small>`}</th>`;
}

function look(head: Head | undefined): Html {
  return head?.look === undefined ? html`` : html` class="${head.look}"`;
}
