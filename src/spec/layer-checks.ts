import type { KeyPath } from "./path.ts";
import type { Problem } from "./problems.ts";
import type { Spec } from "./spec.ts";

function problem(
  name: "spec.needs" | "spec.conflict",
  path: KeyPath,
  expected: string,
  found: string,
  remedy: string,
): Problem {
  return { name, path, expected, found, remedy, ...(name === "spec.needs" ? { atKey: true } : {}) };
}

/** Layers whose quality or time axis needs what is not written, and areas asked of places that move. */
export function layerProblems(spec: Spec): Problem[] {
  const layers = Object.entries(spec.layers).flatMap(([name, { covers, date, quality }]): Problem[] => [
    ...(covers === "bounds" && !("axis" in date)
      ? [
          problem(
            "spec.conflict",
            ["layers", name, "covers"],
            "covers: bounds only with date: { axis: time }",
            "bounds",
            "write what an image covers, e.g. month, or date: { axis: time }",
          ),
        ]
      : []),
    ...(quality !== undefined &&
    quality.files === undefined &&
    quality.band === undefined &&
    quality.variable === undefined
      ? [
          problem(
            "spec.needs",
            ["layers", name, "quality"],
            "files, a band or a variable, where the quality numbers stand",
            "none of them",
            'add e.g. files: ["layers/quality_*.tif"] or variable: quality',
          ),
        ]
      : []),
  ]);
  const areas = spec.covariates.flatMap((one, i): Problem[] => {
    if (one.source !== "layer" || one.use.by !== "area") return [];
    const place = Object.hasOwn(spec.places, one.place) ? spec.places[one.place] : undefined;
    if (place === undefined || !("fixes" in place)) return [];
    const remedy = "write by: nearest or bilinear, or by: radius for a circle round each position";
    return [
      problem("spec.conflict", ["covariates", i, "by"], "a place with an area", "a place that moves", remedy),
    ];
  });
  return [...layers, ...areas];
}
