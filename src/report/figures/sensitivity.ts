import type { Cast } from "../cast.ts";
import { belongs, drawing, type Figure, fitted, label, marker, rect, segment } from "../figure.ts";
import { html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, px } from "../numbers.ts";
import { ink } from "../palette.ts";
import type { Size } from "../size.ts";

const HIGH = 24;

/** What is selected where: covariates down, analyses across. */
export function sensitivityFigure({ comparison }: ReportInput, cast: Cast, size: Size): Figure | undefined {
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
  const left = size.names + 12;
  // upright names need no room on the right
  const right = size.narrow ? 8 : 130;
  const wide = Math.min(30, (size.width - left - right) / analyses.length);
  const side = Math.min(13, wide - 4);
  const longest = Math.max(...analyses.map((one) => Math.min(one.name.length, 26)));
  const top = 16 + longest * (size.narrow ? 6.2 : 4.8);
  const bottom = top + names.length * HIGH;
  const x = (a: number) => left + (a + 0.5) * wide;
  const mark = (name: string, a: number, y: number) => {
    const one = analyses[a];
    if (!one.candidates.includes(name))
      return label(x(a), y + 4, "×", { anchor: "middle", fill: "muted", size: 10 });
    const rival = one.rivals.some(({ others }) => others.includes(name));
    const square = (filled: boolean) =>
      html`<rect x="${px(x(a) - side / 2)}" y="${px(y - side / 2)}" width="${side}" height="${side}" fill="${filled ? ink("mark") : "none"}" stroke="${ink("mark")}" stroke-width="1.5"/>`;
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
      Math.max(left + analyses.length * wide + right, size.narrow ? size.width : 640),
      bottom + 10,
      "What is selected where",
      `${counted(analyses.length, "analysis", "analyses")}; ${says.length === 0 ? "nothing chosen by years in any" : says.join(", ")}`,
      [
        rect(left, top, wide, bottom - top, "wash"),
        analyses.map((one, a) =>
          label(x(a) + (size.narrow ? 4 : -2), top - 8, fitted(one.name, 26 * 0.55 * 11, 11), {
            size: 11,
            turn: size.narrow ? -90 : -50,
          }),
        ),
        names.map((name, i) => {
          const y = top + (i + 0.5) * HIGH;
          const member = cast.byName.get(name);
          return belongs(member, [
            segment(left, y - HIGH / 2, left + analyses.length * wide, y - HIGH / 2, "rule", 0.5),
            member !== undefined && marker(member.theme, left - 14, y),
            label(left - 24, y + 4, fitted(name, left - 34), { anchor: "end" }),
            analyses.map((_, a) => mark(name, a, y)),
          ]);
        }),
      ],
    ),
  };
}
