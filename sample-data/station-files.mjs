import { civil, dayOf, dotted, iso } from "./dates.mjs";
import { FIRST_DAY, LAST_DAY, STATIONS } from "./weather.mjs";

// The true weather as it would reach a user: gaps, a sentinel, a day typed twice, two layouts of columns.

const one = (value) => {
  const text = value.toFixed(1);
  return text === "-0.0" ? "0.0" : text;
};

/** Runs of days without any row: [station, first, last]. */
const ABSENT = [
  ["Ash", dayOf(2003, 10, 11), dayOf(2003, 10, 13)],
  ["Ash", dayOf(2014, 6, 2), dayOf(2014, 6, 2)],
  ["Beck", dayOf(2006, 8, 19), dayOf(2006, 8, 22)],
  ["Beck", dayOf(2017, 1, 8), dayOf(2017, 1, 9)],
  ["Cray", dayOf(2010, 2, 1), dayOf(2010, 2, 5)],
  ["Elm", dayOf(2005, 12, 24), dayOf(2005, 12, 27)],
  ["Elm", dayOf(2019, 7, 3), dayOf(2019, 7, 16)],
  // A station that drops out for years.
  ["Dene", dayOf(2008, 3, 17), dayOf(2012, 9, 30)],
  ["050114", dayOf(2012, 12, 8), dayOf(2012, 12, 19)],
];

const absent = (id, day) => ABSENT.some(([who, first, last]) => who === id && day >= first && day <= last);

/** Written where the logger could not measure. */
const SENTINEL = "-9999";

/**
 * `day,site,precip,tn,tx` of some lowland stations. Rain is read in the morning and stands under the day of the
 * reading: it fell on the day before.
 */
export function lowlandFile(ids, series, random) {
  const rows = ["day,site,precip,tn,tx"];
  for (let day = FIRST_DAY; day <= LAST_DAY; day++)
    for (const id of ids) {
      if (absent(id, day)) continue;
      const own = series[STATIONS.findIndex((station) => station.id === id)];
      const i = day - FIRST_DAY;
      const cell = (value) => (random.chance(0.0006) ? SENTINEL : one(value));
      const rain = i === 0 ? SENTINEL : cell(own.rain[i - 1]);
      rows.push(`${iso(day)},${id},${rain},${cell(own.tmin[i])},${cell(own.tmax[i])}`);
    }
  return `${rows.join("\n")}\n`;
}

/** `date,RR,TN,TX` of the upland station, automatic: rain stands under the day it fell. One day stands twice. */
export function uplandFile(series) {
  const id = "050114";
  const own = series[STATIONS.findIndex((station) => station.id === id)];
  const twice = dayOf(2009, 5, 14);
  const rows = ["date,RR,TN,TX"];
  for (let day = FIRST_DAY; day <= LAST_DAY; day++) {
    if (absent(id, day)) continue;
    const i = day - FIRST_DAY;
    // A blocked gauge: the rain's cells are empty for a week in a summer.
    const { year, month, day: dom } = civil(day);
    const blocked = year === 2004 && month === 7 && dom >= 5 && dom <= 11;
    const row = `${dotted(day)},${blocked ? "" : one(own.rain[i])},${one(own.tmin[i])},${one(own.tmax[i])}`;
    rows.push(row);
    if (day === twice) rows.push(row.replace(/,[^,]*,/, `,${one(own.rain[i] + 10)},`));
  }
  return `${rows.join("\n")}\n`;
}

export function stationList(toDegrees) {
  const rows = STATIONS.map(({ id, name, x, y, elevation }) => {
    const [longitude, latitude] = toDegrees(x, y);
    return `${id},${name},${longitude.toFixed(4)},${latitude.toFixed(4)},${elevation}`;
  });
  return `id,name,lon,lat,elevation\n${rows.join("\n")}\n`;
}
