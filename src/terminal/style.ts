/** Ways to set text off on a terminal; the words alone must carry the meaning. */
export interface Style {
  strong(text: string): string;
  faint(text: string): string;
  /** A stop, an error. */
  alarm(text: string): string;
  /** A warning. */
  caution(text: string): string;
  good(text: string): string;
}

/** SGR parameters of ECMA-48 §8.3.117: begin and end. */
const CODES = {
  strong: [1, 22],
  faint: [2, 22],
  alarm: [35, 39],
  caution: [33, 39],
  good: [36, 39],
} as const;

/** Colours (magenta, yellow, cyan: told apart by most colour-blind readers) or, without them, the text as it is. */
export function styleOf(colour: boolean): Style {
  const wrap = (key: keyof typeof CODES) => (text: string) => {
    if (!colour) return text;
    const [begin, end] = CODES[key];
    return `${ESCAPE}[${begin}m${text}${ESCAPE}[${end}m`;
  };
  return {
    strong: wrap("strong"),
    faint: wrap("faint"),
    alarm: wrap("alarm"),
    caution: wrap("caution"),
    good: wrap("good"),
  };
}

const ESCAPE = String.fromCharCode(27);

/**
 * Text from outside (names, values) made safe for a terminal: control characters, line breaks and marks that turn the
 * writing direction appear as their code points and can neither colour, move nor hide anything.
 */
export function plain(text: string): string {
  return text.replace(
    /[\p{Cc}\p{Zl}\p{Zp}\p{Bidi_Control}\p{Cs}]/gu,
    (char) => `\\u{${char.codePointAt(0)?.toString(16)}}`,
  );
}

/** Columns a text takes on a terminal: marks none, wide East Asian letters and emoji two. An estimate for the rest. */
export function widthOf(text: string): number {
  let width = 0;
  for (const char of text) width += /\p{M}|\p{Cf}/u.test(char) ? 0 : WIDE.test(char) ? 2 : 1;
  return width;
}

const WIDE =
  /[\p{Script=Han}\p{Script=Hangul}\p{Script=Hiragana}\p{Script=Katakana}\p{Emoji_Presentation}\u{ff01}-\u{ff60}]/u;

/** The text cut to `width` columns, its end shown as `…`. */
export function cut(text: string, width: number): string {
  if (widthOf(text) <= width) return text;
  let kept = "";
  for (const char of text) {
    if (widthOf(kept + char) > width - 1) break;
    kept += char;
  }
  return width < 1 ? "" : `${kept.trimEnd()}…`;
}

/** Padded with blanks to `width` columns. */
export function pad(text: string, width: number): string {
  return text + " ".repeat(Math.max(0, width - widthOf(text)));
}

/** Words filled into lines of at most `width` columns; a longer word is broken. */
export function fill(text: string, width: number): string[] {
  const room = Math.max(1, width);
  const lines: string[] = [];
  let line = "";
  for (const word of text.split(/ +/)) {
    if (line !== "" && widthOf(line) + 1 + widthOf(word) > room) {
      lines.push(line);
      line = "";
    }
    line = line === "" ? word : `${line} ${word}`;
    while (widthOf(line) > room) {
      let head = "";
      for (const char of line) {
        if (head !== "" && widthOf(head + char) > room) break;
        head += char;
      }
      if (head === line) break;
      lines.push(head);
      line = line.slice(head.length);
    }
  }
  return line === "" && lines.length > 0 ? lines : [...lines, line];
}
