import type { Cast } from "../cast.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { brief, counted, show } from "../numbers.ts";
import { covariateList, covariateName, foldedGrid, grid } from "../parts.ts";

/** Why the tree is cut where it is, and what keeping each member would keep of the others. */
export function clustersBlock({ diagnosis, cut }: ReportInput, cast: Cast): Html | undefined {
  if (diagnosis === undefined) return undefined;
  const groups = diagnosis.clusters.filter((one) => one.members.length > 1);
  const heights = diagnosis.merges.map((one) => 1 - one.height);
  const limit = cut ?? 0.7;
  const held = heights.filter((r) => r >= limit);
  const parted = heights.filter((r) => r < limit);
  const edge = [
    held.length > 0 ? `the loosest merge that holds joins at ${show(Math.min(...held))}` : "no merge holds",
    parted.length > 0 ? `the closest that does not would join at ${show(Math.max(...parted))}` : "",
  ].filter((words) => words !== "");
  const why = html`<p>Clusters come from average linkage: two groups are as close as the mean |r| between their members. The tree is cut at ${brief(limit)}, a convention that the pipeline file can change; ${edge.join(", and ")}.</p>`;
  if (groups.length === 0) return why;
  return html`${why}${foldedGrid(
    cast,
    "What keeping one member of a cluster would keep of the others",
    [
      { text: "if this one is kept" },
      { text: "for", look: "w" },
      { text: "mean |r| to them", look: "n" },
      { text: "least", look: "n" },
      { text: "closest to all" },
    ],
    groups.flatMap((one) =>
      (one.choices ?? []).map(({ keep, meanR, leastR }) => ({
        covariate: keep,
        best: keep === one.closest,
        cells: [
          covariateName(cast, keep),
          covariateList(
            cast,
            one.members.filter((name) => name !== keep),
          ),
          show(meanR),
          show(leastR),
          keep === one.closest ? "yes" : "no",
        ],
      })),
    ),
  )}`;
}

/** More pairs than this are left to the table. */
const MOST = 12;

/** Pairs whose closeness is a shared trend: above the limit as they are, below it once the year is taken out. */
export function trendBlock({ diagnosis, warn }: ReportInput, cast: Cast): Html | undefined {
  const partial = diagnosis?.partial;
  if (diagnosis === undefined || partial === undefined) return undefined;
  const { names, r } = diagnosis.pearson;
  const K = names.length;
  const shared = [];
  const hidden = [];
  for (let a = 0; a < K; a++)
    for (let b = a + 1; b < K; b++) {
      const [plain, given] = [r.data[a * K + b], partial.r.data[a * K + b]];
      const pair = { a: names[a], b: names[b], plain, given, changes: diagnosis.changes?.r.data[a * K + b] };
      if (Math.abs(plain) >= warn.correlation && Math.abs(given) < warn.correlation) shared.push(pair);
      if (Math.abs(plain) < warn.correlation && Math.abs(given) >= warn.correlation) hidden.push(pair);
    }
  if (shared.length + hidden.length === 0)
    return html`<p>No pair of covariates owes its closeness to a shared trend: taking the year out moves none across the limit of ${brief(warn.correlation)}.</p>`;
  const pairs = [...shared, ...hidden];
  const table = grid(
    cast,
    "Pairs that the year moves across the limit",
    [
      { text: "pair", look: "w" },
      { text: "r", look: "n" },
      { text: "r given the year", look: "n" },
      { text: "r of changes", look: "n" },
    ],
    pairs.slice(0, MOST).map((one) => ({
      cells: [
        html`${covariateName(cast, one.a)} and ${covariateName(cast, one.b)}`,
        show(one.plain),
        show(one.given),
        one.changes === undefined ? "–" : show(one.changes),
      ],
    })),
  );
  return html`<p>${counted(shared.length, "pair")} close only through a shared trend, ${counted(hidden.length, "pair")} close only once it is taken out${pairs.length > MOST && `; the first ${MOST} below, all in the tables`}.</p>${table}`;
}
