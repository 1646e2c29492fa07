import { isoDay } from "../../data/day.ts";
import { intervalWords } from "../../data/occasion.ts";
import type { Cast } from "../cast.ts";
import { unitText } from "../cast.ts";
import type { Figure } from "../figure.ts";
import { valuesOf } from "../figures/values.ts";
import { html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { brief, counted, percent, show } from "../numbers.ts";
import { caution, covariateName, figureBlock, grid, type Section, themeMark } from "../parts.ts";
import { extent } from "../scale.ts";
import { qualityBlock } from "./quality.ts";

export function timeSection(input: ReportInput, figures: readonly Figure[]): Section {
  const lengths = input.intervals.map((one) => one.length);
  const [low, high] = extent(lengths);
  const first = input.occasions[0];
  const last = input.occasions[input.occasions.length - 1];
  const dates =
    first !== undefined && Number.isFinite(first.first)
      ? ` The first begins on ${isoDay(first.first)}, the last ends on ${isoDay(last.last)}.`
      : " They carry no dates; intervals stand in their order.";
  const equal =
    high - low < 1e-9
      ? `each ${brief(low)} ${low === 1 ? "year" : "years"} long`
      : `from ${brief(low)} to ${brief(high)} years long`;
  return {
    id: "time",
    title: "Time",
    body: html`<p>${counted(input.occasions.length, "occasion")} and between them ${intervalWords(input.occasions.length - 1, input.intervals.length)}, ${equal}.${dates} Survival is always per year.</p>${figureBlock(figures, "time-ribbon")}`,
  };
}

export function whereSection(input: ReportInput, figures: readonly Figure[]): Section {
  const map = figureBlock(figures, "map");
  const unplaced = input.stations.filter((one) => !Number.isFinite(one.longitude));
  return {
    id: "where",
    title: "Where",
    body: html`${
      input.coarsenedKm > 0
        ? html`<p class="note">The study is marked sensitive: the places of the study, on this page and in every file beside it, were moved to the middle of a square of ${brief(input.coarsenedKm)} km before they came here; stations stand where their list puts them. Names, dates and landscape can still give a site away.</p>`
        : input.sensitive
          ? html`<p class="note">The study is marked sensitive, but its positions were not coarsened. Do not pass this page on.</p>`
          : caution(
              "Sensitive sites",
              "Positions are shown as they were given. If the site must not be found by others, mark the study sensitive before passing this page on.",
            )
    }${map ?? html`<p>No position is known, so there is no map.</p>`}${unplaced.length > 0 && html`<p>Without a position, and so not on the map: ${unplaced.map((one) => one.name).join(", ")}.</p>`}`,
  };
}

/** Every candidate with its definition and range; the index by which a covariate is found everywhere. */
export function inputsSection(input: ReportInput, cast: Cast, figures: readonly Figure[]): Section {
  const entered = new Set(input.matrix.names);
  const byStratum = input.matrix.byStratum?.length ?? 0;
  const rows = cast.members.map((member) => {
    const apart = input.matrix.byStratum?.find((one) => one.recipe.name === member.name);
    const partOf = input.matrix.byStratum?.find((one) => one.parts.includes(member.name));
    const values =
      apart === undefined
        ? valuesOf(input, member.name)
        : Array.from(apart.values, (z) => apart.recipe.centre + apart.recipe.scale * z);
    const known = values.filter(Number.isFinite);
    const [low, high] = extent(known);
    const reason = input.leftOut.find((one) => one.name === member.name)?.reason;
    return {
      covariate: member.name,
      cells: [
        covariateName(cast, member.name),
        member.theme.name,
        member.definition.replace(/\bdegC\b/g, "°C"),
        unitText(member.unit) || "–",
        `${known.length} of ${values.length}`,
        known.length === 0 ? "–" : show(known.reduce((sum, one) => sum + one, 0) / known.length),
        known.length === 0 ? "–" : `${show(low)} to ${show(high)}`,
        reason !== undefined
          ? `left out: ${reason}`
          : apart !== undefined
            ? "by stratum and interval"
            : partOf !== undefined
              ? `yes, as the values of a stratum in ${partOf.recipe.name}`
              : entered.has(member.name)
                ? "yes"
                : "no",
      ],
    };
  });
  const windows = input.covariates.flatMap((one) => one.values).filter((one) => one.daysDue > 0);
  const full = windows.filter((one) => one.daysCovered >= one.daysDue).length;
  return {
    id: "inputs",
    title: "What went in",
    body: html`<p>${counted(cast.members.length, "candidate covariate")} in ${counted(cast.themes.length, "theme")}; ${counted(entered.size, "one", "of them")} ${entered.size === 1 ? "stands" : "stand"} in the matrix${byStratum > 0 && `, ${counted(byStratum, "is", "are")} put together from others by stratum`}, ${counted(input.leftOut.length, "was", "were")} left out.${windows.length > 0 && ` Of ${windows.length} windows ${full} (${percent(full / windows.length)}) were observed in full.`}</p>
<ul class="themes">${cast.themes.map((theme) => html`<li><span class="cov">${themeMark(theme)}${theme.name}</span></li>`)}</ul>
${grid(cast, "The candidates", [{ text: "covariate" }, { text: "theme" }, { text: "definition", look: "w" }, { text: "unit" }, { text: "intervals with a value", look: "n" }, { text: "mean", look: "n" }, { text: "range", look: "n" }, { text: "in the matrix", look: "w" }], rows)}
${figureBlock(figures, "covariate-values")}${figureBlock(figures, "observed-series")}${figureBlock(figures, "completeness")}${qualityBlock(input, cast)}`,
  };
}
