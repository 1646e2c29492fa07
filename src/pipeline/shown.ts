import { civil, dayOf } from "../data/day.ts";
import type { Series } from "../data/series.ts";
import type { Files } from "../effects/effects.ts";
import { readOverview } from "../layers/overview.ts";
import type { MapLayer, ShownSeries } from "../report/input.ts";
import type { Spec } from "../spec/spec.ts";

/**
 * For the picture of a covariate: the mean of its stations, month by month (a total becomes its mean per day). The
 * values that count were made from the daily records; this is only drawn.
 */
export function monthlyPicture(covariate: string, sources: readonly Series[]): ShownSeries | undefined {
  if (sources.length === 0) return undefined;
  const sums = new Map<number, { sum: number; days: number }>();
  for (const series of sources)
    for (let i = 0; i < series.values.length; i++) {
      const value = series.values[i];
      if (Number.isNaN(value)) continue;
      const { year, month } = civil(series.starts[i]);
      const days = series.ends[i] - series.starts[i];
      const held = sums.get(year * 12 + month - 1) ?? { sum: 0, days: 0 };
      held.sum += series.kind === "total" ? value : value * days;
      held.days += days;
      sums.set(year * 12 + month - 1, held);
    }
  const months = [...sums.keys()].sort((a, b) => a - b);
  const [first] = sources;
  const start = (index: number) => dayOf(Math.floor(index / 12), (index % 12) + 1, 1);
  return {
    covariate,
    series: {
      site: sources.length === 1 ? first.site : `mean of ${sources.length}`,
      variable: first.variable,
      unit: first.kind === "total" ? `${first.unit} per day` : first.unit,
      kind: "mean",
      starts: Int32Array.from(months, start),
      ends: Int32Array.from(months, (index) => start(index + 1)),
      values: Float64Array.from(months, (index) => {
        const held = sums.get(index);
        return held === undefined ? Number.NaN : held.sum / held.days;
      }),
      files: first.files,
    },
  };
}

const MAP_WIDTH = 160;

/** The middle image of the first layer, on a grid of longitude and latitude, to lie under the map. */
export async function mapLayer(spec: Spec, files: Files): Promise<MapLayer | undefined> {
  const used = spec.covariates.find((one) => one.source === "layer");
  if (used === undefined || used.source !== "layer") return undefined;
  const options = spec.layers[used.layer];
  const paths = await files.list(options.files);
  const path = paths[Math.floor(paths.length / 2)];
  const view = await readOverview(path, options, 256 * 256, files);
  const [west, south, east, north] = view.bounds;
  const shrink = Math.cos((((south + north) / 2) * Math.PI) / 180);
  const width = MAP_WIDTH;
  const height = Math.max(8, Math.min(400, Math.round((width * (north - south)) / ((east - west) * shrink))));
  const values = new Float64Array(width * height).fill(Number.NaN);
  for (let row = 0; row < height; row++)
    for (let column = 0; column < width; column++) {
      const longitude = west + ((column + 0.5) / width) * (east - west);
      const latitude = north - ((row + 0.5) / height) * (north - south);
      const [x, y] = view.toPixel([longitude, latitude]);
      const [i, j] = [Math.floor(x), Math.floor(y)];
      if (i >= 0 && i < view.width && j >= 0 && j < view.height)
        values[row * width + column] = view.values[j * view.width + i];
    }
  return {
    variable: used.layer,
    title: `${used.layer}, ${path}`,
    unit: options.unit,
    width,
    height,
    values,
    west,
    east,
    south,
    north,
  };
}
