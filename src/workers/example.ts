/** Input and result of the example task: plain values and typed arrays, as everything that crosses to a worker. */
export interface SumsInput {
  readonly values: Float64Array;
  readonly power: number;
}

/** The sum of the powers of the values, left to right. It stands in the table so that tests have a task to send. */
export function sumOfPowers({ values, power }: SumsInput): number {
  if (!Number.isInteger(power)) throw new RangeError(`expected a whole power, found ${power}`);
  let sum = 0;
  for (const value of values) sum += value ** power;
  return sum;
}
