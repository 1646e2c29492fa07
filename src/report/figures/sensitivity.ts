import type { Cast } from "../cast.ts";
import { belongs, drawing, type Figure, fitted, label, marker, rect, segment } from "../figure.ts";
import { html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, px } from "../numbers.ts";
import { ink } from "../palette.ts";

const LEFT = 190;
const WIDE = 30;
const HIGH = 24;

/** What is selected where: covariates down, analyses across. */
export function sensitivityFigure({ comparison }: ReportInput, cast: Cast): Figure | undefined {
  const sensitivity = comparison?.sensitivity;
  if (sensitivity === undefined) return undefined;
  const analyses = sensitivity.analyses.filter((one) => one.failed === undefined);
  const named = sensitivity.stands.map((one) => one.name);
  const chosen = named.filter((name) =>
    analyses.some(
      (one) =>
        one.byYears.includes(name) ||
        one.byAnimals.includes(name) ||
        one.rivals.some(({ others }) => others.includes(name)),
    ),
  );
  // where there are many, those that are chosen nowhere are left to the tables
  const names = named.length <= 30 ? named : chosen;
  if (analyses.length < 2 || names.length === 0) return undefined;
  const longest = Math.max(...analyses.map((one) => Math.min(one.name.length, 26)));
  const top = 16 + longest * 4.8;
  const bottom = top + names.length * HIGH;
  const x = (a: number) => LEFT + (a + 0.5) * WIDE;
  const mark = (name: string, a: number, y: number) => {
    const one = analyses[a];
    const size = 13;
    if (!one.candidates.includes(name))
      return label(x(a), y + 4, "×", { anchor: "middle", fill: "muted", size: 10 });
    const rival = one.rivals.some(({ others }) => others.includes(name));
    const square = (filled: boolean) =>
      html`<rect x="${px(x(a) - size / 2)}" y="${px(y - size / 2)}" width="${size}" height="${size}" fill="${filled ? ink("mark") : "none"}" stroke="${ink("mark")}" stroke-width="1.5"/>`;
    const years = one.byYears.includes(name) ? square(true) : rival ? square(false) : undefined;
    const animals =
      one.byAnimals.includes(name) &&
      html`<circle cx="${px(x(a))}" cy="${px(y)}" r="2.6" fill="${ink(one.byYears.includes(name) ? "panel" : "ink")}"/>`;
    return html`${years}${animals}`;
  };
  const says = sensitivity.stands
    .filter((one) => one.chosen > 0)
    .map((one) => `${one.name} chosen by years in ${one.chosen} of ${analyses.length}`);
  return {
    name: "sensitivity",
    title: "What is selected where",
    caption: `Each column is one analysis, the study as it stands first (shaded). Filled square: chosen counting years; hollow: the data cannot tell it from one that was; dot: chosen counting animals; ×: not among the candidates.`,
    svg: drawing(
      Math.max(LEFT + analyses.length * WIDE + 130, 640),
      bottom + 10,
      "What is selected where",
      `${counted(analyses.length, "analysis", "analyses")}; ${says.length === 0 ? "nothing chosen by years in any" : says.join(", ")}`,
      [
        rect(LEFT, top, WIDE, bottom - top, "wash"),
        analyses.map((one, a) =>
          label(x(a) - 2, top - 8, fitted(one.name, 26 * 0.55 * 11, 11), { size: 11, turn: -50 }),
        ),
        names.map((name, i) => {
          const y = top + (i + 0.5) * HIGH;
          const member = cast.byName.get(name);
          return belongs(member, [
            segment(LEFT, y - HIGH / 2, LEFT + analyses.length * WIDE, y - HIGH / 2, "rule", 0.5),
            member !== undefined && marker(member.theme, LEFT - 14, y),
            label(LEFT - 24, y + 4, fitted(name, LEFT - 34), { anchor: "end" }),
            analyses.map((_, a) => mark(name, a, y)),
          ]);
        }),
      ],
    ),
  };
}
