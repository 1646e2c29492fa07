import { listWords } from "../../data/words.ts";
import type { Detection, DetectionRow, Rule } from "../../simulate/detect.ts";
import type { Share } from "../../simulate/tally.ts";
import { drawing, type Figure, fitted, label, rect, segment } from "../figure.ts";
import { type Html, html } from "../html.ts";
import { brief, counted, percent, px } from "../numbers.ts";
import { ink, type Token } from "../palette.ts";
import { line, ticks, tickText } from "../scale.ts";
import { SCREEN, type Size } from "../size.ts";

interface Panel {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

/** Height between the axes, px. */
const HIGH = 234;

/** Side by side, in a single column one below the other. */
function panelsOf({ narrow, width }: Size): readonly [Panel, Panel] {
  const first = { left: 58, right: narrow ? width - 12 : 366, top: 92, bottom: 92 + HIGH };
  return narrow
    ? [first, { ...first, top: first.bottom + 92, bottom: first.bottom + 92 + HIGH }]
    : [first, { ...first, left: 438, right: 746 }];
}

const TITLES = ["Found", "Something unrelated chosen"] as const;

const LOOKS: Readonly<
  Record<Rule, { readonly token: Token; readonly dash?: string; readonly shift: number }>
> = {
  "counting years": { token: "mark", shift: -2 },
  "counting animals": { token: "less", dash: "6 4", shift: 2 },
};

/** Power by size of the effect, and beside it what is chosen wrongly, for both rules with Monte Carlo bars. */
export function detectionFigure(detection: Detection, size: Size = SCREEN): Figure {
  const { rows, covariates, replicates, residual } = detection;
  const rules = Object.keys(LOOKS) as Rule[]; // the keys of the record above
  const effects = [...new Set(rows.map((one) => one.effect))];
  const title = "What this study can detect";
  const shares: readonly ((row: DetectionRow) => Share)[] = [(row) => row.found, (row) => row.unrelated];
  const of = (rule: Rule) => rows.filter((one) => one.rule === rule);
  const places = panelsOf(size);
  const width = size.narrow ? size.width : 760;
  const height = places[1].bottom + 54;
  const panels = places.map((panel, i) => {
    const { left, right, top, bottom } = panel;
    const low = Math.min(0, ...effects);
    const x = line([low, Math.max(...effects, low + 0.1)], [left + 10, right - 10]);
    const y = line([0, 1], [bottom, top]);
    return html`${label(left, top - 18, TITLES[i], { weight: 700, size: 13 })}${axes(x, y, panel, effects)}${rules.map(
      (rule) => curve(of(rule), shares[i], x, y, LOOKS[rule]),
    )}`;
  });
  const says = rules
    .map((rule) => {
      const each = of(rule).map((row) => `${tickText(row.effect)}: ${percent(row.found.share)}`);
      return `${rule}, found by size of effect ${each.join(", ")}`;
    })
    .join("; ");
  const heading =
    covariates.length === 1
      ? `Share of drawn studies, if ${covariates[0]} acts on survival`
      : `Share of drawn studies, if ${listWords(covariates)} act on survival, by the same size each`;
  return {
    name: "detection",
    title,
    caption: `Share of ${counted(replicates, "drawn study", "drawn studies")} in which ${listWords(covariates)} ${covariates.length === 1 ? "is" : "are all"} chosen (found), and in which something is chosen whose |r| with the truth is below 0.5 (unrelated), by size of the effect. At 0 nothing acts, so whatever is chosen is wrong. Bars: 95 % Monte Carlo intervals. Residual sd between years ${brief(Number(residual.toFixed(3)))} on the logit.`,
    svg: drawing(
      width,
      height,
      title,
      says,
      html`${rect(0, 0, width, height, "panel")}${label(58, 22, fitted(heading, width - 66, 14), { size: 14 })}${legend(rules)}${panels}`,
    ),
  };
}

function legend(rules: readonly Rule[]): Html[] {
  return rules.map((rule, i) => {
    const x = 58 + i * 160;
    const { token, dash } = LOOKS[rule];
    return html`${segment(x, 44, x + 34, 44, token, 2, dash)}${dot(rule, x + 17, 44)}${label(x + 42, 48, rule)}`;
  });
}

function axes(
  x: (value: number) => number,
  y: (value: number) => number,
  { left, right, bottom }: Panel,
  effects: readonly number[],
): Html {
  const across = [0, 0.25, 0.5, 0.75, 1].map(
    (share) =>
      html`${segment(left, y(share), right, y(share), "rule")}${label(left - 8, y(share) + 4, `${100 * share} %`, { fill: "muted", anchor: "end" })}`,
  );
  const along = ticks(Math.min(0, ...effects), Math.max(...effects, 0.1), 5).map(
    (value) =>
      html`${segment(x(value), bottom, x(value), bottom + 5, "rule")}${label(x(value), bottom + 20, tickText(value), { fill: "muted", anchor: "middle" })}`,
  );
  return html`${across}${along}${label((left + right) / 2, bottom + 42, "size of the effect (logit per sd)", { anchor: "middle" })}`;
}

function curve(
  rows: readonly DetectionRow[],
  share: (row: DetectionRow) => Share,
  x: (value: number) => number,
  y: (value: number) => number,
  look: (typeof LOOKS)[Rule],
): Html {
  // set a little apart, so that bars of the two rules can be told where they agree
  const at = (row: DetectionRow) => x(row.effect) + look.shift;
  const steps = rows.map((row, i) => `${i === 0 ? "M" : "L"}${px(at(row))},${px(y(share(row).share))}`);
  const path = html`<path d="${steps.join("")}" fill="none" stroke="${ink(look.token)}" stroke-width="2"${look.dash !== undefined && html` stroke-dasharray="${look.dash}"`}/>`;
  const bars = rows.map((row) =>
    segment(at(row), y(share(row).low), at(row), y(share(row).high), look.token, 1.25),
  );
  return html`${path}${bars}${rows.map((row) => dot(row.rule, at(row), y(share(row).share)))}`;
}

/** Round for years, square for animals, so that the two can be told without colour. */
function dot(rule: Rule, x: number, y: number): Html {
  const fill = ink(LOOKS[rule].token);
  return rule === "counting years"
    ? html`<circle cx="${px(x)}" cy="${px(y)}" r="4" fill="${fill}"/>`
    : html`<rect x="${px(x - 3.5)}" y="${px(y - 3.5)}" width="7" height="7" fill="${fill}"/>`;
}
