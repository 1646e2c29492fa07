import type { CaptureOptions } from "../study/options.ts";
import { byStratumProblems } from "./by-stratum-checks.ts";
import { layerProblems } from "./layer-checks.ts";
import type { KeyPath } from "./path.ts";
import type { Problem } from "./problems.ts";
import { unknownName } from "./read-covariates.ts";
import { sensitivityProblems } from "./sensitivity-checks.ts";
import type { Spec } from "./spec.ts";

const quote = (name: string) => JSON.stringify(name);

function needs(path: KeyPath, expected: string, found: string, remedy: string, atKey = false): Problem {
  return { name: "spec.needs", path, expected, found, remedy, atKey };
}

function conflict(path: KeyPath, expected: string, found: string, remedy: string): Problem {
  return { name: "spec.conflict", path, expected, found, remedy };
}

function nameProblems(spec: Spec): Problem[] {
  const seen = new Set<string>();
  const written: (readonly [KeyPath, string])[] = [
    ...spec.covariates.map(({ name, entry }, i) => [["covariates", entry ?? i, "name"], name] as const),
    ...spec.prepare.derive.map(({ name }, i) => [["derive", i, "name"], name] as const),
  ];
  return written.flatMap(([path, name]): Problem[] => {
    if (!seen.has(name)) {
      seen.add(name);
      return [];
    }
    const remedy = "give one of the two another name";
    return [
      {
        name: "spec.repeated-name",
        path,
        expected: "each covariate name once",
        found: `${quote(name)} again`,
        remedy,
      },
    ];
  });
}

/** A variable that several records tell must be of one kind, and must not share its name with a layer. */
function seriesProblems(spec: Spec): Problem[] {
  const kinds = new Map<string, string>();
  return spec.records.flatMap((record, i) => {
    const variables =
      record.layout !== "long"
        ? [
            {
              path: ["records", i, "variable"],
              name: record.variable,
              kind: record.kind,
              kindPath: ["records", i, "kind"],
            },
          ]
        : Object.entries(record.series).map(([name, { kind }]) => {
            const path = ["records", i, "series", name];
            return { path, name, kind, kindPath: [...path, "kind"] };
          });
    return variables.flatMap(({ path, name, kind, kindPath }): Problem[] => {
      const earlier = kinds.get(name);
      kinds.set(name, earlier ?? kind);
      if (Object.hasOwn(spec.layers, name)) {
        const atKey = record.layout === "long";
        const remedy = "rename the variable or the layer";
        return [{ ...conflict(path, "a name that no layer has", quote(name), remedy), atKey }];
      }
      if (earlier === undefined || earlier === kind) return [];
      return [
        conflict(
          kindPath,
          `the kind ${earlier} that ${quote(name)} has above`,
          kind,
          "write the same kind, or rename one of the variables",
        ),
      ];
    });
  });
}

/** The normal-ratio method fills totals alone: a ratio of temperatures has no meaning. */
function infillProblems(spec: Spec): Problem[] {
  const kinds = new Map<string, string>();
  for (const record of spec.records) {
    if (record.layout !== "long") kinds.set(record.variable, record.kind);
    else for (const [name, { kind }] of Object.entries(record.series)) kinds.set(name, kind);
  }
  return spec.covariates.flatMap((one, i): Problem[] => {
    if (one.source !== "stations" || one.infill?.method !== "normal ratio") return [];
    const kind = kinds.get(one.variable);
    if (kind === undefined || kind === "total") return [];
    const path = ["covariates", one.entry ?? i, "infill", "method"];
    const expected = "neighbour regression for what is not a total";
    return [conflict(path, expected, `normal ratio for a ${kind}`, "write method: neighbour regression")];
  });
}

