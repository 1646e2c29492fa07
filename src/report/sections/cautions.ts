import { html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { brief } from "../numbers.ts";
import type { Section } from "../parts.ts";

/** What the numbers do not say and the reader must not make them say. */
export function cautionsSection(input: ReportInput): Section {
  const modelled = input.screened !== undefined;
  return {
    id: "cautions",
    title: "Cautions",
    body: html`<ul>
<li><b>Animals first.</b> Catching and marking animals and visiting roosts, nests or dens needs permits, training and care for their welfare. A gap in these data is not a reason to disturb a site once more.</li>
<li><b>Sensitive sites.</b> ${input.coarsenedKm > 0 ? `Positions are shown no finer than ${brief(input.coarsenedKm)} km; names, dates and landscape can still give a site away.` : "Positions are shown as they were given. If the site must not be found by others, mark the study sensitive before passing this page on."}</li>
<li><b>Association is not cause.</b> A covariate that goes with survival over these years may stand for another that was never measured, and for every covariate of its cluster.</li>
${modelled && html`<li><b>Apparent survival.</b> An animal that moves away for good looks like one that died. Where emigration changes with the weather, so does apparent survival.</li>`}
<li><b>No forecast.</b> ${modelled ? "The relations hold, if they hold, within the range of the covariates seen here. Beyond it, and for coming years, this page says nothing." : "These values describe the years they were observed in."}</li>
<li><b>Decisions.</b> What is done about a threatened population is for qualified people and the local authority to decide, with more before them than this page.</li>
</ul>`,
  };
}
