import type { Cast } from "../cast.ts";
import { belongs, drawing, type Figure, fitted, label, marker, rect, segment } from "../figure.ts";
import type { ReportInput } from "../input.ts";
import { counted, percent } from "../numbers.ts";
import { shortR, signedLegend, signedSquare } from "./signed.ts";

const LEFT = 190;
const WIDE = 92;

/** What each component is made of: its correlation with every covariate. */
export function loadings(input: ReportInput, cast: Cast): Figure | undefined {
  const { components } = input;
  if (components === undefined || components.labels.length === 0) return undefined;
  const { names, labels, correlations, kept, share } = components;
  const shown = Math.min(labels.length, Math.max(kept, Math.min(4, labels.length)), 10);
  const order =
    input.diagnosis?.order.length === names.length ? input.diagnosis.order : names.map((_, k) => k);
  const high = names.length > 40 ? 14 : 26;
  const top = 46;
  const bottom = top + names.length * high;
  const value = (k: number, j: number) => correlations.data[k * correlations.columns + j];
  const says = labels.slice(0, shown).map((text, j) => {
    const strongest = names
      .map((name, k) => ({ name, r: value(k, j) }))
      .sort((a, b) => Math.abs(b.r) - Math.abs(a.r));
    return `${text} (${percent(share[j])} of variance): ${strongest
      .slice(0, 3)
      .map((one) => `${one.name} ${shortR(one.r)}`)
      .join(", ")}`;
  });
  return {
    name: "component-loadings",
    title: "What the components are made of",
    caption: `Correlation of each covariate with the first ${counted(shown, "component")}; the shaded columns are the ${kept} kept. Covariates in the order of clusters.`,
    svg: drawing(
      Math.max(LEFT + shown * WIDE + 12, 640),
      bottom + 34,
      "What the components are made of",
      says.join("; "),
      [
        kept > 0 && rect(LEFT, 0, Math.min(kept, shown) * WIDE, bottom, "wash"),
        labels
          .slice(0, shown)
          .map((text, j) => [
            label(LEFT + (j + 0.5) * WIDE, 18, text, { anchor: "middle", weight: j < kept ? 700 : 400 }),
            label(LEFT + (j + 0.5) * WIDE, 34, percent(share[j]), { anchor: "middle", fill: "muted" }),
          ]),
        order.map((k, i) => {
          const y = top + (i + 0.5) * high;
          const member = cast.byName.get(names[k]);
          return belongs(member, [
            segment(LEFT, y - high / 2, LEFT + shown * WIDE, y - high / 2, "rule", 0.5),
            member !== undefined && marker(member.theme, LEFT - 14, y),
            label(LEFT - 24, y + 4, fitted(names[k], LEFT - 34), {
              anchor: "end",
              size: high < 20 ? 11 : 12,
            }),
            labels
              .slice(0, shown)
              .map((_, j) => [
                signedSquare(value(k, j), LEFT + j * WIDE + 30, y, high),
                label(LEFT + j * WIDE + 78, y + 4, shortR(value(k, j)), { anchor: "end", size: 11 }),
              ]),
          ]);
        }),
        signedLegend(LEFT, bottom + 24),
      ],
    ),
  };
}
