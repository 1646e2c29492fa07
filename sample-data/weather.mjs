import { civil, dayOf } from "./dates.mjs";

/** The invented stations. `x`, `y` in metres of EPSG:32632; `wet` multiplies rain. */
export const STATIONS = [
  { id: "Ash", name: "Ashford Mill", x: 341_300, y: 6_133_400, elevation: 62, wet: 0.92 },
  { id: "Beck", name: "Becksmouth", x: 352_700, y: 6_130_100, elevation: 38, wet: 0.88 },
  { id: "Cray", name: "Crayhead", x: 360_900, y: 6_138_200, elevation: 121, wet: 1.0 },
  { id: "Dene", name: "Denewood", x: 346_500, y: 6_144_800, elevation: 154, wet: 1.05 },
  { id: "Elm", name: "Elmbridge", x: 358_200, y: 6_147_600, elevation: 203, wet: 1.12 },
  { id: "050114", name: "Upper Moor", x: 364_400, y: 6_152_300, elevation: 388, wet: 1.34 },
];

export const FIRST_DAY = dayOf(2000, 1, 1);
export const LAST_DAY = dayOf(2021, 12, 31);
/** Degrees Celsius per metre. */
export const LAPSE = -0.0062;

/** How much of the winter, spring and summer factor acts on a day of the year: smooth bumps from 0 to 1. */
function seasonShare(doy, centre, halfWidth) {
  const away = Math.abs(((doy - centre + 548) % 365.25) - 182.625);
  return away >= halfWidth ? 0 : 0.5 * (1 + Math.cos((Math.PI * away) / halfWidth));
}

/**
 * Factors shared by all stations and layers in a year, standard normal: `wet` and `cold` winters (November of
 * the year before to March; wet winters tend to be mild), `spring` and `summer` warmth, `dry` summers.
 */
export function yearFactors(random, years) {
  const factors = new Map();
  for (const year of years) {
    const wet = random.normal();
    const cold = -0.35 * wet + Math.sqrt(1 - 0.35 ** 2) * random.normal();
    const spring = -0.2 * cold + Math.sqrt(1 - 0.2 ** 2) * random.normal();
    const summer = random.normal();
    const green = random.normal();
    factors.set(year, { wet, cold, spring, summer, green });
  }
  return factors;
}

/** True daily weather: rain that fell on the day (mm), lowest and highest temperature (degrees Celsius). */
export function weather(random, factors) {
  const days = LAST_DAY - FIRST_DAY + 1;
  const fresh = () => new Float64Array(days);
  const series = STATIONS.map(() => ({ rain: fresh(), tmin: fresh(), tmax: fresh() }));
  /** Daily mean at 100 m, for the snow layer. */
  const regional = fresh();
  let anomaly = 0;
  let wetBefore = false;
  for (let i = 0; i < days; i++) {
    const { year, month } = civil(FIRST_DAY + i);
    const doy = FIRST_DAY + i - dayOf(year, 1, 1) + 1;
    const winter = factors.get(month >= 8 ? year + 1 : year);
    const { spring, summer } = factors.get(year);
    const winterShare = seasonShare(doy, 10, 85);
    anomaly = 0.78 * anomaly + 2.0 * random.normal();
    regional[i] =
      9.0 -
      8.2 * Math.cos((2 * Math.PI * (doy - 21)) / 365.25) -
      2.1 * winter.cold * winterShare +
      1.5 * spring * seasonShare(doy, 110, 60) +
      1.6 * summer * seasonShare(doy, 205, 60) +
      anomaly * (0.75 + 0.35 * winterShare);
    const wetChance = 0.3 + 0.28 * Number(wetBefore) + 0.075 * winter.wet * winterShare;
    const wet = random.chance(Math.min(0.95, Math.max(0.05, wetChance)));
    wetBefore = wet;
    const amount = wet ? random.exponential(5.2 * Math.exp(0.22 * winter.wet * winterShare)) + 0.4 : 0;
    const spread = (3.0 - 0.9 * Math.cos((2 * Math.PI * (doy - 10)) / 365.25)) * (wet ? 0.75 : 1.15);
    STATIONS.forEach((station, s) => {
      const centre = regional[i] + LAPSE * (station.elevation - 100) + 0.4 * random.normal();
      series[s].tmin[i] = centre - spread - 0.8 * Math.abs(random.normal());
      series[s].tmax[i] = centre + spread + 0.8 * Math.abs(random.normal());
      const local = random.chance(wet ? 0.9 : 0.05);
      const drops = wet ? amount * Math.exp(0.35 * random.normal()) : random.exponential(1.1);
      series[s].rain[i] = local ? drops * station.wet : 0;
    });
  }
  return { series, regional };
}

/** Mean of `values` over the days from `first` to `last`, both included. */
export function meanOver(values, first, last) {
  let sum = 0;
  for (let day = first; day <= last; day++) sum += values[day - FIRST_DAY];
  return sum / (last - first + 1);
}
