import { type Matrix, pickColumns, zeros } from "../data/matrix.ts";
import { type Random, randomStream } from "../math/random.ts";
import { principalComponents } from "./components.ts";
import type { ComponentOptions, Within } from "./options.ts";
import { loadingIntervals } from "./resample.ts";
import type { Components, LoadingIntervals, SimplifiedComponents } from "./result.ts";
import { simplifyComponents } from "./simplify.ts";
import { componentsWithin } from "./within.ts";

const LEVEL = 0.95;
/** The group of the columns that stand in none of the user's. */
const REST = "the rest";

/** The group of each column: its theme, or the user's group; undefined where all columns are taken together. */
export function groupsOf(
  names: readonly string[],
  themes: readonly string[],
  within: Within,
): readonly string[] | undefined {
  if (within === "all") return undefined;
  if (within === "themes") return themes;
  const groups = Object.entries(within);
  return names.map((name) => groups.find(([, members]) => members.includes(name))?.[0] ?? REST);
}

/**
 * Components as the pipeline asks for them: over all columns or within groups, how many are kept, and for those kept the
 * simple loadings and the resampled intervals. `groups`: one per column, or undefined; `seed` feeds parallel analysis and
 * the resampling. Errors are those of `principalComponents`.
 */
export function reduceColumns(
  standard: Matrix,
  names: readonly string[],
  groups: readonly string[] | undefined,
  options: ComponentOptions,
  seed: number,
): Components {
  const components = plainComponents(standard, names, groups, options, randomStream(seed, "components", 0));
  const parts = partsOf(standard, components, groups);
  const { simplify, resamples } = options;
  const simplified =
    simplify === "none"
      ? undefined
      : joinSimplified(
          parts.map((part) => ({ part, made: simplifyComponents(part.columns, part.components, simplify) })),
          names,
          standard.rows,
        );
  const intervals =
    resamples === 0 || components.kept === 0
      ? undefined
      : joinIntervals(
          parts.map((part, i) => ({
            part,
            made: loadingIntervals(
              part.columns,
              part.components,
              { replicates: resamples, level: LEVEL },
              randomStream(seed, "loadings", i),
            ),
          })),
          names.length,
        );
  return {
    ...components,
    ...(simplified === undefined ? {} : { simplified }),
    ...(intervals === undefined ? {} : { intervals }),
  };
}

/** The components alone, as each fold of a prediction makes them again. */
export function plainComponents(
  standard: Matrix,
  names: readonly string[],
  groups: readonly string[] | undefined,
  { keep }: Pick<ComponentOptions, "keep">,
  random: Random,
): Components {
  return groups === undefined
    ? principalComponents(standard, names, keep, random)
    : componentsWithin(standard, names, groups, keep, random);
}

/** One group of columns with its own components, as many kept as the whole kept of it. */
interface Part {
  readonly name: string | undefined;
  readonly positions: readonly number[];
  readonly columns: Matrix;
  readonly components: Components;
}

function partsOf(
  standard: Matrix,
  components: Components,
  groups: readonly string[] | undefined,
): readonly Part[] {
  const { names, themes, kept } = components;
  if (groups === undefined || themes === undefined)
    return [{ name: undefined, positions: names.map((_, k) => k), columns: standard, components }];
  return [...new Set(groups)].flatMap((name) => {
    const number = themes.slice(0, kept).filter((theme) => theme === name).length;
    if (number === 0) return [];
    const positions = names.map((_, k) => k).filter((k) => groups[k] === name);
    const columns = pickColumns(standard, positions);
    const own = principalComponents(
      columns,
      positions.map((k) => names[k]),
      { type: "number", number },
    );
    return [{ name, positions, columns, components: own }];
  });
}

function joinSimplified(
  all: readonly { readonly part: Part; readonly made: SimplifiedComponents | undefined }[],
  names: readonly string[],
  rows: number,
): SimplifiedComponents | undefined {
  const given = all.flatMap(({ part, made }) => (made === undefined ? [] : [{ part, made }]));
  if (given.length === 0) return undefined;
  const k = given.reduce((sum, { made }) => sum + made.labels.length, 0);
  const loadings = zeros(names.length, k);
  const scores = zeros(rows, k);
  let at = 0;
  for (const { part, made } of given) {
    place(made.loadings, loadings, at, (i) => part.positions[i]);
    place(made.scores, scores, at, (i) => i);
    at += made.labels.length;
  }
  return {
    by: given[0].made.by,
    names,
    labels: given.flatMap(({ part, made }) =>
      made.labels.map((label) => (part.name === undefined ? label : `${part.name}, ${label}`)),
    ),
    loadings,
    scores,
    share: given.flatMap(({ part, made }) =>
      made.share.map((value) => (value * part.positions.length) / names.length),
    ),
    ledBy: given.flatMap(({ made }) => made.ledBy),
  };
}

function joinIntervals(
  all: readonly { readonly part: Part; readonly made: LoadingIntervals }[],
  K: number,
): LoadingIntervals {
  const k = all.reduce((sum, { made }) => sum + made.congruence.length, 0);
  const [lower, upper] = [zeros(K, k), zeros(K, k)];
  let at = 0;
  for (const { part, made } of all) {
    place(made.lower, lower, at, (i) => part.positions[i]);
    place(made.upper, upper, at, (i) => part.positions[i]);
    at += made.congruence.length;
  }
  return {
    level: LEVEL,
    replicates: Math.min(...all.map(({ made }) => made.replicates)),
    leftOut: Math.max(...all.map(({ made }) => made.leftOut)),
    lower,
    upper,
    congruence: all.flatMap(({ made }) => made.congruence),
  };
}

/** Writes a block into a wider matrix, from column `at` on, rows as told. */
function place(block: Matrix, into: Matrix, at: number, row: (i: number) => number): void {
  for (let i = 0; i < block.rows; i++)
    for (let j = 0; j < block.columns; j++)
      into.data[row(i) * into.columns + at + j] = block.data[i * block.columns + j];
}
