import type { CorrelationTable } from "../../collinearity/result.ts";
import type { Cast } from "../cast.ts";
import { belongs, drawing, type Figure, fitted, label, marker, segment } from "../figure.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { brief, counted, px } from "../numbers.ts";
import { ink } from "../palette.ts";
import type { Size } from "../size.ts";
import { shortR, signedLegend, signedSquare } from "./signed.ts";

/** Correlations of the covariates, ordered so that those of one cluster stand together. */
export function correlationMap(input: ReportInput, cast: Cast, size: Size): Figure | undefined {
  const { diagnosis } = input;
  if (diagnosis === undefined || diagnosis.pearson.names.length < 2) return undefined;
  const many = diagnosis.clusters.filter((one) => one.members.length > 1).length;
  return triangles(input, cast, size, diagnosis.pearson, diagnosis.pearson, {
    name: "correlation",
    title: "Which covariates tell the same story",
    caption: (numbers) =>
      `Pearson correlation of the covariates over intervals, in the order of clusters${numbers ? "; the same values as numbers above the diagonal, bold where |r| is above the limit" : ""}. Frames hold the clusters (${counted(many, "cluster")} of two or more).`,
    label: "Correlation of the covariates",
  });
}

/** The same once shared trends are taken out: given the year below the diagonal, of changes above it. */
export function detrendedMap(input: ReportInput, cast: Cast, size: Size): Figure | undefined {
  const { diagnosis } = input;
  if (diagnosis?.partial === undefined || diagnosis.pearson.names.length < 2) return undefined;
  const changes = diagnosis.changes ?? diagnosis.partial;
  return triangles(input, cast, size, diagnosis.partial, changes, {
    name: "correlation-detrended",
    title: "The same without shared trends",
    caption: (numbers) =>
      `Squares below the diagonal: Pearson correlation given the year, which is that of the columns with their linear trend taken out.${numbers ? " Numbers above it: correlation of the changes from each interval to the next, bold where |r| is above the limit." : ""} Order and frames are those of the clusters above. What is close above and far here shares a trend.`,
    label: "Correlation of the covariates given the year, and of their changes",
  });
}

interface Told {
  readonly name: string;
  readonly title: string;
  readonly caption: (numbers: boolean) => string;
  readonly label: string;
}

/** One correlation as squares below the diagonal, the same or another as numbers above it. */
function triangles(
  input: ReportInput,
  cast: Cast,
  room: Size,
  below: CorrelationTable,
  above: CorrelationTable,
  told: Told,
): Figure | undefined {
  const { diagnosis } = input;
  if (diagnosis === undefined) return undefined;
  const { names, r } = below;
  const left = room.names + 12;
  const order = diagnosis.order;
  const K = names.length;
  const cell = Math.min(K <= 24 ? 34 : K <= 45 ? 18 : 9, (room.width - left - 12) / K);
  const numbers = cell >= 26;
  const top = 24;
  const size = cell >= 13 ? 12 : 8;
  const at = (i: number) => left + (i + 0.5) * cell;
  const down = (i: number) => top + (i + 0.5) * cell;
  const value = (i: number, j: number) => r.data[order[i] * K + order[j]];
  const other = (i: number, j: number) => above.r.data[order[i] * K + order[j]];
  // a cell belongs to two covariates, the name before its row to one
  const both = (i: number, j: number, body: Html) => {
    const pair = [i, j].map((one) => cast.byName.get(names[order[one]])?.index ?? -1);
    return html`<g data-covariates="${pair.join(" ")}">${body}</g>`;
  };
  const rows = order.map((k, i) => {
    const member = cast.byName.get(names[k]);
    const head = belongs(member, [
      member !== undefined && marker(member.theme, left - 14, down(i), size / 3),
      label(left - 24, down(i) + size / 3, fitted(names[k], left - 34, size), { anchor: "end", size }),
      cell >= 16 && label(at(i), down(i) + 4, String(i + 1), { anchor: "middle", fill: "muted", size: 11 }),
    ]);
    const squares = order
      .slice(0, i)
      .map((_, j) => both(i, j, signedSquare(value(i, j), at(j), down(i), cell)));
    const texts = !numbers
      ? []
      : order.slice(i + 1).map((_, above) => {
          const j = i + 1 + above;
          const strong = Math.abs(other(i, j)) > input.warn.correlation;
          const look = { anchor: "middle", size: 11, weight: strong ? 700 : 400 } as const;
          return both(i, j, label(at(j), down(i) + 4, shortR(other(i, j)), look));
        });
    return html`${head}${squares}${texts}`;
  });
  const position = (name: string) => order.indexOf(names.indexOf(name));
  const frames = diagnosis.clusters
    .filter((one) => one.members.length > 1)
    .map((one) => {
      const places = one.members.map(position);
      const [a, b] = [Math.min(...places), Math.max(...places)];
      const side = (b - a + 1) * cell;
      return html`<rect x="${px(left + a * cell)}" y="${px(top + a * cell)}" width="${px(side)}" height="${px(side)}" fill="none" stroke="${ink("mark")}" stroke-width="2"/>`;
    });
  const pairs = [];
  for (let i = 0; i < K; i++)
    for (let j = 0; j < i; j++)
      if (Math.abs(r.data[i * K + j]) > input.warn.correlation)
        pairs.push({ a: names[i], b: names[j], r: r.data[i * K + j] });
  pairs.sort((a, b) => Math.abs(b.r) - Math.abs(a.r));
  const strongest = pairs.slice(0, 8).map((one) => `${one.a} and ${one.b} ${shortR(one.r)}`);
  return {
    name: told.name,
    title: told.title,
    caption: told.caption(numbers),
    svg: drawing(
      Math.max(left + K * cell + 12, Math.min(640, room.width)),
      top + K * cell + 36,
      told.label,
      `${counted(K, "covariate")}; ${counted(pairs.length, "pair")} with |r| above ${brief(input.warn.correlation)}${strongest.length > 0 ? `: ${strongest.join(", ")}` : ""}`,
      [
        segment(left, top, left + K * cell, top, "rule"),
        ...order.map((_, i) =>
          segment(left, top + (i + 1) * cell, left + K * cell, top + (i + 1) * cell, "rule", 0.5),
        ),
        ...rows,
        ...frames,
        signedLegend(room.narrow ? 4 : left, top + K * cell + 24, room.narrow),
      ],
    ),
  };
}
