import type { ReportInput } from "./input.ts";
import type { Token } from "./palette.ts";

/** How a theme looks: a colour and a marker, so that neither has to be told by the other. */
export interface ThemeLook {
  readonly name: string;
  readonly token: Token;
  /** An SVG path within −1 … 1. */
  readonly marker: string;
}

/** One covariate, wherever it appears on the page. */
export interface Member {
  readonly index: number;
  readonly name: string;
  readonly unit: string;
  readonly definition: string;
  readonly theme: ThemeLook;
}

/** Everyone who appears: covariates in one order, themes in the order in which they come up. */
export interface Cast {
  readonly members: readonly Member[];
  readonly themes: readonly ThemeLook[];
  readonly byName: ReadonlyMap<string, Member>;
}

const MARKERS = [
  "M1,0A1,1,0,1,1,-1,0A1,1,0,1,1,1,0Z",
  "M-0.88,-0.88H0.88V0.88H-0.88Z",
  "M0,-1.1L1.1,0.8H-1.1Z",
  "M0,-1.2L1.2,0L0,1.2L-1.2,0Z",
  "M-0.36,-1.1H0.36V-0.36H1.1V0.36H0.36V1.1H-0.36V0.36H-1.1V-0.36H-0.36Z",
  "M0,1.1L1.1,-0.8H-1.1Z",
  "M-1.05,-0.6L-0.6,-1.05L0,-0.45L0.6,-1.05L1.05,-0.6L0.45,0L1.05,0.6L0.6,1.05L0,0.45L-0.6,1.05L-1.05,0.6L-0.45,0Z",
  "M-0.5,-1.15H0.5V1.15H-0.5Z",
];

function lookOf(name: string, i: number): ThemeLook {
  const turn = Math.floor(i / MARKERS.length);
  // beyond eight themes the pairs of colour and marker shift, so that no pair comes twice before the 64th
  return {
    name,
    token: `theme${i % MARKERS.length}` as Token, // the palette has theme0 to theme7
    marker: MARKERS[(i + turn) % MARKERS.length],
  };
}

export function castOf(input: ReportInput): Cast {
  const known = new Map<string, { theme: string; unit: string; definition: string }>();
  for (const { name, theme, unit, definition } of input.covariates)
    known.set(name, { theme, unit, definition });
  const apart = input.matrix.byStratum?.map((one) => one.recipe) ?? [];
  for (const { name, theme, unit, definition } of [...input.matrix.recipes, ...apart])
    if (!known.has(name)) known.set(name, { theme, unit, definition });
  const themes = [...new Set([...known.values()].map((one) => one.theme))].map(lookOf);
  const members = [...known].map(([name, { theme, unit, definition }], index) => ({
    index,
    name,
    unit,
    definition,
    theme: themes.find((look) => look.name === theme) ?? lookOf(theme, 0),
  }));
  return { members, themes, byName: new Map(members.map((one) => [one.name, one])) };
}

/** The unit as it stands in brackets behind a name: nothing for pure numbers. */
export function unitText(unit: string): string {
  return unit === "" || unit === "1" ? "" : unit.replace(/\bdegC\b/g, "°C").replace(/^percent$/, "%");
}
