import { z } from "zod";

/**
 * The pieces the schema is made of. Each carries a description, a noun phrase that serves three times: in the
 * published JSON Schema, as what an error message says was expected, and as the only place where a default is told.
 * The first example serves as the remedy.
 */

/** One line without outer blanks. */
const NAME = /^\S(?:.*\S)?$/;

function tell<S extends z.ZodType>(schema: S, description: string, example: unknown): S {
  return schema.meta(example === undefined ? { description } : { description, examples: [example] });
}

export function text(description: string, example?: string, pattern: RegExp = NAME) {
  return tell(z.string().max(300).regex(pattern), description, example);
}

/** Longer text, for titles and notes. */
export function prose(description: string, example?: string) {
  return tell(z.string().min(1).max(2000), description, example);
}

export function column(what: string, example?: string) {
  return text(`the column with ${what}`, example);
}

export function inputPath(what: string, example: string) {
  return text(`the path of ${what}, below \`data\``, example);
}

export interface Range {
  readonly min?: number;
  readonly max?: number;
  readonly above?: number;
  readonly below?: number;
  readonly whole?: boolean;
}

export function number(description: string, example?: number, range: Range = {}) {
  let schema = range.whole === true ? z.int() : z.number();
  if (range.min !== undefined) schema = schema.min(range.min);
  if (range.max !== undefined) schema = schema.max(range.max);
  if (range.above !== undefined) schema = schema.gt(range.above);
  if (range.below !== undefined) schema = schema.lt(range.below);
  return tell(schema, description, example);
}

export function flag(description: string) {
  return tell(z.boolean(), description, undefined);
}

/** One of several fixed words. */
export function choice<const W extends readonly [string, ...string[]]>(description: string, words: W) {
  return tell(z.enum(words), `${description}: ${words.join(", ")}`, undefined);
}

/** The one word that tells which of several kinds of mapping is meant. */
export function word<const W extends string>(description: string, only: W) {
  return tell(z.literal(only), description, undefined);
}

export function list<S extends z.ZodType>(description: string, of: S, example?: unknown) {
  return tell(z.array(of).max(2000), description, example);
}

/** At least one. */
export function someOf<S extends z.ZodType>(description: string, of: S, example?: unknown) {
  return tell(z.array(of).min(1).max(2000), description, example);
}

/** Names of the user's own, each with the same kind of value. */
export function named<S extends z.ZodType>(description: string, what: string, value: S) {
  return tell(z.record(text(what), value), description, undefined);
}

export function keys<const S extends z.ZodRawShape>(description: string, shape: S, example?: unknown) {
  return tell(z.strictObject(shape), description, example);
}

export function oneOf<const S extends readonly [z.ZodType, ...z.ZodType[]]>(
  description: string,
  options: S,
  example?: unknown,
) {
  return tell(z.union(options), description, example);
}

/** A piece that the published schema writes once, under `definitions`, and refers to. */
export function shared<S extends z.ZodType>(id: string, schema: S): S {
  return schema.meta({ ...schema.meta(), id });
}

/** The value that holds where the key is left out, told in the description and in the schema's `default`. */
export function stated<S extends z.ZodType>(schema: S, value: z.output<S> & z.input<S>) {
  // Pieces under `definitions` are told apart by id; this copy is another piece.
  const { id: _, ...meta } = schema.meta() ?? {};
  const shown = typeof value === "string" ? value : JSON.stringify(value);
  const described = schema.meta({
    ...meta,
    description: `${meta.description ?? ""} (if left out: ${shown})`,
  });
  return described.prefault(value as z.input<S>);
}

/** A mapping whose every key has a default of its own; it may be left out as a whole. */
export function allStated<const S extends z.ZodRawShape>(description: string, shape: S) {
  const schema = keys(description, shape);
  return schema.prefault({} as z.input<typeof schema>);
}

/** Two numbers, e.g. least and greatest. */
export function pair(description: string, first: string, second: string, example: readonly [number, number]) {
  return tell(z.tuple([number(first, example[0]), number(second, example[1])]), description, example);
}
