import { InputError } from "../errors.ts";

/** Adds the file's name to errors that speak of a place only. */
export function naming<Result>(path: string, work: () => Result): Result {
  try {
    return work();
  } catch (error) {
    if (!(error instanceof InputError) || error.facts.where?.file !== undefined) throw error;
    throw new InputError({ ...error.facts, where: { ...error.facts.where, file: path } }, error);
  }
}
