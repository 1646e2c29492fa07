import { tQuantile } from "../../math/distributions.ts";
import { html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, show } from "../numbers.ts";
import type { Section } from "../parts.ts";

/** Chance of being found, and of a false find, for which the size is given. */
const POWER = 0.8;
const ALPHA = 0.05;

export interface Detectable {
  /** Least effect, logit per standard deviation of a covariate. */
  readonly effect: number;
  /** Variation between intervals beyond any covariate, sd on the logit. */
  readonly between: number;
  /** What the numbers of animals leave unsure in an interval, sd on the logit; root of the harmonic mean of variances. */
  readonly within: number;
  readonly intervals: number;
}

/**
 * The least effect of one covariate, fixed before looking, that a straight line through the intervals' logit survivals
 * would find in 4 of 5 studies:
 *
 *     β = (t(1 − α/2) + t(power)) · √((σ² + v) / (n − 1)),   t on n − 2 degrees of freedom,
 *
 * with σ² the variance between intervals without covariates and v the harmonic mean of the sampling variances of logit
 * survival and x of standard deviation 1 (common practice, no source). A simulation from the design is the real answer.
 */
export function detectable({ screened }: ReportInput): Detectable | undefined {
  const between = screened?.randomIntervals?.sigmaWithout;
  if (screened === undefined || between === undefined || !Number.isFinite(between)) return undefined;
  const precision = new Map<number, number>();
  for (const { interval, value, se } of screened.intervalFit.survival) {
    const variance = (se / (value * (1 - value))) ** 2;
    if (Number.isFinite(variance) && variance > 0)
      precision.set(interval, Math.max(precision.get(interval) ?? 0, 1 / variance));
  }
  const n = precision.size;
  if (n < 4) return undefined;
  const within = Math.sqrt(n / [...precision.values()].reduce((sum, one) => sum + one, 0));
  const quantiles = tQuantile(1 - ALPHA / 2, n - 2) + tQuantile(POWER, n - 2);
  const effect = quantiles * Math.sqrt((between ** 2 + within ** 2) / (n - 1));
  return { effect, between, within, intervals: n };
}

/** How small an effect these years and animals could have shown. */
export function detectableSection(input: ReportInput): Section {
  const head = { id: "detectable", title: "What this study could have detected" };
  if (input.screened === undefined)
    return { ...head, body: html`<p>No survival was modelled in this run.</p>` };
  const found = detectable(input);
  const simulate = html`<p>That is a rule of thumb for one covariate fixed in advance. How often the whole procedure, with its choosing, finds an effect of a given size in studies drawn from this one's design is told by <code>covey simulate</code>; its figure and table are written beside this output.</p>`;
  if (found === undefined)
    return {
      ...head,
      body: html`<p>The variation between intervals could not be estimated, so no size can be given here.</p>${simulate}`,
    };
  const times = Math.exp(found.effect);
  return {
    ...head,
    body: html`<p>With ${counted(found.intervals, "interval")} that tell their survival, a standard deviation of ${show(found.between)} between them and one of about ${show(found.within)} from the numbers of animals (both on the logit), a single covariate fixed before looking would have to act with at least <b>${show(found.effect)} per standard deviation</b> of itself, odds of surviving times ${show(times)} or ${show(1 / times)}, to be found in 4 of 5 such studies. Smaller effects would mostly have been missed: that a covariate does not stand does not say that it does nothing.</p>${simulate}`,
  };
}
