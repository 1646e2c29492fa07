import { fileURLToPath } from "node:url";
import { describe, expect, test } from "vitest";
import { lookNetcdf } from "../../src/inspect/look-netcdf.ts";
import { readOverview } from "../../src/layers/overview.ts";
import { DATA, filesBelow } from "../layers/effects.ts";

const FOLDER = fileURLToPath(new URL("../data/netcdf", import.meta.url));

describe("a look at NetCDF", () => {
  test("variables, dates, extent, first image and a stanza for each", async () => {
    const look = await lookNetcdf("us-southeast-monthly-1999.nc", filesBelow(DATA));
    expect(look.format).toBe("NetCDF classic (CDF-1)");
    expect(look.variables.map((one) => one.name)).toEqual(["pr", "tas"]);
    expect(look.variables[0].dates).toBe("1999-01-01 to 1999-12-31, 12 images");
    expect(look.variables[0].bounds).toEqual([-85, 33, -74.875, 37.125]);
    // an eighth of a degree at 35° N, where a degree is 110,941 m along the meridian and 91,288 m along the parallel (WGS 84,
    // from memory)
    const [across, down] = look.variables[0].pixelMetres;
    expect(across / (91288 / 8)).toBeCloseTo(1, 3);
    expect(down / (110941 / 8)).toBeCloseTo(1, 3);
    expect(look.stanza).toContain('    variable: "pr"\n    date: { axis: time }\n');
  });
  test("what must be chosen is shown with the first choice in the stanza", async () => {
    const look = await lookNetcdf("level-member.nc", filesBelow(FOLDER));
    expect(look.variables[0].notes).toEqual([
      'one member of x: "r1i1p1f1", "r2i1p1f1"',
      "one level of x: 1000, 850, 500.5 (hPa)",
    ]);
    expect(look.stanza).toContain('select: { "member": "r1i1p1f1", "level": 1000 }');
  });
  test("bounds in the file: covers: bounds", async () => {
    expect((await lookNetcdf("bounds.nc", filesBelow(FOLDER))).stanza).toContain("covers: bounds");
  });
  test("positions cell by cell are refused by name", async () => {
    await expect(lookNetcdf("two-dimensional.nc", filesBelow(FOLDER))).rejects.toMatchObject({
      facts: { name: "layers.two-dimensional-coordinates" },
    });
  });
  test("the picture for the map has the first image's values", async () => {
    const view = await readOverview("chunks-odd.nc", { variable: "x" }, 1000, filesBelow(FOLDER));
    expect([view.width, view.height]).toEqual([8, 6]);
    expect(view.values.every(Number.isFinite)).toBe(true);
    expect(view.bounds).toEqual([6.75, 49.75, 10.75, 52.75]);
  });
});
