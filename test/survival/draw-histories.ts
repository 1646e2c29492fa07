import type { Random } from "../../src/math/random.ts";
import type { History } from "../../src/study/histories.ts";

export interface Drawing {
  readonly occasions: number;
  /** Animals newly marked at every occasion. */
  readonly marked: number;
  readonly survival: number;
  readonly recapture: number;
  /** Share of newly marked animals that leave at once. */
  readonly visitors?: number;
  /** Recapture of an animal that was met at the occasion before; `recapture` if not said. */
  readonly recaptureAfterMeeting?: number;
  readonly loss?: number;
  readonly stratum?: string;
}

/** Animals one by one, with what breaks the general model if it is asked for. */
export function drawHistories(truth: Drawing, random: Random): History[] {
  const histories: History[] = [];
  const { occasions, marked, survival, recapture, visitors = 0, loss = 0, stratum = "all" } = truth;
  for (let first = 0; first < occasions; first++)
    for (let animal = 0; animal < marked; animal++) {
      const seen = [first];
      let lost = random.uniform() < loss;
      const leaves = random.uniform() < visitors;
      for (let t = first + 1; !lost && !leaves && t < occasions && random.uniform() < survival; t++) {
        const met = seen.at(-1) === t - 1;
        if (random.uniform() >= (met ? (truth.recaptureAfterMeeting ?? recapture) : recapture)) continue;
        seen.push(t);
        lost = random.uniform() < loss;
      }
      histories.push({ stratum, seen, lost, number: 1 });
    }
  return histories;
}
