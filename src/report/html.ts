/** Markup that is safe to put into a page as it stands. */
export class Html {
  readonly text: string;
  constructor(text: string) {
    this.text = text;
  }
  toString(): string {
    return this.text;
  }
}

export type Piece = string | number | Html | undefined | false | readonly Piece[];

const ENTITIES: Readonly<Record<string, string>> = {
  "&": "&amp;",
  "<": "&lt;",
  ">": "&gt;",
  '"': "&quot;",
  "'": "&#39;",
};

/** Text as it must stand in element content and in quoted attributes, HTML and SVG alike. */
export function escapeText(text: string): string {
  // Control characters are not allowed in XML, so an exported figure could not be opened with them.
  return text
    .replace(/[&<>"']/g, (mark) => ENTITIES[mark])
    .replace(/[^\t\n\r\u0020-\uD7FF\uE000-\uFFFD\u{10000}-\u{10FFFF}]/gu, "\uFFFD");
}

/** Marks text as markup. Only for text written in this folder or made by `html`. */
export function markup(text: string): Html {
  return new Html(text);
}

/** A template whose every inserted text is escaped; only `Html` goes in as it is. `undefined` and `false` vanish. */
export function html(parts: TemplateStringsArray, ...pieces: readonly Piece[]): Html {
  return new Html(parts.map((part, i) => (i === 0 ? part : write(pieces[i - 1]) + part)).join(""));
}

function write(piece: Piece): string {
  if (piece === undefined || piece === false) return "";
  if (piece instanceof Html) return piece.text;
  if (typeof piece === "number") return String(piece);
  return typeof piece === "string" ? escapeText(piece) : piece.map(write).join("");
}
