import type { Series } from "../data/series.ts";
import { InputError } from "../errors.ts";
import { quantile7 } from "../math/quantile.ts";
import type { EtccdiIndex, WindowStatistic, YearRange } from "./options.ts";
import { present } from "./slice.ts";
import { cutYears } from "./years.ts";

/** A wet day has at least 1.0 mm. */
const WET = { threshold: 1, orEqual: true } as const;

/**
 * ETCCDI indices (Expert Team on Climate Change Detection and Indices; Zhang et al. 2011, WIREs Clim. Change 2:851)
 * as statistics of this program: temperatures strictly past their threshold, rain at or above it.
 */
const INDICES: Readonly<Record<EtccdiIndex, { readonly unit: "degC" | "mm"; readonly is: WindowStatistic }>> =
  {
    "frost days": { unit: "degC", is: { type: "days below", threshold: 0, orEqual: false } },
    "icing days": { unit: "degC", is: { type: "days below", threshold: 0, orEqual: false } },
    "summer days": { unit: "degC", is: { type: "days above", threshold: 25, orEqual: false } },
    "tropical nights": { unit: "degC", is: { type: "days above", threshold: 20, orEqual: false } },
    "growing-season length": { unit: "degC", is: { type: "growing season" } },
    TXx: { unit: "degC", is: { type: "maximum" } },
    TNn: { unit: "degC", is: { type: "minimum" } },
    Rx1day: { unit: "mm", is: { type: "maximum" } },
    Rx5day: { unit: "mm", is: { type: "largest sums", days: 5, count: 1 } },
    SDII: { unit: "mm", is: { type: "mean above", ...WET } },
    R10mm: { unit: "mm", is: { type: "days above", threshold: 10, orEqual: true } },
    R20mm: { unit: "mm", is: { type: "days above", threshold: 20, orEqual: true } },
    CDD: { unit: "mm", is: { type: "longest run below", threshold: 1, orEqual: false } },
    CWD: { unit: "mm", is: { type: "longest run above", ...WET } },
    PRCPTOT: { unit: "mm", is: { type: "sum above", ...WET } },
  };

export const ETCCDI_INDICES: readonly EtccdiIndex[] = Object.keys(INDICES) as EtccdiIndex[];

/** An index as a statistic. Its thresholds mean degC or mm: throws `aggregate.index-unit` for any other unit. */
export function indexStatistic(index: EtccdiIndex, unit: string, covariate: string): WindowStatistic {
  const { unit: needed, is } = INDICES[index];
  if (unit === needed) return is;
  throw new InputError({
    name: "aggregate.index-unit",
    expected: `values in ${needed} for ${index}`,
    found: JSON.stringify(unit),
    where: { cell: covariate },
    remedy: `give the covariate the unit ${needed}`,
  });
}

/**
 * R95pTOT as a sum above a threshold: the 95th percentile (type 7) of the station's wet days in the base years.
 * Undefined where the base years hold no wet day.
 */
export function veryWetStatistic(rain: Series, base: YearRange): WindowStatistic | undefined {
  const wet = present(cutYears(rain, base)).filter((mm) => mm >= WET.threshold);
  if (wet.length === 0) return undefined;
  return { type: "sum above", threshold: quantile7(wet, 0.95), orEqual: false };
}
