import { InputError } from "../errors.ts";
import type { Design, Part } from "./design.ts";
import type { SufficientStatistics } from "./statistics.ts";

/**
 * Refuses what no likelihood can be written for: a column with a value that is not a number
 * (`survival.column-not-finite`), a known recapture that the captures contradict (`survival.known-recapture`: known to be
 * 1 with animals passed over, or 0 with animals met).
 */
export function checkDesign(data: readonly SufficientStatistics[], design: Design): void {
  checkPart(design.survival, design.intervals);
  if (!("known" in design.recapture)) {
    checkPart(design.recapture, design.intervals);
    return;
  }
  const { known } = design.recapture;
  const sum = (key: "seen" | "passed") =>
    data.reduce((total, one) => total + one[key].reduce((a, b) => a + b, 0), 0);
  const against = known === 1 ? sum("passed") : known === 0 ? sum("seen") : 0;
  if (against === 0 && known >= 0 && known <= 1) return;
  throw new InputError({
    name: "survival.known-recapture",
    expected: "a known recapture from 0 to 1 that the captures can have come from",
    found: `${known}, with ${against} ${known === 0 ? "animals met" : "animals alive that were passed over"}`,
    where: { cell: "recapture" },
    remedy: "let recapture be estimated",
  });
}

function checkPart(part: Part, intervals: number): void {
  for (let k = 0; k < part.columns.length; k++) {
    const at = part.columns[k].findIndex((value) => !Number.isFinite(value));
    if (at < 0) continue;
    throw new InputError({
      name: "survival.column-not-finite",
      expected: "a number in every interval of every column",
      found: `${part.columns[k][at]} in ${part.names[k]}, interval ${(at % intervals) + 1}`,
      where: { cell: part.names[k] },
      remedy: "leave the covariate out, or choose a rule of completeness that fills its gaps",
    });
  }
}