function needProblems(spec: Spec): Problem[] {
  const { captures, occasions, covariates, survival, recapture } = spec;
  const problems: Problem[] = [];
  const dates = covariates.findIndex(({ source }) => source !== "ready-made");
  if (occasions === undefined) {
    const remedy = "add the section occasions";
    if (captures?.layout === "dated")
      problems.push(
        needs(["captures"], "occasions, which sort dated captures", "no occasions", remedy, true),
      );
    if (captures?.layout === "zero-one" && captures.columns === undefined)
      problems.push(
        needs(
          ["captures"],
          "occasions, or the columns of the captures in order",
          "neither",
          "add the key columns",
          true,
        ),
      );
    if (dates >= 0)
      problems.push(
        needs(
          ["covariates", covariates[dates].entry ?? dates, "window"],
          "occasions, which windows are counted from",
          "no occasions",
          remedy,
          true,
        ),
      );
  }
  if (captures === undefined) {
    const remedy = "add the section captures, or remove this";
    if (survival.forced.length > 0)
      problems.push(
        needs(["survival", "forced"], "captures, for a covariate to be in a model", "no captures", remedy),
      );
    if (survival.strata.length > 0)
      problems.push(needs(["survival", "strata"], "captures, which hold the strata", "no captures", remedy));
    if (recapture !== "choose" && recapture !== "constant")
      problems.push(needs(["recapture"], "captures, for a recapture part", "no captures", remedy));
  } else {
    survival.strata.forEach((name, i) => {
      if (!captures.strata.includes(name))
        problems.push(
          unknownName(
            ["survival", "strata", i],
            "a stratum of the captures",
            name,
            captures.strata,
            "add it to the strata of the captures",
          ),
        );
    });
    problems.push(...markingProblems(spec, captures));
    if (recapture.includes("strata") && captures.strata.length === 0)
      problems.push(
        needs(
          ["recapture"],
          "strata of the captures, for recapture to differ between them",
          "none",
          "name their columns under captures > strata, or choose another recapture part",
        ),
      );
    if (recapture.startsWith("effort") && occasions?.effort === undefined)
      problems.push(
        needs(
          ["recapture"],
          "a column of effort among the occasions",
          "no effort",
          "add effort: to the occasions, or choose another recapture part",
        ),
      );
  }
  return problems;
}

/** Time since marking needs histories, and something to act on. */
function markingProblems({ survival }: Spec, captures: CaptureOptions): Problem[] {
  if (survival.sinceMarking === "first interval apart" && captures.layout === "counts")
    return [
      conflict(
        ["survival", "time since marking"],
        "captures animal by animal, which tell who was newly marked",
        "a counts table",
        "give the histories, or write time since marking: ignored",
      ),
    ];
  if (survival.sinceMarking !== "first interval apart" && survival.covariatesActOn === "later intervals")
    return [
      conflict(
        ["survival", "covariates act on"],
        "time since marking: first interval apart, where covariates act on later intervals alone",
        "time since marking: ignored",
        "write time since marking: first interval apart, or remove this",
      ),
    ];
  return [];
}

function modelProblems(spec: Spec): Problem[] {
  const { prepare, collinearity, survival } = spec;
  const names = [...spec.covariates, ...prepare.derive].map(({ name }) => name);
  const inModels = [...names, ...(survival.byStratum ?? []).map(({ name }) => name)];
  const problems: Problem[] = [];
  const know = (path: KeyPath, name: string, atKey = false, among = names) => {
    if (among.includes(name)) return;
    problems.push({
      ...unknownName(path, "a covariate", name, names, "name a covariate of this file"),
      atKey,
    });
  };
  for (const name of Object.keys(prepare.transform)) know(["prepare", "transform", name], name, true);
  const dropped = new Set<string>();
  collinearity.decisions.forEach(({ drop, keep }, i) => {
    const path = ["collinearity", "decisions", i];
    know([...path, "drop"], drop);
    if (dropped.has(drop))
      problems.push(
        conflict(
          [...path, "drop"],
          "each covariate dropped once",
          `${quote(drop)} again`,
          "remove one of the decisions",
        ),
      );
    dropped.add(drop);
    if (keep === undefined) return;
    know([...path, "keep"], keep);
    if (keep === drop)
      problems.push(
        conflict(
          [...path, "keep"],
          "another covariate than the dropped one",
          quote(keep),
          "name the covariate that stays",
        ),
      );
  });
  collinearity.decisions.forEach(({ keep }, i) => {
    if (keep !== undefined && dropped.has(keep) && keep !== collinearity.decisions[i].drop)
      problems.push(
        conflict(
          ["collinearity", "decisions", i, "keep"],
          "a covariate that no decision drops",
          quote(keep),
          "keep another one, or remove the decision that drops it",
        ),
      );
  });
  collinearity.priority?.forEach((name, i) => {
    know(["collinearity", "priority", i], name);
  });
  const { keep } = spec.components;
  const all = spec.covariates.length + spec.prepare.derive.length - dropped.size;
  if (keep.type === "number" && all > 1 && keep.number > all)
    problems.push({
      name: "spec.out-of-range",
      path: ["components", "keep", "number"],
      expected: `at most ${all}, as many components as there are covariates that stay`,
      found: String(keep.number),
      remedy: "keep fewer components than covariates, or nothing is reduced",
    });
  if (typeof spec.components.within === "object") {
    const grouped = new Map<string, string>();
    for (const [group, members] of Object.entries(spec.components.within))
      members.forEach((name, i) => {
        const path = ["components", "within", group, i];
        know(path, name);
        const before = grouped.get(name);
        if (before !== undefined)
          problems.push(
            conflict(
              path,
              "each covariate in one group",
              `${quote(name)} in ${before} too`,
              "keep it in one",
            ),
          );
        grouped.set(name, group);
      });
  }
  spec.recaptureCovariates?.forEach((name, i) => {
    know(["recapture", "covariates", i], name, false, inModels);
  });
  survival.forced.forEach((name, i) => {
    const path = ["survival", "forced", i];
    know(path, name, false, inModels);
    if (dropped.has(name))
      problems.push(
        conflict(
          path,
          "a covariate that no decision drops",
          quote(name),
          "remove the decision, or do not force it",
        ),
      );
  });
  return problems;
}

