import { type ErrorFacts, InputError, type Place } from "../errors.ts";
import { cellText, type KeyPath } from "./path.ts";
import type { YamlText } from "./yaml.ts";

/** What is wrong at a key path; where it stands is added from the file. */
export interface Problem extends Omit<ErrorFacts, "where"> {
  readonly path: KeyPath;
  /** True if the key is at fault and not its value. */
  readonly atKey?: boolean;
}

/** Where a path stands; the place of the nearest enclosing value if the path itself is not written. */
export function placeOf(yaml: YamlText, path: KeyPath, atKey = false): Place {
  const cell: Place = path.length === 0 ? {} : { cell: cellText(path) };
  for (let length = path.length; length >= 0; length--) {
    const part = path.slice(0, length);
    // For a missing key the mapping's own key is the better place to look at than its first entry.
    const wantsKey = atKey || length < path.length;
    const at = (wantsKey ? yaml.keyAt(part) : undefined) ?? yaml.valueAt(part);
    if (at !== undefined) return { file: yaml.file, ...at, ...cell };
  }
  return { file: yaml.file, ...cell };
}

function factsOf(yaml: YamlText, problem: Problem): ErrorFacts {
  const { path, atKey, ...facts } = problem;
  return { ...facts, where: placeOf(yaml, path, atKey) };
}

/** In the order of the file; of several at one spot the order they were found in. */
export function orderedFacts(yaml: YamlText, problems: readonly Problem[]): ErrorFacts[] {
  const key = (facts: ErrorFacts) => (facts.where?.line ?? 0) * 1e6 + (facts.where?.column ?? 0);
  return problems.map((problem) => factsOf(yaml, problem)).sort((a, b) => key(a) - key(b));
}

/** Throws the first problem in the order of the file; says how many there are beside it. */
export function refuseProblems(yaml: YamlText, problems: readonly Problem[]): void {
  const facts = orderedFacts(yaml, problems);
  if (facts.length === 0) return;
  const others = facts.length - 1;
  const more = others === 0 ? "" : ` (and ${others} more problem${others === 1 ? "" : "s"} further down)`;
  throw new InputError({ ...facts[0], remedy: `${facts[0].remedy}${more}` });
}
