import { agnes, type Cluster as Node } from "ml-hclust";
import type { Matrix } from "../data/matrix.ts";
import type { Cluster, Merge } from "./result.ts";

export interface ClusterTree {
  readonly merges: readonly Merge[];
  /** Column indices along the tree. */
  readonly order: readonly number[];
}

/** Distances are compared to this many decimals, so that rounding does not decide between ties. */
const DECIMALS = 1e13;

/**
 * Average linkage on 1 − |r| (Sokal & Michener 1958; a pair without r is at distance 1). Columns are taken in order of
 * name, so ties fall the same way whatever the order of the columns. In each merge single columns stand before
 * clusters, earlier clusters before later ones; `order` reads the leaves in that sense.
 */
export function clusterTree(r: Matrix, names: readonly string[]): ClusterTree {
  const K = names.length;
  if (K < 2) return { merges: [], order: names.map((_, k) => k) };
  const sorted = names.map((_, k) => k).sort((a, b) => (names[a] < names[b] ? -1 : 1));
  const distances = sorted.map((a) =>
    sorted.map((b) => {
      const close = a === b ? 1 : Math.abs(r.data[a * K + b]);
      return Number.isNaN(close) ? 1 : Math.round((1 - close) * DECIMALS) / DECIMALS;
    }),
  );
  const root = agnes(distances, { method: "average", isDistanceMatrix: true });
  const nodes = innerNodes(root);
  const place = new Map(nodes.map(({ node }, at) => [node, at]));
  // Leaves below, clusters above: the sorted position counts from −K.
  const rank = (node: Node) => (node.isLeaf ? node.index - K : (place.get(node) as number));
  const id = (node: Node) => (node.isLeaf ? -1 - sorted[node.index] : (place.get(node) as number));
  const merges = nodes.map(({ node, height }) => {
    const [left, right] = [...node.children].sort((a, b) => rank(a) - rank(b));
    return { left: id(left), right: id(right), height };
  });
  return { merges, order: leaves(merges, K - 2) };
}

/** Inner nodes from the lowest up, children always before their parents. */
function innerNodes(root: Node): { node: Node; height: number }[] {
  const out: { node: Node; height: number }[] = [];
  const walk = (node: Node): number => {
    if (node.isLeaf) return 0;
    const below = node.children.map(walk);
    // Average linkage never falls but by rounding, which must not put a parent below its child.
    const height = Math.max(node.height, ...below);
    out.push({ node, height });
    return height;
  };
  walk(root);
  return out.sort((a, b) => a.height - b.height);
}

/** Column indices below merge `at`, left to right. */
function leaves(merges: readonly Merge[], at: number): number[] {
  const { left, right } = merges[at];
  return [left, right].flatMap((one) => (one < 0 ? [-1 - one] : leaves(merges, one)));
}

/**
 * Cuts the tree at a mean |r| of `cut` between what is merged: every merge at a height of at most 1 − cut holds.
 * Clusters stand in the order of their first column, members in the order of the columns. The member closest to the
 * others has the largest mean |r| to them; between equals (always so in a pair) the one with the smaller mean |r| to
 * the columns outside, then the first by name.
 */
export function cutTree(
  { merges }: ClusterTree,
  r: Matrix,
  names: readonly string[],
  cut: number,
): Cluster[] {
  const K = names.length;
  const home = names.map((_, k) => k);
  merges.forEach((merge, at) => {
    // Rounding of the heights must not part what stands exactly at the cut.
    if (merge.height > 1 - cut + 1e-12) return;
    const below = leaves(merges, at);
    const first = Math.min(...below.map((k) => home[k]));
    for (const k of below) home[k] = first;
  });
  const size = (a: number, b: number) => {
    const value = Math.abs(r.data[a * K + b]);
    return Number.isNaN(value) ? 0 : value;
  };
  const all = names.map((_, k) => k);
  return all
    .filter((k) => home[k] === k)
    .map((first) => {
      const members = all.filter((k) => home[k] === first);
      const outside = all.filter((k) => home[k] !== first);
      const choices = members.map((keep) => {
        const others = members.filter((k) => k !== keep).map((k) => size(keep, k));
        return {
          keep,
          meanR: others.length === 0 ? 1 : average(others),
          leastR: others.length === 0 ? 1 : Math.min(...others),
          outside: average(outside.map((k) => size(keep, k))),
        };
      });
      const [closest] = [...choices].sort(
        (a, b) =>
          apart(b.meanR, a.meanR) || apart(a.outside, b.outside) || (names[a.keep] < names[b.keep] ? -1 : 1),
      );
      return {
        members: members.map((k) => names[k]),
        closest: names[closest.keep],
        choices: choices.map(({ keep, meanR, leastR }) => ({ keep: names[keep], meanR, leastR })),
      };
    });
}

function average(values: readonly number[]): number {
  return values.length === 0 ? 0 : values.reduce((sum, value) => sum + value, 0) / values.length;
}

/** a − b, or 0 where they differ by rounding only. */
function apart(a: number, b: number): number {
  return Math.abs(a - b) <= 1e-10 ? 0 : a - b;
}
