/**
 * Every colour of the page, light and dark. The eight theme colours were searched for the largest least distance
 * (OKLab) between any two of them, as seen with normal vision and with simulated protanopia, deuteranopia and
 * tritanopia (Machado et al. 2009), at a contrast of 3:1 or more against the panel. No meaning rests on them alone: a
 * theme has a marker and its name as well.
 */
export const PALETTE = {
  page: { light: "#f3f5f8", dark: "#10131a" },
  panel: { light: "#ffffff", dark: "#191d27" },
  ink: { light: "#1a2130", dark: "#e7eaf1" },
  muted: { light: "#545e70", dark: "#a7b0c0" },
  rule: { light: "#d3d9e3", dark: "#343b4b" },
  wash: { light: "#e8ecf3", dark: "#232938" },
  mark: { light: "#4b3a9b", dark: "#b7a9ff" },
  less: { light: "#a34a08", dark: "#f2a35e" },
  more: { light: "#1c5fa8", dark: "#77b3f5" },
  theme0: { light: "#1344a4", dark: "#5a9bfe" },
  theme1: { light: "#e16317", dark: "#f47f1a" },
  theme2: { light: "#339e81", dark: "#98ecd2" },
  theme3: { light: "#aa71dd", dark: "#a477b8" },
  theme4: { light: "#6b4b00", dark: "#fbd86d" },
  theme5: { light: "#2f333d", dark: "#aeb1ba" },
  theme6: { light: "#ae3459", dark: "#d2667c" },
  theme7: { light: "#157491", dark: "#6fd6fc" },
} as const;

export type Token = keyof typeof PALETTE;

export const TOKENS = Object.keys(PALETTE).map((name) => name as Token);

/** The colour in which figures are drawn and exported. */
export function ink(token: Token): string {
  return PALETTE[token].light;
}

/** Colours of a drawing become the page's variables, so that one drawing serves light, dark and print. */
export function withVariables(svg: string): string {
  return svg.replace(/="(#[0-9a-f]{6})"/g, (all, hex: string) => {
    const token = TOKENS.find((name) => PALETTE[name].light === hex);
    return token === undefined ? all : `="var(--${token})"`;
  });
}

/** The palette as CSS variables. */
export function variables(side: "light" | "dark"): string {
  return TOKENS.map((name) => `--${name}:${PALETTE[name][side]}`).join(";");
}
