import { isoDay } from "../data/day.ts";
import type { Files } from "../effects/effects.ts";
import { CoveyError } from "../errors.ts";
import { stemOf } from "../layers/dates.ts";
import type { Dataset } from "../layers/netcdf/dataset.ts";
import { type NcVariable, textOf } from "../layers/netcdf/dataset.ts";
import { netcdfStack } from "../layers/netcdf/file.ts";
import { describeNetcdf, gridVariables } from "../layers/netcdf/layer.ts";
import { isNetcdf, openNetcdf } from "../layers/netcdf/open.ts";
import { packingOf, unpacker } from "../layers/netcdf/packing.ts";
import { pixelsOf } from "../layers/netcdf/pixels.ts";
import { boundsOf } from "../layers/overview.ts";
import { groundSize } from "./ground-size.ts";
import { guessPattern } from "./layer-stanza.ts";
import { Tally } from "./tally.ts";

/** What a variable on a grid says and holds. */
export interface VariableLook {
  readonly name: string;
  readonly title: string;
  readonly unit: string;
  readonly type: string;
  /** `time = 12, lat = 33, lon = 81`. */
  readonly dimensions: string;
  readonly storage: string;
  readonly methods: string;
  readonly scale: number;
  readonly offset: number;
  /** First to last day and how many images, or why there are no dates. */
  readonly dates: string;
  readonly system: string;
  /** Width and height of the middle pixel on the ground, in metres; NaN if not known. */
  readonly pixelMetres: readonly [number, number];
  /** West, south, east, north; NaN if not known. */
  readonly bounds: readonly [number, number, number, number];
  /** Of the first image. */
  readonly missingShare: number;
  readonly least: number;
  readonly mean: number;
  readonly greatest: number;
  /** What a run would refuse or note. */
  readonly notes: readonly string[];
}

export interface NetcdfLook {
  readonly path: string;
  readonly bytes: number;
  readonly format: string;
  readonly variables: readonly VariableLook[];
  /** Variables that lie on no grid of one-dimensional axes. */
  readonly others: readonly string[];
  readonly stanza: string;
}

/** True if a file of the folder is NetCDF by its first bytes. */
export function looksLikeNetcdf(path: string, files: Files): boolean {
  const file = files.open(path);
  try {
    return isNetcdf(file);
  } finally {
    file.close();
  }
}

/** Looks at a NetCDF file: its variables on grids, their dates, system and first image, and the stanza to paste. */
export async function lookNetcdf(path: string, files: Files): Promise<NetcdfLook> {
  const file = files.open(path);
  try {
    const dataset = await openNetcdf(file);
    try {
      const grids = gridVariables(dataset);
      // With no variable to show, the reason is the answer.
      if (grids.length === 0) describeNetcdf(dataset, {});
      const settled = grids.map((one) => ({ variable: one, told: lookAt(dataset, one) }));
      const names = new Set(grids.map((one) => one.name));
      return {
        path,
        bytes: file.size,
        format: dataset.format,
        variables: settled.map((one) => one.told.look),
        others: [...dataset.variables.keys()].filter((name) => !names.has(name)),
        stanza: stanza(
          path,
          settled.map((one) => one.told),
        ),
      };
    } finally {
      dataset.close();
    }
  } finally {
    file.close();
  }
}

interface Told {
  readonly look: VariableLook;
  readonly hasTime: boolean;
  readonly byBounds: boolean;
  readonly kind: string;
  readonly select: readonly string[];
  readonly systemKnown: boolean;
}

