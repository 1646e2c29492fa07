import { listWords } from "../data/words.ts";
import { type Cast, castOf } from "./cast.ts";
import type { Figure } from "./figure.ts";
import { figures } from "./figures.ts";
import { type Html, html, markup } from "./html.ts";
import type { ReportInput } from "./input.ts";
import { counted, whole } from "./numbers.ts";
import type { Section } from "./parts.ts";
import { SCRIPT } from "./script.ts";
import { componentsSection, storySection } from "./sections/collinearity.ts";
import { detectableSection } from "./sections/detectable.ts";
import { recordSection } from "./sections/files.ts";
import { findingsSection } from "./sections/findings.ts";
import { inputsSection, timeSection, whereSection } from "./sections/inputs.ts";
import { methodsSection } from "./sections/methods.ts";
import { recaptureSection } from "./sections/recapture.ts";
import { screenSection } from "./sections/screen.ts";
import { sensitivitySection } from "./sections/sensitivity.ts";
import { comparisonSection, survivalSection } from "./sections/survival.ts";
import { verdictSection } from "./sections/verdict.ts";
import { STYLE } from "./style.ts";

/** Nothing may be fetched, whatever a browser or a later edit tries. */
const POLICY = "default-src 'none'; img-src data:; style-src 'unsafe-inline'; script-src 'unsafe-inline'";

/**
 * The whole report as one HTML page that needs nothing beside it: the same input gives the same bytes. Figures that
 * were drawn already (by `figures` from the same input) can be handed in.
 */
export async function renderPage(input: ReportInput, figuresDrawn?: readonly Figure[]): Promise<string> {
  const cast = castOf(input);
  const drawn = figuresDrawn ?? (await figures(input));
  const sections: readonly Section[] = [
    verdictSection(input),
    timeSection(input, drawn),
    whereSection(input, drawn),
    inputsSection(input, cast, drawn),
    storySection(input, cast, drawn),
    componentsSection(input, cast, drawn),
    recaptureSection(input, cast),
    screenSection(input, cast, drawn),
    survivalSection(input, cast, drawn),
    comparisonSection(input, cast, drawn),
    sensitivitySection(input, cast, drawn),
    detectableSection(input),
    findingsSection(input),
    methodsSection(input),
    recordSection(input),
  ];
  return html`<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta http-equiv="Content-Security-Policy" content="${POLICY}">
<title>${input.title}</title>
<link rel="icon" href="data:,">
<style>${markup(STYLE)}</style>
</head>
<body>
<a class="skip" href="#verdict">To the verdict</a>
${strip(input)}
<div class="sheet">
<header><h1>${input.title}</h1>${facts(input, cast)}</header>
<div class="body">
<nav aria-label="Sections"><ol>${sections.map((one) => html`<li><a href="#${one.id}">${one.title}</a></li>`)}</ol></nav>
<main>
${sections.map(
  (
    one,
  ) => html`<section id="${one.id}" aria-labelledby="${one.id}-title"><h2 id="${one.id}-title">${one.title}</h2>
${one.body}</section>
`,
)}</main>
</div>
</div>
<script>${markup(SCRIPT)}</script>
</body>
</html>
`.text.replace(TEXT_RUN, (run) => run.replace(/(\d) %/g, "$1\u00a0%"));
}

/** Text between tags: there a number and its per cent sign are kept on one line. */
const TEXT_RUN = />[^<]+</g;

/** The run of intervals across the top of the page, each as long as it is. */
function strip(input: ReportInput): Html {
  return html`<div class="run" aria-hidden="true">${input.intervals.map((one) => html`<i style="flex:${Number.isFinite(one.length) ? one.length : 1}"></i>`)}</div>`;
}

function facts(input: ReportInput, cast: Cast): Html {
  const { screened } = input;
  const fact = (text: string, rest: string) => html`<li><b>${text}</b>${rest}</li>`;
  const first = input.occasions[0];
  const last = input.occasions[input.occasions.length - 1];
  const byStratum = input.matrix.byStratum?.length ?? 0;
  return html`<ul class="facts">${[
    first !== undefined && last !== undefined
      ? fact(counted(input.occasions.length, "occasion"), `, ${first.name} to ${last.name}`)
      : html``,
    Number.isFinite(input.animals) ? fact(counted(input.animals, "animal"), "") : html``,
    screened !== undefined ? fact(counted(screened.releases, "release"), "") : html``,
    fact(
      `${whole(input.matrix.names.length + byStratum)} of ${counted(cast.members.length, "covariate")}`,
      ` in the matrix: ${listWords(cast.themes.map((one) => one.name))}`,
    ),
  ]}</ul>`;
}
