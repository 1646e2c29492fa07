/** A small good pipeline that the tables of bad ones are edits of. Lines are numbered by the tests: keep them. */
export const GOOD = `covey: 1
study: { title: A small roost, coarsen: 5 km }
data: ../sample-data
output: ../out/small
seed: 7
occasions: { file: occasions.csv, name: visit, start: from, end: to, effort: hours }
captures:
  layout: dated
  file: captures.csv
  animal: ring
  date: date
  strata: [sex]
places:
  roost: { file: places.geojson, where: { name: roost } }
  point: { longitude: 8.25, latitude: 49.5 }
stations: { file: stations/list.csv, id: id }
records:
  - files: [stations/lowland_*.csv]
    station: { column: site }
    date: { column: day }
    missing: [-9999, -99.90, NA]
    series:
      rain: { column: precip, unit: mm, kind: total }
      tmin: { column: tn, unit: degC, kind: minimum }
layers:
  snow:
    files: ["layers/snow_*.tif"]
    date: { name: "snow_{yyyy}_{MM}" }
    covers: month
    valid: [0, 100]
    unit: percent
    kind: mean
ready-made:
  visits: { file: intervals.csv, interval: interval, columns: { disturbance: { unit: "1" } } }
covariates:
  - name: winter rain
    theme: rain
    from: rain
    stations: [Ash, "050114"]
    window: { season: Nov to Feb }
    statistic: sum
  - { name: cold nights, theme: cold, from: tmin, window: whole interval, statistic: { days below: 0 } }
  - { name: snow, theme: snow, from: snow, at: roost, by: area, window: { season: Dec to Feb }, statistic: mean }
  - { name: disturbance, theme: people, from: visits.disturbance }
derive:
  - { name: contrast, theme: rain, ratio: [winter rain, snow] }
prepare:
  transform: { winter rain: square root }
collinearity:
  decisions: [{ drop: contrast, keep: snow, note: same weeks }]
survival: { strata: [sex], forced: [snow] }
recapture: effort
screen: { steps: 50, down to: 0.01 }
findings:
  gap: accept
  duplicate: { do: stop, except: [{ file: stations/upland.csv, keep: first, note: typed twice }] }
`;

/** GOOD with one text replaced by another; the text must be there. */
export function edited(from: string, to: string): string {
  if (!GOOD.includes(from)) throw new Error(`the good pipeline does not hold ${JSON.stringify(from)}`);
  return GOOD.replace(from, () => to);
}