function lookAt(dataset: Dataset, variable: NcVariable): Told {
  const { attributes, name, shape } = variable;
  const methods = textOf(attributes, "cell_methods") ?? "";
  const { scale, offset } = packingOf(variable);
  const base = {
    name,
    title: textOf(attributes, "long_name") ?? textOf(attributes, "standard_name") ?? "",
    unit: textOf(attributes, "units") ?? "",
    type: variable.type,
    dimensions: variable.dimensions.map((one, d) => `${one} = ${shape[d]}`).join(", "),
    storage: `${variable.chunks === undefined ? "in one piece" : `chunks of ${variable.chunks.join(" × ")}`}, ${variable.compression === "none" ? "not packed" : variable.compression}`,
    methods,
    scale,
    offset,
  };
  const kind = /sum/.test(methods) ? "total" : (/maximum|minimum/.exec(methods)?.[0] ?? "mean");
  const notes: string[] = [];
  /** The whole as a run would settle it; where something must be chosen, the first choice, with a note. */
  const settle = () => {
    const options = { files: [], date: { axis: "time" }, covers: "month", unit: "1", kind: "mean" } as const;
    let select: Readonly<Record<string, string | number>> = {};
    for (let tries = 0; ; tries++)
      try {
        return { stack: netcdfStack(dataset, { ...options, variable: name, select }, name), select };
      } catch (error) {
        const choice =
          error instanceof CoveyError && error.facts.name === "layers.further-dimension" && tries < 8
            ? /select: \{ (.+): (.+) \}$/.exec(error.facts.remedy)
            : null;
        if (choice === null || !(error instanceof CoveyError)) throw error;
        notes.push(error.facts.expected);
        const value: unknown = JSON.parse(choice[2]);
        select = { ...select, [choice[1]]: typeof value === "number" ? value : String(value) };
      }
  };
  try {
    const { stack, select } = settle();
    const { layer, system, periods, findings } = stack;
    const [first, last] = [periods[0], periods[periods.length - 1]];
    const raw = pixelsOf(layer);
    const unpack = unpacker(variable, {});
    const tally = new Tally();
    for (let row = 0; row < layer.grid.height; row++)
      for (let column = 0; column < layer.grid.width; column++) tally.add(unpack(raw(0, column, row)));
    const dates =
      periods.length === 0
        ? "none"
        : `${isoDay(first.start)} to ${isoDay(last.end - 1)}, ${periods.length} images`;
    const time = layer.t < 0 ? undefined : layer.axes[layer.t].coordinate;
    return {
      look: {
        ...base,
        dates,
        system: system.label,
        pixelMetres: groundSize(layer.grid, system),
        bounds: boundsOf(layer, system),
        ...tally.result(),
        notes: [
          ...notes,
          ...findings.filter((one) => one.kind !== "layer-methods").map((one) => one.message),
        ],
      },
      hasTime: true,
      byBounds:
        time?.attributes.has("bounds") === true &&
        !findings.some((one) => one.message.includes("does not hold")),
      kind,
      select: Object.entries(select).map(
        ([key, value]) => `${JSON.stringify(key)}: ${JSON.stringify(value)}`,
      ),
      systemKnown: true,
    };
  } catch (error) {
    if (!(error instanceof CoveyError)) throw error;
    const { expected, found, name: what } = error.facts;
    const nothing = { missingShare: Number.NaN, least: Number.NaN, mean: Number.NaN, greatest: Number.NaN };
    return {
      look: {
        ...base,
        dates: "not settled",
        system: "not settled",
        pixelMetres: [Number.NaN, Number.NaN],
        bounds: [Number.NaN, Number.NaN, Number.NaN, Number.NaN],
        ...nothing,
        notes: [...notes, `expected ${expected}, found ${found}`],
      },
      hasTime: !/time|calendar|within-day|climatology/.test(what),
      byBounds: false,
      kind,
      select: [],
      systemKnown: what !== "layers.system-unknown",
    };
  }
}

function stanza(path: string, told: readonly Told[]): string {
  const stem = stemOf(path);
  const folder = path.slice(0, path.lastIndexOf("/") + 1);
  const glob = guessPattern(stem)?.glob;
  // A year in the name speaks of one file a year.
  const files = glob === undefined ? path : folder + glob + path.slice(folder.length + stem.length);
  const lines = told.flatMap(({ look, hasTime, byBounds, kind, select, systemKnown }) => [
    `  ${look.name.replace(/[^A-Za-z0-9 _-]/g, " ").trim() || "layer"}:`,
    `    files: [${JSON.stringify(files)}]`,
    `    variable: ${JSON.stringify(look.name)}`,
    hasTime
      ? `    date: { axis: time }`
      : `    date: { first: "2000-01", step: month } # the file's times cannot be read: write the first image's date`,
    byBounds ? `    covers: bounds` : `    covers: month # the file does not say: day, month, year, …`,
    ...(select.length === 0 ? [] : [`    select: { ${select.join(", ")} } # one of several`]),
    look.unit === "" ? `    unit: "1" # the file does not say` : `    unit: ${JSON.stringify(look.unit)}`,
    look.methods === "" ? `    kind: mean # mean, total, minimum or maximum` : `    kind: ${kind}`,
    ...(systemKnown ? [] : ["    system: EPSG:0000 # the file does not say; its provider's page does"]),
  ]);
  return `${["layers:", ...lines].join("\n")}\n`;
}
