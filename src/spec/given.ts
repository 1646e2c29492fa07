import { FINDING_KINDS, type FindingKind } from "../data/finding.ts";

/** The same value with keys that are undefined left out, as the rooms' option types want it. */
export type Given<T> = T extends unknown
  ? { [K in keyof T as undefined extends T[K] ? never : K]: T[K] } & {
      [K in keyof T as undefined extends T[K] ? K : never]?: Exclude<T[K], undefined>;
    }
  : never;

export function given<T extends object>(value: T): Given<T> {
  return Object.fromEntries(Object.entries(value).filter(([, one]) => one !== undefined)) as Given<T>;
}

export function mapValues<A, B>(
  record: Readonly<Record<string, A>>,
  change: (value: A, key: string) => B,
): Record<string, B> {
  return Object.fromEntries(Object.entries(record).map(([key, value]) => [key, change(value, key)]));
}

/** One value for each kind of finding. */
export function byKind<T>(value: (kind: FindingKind) => T): Record<FindingKind, T> {
  // `fromEntries` forgets that every kind is there.
  return Object.fromEntries(FINDING_KINDS.map((kind) => [kind, value(kind)])) as Record<FindingKind, T>;
}