/** Years that stand in the wrong order or are too few, valid ranges that are empty. */
function rangeProblems(spec: Spec): Problem[] {
  const problems: Problem[] = [];
  const years = (path: KeyPath, range: { readonly from: number; readonly to: number }, least: number) => {
    const count = range.to - range.from + 1;
    if (count < least)
      problems.push({
        name: "spec.out-of-range",
        path,
        expected:
          least === 1
            ? "a first year that is not after the last"
            : `a base period of at least ${least} years, both ends included`,
        found: `${range.from} to ${range.to}`,
        remedy: "write an earlier first or a later last year",
      });
  };
  const { standardise } = spec.prepare;
  if (standardise.type === "base") {
    years(["prepare", "standardise", "base"], standardise, 20);
    spec.covariates.forEach((covariate, i) => {
      if (
        covariate.source === "ready-made" ||
        (covariate.window.type !== "span" && covariate.window.type !== "interval")
      )
        return;
      problems.push(
        conflict(
          ["covariates", covariate.entry ?? i, "window"],
          "a season or calendar year, which every year of a base period has",
          "a window counted from occasions",
          "give it a season, or write standardise: sample",
        ),
      );
    });
  }
  spec.covariates.forEach((covariate, at) => {
    if (covariate.source === "ready-made") return;
    const i = covariate.entry ?? at;
    const { statistic, anomaly } = covariate;
    if ("base" in statistic && typeof statistic.base === "object")
      years(["covariates", i, "statistic", statistic.type, "base"], statistic.base, 1);
    if (anomaly !== undefined) years(["covariates", i, "departures", "base"], anomaly.base, 1);
    if (
      (statistic.type === "degree-days" || statistic.type === "degree-days of extremes") &&
      statistic.cap <= statistic.base
    )
      problems.push(
        conflict(
          ["covariates", i, "statistic", statistic.type, "cap"],
          `a cap above the base of ${statistic.base}`,
          String(statistic.cap),
          "write a higher cap, or leave it out",
        ),
      );
  });
  const ordered = (path: KeyPath, pair: readonly [number, number] | undefined) => {
    if (pair !== undefined && pair[0] >= pair[1])
      problems.push(
        conflict(path, "a least value below the greatest", `[${pair[0]}, ${pair[1]}]`, "exchange the two"),
      );
  };
  for (const [name, { valid }] of Object.entries(spec.layers)) ordered(["layers", name, "valid"], valid);
  spec.records.forEach((record, i) => {
    if (record.layout === "long")
      for (const [name, { limits }] of Object.entries(record.series))
        ordered(["records", i, "series", name, "limits"], limits);
  });
  return problems;
}

/** What the parts of a pipeline say of each other. */
export function crossProblems(spec: Spec): Problem[] {
  const checks = [
    nameProblems,
    seriesProblems,
    infillProblems,
    needProblems,
    modelProblems,
    byStratumProblems,
    rangeProblems,
    layerProblems,
    sensitivityProblems,
  ];
  return checks.flatMap((check) => check(spec));
}
