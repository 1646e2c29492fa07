import { Lexer, Parser } from "yaml";
import { type ErrorFacts, InputError } from "../errors.ts";

/** A pipeline file of a hundred covariates has some 20 kB. */
const LONGEST_TEXT = 1_000_000;
/** Open brackets and indented blocks at one place; a whole pipeline needs about 14. */
const DEEPEST = 60;

function at(text: string, offset: number): { readonly line: number; readonly column: number } {
  const before = text.slice(0, offset);
  const start = before.lastIndexOf("\n") + 1;
  return { line: before.split("\n").length, column: offset - start + 1 };
}

/**
 * Refuses text that must not reach the YAML composer, which is recursive: with thousands of open brackets it ends
 * the process where no error can be caught. The lexer and the token parser are loops, so they count safely.
 * Throws `spec.too-large`, `spec.too-deep`.
 */
export function guardText(text: string, file: string): void {
  const refuse = (facts: Omit<ErrorFacts, "where">, offset: number) => {
    throw new InputError({ ...facts, where: { file, ...at(text, offset) } });
  };
  if (text.length > LONGEST_TEXT)
    refuse(
      {
        name: "spec.too-large",
        expected: `a pipeline file of at most ${LONGEST_TEXT} characters`,
        found: `${text.length}`,
        remedy: "check that this is the pipeline file and not a data file",
      },
      0,
    );
  const parser = new Parser();
  let offset = 0;
  for (const lexeme of new Lexer().lex(text)) {
    for (const _ of parser.next(lexeme)) {
      // Only the depth of the open tokens matters here.
    }
    if (parser.stack.length > DEEPEST)
      refuse(
        {
          name: "spec.too-deep",
          expected: "values nested as deeply as a pipeline needs",
          found: `more than ${DEEPEST} open brackets or indented blocks`,
          remedy: "close the brackets, or lessen the indentation",
        },
        offset,
      );
    offset = parser.offset;
  }
}
