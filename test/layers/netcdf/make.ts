import { inMemory } from "../effects.ts";

/** What a small classic file made by hand holds. */
export interface Made {
  readonly dimensions: Readonly<Record<string, number>>;
  readonly variables: Readonly<
    Record<
      string,
      {
        readonly dimensions: readonly string[];
        readonly values: readonly number[];
        readonly attributes?: Readonly<Record<string, string | number | readonly number[]>>;
      }
    >
  >;
}

/** A CDF-1 file of doubles by the grammar of the format: an independent few lines, to make cases with. */
export function madeClassic({ dimensions, variables }: Made): Uint8Array {
  const names = Object.keys(dimensions);
  const bytes: number[] = [];
  const int = (value: number) => bytes.push(...new Uint8Array(Uint32Array.of(value).buffer).reverse());
  const pad = () => {
    while (bytes.length % 4 !== 0) bytes.push(0);
  };
  const name = (text: string) => {
    const own = new TextEncoder().encode(text);
    int(own.length);
    bytes.push(...own);
    pad();
  };
  const double = (value: number) => bytes.push(...new Uint8Array(Float64Array.of(value).buffer).reverse());
  bytes.push(0x43, 0x44, 0x46, 1);
  int(0);
  int(10);
  int(names.length);
  for (const one of names) {
    name(one);
    int(dimensions[one]);
  }
  int(0);
  int(0);
  int(11);
  const entries = Object.entries(variables);
  int(entries.length);
  const begins: number[] = [];
  for (const [key, { dimensions: own, attributes = {} }] of entries) {
    name(key);
    int(own.length);
    for (const one of own) int(names.indexOf(one));
    const given = Object.entries(attributes);
    int(given.length > 0 ? 12 : 0);
    int(given.length);
    for (const [label, value] of given) {
      name(label);
      int(typeof value === "string" ? 2 : 6);
      if (typeof value === "string") {
        const text = new TextEncoder().encode(value);
        int(text.length);
        bytes.push(...text);
        pad();
      } else {
        const numbers = typeof value === "number" ? [value] : value;
        int(numbers.length);
        for (const one of numbers) double(one);
      }
    }
    int(6);
    int(0);
    begins.push(bytes.length);
    int(0);
  }
  entries.forEach(([, { values }], i) => {
    const at = new Uint8Array(Uint32Array.of(bytes.length).buffer).reverse();
    at.forEach((byte, j) => {
      bytes[begins[i] + j] = byte;
    });
    for (const one of values) double(one);
  });
  return Uint8Array.from(bytes);
}

export function classicInMemory(made: Made) {
  return inMemory(madeClassic(made), "made.nc");
}

/** Two by two cells round 50 N, 8 E, with times. */
export function gridOf(
  times: readonly number[],
  time: Readonly<Record<string, string>>,
  more: Made["variables"] = {},
  variable: Readonly<Record<string, string | number>> = {},
): Made {
  return {
    dimensions: { time: times.length, lat: 2, lon: 2, nv: 2 },
    variables: {
      time: { dimensions: ["time"], values: times, attributes: time },
      lat: { dimensions: ["lat"], values: [50.5, 49.5], attributes: { units: "degrees_north" } },
      lon: { dimensions: ["lon"], values: [7.5, 8.5], attributes: { units: "degrees_east" } },
      v: {
        dimensions: ["time", "lat", "lon"],
        values: times.flatMap((_, i) => [i, i + 0.1, i + 0.2, i + 0.3]),
        attributes: variable,
      },
      ...more,
    },
  };
}
