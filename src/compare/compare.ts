import type { Components } from "../components/result.ts";
import type { ScreenOptions } from "../screen/options.ts";
import type { ScreenProblem } from "../screen/problem.ts";
import type { ScreenResult } from "../screen/screen.ts";
import { type Agreement, agreement } from "./agreement.ts";
import { buildCandidates, type Candidate } from "./candidates.ts";
import { type Verdict, verdict } from "./verdict.ts";

export interface Comparison {
  readonly candidates: readonly Candidate[];
  readonly agreement: Agreement;
  readonly verdict: Verdict;
}

/** Selection against components on the same data, recapture part and criterion. */
export function compare(
  problem: ScreenProblem,
  screened: ScreenResult,
  components: Components | undefined,
  pruned: readonly string[],
  options: ScreenOptions,
): Comparison {
  const candidates = buildCandidates(problem, screened, components, pruned, options);
  const agreed = agreement(problem, screened, candidates, components);
  return { candidates, agreement: agreed, verdict: verdict(screened, agreed) };
}
