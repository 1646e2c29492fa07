import { castOf } from "./cast.ts";
import type { Draw, Figure } from "./figure.ts";
import { chance } from "./figures/chance.ts";
import { completeness } from "./figures/completeness.ts";
import { correlationMap, detrendedMap } from "./figures/correlation.ts";
import { criterion } from "./figures/criterion.ts";
import { drivers } from "./figures/drivers.ts";
import { effects } from "./figures/effects.ts";
import { evidence } from "./figures/evidence.ts";
import { inflation } from "./figures/inflation.ts";
import { loadings } from "./figures/loadings.ts";
import { placesMap } from "./figures/map.ts";
import { paths } from "./figures/paths.ts";
import { ribbon } from "./figures/ribbon.ts";
import { sensitivityFigure } from "./figures/sensitivity.ts";
import { seriesFigure } from "./figures/series.ts";
import { survival } from "./figures/survival.ts";
import { values } from "./figures/values.ts";
import { variance } from "./figures/variance.ts";
import type { ReportInput } from "./input.ts";
import { SCREEN, type Size } from "./size.ts";

/** In the order in which the page shows them. */
const ALL: readonly Draw[] = [
  ribbon,
  placesMap,
  values,
  seriesFigure,
  completeness,
  correlationMap,
  detrendedMap,
  inflation,
  variance,
  loadings,
  criterion,
  paths,
  evidence,
  chance,
  survival("years"),
  drivers("years"),
  survival("animals"),
  drivers("animals"),
  effects,
  sensitivityFigure,
];

/** Every figure that this study has, drawn for the page or for a journal's column. */
export async function figures(input: ReportInput, size: Size = SCREEN): Promise<readonly Figure[]> {
  const cast = castOf(input);
  const out: Figure[] = [];
  // one after the other: the plot library counts its ids globally
  for (const draw of ALL) {
    const figure = await draw(input, cast, size);
    if (figure !== undefined) out.push(figure);
  }
  return out;
}
