import { z } from "zod";
import type { KeyPath } from "./path.ts";

/** The schema under the wrappers that make a key optional or give it a default. */
export function bareSchema(schema: z.ZodType): z.ZodType {
  let bare = schema;
  while (bare instanceof z.ZodOptional || bare instanceof z.ZodPrefault)
    bare = bare._zod.def.innerType as z.ZodType;
  return bare;
}

/** The description of a schema, a noun phrase. */
export function describedAs(schema: z.ZodType): string {
  return schema.meta()?.description ?? bareSchema(schema).meta()?.description ?? "another value";
}

export function exampleOf(schema: z.ZodType): unknown {
  const examples = schema.meta()?.examples ?? bareSchema(schema).meta()?.examples;
  return Array.isArray(examples) ? examples[0] : undefined;
}

/** The keys of a mapping. */
export function shapeOf(schema: z.ZodType): Readonly<Record<string, z.ZodType>> | undefined {
  const bare = bareSchema(schema);
  if (bare instanceof z.ZodObject) return bare.shape as Record<string, z.ZodType>;
  return undefined;
}

function step(schema: z.ZodType, part: string | number): z.ZodType | undefined {
  const bare = bareSchema(schema);
  if (bare instanceof z.ZodObject) return (bare.shape as Record<string, z.ZodType>)[part];
  if (bare instanceof z.ZodRecord) return bare.valueType as z.ZodType;
  if (bare instanceof z.ZodArray) return bare.element as z.ZodType;
  if (bare instanceof z.ZodTuple) return bare._zod.def.items[Number(part)] as z.ZodType;
  return undefined;
}

/** How far along a path the first union stands; undefined if there is none. */
export function firstUnion(schema: z.ZodType, path: KeyPath): number | undefined {
  let at: z.ZodType | undefined = schema;
  for (let length = 0; length <= path.length && at !== undefined; length++) {
    if (bareSchema(at) instanceof z.ZodUnion) return length;
    at = length < path.length ? step(at, path[length]) : undefined;
  }
  return undefined;
}

/** The schema at a path below `schema`; the deepest one there is. */
export function descend(schema: z.ZodType, path: KeyPath): z.ZodType {
  let at = schema;
  for (const part of path) {
    const next = step(at, part);
    if (next === undefined) return at;
    at = next;
  }
  return at;
}
