import fc from "fast-check";
import type { Cell, Table, TableColumn } from "../../src/tables/table.ts";

const TYPES = ["text", "number", "integer", "truth"] as const;

/** Any code points but lone surrogates, which UTF-8 has no bytes for. */
const text = fc.oneof(
  fc.string({ unit: "binary" }),
  fc
    .tuple(
      fc.constantFrom("=", "+", "-", "@", "\t", "\r", "'", "'=", "''@", '"', ",", "\n", " "),
      fc.string(),
    )
    .map(([head, tail]) => head + tail),
);

const cells: Readonly<Record<TableColumn["type"], fc.Arbitrary<Cell>>> = {
  text: fc.option(text, { nil: undefined }),
  number: fc.option(fc.double(), { nil: undefined }),
  integer: fc.option(fc.maxSafeInteger(), { nil: undefined }),
  truth: fc.option(fc.boolean(), { nil: undefined }),
};

export function column(name: string, type: TableColumn["type"], unit?: string): TableColumn {
  const words = { name, title: name, type, description: `What ${name} says.` };
  return unit === undefined ? words : { ...words, unit };
}

/** Tables of any shape; column names as a covariate matrix has them, and stranger ones. */
export const anyTable: fc.Arbitrary<Table> = fc
  .uniqueArray(
    fc.record({
      name: fc.oneof(
        fc.stringMatching(/^[a-z][a-z0-9_]{0,8}$/),
        // no pipeline file holds a control character, and no SQL a NUL
        text.filter((one) => one !== "" && !one.includes("\0")),
        fc.constant("__proto__"),
      ),
      type: fc.constantFrom(...TYPES),
    }),
    { minLength: 1, maxLength: 5, selector: (one) => one.name },
  )
  .chain((columns) =>
    fc.array(fc.tuple(...columns.map((one) => cells[one.type])), { maxLength: 8 }).map((rows) => ({
      name: "any",
      title: "Any",
      description: "",
      columns: columns.map((one) => column(one.name, one.type)),
      rows,
    })),
  );
