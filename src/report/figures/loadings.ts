import type { Cast } from "../cast.ts";
import { belongs, drawing, type Figure, fitted, label, marker, rect, segment } from "../figure.ts";
import type { ReportInput } from "../input.ts";
import { counted, percent } from "../numbers.ts";
import type { Size } from "../size.ts";
import { shortR, signedLegend, signedSquare } from "./signed.ts";

/** What each component is made of: its correlation with every covariate. */
export function loadings(input: ReportInput, cast: Cast, size: Size): Figure | undefined {
  const left = size.names + 12;
  const { components } = input;
  if (components === undefined || components.labels.length === 0) return undefined;
  const { names, labels, correlations, kept, share } = components;
  const shown = Math.min(labels.length, Math.max(kept, Math.min(4, labels.length)), 10);
  const wide = Math.min(92, (size.width - left - 6) / shown);
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
      Math.max(left + shown * wide + 6, Math.min(640, size.width)),
      bottom + 34,
      "What the components are made of",
      says.join("; "),
      [
        kept > 0 && rect(left, 0, Math.min(kept, shown) * wide, bottom, "wash"),
        labels.slice(0, shown).map((text, j) => [
          label(left + (j + 0.5) * wide, 18, wide < 84 ? text.replace("component ", "") : text, {
            anchor: "middle",
            weight: j < kept ? 700 : 400,
          }),
          label(left + (j + 0.5) * wide, 34, percent(share[j]), { anchor: "middle", fill: "muted" }),
        ]),
        order.map((k, i) => {
          const y = top + (i + 0.5) * high;
          const member = cast.byName.get(names[k]);
          return belongs(member, [
            segment(left, y - high / 2, left + shown * wide, y - high / 2, "rule", 0.5),
            member !== undefined && marker(member.theme, left - 14, y),
            label(left - 24, y + 4, fitted(names[k], left - 34), {
              anchor: "end",
              size: high < 20 ? 11 : 12,
            }),
            labels
              .slice(0, shown)
              .map((_, j) => [
                signedSquare(value(k, j), left + (j + 0.33) * wide, y, high),
                label(left + (j + 0.87) * wide, y + 4, shortR(value(k, j)), { anchor: "end", size: 11 }),
              ]),
          ]);
        }),
        signedLegend(size.narrow ? 4 : left, bottom + 24, size.narrow),
      ],
    ),
  };
}
