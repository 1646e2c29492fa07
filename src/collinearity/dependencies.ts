import { column, type Matrix, pickColumns } from "../data/matrix.ts";
import { decompose, EXACT } from "./decomposition.ts";
import { relationOf } from "./relation.ts";
import type { Dependency } from "./result.ts";

/** The largest dependency that is looked for. */
const LARGEST = 4;

/**
 * Names exact linear dependencies of 2, 3 and 4 centred columns, small ones first: pairs against the first column (by
 * name) they repeat, then triples and fours among what is left. A dependency that follows from those already named is
 * not named again, so there are at most K − rank of them. With n rows any n columns depend on each other; sets that
 * large say nothing about the columns and are passed over.
 *
 * `unit`: n × K centred columns of unit length; `candidates`: the columns with infinite inflation, the only ones that
 * can take part; `values`: the same columns in the units in which the relation is to be told.
 * Cost: K⁴/24 additions over the candidates, each possible set then confirmed by its singular values.
 */
export function exactDependencies(
  unit: Matrix,
  names: readonly string[],
  candidates: readonly number[],
  values: Matrix,
): Dependency[] {
  const largest = Math.min(LARGEST, unit.rows - 1);
  // Searched in order of name, so that the order of the columns changes nothing.
  const sorted = [...candidates].sort((a, b) => (names[a] < names[b] ? -1 : 1));
  const groups: { first: number; copies: number[] }[] = [];
  for (const k of largest >= 2 ? sorted : []) {
    const group = groups.find(({ first }) => repeats(unit, first, k));
    if (group === undefined) groups.push({ first: k, copies: [] });
    else group.copies.push(k);
  }
  const found = groups.flatMap(({ first, copies }) => copies.map((copy) => [first, copy]));
  const distinct = groups.map(({ first }) => first);
  const basis: Float64Array[] = [];
  const nullity = distinct.length - decompose(pickColumns(unit, distinct), EXACT).rank;
  const cross = crossProducts(unit, distinct);
  const keep = (set: readonly number[]) => {
    const vector = nullVector(unit, distinct, set);
    if (vector !== undefined && addTo(basis, vector))
      found.push(set.map((at) => distinct[at]).sort(byNumber));
  };
  if (largest >= 3 && basis.length < nullity) searchTriples(cross, distinct.length, keep);
  if (largest >= 4 && basis.length < nullity) searchFours(cross, distinct.length, keep);
  return found.map((set) => {
    const members = [...set].sort(byNumber);
    const told = members.map((k) => names[k]);
    return {
      names: told,
      ...relationOf(
        told,
        members.map((k) => column(values, k)),
      ),
    };
  });
}

const byNumber = (a: number, b: number) => a - b;

/** True if unit column b is a or −a. */
function repeats(unit: Matrix, a: number, b: number): boolean {
  let [plus, minus] = [0, 0];
  for (let i = 0; i < unit.rows; i++) {
    const [x, y] = [unit.data[i * unit.columns + a], unit.data[i * unit.columns + b]];
    minus += (x - y) ** 2;
    plus += (x + y) ** 2;
  }
  return Math.min(plus, minus) <= EXACT * EXACT;
}

function crossProducts(unit: Matrix, which: readonly number[]): Float64Array {
  const K = which.length;
  const columns = which.map((k) => column(unit, k));
  const out = new Float64Array(K * K);
  for (let a = 0; a < K; a++)
    for (let b = a; b < K; b++) {
      let sum = 0;
      for (let i = 0; i < unit.rows; i++) sum += columns[a][i] * columns[b][i];
      out[a * K + b] = sum;
      out[b * K + a] = sum;
    }
  return out;
}

/**
 * Cross products lose half the digits, so they only pick the sets worth a closer look: what is left of the last
 * column, squared, within the rounding that division by the smallest pivot can cause.
 */
const worthALook = (left: number, pivot: number) => left <= 1e-9 + 1e-13 / pivot;

type Keep = (set: readonly number[]) => void;

function searchTriples(cross: Float64Array, K: number, keep: Keep): void {
  for (let a = 0; a < K; a++)
    for (let b = a + 1; b < K; b++) {
      const ab = cross[a * K + b];
      const pivot = Math.max(1 - ab * ab, EXACT * EXACT);
      for (let c = b + 1; c < K; c++) {
        const ac = cross[a * K + c];
        const left = 1 - ac * ac - (cross[b * K + c] - ab * ac) ** 2 / pivot;
        if (worthALook(left, pivot)) keep([a, b, c]);
      }
    }
}

function searchFours(cross: Float64Array, K: number, keep: Keep): void {
  const left = new Float64Array(K);
  const slope = new Float64Array(K);
  for (let a = 0; a < K; a++)
    for (let b = a + 1; b < K; b++) {
      const ab = cross[a * K + b];
      const pivot = Math.max(1 - ab * ab, EXACT * EXACT);
      // What a and b leave of each later column, squared.
      for (let c = b + 1; c < K; c++) {
        slope[c] = cross[b * K + c] - ab * cross[a * K + c];
        left[c] = 1 - cross[a * K + c] ** 2 - slope[c] ** 2 / pivot;
      }
      for (let c = b + 1; c < K; c++) {
        const next = Math.max(left[c], EXACT * EXACT);
        for (let d = c + 1; d < K; d++) {
          const cd = cross[c * K + d] - cross[a * K + c] * cross[a * K + d] - (slope[c] * slope[d]) / pivot;
          if (worthALook(left[d] - (cd * cd) / next, Math.min(pivot, next))) keep([a, b, c, d]);
        }
      }
    }
}

/** The combination of the set that vanishes, among all distinct columns; undefined if there is none. */
function nullVector(
  unit: Matrix,
  distinct: readonly number[],
  set: readonly number[],
): Float64Array | undefined {
  const picked = pickColumns(
    unit,
    set.map((at) => distinct[at]),
  );
  const { vectors, rank } = decompose(picked, EXACT);
  if (rank === set.length) return undefined;
  const out = new Float64Array(distinct.length);
  set.forEach((at, k) => {
    out[at] = vectors.data[k * set.length + set.length - 1];
  });
  return out;
}

/** Adds a vector to an orthonormal basis (Gram–Schmidt, twice); false if it is in its span already. */
function addTo(basis: Float64Array[], vector: Float64Array): boolean {
  const left = Float64Array.from(vector);
  for (let pass = 0; pass < 2; pass++)
    for (const one of basis) {
      const dot = one.reduce((sum, value, i) => sum + value * left[i], 0);
      for (let i = 0; i < left.length; i++) left[i] -= dot * one[i];
    }
  const length = Math.hypot(...left);
  if (length <= 1e-6) return false;
  basis.push(left.map((value) => value / length));
  return true;
}
