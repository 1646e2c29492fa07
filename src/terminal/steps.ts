import { cut, fill, pad, plain, type Style } from "./style.ts";

/** What became of a step of a run, as far as it is shown. */
export interface ShownStep {
  readonly step: string;
  readonly outcome: "ran" | "reused";
  readonly why: string;
}

/** One row a step in the order of the work: what became of it, its name, and why. */
export function stepLines(steps: readonly ShownStep[], style: Style, width = 80): string[] {
  const ran = steps.filter((one) => one.outcome === "ran").length;
  const label = Math.min(Math.floor(width / 3), Math.max(0, ...steps.map((one) => plain(one.step).length)));
  return [
    style.strong(`${ran} of ${steps.length} steps ran, ${steps.length - ran} reused`),
    ...steps.flatMap(({ step, outcome, why }) =>
      fill(plain(why), width - label - 12).map((line, i) => {
        const head =
          i === 0 ? `${pad(outcome, 6)}  ${pad(cut(plain(step), label), label)}` : " ".repeat(label + 8);
        return `  ${outcome === "reused" ? style.faint(head) : head}  ${line}`;
      }),
    ),
  ];
}
