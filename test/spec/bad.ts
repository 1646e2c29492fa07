/** One bad pipeline: an edit of the good one (or a whole text, where `from` is null) and what is said of it. */
export interface BadPipeline {
  readonly title: string;
  readonly from: string | null;
  readonly to: string;
  readonly name: string;
  readonly message: string;
}

export const BAD_PIPELINES: readonly BadPipeline[] = [
  {
    title: "layers: bounds without a time axis",
    from: "    covers: month\n",
    to: "    covers: bounds\n",
    name: "spec.conflict",
    message:
      "p.yaml:29:13 (layers > snow > covers): expected covers: bounds only with date: { axis: time }, found bounds; write what an image covers, e.g. month, or date: { axis: time }",
  },
  {
    title: "layers: quality that stands nowhere",
    from: "    valid: [0, 100]\n",
    to: "    quality: { pass: [{ values: [0] }] }\n",
    name: "spec.needs",
    message:
      'p.yaml:30:5 (layers > snow > quality): expected files, a band or a variable, where the quality numbers stand, found none of them; add e.g. files: ["layers/quality_*.tif"] or variable: quality',
  },
  {
    title: "layers: bits that are no bits",
    from: "    valid: [0, 100]\n",
    to: "    quality: { band: 2, pass: [{ bits: 0-1, values: [0] }] }\n",
    name: "spec.format",
    message:
      'p.yaml:30:40 (layers > snow > quality > pass > #1 > bits): expected the bits, from 0 for the lowest: 2, or 0 to 1; the whole number if left out, found "0-1"; write it like 0 to 1',
  },
  {
    title: "layers: quality files beyond the data folder",
    from: "    valid: [0, 100]\n",
    to: "    quality: { files: [../q.tif], pass: [{ values: [0] }] }\n",
    name: "spec.path",
    message:
      'p.yaml:30:24 (layers > snow > quality > files > #1): expected a path below `data`, with / between folders, found a step out of the folder (..): "../q.tif"; write the path from the data folder, or move `data` up to a folder that holds all inputs',
  },
  {
    title: "places: an area asked of a place that moves",
    from: "  roost: { file: places.geojson, where: { name: roost } }\n",
    to: "  roost: { fixes: fixes.csv, date: time, longitude: lon, latitude: lat }\n",
    name: "spec.conflict",
    message:
      "p.yaml:43:59 (covariates > #3 > by): expected a place with an area, found a place that moves; write by: nearest or bilinear, or by: radius for a circle round each position",
  },
  {
    title: "infilling: a ratio of temperatures",
    from: "window: whole interval, statistic: { days below: 0 } }",
    to: "window: whole interval, statistic: { days below: 0 }, infill: { method: normal ratio, longest gap: 3 days } }",
    name: "spec.conflict",
    message:
      "p.yaml:42:123 (covariates > #2 > infill > method): expected neighbour regression for what is not a total, found normal ratio for a minimum; write method: neighbour regression",
  },
  {
    title: "infilling: a gap without its unit",
    from: "window: whole interval, statistic: { days below: 0 } }",
    to: "window: whole interval, statistic: { days below: 0 }, infill: { method: normal ratio, longest gap: 3 } }",
    name: "spec.format",
    message:
      "p.yaml:42:150 (covariates > #2 > infill > longest gap): expected the longest gap that is filled, found 3; write it like 3 days",
  },
  {
    title: "schema: a newer schema number",
    from: "covey: 1\n",
    to: "covey: 2\n",
    name: "spec.schema-number",
    message:
      "p.yaml:1:8 (covey): expected schema number 1 of the pipeline file, found 2, which is newer than this covey; use a newer covey",
  },
  {
    title: "schema: schema number 0",
    from: "covey: 1\n",
    to: "covey: 0\n",
    name: "spec.schema-number",
    message:
      "p.yaml:1:8 (covey): expected schema number 1 of the pipeline file, found 0, which no covey has used; write covey: 1",
  },
  {
    title: "schema: no schema number",
    from: "covey: 1\n",
    to: "",
    name: "spec.missing-key",
    message:
      'p.yaml:1:1 (covey): expected the key "covey": the number of this file\'s schema, found no such key; add it, e.g. covey: 1',
  },
  {
    title: "schema: schema number as text",
    from: "covey: 1\n",
    to: "covey: one\n",
    name: "spec.not-a-choice",
    message: 'p.yaml:1:8 (covey): expected the number of this file\'s schema, found "one"; write 1',
  },
  {
    title: "keys: misspelt key at the top",
    from: "occasions:",
    to: "ocasions:",
    name: "spec.unknown-key",
    message:
      'p.yaml:6:1 (ocasions): expected one of the keys "covey", "study", "data", "output", "seed", "occasions", "captures", "places", "stations", "records", "layers", "ready-made", "covariates", "derive", "prepare", "collinearity", "components", "survival", "recapture", "screen", "sensitivity", "figures", "findings", found "ocasions"; did you mean "occasions"?',
  },
  {
    title: "keys: misspelt key inside",
    from: "animal: ring",
    to: "anmial: ring",
    name: "spec.unknown-key",
    message:
      'p.yaml:10:3 (captures > anmial): expected one of the keys "layout", "file", "animal", "date", "format", "strata", "lost", found "anmial"; did you mean "animal"?',
  },
  {
    title: "keys: key with another separator",
    from: "ready-made:",
    to: "ready_made:",
    name: "spec.unknown-key",
    message:
      'p.yaml:33:1 (ready_made): expected one of the keys "covey", "study", "data", "output", "seed", "occasions", "captures", "places", "stations", "records", "layers", "ready-made", "covariates", "derive", "prepare", "collinearity", "components", "survival", "recapture", "screen", "sensitivity", "figures", "findings", found "ready_made"; did you mean "ready-made"?',
  },
  {
    title: "keys: key that is like nothing",
    from: "seed: 7",
    to: "weather: fine",
    name: "spec.unknown-key",
    message:
      'p.yaml:5:1 (weather): expected one of the keys "covey", "study", "data", "output", "seed", "occasions", "captures", "places", "stations", "records", "layers", "ready-made", "covariates", "derive", "prepare", "collinearity", "components", "survival", "recapture", "screen", "sensitivity", "figures", "findings", found "weather"; remove it, or use one of those keys',
  },
  {
    title: "keys: misspelt optional key",
    from: "effort: hours",
    to: "efort: hours",
    name: "spec.unknown-key",
    message:
      'p.yaml:6:70 (occasions > efort): expected one of the keys "file", "name", "start", "end", "format", "lengths", "effort", found "efort"; did you mean "effort"?',
  },
  {
    title: "keys: misspelt key of a covariate",
    from: "    theme: rain\n",
    to: "    themes: rain\n",
    name: "spec.unknown-key",
    message:
      'p.yaml:37:5 (covariates > #1 > themes): expected one of the keys "name", "theme", "from", "second", "stations", "join", "weights", "infill", "window", "statistic", "complete", "unit", "departures", "allowed missing", found "themes"; did you mean "theme"?',
  },
  {
    title: "keys: key of the other branch",
    from: "from: snow, at: roost",
    to: "from: snow, stations: all, at: roost",
    name: "spec.unknown-key",
    message:
      'p.yaml:43:44 (covariates > #3 > stations): expected one of the keys "name", "theme", "from", "at", "by", "radius", "valid area", "window", "statistic", "complete", "unit", "departures", "allowed missing", found "stations"; remove it, or use one of those keys',
  },
  {
    title: "keys: misspelt key that tells the branch",
    from: "at: roost, by: area",
    to: "att: roost, by: area",
    name: "spec.unknown-key",
    message:
      'p.yaml:43:44 (covariates > #3 > att): expected one of the keys "name", "theme", "from", "at", "by", "radius", "valid area", "window", "statistic", "complete", "unit", "departures", "allowed missing", found "att"; did you mean "at"?',
  },
  {
    title: "keys: missing required key",
    from: "name: visit, start: from,",
    to: "start: from,",
    name: "spec.missing-key",
    message:
      'p.yaml:6:1 (occasions > name): expected the key "name": the column with the occasion\'s name, found no such key; add it, e.g. name: visit',
  },
  {
    title: "keys: missing key in a list entry",
    from: "    statistic: sum\n",
    to: "",
    name: "spec.missing-key",
    message:
      'p.yaml:36:5 (covariates > #1 > statistic): expected the key "statistic": the statistic: a word such as mean, sum or maximum, or a mapping such as { days below: 0 } or { quantile: 0.9 }, found no such key; add it, e.g. statistic: mean',
  },
  {
    title: "keys: layer without place",
    from: "from: snow, at: roost, by: area",
    to: "from: snow",
    name: "spec.missing-key",
    message:
      'p.yaml:43:5 (covariates > #3 > at): expected the keys "at" and "by", since "snow" is a layer, found no such keys; add them, e.g. at: roost, by: nearest',
  },
  {
    title: "keys: misspelt kind of finding",
    from: "gap: accept",
    to: "gaps: accept",
    name: "spec.unknown-key",
    message:
      'p.yaml:55:3 (findings > gaps): expected one of the keys "gap", "duplicate", "bad-value", "bad-date", "sentinel", "unit", "unknown-station", "capture-outside", "capture-repeat", "capture-after-loss", "strata-conflict", "never-recaptured", "layer-gap", "layer-overlap", "layer-valid-area", "place-outside", "window-empty", "window-leak", "incomplete", "changing-stations", "constant-column", "incomplete-column", "correlated", "inflated", and others, found "gaps"; did you mean "gap"?',
  },
  {
    title: "keys: YAML merge key",
    from: "seed: 7",
    to: "<<: { seed: 7 }",
    name: "spec.unknown-key",
    message:
      'p.yaml:5:1 (<<): expected one of the keys "covey", "study", "data", "output", "seed", "occasions", "captures", "places", "stations", "records", "layers", "ready-made", "covariates", "derive", "prepare", "collinearity", "components", "survival", "recapture", "screen", "sensitivity", "figures", "findings", found "<<"; remove it, or use one of those keys',
  },
  {
    title: "types: text for a number",
    from: "steps: 50",
    to: "steps: many",
    name: "spec.wrong-type",
    message:
      'p.yaml:53:18 (screen > steps): expected the number of penalties on the path (if left out: 100), found "many"; write it like 100',
  },
  {
    title: "types: decimal comma",
    from: "down to: 0.01",
    to: "down to: 0,01",
    name: "spec.out-of-range",
    message:
      "p.yaml:53:31 (screen > down to): expected the least penalty as a share of the greatest (if left out: 0.001), more than 0, found 0; write it like 0.001 (and 1 more problem further down)",
  },
  {
    title: "types: quoted number",
    from: "steps: 50",
    to: 'steps: "50"',
    name: "spec.wrong-type",
    message:
      'p.yaml:53:18 (screen > steps): expected the number of penalties on the path (if left out: 100), found "50"; take the quotation marks away',
  },
  {
    title: "types: fraction for a whole number",
    from: "steps: 50",
    to: "steps: 50.5",
    name: "spec.wrong-type",
    message:
      "p.yaml:53:18 (screen > steps): expected the number of penalties on the path (if left out: 100), a whole number, found 50.5; round it",
  },
  {
    title: "types: number for text",
    from: "id: id",
    to: "id: 7",
    name: "spec.unquoted",
    message:
      'p.yaml:16:42 (stations > id): expected the column with the station\'s identifier, found the number 7; quote it: "7"',
  },
  {
    title: "types: text for a list",
    from: "strata: [sex]\nplaces",
    to: "strata: sex\nplaces",
    name: "spec.wrong-type",
    message:
      'p.yaml:12:11 (captures > strata): expected the columns that split the animals (if left out: []), found "sex"; put it in brackets: [sex]',
  },
  {
    title: "types: list for text",
    from: "animal: ring",
    to: "animal: [ring]",
    name: "spec.wrong-type",
    message:
      "p.yaml:10:11 (captures > animal): expected the column with the animal's mark, found a list of 1; write it like ring",
  },
  {
    title: "types: text for a mapping",
    from: "study: { title: A small roost, coarsen: 5 km }",
    to: "study: A small roost",
    name: "spec.wrong-type",
    message:
      'p.yaml:2:8 (study): expected the study\'s title and how far its places are hidden, found "A small roost"; write it as keys with values',
  },
  {
    title: "types: list for a mapping",
    from: "layers:\n  snow:",
    to: "layers:\n  - snow:",
    name: "spec.wrong-type",
    message:
      "p.yaml:26:3 (layers): expected the layers, by name (if left out: {}), found a list of 1; write it as keys with values",
  },
  {
    title: "types: nothing after the colon",
    from: "animal: ring",
    to: "animal:",
    name: "spec.wrong-type",
    message:
      "p.yaml:10:10 (captures > animal): expected the column with the animal's mark, found nothing; write it like ring",
  },
  {
    title: "types: null list entry",
    from: "strata: [sex]\nplaces",
    to: "strata: [~]\nplaces",
    name: "spec.wrong-type",
    message:
      "p.yaml:12:12 (captures > strata > #1): expected the name of a column, found nothing; write it like sex",
  },
  {
    title: "types: text for true or false",
    from: "coarsen: 5 km }",
    to: "coarsen: 5 km, sensitive: yes }",
    name: "spec.wrong-type",
    message:
      'p.yaml:2:58 (study > sensitive): expected whether the places must not be published, true or false (if left out: false), found "yes"; write true or false',
  },
  {
    title: "types: a scalar for the whole",
    from: null,
    to: "hello",
    name: "spec.wrong-type",
    message: 'p.yaml:1:1: expected a pipeline file, found "hello"; write it as keys with values',
  },
  {
    title: "types: a list for the whole",
    from: null,
    to: "- covey: 1",
    name: "spec.wrong-type",
    message: "p.yaml:1:1: expected a pipeline file, found a list of 1; write it as keys with values",
  },
  {
    title: "types: empty covariates",
    from: null,
    to: "covey: 1\nstudy: { title: x }\ncovariates: []\n",
    name: "spec.out-of-range",
    message:
      "p.yaml:3:13 (covariates): expected the covariates, at least 1 entry, found an empty list; write a value within that range",
  },
  {
    title: "types: empty text",
    from: "animal: ring",
    to: 'animal: ""',
    name: "spec.format",
    message:
      "p.yaml:10:11 (captures > animal): expected the column with the animal's mark, found empty text; write it like ring",
  },
  {
    title: "types: blanks around a name",
    from: "animal: ring",
    to: 'animal: "ring "',
    name: "spec.format",
    message:
      'p.yaml:10:11 (captures > animal): expected the column with the animal\'s mark, found "ring "; write it like ring',
  },
  {
    title: "quotes: station with a leading zero",
    from: '[Ash, "050114"]',
    to: "[Ash, 050114]",
    name: "spec.unquoted",
    message:
      'p.yaml:39:21 (covariates > #1 > stations > #2): expected a decimal number, or text in quotation marks, found 050114, which YAML reads as the number 50114; quote it if it is an identifier: "050114"; write 50114 if it is a number',
  },
  {
    title: "quotes: station that is a plain number",
    from: '[Ash, "050114"]',
    to: "[Ash, 50114]",
    name: "spec.unquoted",
    message:
      'p.yaml:39:21 (covariates > #1 > stations > #2): expected a station\'s name or identifier, found the number 50114; quote it: "50114"',
  },
  {
    title: "quotes: always with a leading zero",
    from: "station: { column: site }",
    to: "station: { always: 050114 }",
    name: "spec.unquoted",
    message:
      'p.yaml:19:24 (records > #1 > station > always): expected a decimal number, or text in quotation marks, found 050114, which YAML reads as the number 50114; quote it if it is an identifier: "050114"; write 50114 if it is a number',
  },
  {
    title: "quotes: always as a hexadecimal",
    from: "station: { column: site }",
    to: "station: { always: 0x1F }",
    name: "spec.unquoted",
    message:
      'p.yaml:19:24 (records > #1 > station > always): expected a decimal number, or text in quotation marks, found 0x1F, which YAML reads as the number 31; quote it if it is an identifier: "0x1F"; write 31 if it is a number',
  },
  {
    title: "quotes: always as true",
    from: "station: { column: site }",
    to: "station: { always: true }",
    name: "spec.unquoted",
    message:
      'p.yaml:19:24 (records > #1 > station > always): expected the station\'s identifier, found the boolean true; quote it: "true"',
  },
  {
    title: "quotes: identifier like 1e5",
    from: "station: { column: site }",
    to: "station: { always: 1e5 }",
    name: "spec.unquoted",
    message:
      'p.yaml:19:24 (records > #1 > station > always): expected the station\'s identifier, found the number 1e5; quote it: "1e5"',
  },
  {
    title: "quotes: unit 1 without quotes",
    from: '{ unit: "1" }',
    to: "{ unit: 1 }",
    name: "spec.unquoted",
    message:
      'p.yaml:34:86 (ready-made > visits > columns > disturbance > unit): expected the unit of the column, "1" for a plain number, found the number 1; quote it: "1"',
  },
  {
    title: "quotes: lost value as a number",
    from: "  strata: [sex]\nplaces",
    to: "  strata: [sex]\n  lost: { column: fate, values: [2] }\nplaces",
    name: "spec.unquoted",
    message:
      'p.yaml:13:34 (captures > lost > values > #1): expected a value that means lost, found the number 2; quote it: "2"',
  },
  {
    title: "quotes: place property as a number",
    from: "where: { name: roost }",
    to: "where: { number: 3 }",
    name: "spec.unquoted",
    message:
      'p.yaml:14:51 (places > roost > where > number): expected the property\'s value, found the number 3; quote it: "3"',
  },
  {
    title: "choices: misspelt layout",
    from: "layout: dated",
    to: "layout: datd",
    name: "spec.not-a-choice",
    message:
      'p.yaml:8:11 (captures > layout): expected the layout of the captures: dated, zero-one, counts, found "datd"; did you mean "dated"?',
  },
  {
    title: "choices: unknown layout",
    from: "layout: dated",
    to: "layout: wide",
    name: "spec.not-a-choice",
    message:
      'p.yaml:8:11 (captures > layout): expected the layout of the captures: dated, zero-one, counts, found "wide"; write one of them',
  },
  {
    title: "choices: layout left out",
    from: "  layout: dated\n",
    to: "",
    name: "spec.missing-key",
    message:
      'p.yaml:7:1 (captures > layout): expected the key "layout": the layout of the captures: dated, zero-one, counts, found no such key; add it, e.g. layout: dated',
  },
  {
    title: "choices: misspelt kind",
    from: "kind: total",
    to: "kind: totals",
    name: "spec.not-a-choice",
    message:
      'p.yaml:23:47 (records > #1 > series > rain > kind): expected how a value stands for its period: total, mean, minimum, maximum, found "totals"; did you mean "total"?',
  },
  {
    title: "choices: unknown kind",
    from: "kind: total",
    to: "kind: average",
    name: "spec.not-a-choice",
    message:
      'p.yaml:23:47 (records > #1 > series > rain > kind): expected how a value stands for its period: total, mean, minimum, maximum, found "average"; write one of them',
  },
  {
    title: "choices: misspelt recapture",
    from: "recapture: effort",
    to: "recapture: each ocasion",
    name: "spec.not-a-choice",
    message:
      'p.yaml:52:12 (recapture): expected the recapture part by name, or { covariates: … }; `choose` takes the least AICc under one survival per interval (if left out: choose), found "each ocasion"; did you mean "each occasion"?',
  },
  {
    title: "recapture: by a covariate that is none",
    from: "recapture: effort",
    to: "recapture: { covariates: [snow, contrats] }",
    name: "spec.unknown-name",
    message:
      'p.yaml:52:33 (recapture > covariates > #2): expected a covariate ("winter rain", "cold nights", "snow", "disturbance", "contrast"), found "contrats"; did you mean "contrast"?',
  },
  {
    title: "recapture: strata as a mapping",
    from: "survival: { strata: [sex], forced: [snow] }\nrecapture: effort",
    to: "survival: { strata: [sex], forced: [snow] }\nrecapture: { strata: [sex] }",
    name: "spec.wrong-type",
    message:
      'p.yaml:52:12 (recapture): expected the recapture part by name, or { covariates: … }; `choose` takes the least AICc under one survival per interval (if left out: choose), found a mapping with "strata"; write it like choose',
  },
  {
    title: "survival: covariates on later intervals without time since marking",
    from: "survival: { strata: [sex], forced: [snow] }",
    to: "survival: { strata: [sex], forced: [snow], covariates act on: later intervals }",
    name: "spec.conflict",
    message:
      "p.yaml:51:63 (survival > covariates act on): expected time since marking: first interval apart, where covariates act on later intervals alone, found time since marking: ignored; write time since marking: first interval apart, or remove this",
  },
  {
    title: "survival: time since marking spelled otherwise",
    from: "survival: { strata: [sex], forced: [snow] }",
    to: "survival: { strata: [sex], forced: [snow], time since marking: true }",
    name: "spec.not-a-choice",
    message:
      "p.yaml:51:64 (survival > time since marking): expected whether survival differs in the interval after marking: ignored, first interval apart (if left out: ignored), found true; write one of them",
  },
  {
    title: "survival: covariates by a stratum that is none",
    from: "survival: { strata: [sex], forced: [snow] }",
    to: "survival: { strata: [sex], covariates by stratum: { cover: { by: site, values: { f: snow, m: disturbance } } } }",
    name: "spec.unknown-name",
    message:
      'p.yaml:51:66 (survival > covariates by stratum > cover > by): expected a stratum of the captures ("sex"), found "site"; add it to the strata of the captures',
  },
  {
    title: "survival: a covariate by stratum made of one that is none",
    from: "survival: { strata: [sex], forced: [snow] }",
    to: "survival: { strata: [sex], covariates by stratum: { cover: { by: sex, values: { f: snow, m: hail } } } }",
    name: "spec.unknown-name",
    message:
      'p.yaml:51:93 (survival > covariates by stratum > cover > values > m): expected a covariate ("winter rain", "cold nights", "snow", "disturbance", "contrast"), found "hail"; name a covariate of this file',
  },
  {
    title: "survival: a covariate by stratum with a name that is taken",
    from: "survival: { strata: [sex], forced: [snow] }",
    to: "survival: { strata: [sex], covariates by stratum: { snow: { by: sex, values: { f: snow, m: disturbance } } } }",
    name: "spec.repeated-name",
    message:
      'p.yaml:51:53 (survival > covariates by stratum > snow): expected each covariate name once, found "snow" again; give one of the two another name',
  },
  {
    title: "survival: a covariate by stratum of unlike transforms",
    from: "survival: { strata: [sex], forced: [snow] }",
    to: "survival: { strata: [sex], covariates by stratum: { cover: { by: sex, values: { f: snow, m: winter rain } } } }",
    name: "spec.conflict",
    message:
      "p.yaml:51:79 (survival > covariates by stratum > cover > values): expected one transform for all of them, found none, square root; write the same transform for each under prepare > transform",
  },
  {
    title: "survival: a covariate by stratum made of one that is forced in",
    from: "survival: { strata: [sex], forced: [snow] }",
    to: "survival: { strata: [sex], forced: [snow], covariates by stratum: { cover: { by: sex, values: { f: snow, m: disturbance } } } }",
    name: "spec.conflict",
    message:
      'p.yaml:51:100 (survival > covariates by stratum > cover > values > f): expected a covariate that is not forced in by itself, found "snow"; force "cover" in instead',
  },
  {
    title: "survival: a covariate by stratum made of one that is dropped",
    from: "survival: { strata: [sex], forced: [snow] }",
    to: "survival: { strata: [sex], covariates by stratum: { cover: { by: sex, values: { f: snow, m: contrast } } } }",
    name: "spec.conflict",
    message:
      'p.yaml:51:93 (survival > covariates by stratum > cover > values > m): expected a covariate that no decision drops, found "contrast"; remove the decision',
  },
  {
    title: "survival: a covariate by stratum without a column",
    from: "survival: { strata: [sex], forced: [snow] }",
    to: "survival: { strata: [sex], covariates by stratum: { cover: { values: { f: snow } } } }",
    name: "spec.missing-key",
    message:
      'p.yaml:51:53 (survival > covariates by stratum > cover > by): expected the key "by": the column of the captures\' strata that tells them apart, found no such key; add it, e.g. by: site',
  },
  {
    title: "survival: split by something else",
    from: "survival: { strata: [sex], forced: [snow] }",
    to: "survival: { strata: [sex], forced: [snow], split: months }",
    name: "spec.not-a-choice",
    message:
      'p.yaml:51:51 (survival > split): expected whether intervals of several years are cut into years with covariates of their own: none, years (if left out: none), found "months"; write one of them',
  },
  {
    title: "choices: a criterion that is none",
    from: "screen: { steps: 50, down to: 0.01 }",
    to: "screen: { steps: 50, down to: 0.01, choose by: EBIC }",
    name: "spec.not-a-choice",
    message:
      'p.yaml:53:48 (screen > choose by): expected the criterion that chooses the penalty: BIC, AICc, extended BIC, QBIC, QAICc (if left out: BIC), found "EBIC"; did you mean "BIC"?',
  },
  {
    title: "choices: misspelt severity",
    from: "gap: accept",
    to: "gap: wran",
    name: "spec.not-a-choice",
    message:
      'p.yaml:55:8 (findings > gap): expected what is done about findings of the kind gap: accept, warn, stop, or { do: …, except: … } (if left out: warn), found "wran"; did you mean "warn"?',
  },
  {
    title: "choices: unknown statistic",
    from: "statistic: sum",
    to: "statistic: average",
    name: "spec.not-a-choice",
    message:
      'p.yaml:41:16 (covariates > #1 > statistic): expected the statistic: a word such as mean, sum or maximum, or a mapping such as { days below: 0 } or { quantile: 0.9 }, found "average"; write it like mean',
  },
  {
    title: "choices: misspelt statistic",
    from: "statistic: sum",
    to: "statistic: meen",
    name: "spec.not-a-choice",
    message:
      'p.yaml:41:16 (covariates > #1 > statistic): expected the statistic: a word such as mean, sum or maximum, or a mapping such as { days below: 0 } or { quantile: 0.9 }, found "meen"; did you mean "mean"?',
  },
  {
    title: "choices: misspelt statistic with a threshold",
    from: "{ days below: 0 }",
    to: "{ days belo: 0 }",
    name: "spec.unknown-key",
    message:
      'p.yaml:42:88 (covariates > #2 > statistic > days belo): expected one of the keys "days below", "or equal", found "days belo"; did you mean "days below"?',
  },
  {
    title: "choices: misspelt window",
    from: "window: whole interval",
    to: "window: whole intervall",
    name: "spec.not-a-choice",
    message:
      'p.yaml:42:59 (covariates > #2 > window): expected the window: { season: Nov to Feb }, { from: 60 days before end, to: end }, whole interval or calendar year, found "whole intervall"; did you mean "whole interval"?',
  },
  {
    title: "choices: unknown transform",
    from: "winter rain: square root",
    to: "winter rain: cube root",
    name: "spec.not-a-choice",
    message:
      'p.yaml:48:29 (prepare > transform > winter rain): expected a transform: log, log1p, square root, logit, found "cube root"; write one of them',
  },
  {
    title: "choices: unknown way to read a layer",
    from: "by: area",
    to: "by: average",
    name: "spec.not-a-choice",
    message:
      'p.yaml:43:59 (covariates > #3 > by): expected how the layer is read at the place: nearest, bilinear, area, radius, found "average"; write one of them',
  },
  {
    title: "choices: criterion not offered",
    from: "steps: 50,",
    to: "steps: 50, choose by: AIC,",
    name: "spec.not-a-choice",
    message:
      'p.yaml:53:33 (screen > choose by): expected the criterion that chooses the penalty: BIC, AICc, extended BIC, QBIC, QAICc (if left out: BIC), found "AIC"; did you mean "AICc"?',
  },
  {
    title: "forms: season backwards",
    from: "season: Nov to Feb",
    to: "season: Nov - Feb",
    name: "spec.format",
    message:
      'p.yaml:40:23 (covariates > #1 > window > season): expected the season, months or day and month to day and month, found "Nov - Feb"; write it like 15 Nov to 10 Mar',
  },
  {
    title: "forms: season with month numbers",
    from: "season: Nov to Feb",
    to: "season: 11 to 2",
    name: "spec.format",
    message:
      'p.yaml:40:23 (covariates > #1 > window > season): expected the season, months or day and month to day and month, found "11 to 2"; write it like 15 Nov to 10 Mar',
  },
  {
    title: "forms: season with a day that is not there",
    from: "season: Nov to Feb",
    to: "season: 15 Nov to 30 Feb",
    name: "spec.format",
    message:
      'p.yaml:40:23 (covariates > #1 > window > season): expected days that the months have, found "15 Nov to 30 Feb"; write a month without a day for its first or last day',
  },
  {
    title: "forms: span without an anchor",
    from: "window: whole interval",
    to: "window: { from: 60 days, to: end }",
    name: "spec.format",
    message:
      'p.yaml:42:67 (covariates > #2 > window > from): expected the beginning of the span, counted from an occasion\'s mid-date, found "60 days"; write it like 60 days before end',
  },
  {
    title: "forms: span without its end",
    from: "window: whole interval",
    to: "window: { from: start }",
    name: "spec.missing-key",
    message:
      'p.yaml:42:51 (covariates > #2 > window > to): expected the key "to": the end (not included) of the span, counted from an occasion\'s mid-date, found no such key; add it, e.g. to: end',
  },
  {
    title: "forms: span backwards",
    from: "window: whole interval",
    to: "window: { from: end, to: 60 days before end }",
    name: "spec.empty-window",
    message:
      "p.yaml:42:59 (covariates > #2 > window): expected a span whose beginning is before its end, found -60 days; exchange from and to, or move one of them",
  },
  {
    title: "forms: coarsen without a unit",
    from: "coarsen: 5 km",
    to: "coarsen: 5",
    name: "spec.format",
    message:
      "p.yaml:2:41 (study > coarsen): expected to what length sensitive places are rounded in what is published (if left out: 10 km), found 5; write it like 10 km",
  },
  {
    title: "forms: coarsen in miles",
    from: "coarsen: 5 km",
    to: "coarsen: 5 miles",
    name: "spec.format",
    message:
      'p.yaml:2:41 (study > coarsen): expected to what length sensitive places are rounded in what is published (if left out: 10 km), found "5 miles"; write it like 10 km',
  },
  {
    title: "forms: base years with a hyphen",
    from: "prepare:",
    to: "prepare:\n  standardise: { base: 1991-2020 }",
    name: "spec.format",
    message:
      'p.yaml:48:24 (prepare > standardise > base): expected the base period, at least 20 years, first and last year, found "1991-2020"; write it like 1991 to 2020',
  },
  {
    title: "forms: file name without a year",
    from: 'name: "snow_{yyyy}_{MM}"',
    to: 'name: "snow_*"',
    name: "spec.format",
    message:
      'p.yaml:28:19 (layers > snow > date > name): expected a pattern of file names with {yyyy}, {MM}, {dd} or {DDD}, found "snow_*"; write it like green_{yyyy}_{MM}',
  },
  {
    title: "forms: images of no known length",
    from: "covers: month",
    to: "covers: fortnight",
    name: "spec.format",
    message:
      'p.yaml:29:13 (layers > snow > covers): expected what one image stands for: day, month, year, dekad, a number of days, which may start anew each year, or bounds (those of the file\'s time axis), found "fortnight"; write it like 16 days',
  },
  {
    title: "forms: valid with one value",
    from: "valid: [0, 100]",
    to: "valid: [0]",
    name: "spec.out-of-range",
    message:
      "p.yaml:30:12 (layers > snow > valid): expected the least and greatest valid value, after scale and offset, at least 2 entries, found a list of 1; write it like [-0.2, 1]",
  },
  {
    title: "forms: ready-made without a dot",
    from: "from: visits.disturbance }",
    to: "from: disturbance }",
    name: "spec.format",
    message:
      'p.yaml:44:47 (covariates > #4 > from): expected the table and column, with a dot between, found "disturbance"; write it like visits.disturbance',
  },
  {
    title: "ranges: quantile above 1",
    from: "{ days below: 0 }",
    to: "{ quantile: 90 }",
    name: "spec.out-of-range",
    message:
      "p.yaml:42:98 (covariates > #2 > statistic > quantile): expected the probability of the quantile, at most 1, found 90; write it like 0.9",
  },
  {
    title: "ranges: share of 0",
    from: "statistic: sum",
    to: "statistic: sum\n    complete: { share: 0 }",
    name: "spec.out-of-range",
    message:
      "p.yaml:42:24 (covariates > #1 > complete > share): expected the share of days needed, more than 0, found 0; write it like 0.95",
  },
  {
    title: "ranges: share in percent",
    from: "statistic: sum",
    to: "statistic: sum\n    complete: { share: 95 }",
    name: "spec.out-of-range",
    message:
      "p.yaml:42:24 (covariates > #1 > complete > share): expected the share of days needed, at most 1, found 95; write it like 0.95",
  },
  {
    title: "ranges: negative lag",
    from: "{ season: Nov to Feb }",
    to: "{ season: Nov to Feb, lag: -1 }",
    name: "spec.out-of-range",
    message:
      "p.yaml:40:40 (covariates > #1 > window > lag): expected how many years further back (if left out: 0), at least 0, found -1; write it like 1",
  },
  {
    title: "ranges: one step",
    from: "steps: 50",
    to: "steps: 1",
    name: "spec.out-of-range",
    message:
      "p.yaml:53:18 (screen > steps): expected the number of penalties on the path (if left out: 100), at least 2, found 1; write it like 100",
  },
  {
    title: "ranges: path that does not go down",
    from: "down to: 0.01",
    to: "down to: 1",
    name: "spec.out-of-range",
    message:
      "p.yaml:53:31 (screen > down to): expected the least penalty as a share of the greatest (if left out: 0.001), less than 1, found 1; write it like 0.001",
  },
  {
    title: "ranges: latitude beyond the pole",
    from: "latitude: 49.5",
    to: "latitude: 95",
    name: "spec.out-of-range",
    message:
      "p.yaml:15:39 (places > point > latitude): expected the latitude in degrees, at most 90, found 95; write it like 49.5",
  },
  {
    title: "ranges: negative seed",
    from: "seed: 7",
    to: "seed: -7",
    name: "spec.out-of-range",
    message:
      "p.yaml:5:7 (seed): expected the seed of everything random (if left out: 1), at least 0, found -7; write it like 1",
  },
  {
    title: "ranges: valid backwards",
    from: "valid: [0, 100]",
    to: "valid: [100, 0]",
    name: "spec.conflict",
    message:
      "p.yaml:30:12 (layers > snow > valid): expected a least value below the greatest, found [100, 0]; exchange the two",
  },
  {
    title: "ranges: base period too short",
    from: "prepare:",
    to: "prepare:\n  standardise: { base: 2001 to 2010 }",
    name: "spec.conflict",
    message:
      "p.yaml:42:59 (covariates > #2 > window): expected a season or calendar year, which every year of a base period has, found a window counted from occasions; give it a season, or write standardise: sample (and 1 more problem further down)",
  },
  {
    title: "ranges: base years backwards",
    from: "statistic: sum",
    to: "statistic: { R95pTOT: { base: 2020 to 1991 } }",
    name: "spec.out-of-range",
    message:
      "p.yaml:41:35 (covariates > #1 > statistic > R95pTOT > base): expected a first year that is not after the last, found 2020 to 1991; write an earlier first or a later last year",
  },
  {
    title: "ranges: degree-days with a cap under the base",
    from: "{ days below: 0 }",
    to: "{ degree-days: { base: 10, cap: 5 } }",
    name: "spec.conflict",
    message:
      "p.yaml:42:118 (covariates > #2 > statistic > degree-days > cap): expected a cap above the base of 10, found 5; write a higher cap, or leave it out",
  },
  {
    title: "ranges: ratio of three",
    from: "ratio: [winter rain, snow]",
    to: "ratio: [winter rain, snow, disturbance]",
    name: "spec.out-of-range",
    message:
      "p.yaml:46:43 (derive > #1 > ratio): expected a list of two covariates, at most 2 entries, found a list of 3; write it like [hot spell, last summer]",
  },
  {
    title: "yaml: tab",
    from: "    theme: rain\n",
    to: "\ttheme: rain\n",
    name: "spec.yaml",
    message:
      "p.yaml:37:1: expected lines indented by spaces, found a tab; put two spaces in place of each tab",
  },
  {
    title: "yaml: bracket left open",
    from: "strata: [sex]\nplaces",
    to: "strata: [sex\nplaces",
    name: "spec.yaml",
    message:
      "p.yaml:13:1: expected YAML that can be read, found a slip: Flow sequence in block collection must be sufficiently indented and end with a ]; mend the line; brackets, quotes and indentation are the usual causes",
  },
  {
    title: "yaml: colon in plain text",
    from: "title: A small roost,",
    to: 'title: "A small roost,',
    name: "spec.yaml",
    message:
      'p.yaml:2:48: expected YAML that can be read, found a slip: Missing closing "quote; mend the line; brackets, quotes and indentation are the usual causes',
  },
  {
    title: "yaml: two colons on a line",
    from: "animal: ring",
    to: "animal: ring: left",
    name: "spec.yaml",
    message:
      "p.yaml:10:11: expected one key and its value on a line, found a second colon; quote the text if the colon belongs to it, or begin a new line",
  },
  {
    title: "yaml: two documents",
    from: "seed: 7",
    to: "seed: 7\n---\ncovey: 1",
    name: "spec.documents",
    message:
      "p.yaml:6:1: expected one YAML document, found a second one, after a line of ---; keep each pipeline in a file of its own",
  },
  {
    title: "yaml: duplicate key",
    from: "seed: 7",
    to: "seed: 7\nseed: 8",
    name: "spec.duplicate-key",
    message: 'p.yaml:6:1 (seed): expected each key once, found "seed" twice; remove or rename one of the two',
  },
  {
    title: "yaml: duplicate place",
    from: "  point:",
    to: "  roost:",
    name: "spec.duplicate-key",
    message:
      'p.yaml:15:3 (places > roost): expected each key once, found "roost" twice; remove or rename one of the two',
  },
  {
    title: "yaml: empty file",
    from: null,
    to: "",
    name: "spec.empty",
    message: "p.yaml:1:1: expected a pipeline, found an empty file; begin with the line covey: 1",
  },
  {
    title: "yaml: only a comment",
    from: null,
    to: "# nothing\n",
    name: "spec.empty",
    message: "p.yaml:1:1: expected a pipeline, found an empty file; begin with the line covey: 1",
  },
  {
    title: "yaml: tag",
    from: "animal: ring",
    to: "animal: !!binary aGVsbG8=",
    name: "spec.tag",
    message:
      "p.yaml:10:20 (captures > animal): expected a value without a YAML tag, found tag:yaml.org,2002:binary; leave the tag out; quote text that begins with an exclamation mark",
  },
  {
    title: "yaml: unknown tag",
    from: "animal: ring",
    to: "animal: !ring x",
    name: "spec.tag",
    message:
      "p.yaml:10:17 (captures > animal): expected a value without a YAML tag, found !ring; leave the tag out; quote text that begins with an exclamation mark",
  },
  {
    title: "yaml: alias without an anchor",
    from: "animal: ring",
    to: "animal: *ring",
    name: "spec.alias",
    message:
      'p.yaml:10:11 (captures > animal): expected an alias of an anchor that stands above it, found *ring; quote the text if it begins with a star: "*ring"',
  },
  {
    title: "yaml: star in a path",
    from: 'files: ["layers/snow_*.tif"]',
    to: "files: [*.tif]",
    name: "spec.alias",
    message:
      'p.yaml:27:13 (layers > snow > files > #1): expected an alias of an anchor that stands above it, found *.tif; quote the text if it begins with a star: "*.tif"',
  },
  {
    title: "yaml: list as a key",
    from: "seed: 7",
    to: "? [seed]\n: 7",
    name: "spec.key",
    message:
      'p.yaml:5:3: expected a key that is plain text, found a key that is a list, mapping or alias; write "key: value" with a word as the key',
  },
  {
    title: "yaml: empty key",
    from: "seed: 7",
    to: ": 7",
    name: "spec.key",
    message:
      'p.yaml:5:1: expected a key that is plain text, found an empty or tagged key; write "key: value" with a word as the key',
  },
  {
    title: "hostile: __proto__",
    from: "places:",
    to: "places:\n  __proto__: { file: x }",
    name: "spec.reserved-key",
    message:
      'p.yaml:14:3 (places): expected a key that means nothing to the program itself, found "__proto__"; choose another name',
  },
  {
    title: "hostile: constructor",
    from: "places:",
    to: "places:\n  constructor: { file: x }",
    name: "spec.reserved-key",
    message:
      'p.yaml:14:3 (places): expected a key that means nothing to the program itself, found "constructor"; choose another name',
  },
  {
    title: "hostile: infinity",
    from: "down to: 0.01",
    to: "down to: .inf",
    name: "spec.number",
    message:
      'p.yaml:53:31 (screen > down to): expected a finite number that can be held exactly, found .inf; write another number, or quote it if it is a name: ".inf"',
  },
  {
    title: "hostile: not a number",
    from: "down to: 0.01",
    to: "down to: .nan",
    name: "spec.number",
    message:
      'p.yaml:53:31 (screen > down to): expected a finite number that can be held exactly, found .nan; write another number, or quote it if it is a name: ".nan"',
  },
  {
    title: "hostile: a number beyond all",
    from: "down to: 0.01",
    to: "down to: 1e999",
    name: "spec.number",
    message:
      'p.yaml:53:31 (screen > down to): expected a finite number that can be held exactly, found 1e999; write another number, or quote it if it is a name: "1e999"',
  },
  {
    title: "hostile: an integer beyond exactness",
    from: "seed: 7",
    to: "seed: 12345678901234567890",
    name: "spec.number",
    message:
      'p.yaml:5:7 (seed): expected a finite number that can be held exactly, found 12345678901234567890; write another number, or quote it if it is a name: "12345678901234567890"',
  },
  {
    title: "hostile: control character",
    from: "title: A small roost",
    to: 'title: "A \\u0007 roost"',
    name: "spec.control-character",
    message:
      "p.yaml:2:17 (study > title): expected text that can be printed, found the control character U+0007; take the character out",
  },
  {
    title: "hostile: text turned around",
    from: "title: A small roost",
    to: 'title: "A \\u202e roost"',
    name: "spec.control-character",
    message:
      "p.yaml:2:17 (study > title): expected text that can be printed, found the control character U+202E; take the character out",
  },
  {
    title: "hostile: line break in a path",
    from: "file: captures.csv",
    to: 'file: "captures\\n.csv"',
    name: "spec.format",
    message:
      'p.yaml:9:9 (captures > file): expected the path of the CSV file of captures, below `data`, found "captures\\n.csv"; write it like captures.csv',
  },
  {
    title: "hostile: absolute path",
    from: "file: captures.csv",
    to: "file: /etc/passwd",
    name: "spec.path",
    message:
      'p.yaml:9:9 (captures > file): expected a path below `data`, with / between folders, found an absolute path: "/etc/passwd"; write the path from the data folder, or move `data` up to a folder that holds all inputs',
  },
  {
    title: "hostile: path that climbs",
    from: "file: captures.csv",
    to: "file: a/../../secret.csv",
    name: "spec.path",
    message:
      'p.yaml:9:9 (captures > file): expected a path below `data`, with / between folders, found a step out of the folder (..): "a/../../secret.csv"; write the path from the data folder, or move `data` up to a folder that holds all inputs',
  },
  {
    title: "hostile: pattern that climbs",
    from: "files: [stations/lowland_*.csv]",
    to: 'files: ["stations/{..,x}/*.csv"]',
    name: "spec.path",
    message:
      'p.yaml:18:13 (records > #1 > files > #1): expected a path below `data`, with / between folders, found a step out of the folder (..): "stations/{..,x}/*.csv"; write the path from the data folder, or move `data` up to a folder that holds all inputs',
  },
  {
    title: "hostile: drive letter",
    from: "file: captures.csv",
    to: 'file: "C:/captures.csv"',
    name: "spec.path",
    message:
      'p.yaml:9:9 (captures > file): expected a path below `data`, with / between folders, found an absolute path: "C:/captures.csv"; write the path from the data folder, or move `data` up to a folder that holds all inputs',
  },
  {
    title: "hostile: backslash",
    from: "file: captures.csv",
    to: "file: captures\\x.csv",
    name: "spec.path",
    message:
      'p.yaml:9:9 (captures > file): expected a path below `data`, with / between folders, found a backslash: "captures\\\\x.csv"; write the path from the data folder, or move `data` up to a folder that holds all inputs',
  },
  {
    title: "hostile: home folder",
    from: "file: captures.csv",
    to: "file: ~/captures.csv",
    name: "spec.path",
    message:
      'p.yaml:9:9 (captures > file): expected a path below `data`, with / between folders, found an absolute path: "~/captures.csv"; write the path from the data folder, or move `data` up to a folder that holds all inputs',
  },
  {
    title: "hostile: remote address",
    from: "file: captures.csv",
    to: "file: https://example.org/captures.csv",
    name: "spec.path",
    message:
      'p.yaml:9:9 (captures > file): expected a path below `data`, with / between folders, found a remote address: "https://example.org/captures.csv"; write the path from the data folder, or move `data` up to a folder that holds all inputs',
  },
  {
    title: "hostile: output that holds the data",
    from: "output: ../out/small",
    to: "output: ../sample-data",
    name: "spec.path",
    message:
      'p.yaml:4:9 (output): expected a folder that does not hold the data, found output "../sample-data" with data "../sample-data"; give the results a folder of their own, e.g. output: ../out/roost',
  },
  {
    title: "hostile: output above the data",
    from: "output: ../out/small",
    to: "output: ..",
    name: "spec.path",
    message:
      'p.yaml:4:9 (output): expected a folder that does not hold the data, found output ".." with data "../sample-data"; give the results a folder of their own, e.g. output: ../out/roost',
  },
  {
    title: "names: unknown variable",
    from: "from: rain\n",
    to: "from: rian\n",
    name: "spec.unknown-name",
    message:
      'p.yaml:38:11 (covariates > #1 > from): expected a variable of the records ("rain", "tmin", "snow"), found "rian"; did you mean "rain"?',
  },
  {
    title: "names: unknown variable, none near",
    from: "from: tmin",
    to: "from: radiation",
    name: "spec.unknown-name",
    message:
      'p.yaml:42:45 (covariates > #2 > from): expected a variable of the records ("rain", "tmin", "snow"), found "radiation"; add it to the series of the records',
  },
  {
    title: "names: unknown layer",
    from: "from: snow, at",
    to: "from: snwo, at",
    name: "spec.unknown-name",
    message:
      'p.yaml:43:38 (covariates > #3 > from): expected a layer ("snow"), found "snwo"; did you mean "snow"?',
  },
  {
    title: "names: unknown place",
    from: "at: roost",
    to: "at: rost",
    name: "spec.unknown-name",
    message:
      'p.yaml:43:48 (covariates > #3 > at): expected a place ("roost", "point"), found "rost"; did you mean "roost"?',
  },
  {
    title: "names: unknown ready-made column",
    from: "from: visits.disturbance",
    to: "from: visits.disturbence",
    name: "spec.unknown-name",
    message:
      'p.yaml:44:47 (covariates > #4 > from): expected a column of a ready-made table ("visits.disturbance"), found "visits.disturbence"; did you mean "visits.disturbance"?',
  },
  {
    title: "names: layer without at, known as a layer",
    from: "  - { name: cold nights, theme: cold, from: tmin,",
    to: "  - { name: cold nights, theme: cold, from: snow,",
    name: "spec.missing-key",
    message:
      'p.yaml:42:5 (covariates > #2 > at): expected the keys "at" and "by", since "snow" is a layer, found no such keys; add them, e.g. at: roost, by: nearest',
  },
  {
    title: "names: repeated covariate",
    from: "name: cold nights",
    to: "name: winter rain",
    name: "spec.repeated-name",
    message:
      'p.yaml:42:13 (covariates > #2 > name): expected each covariate name once, found "winter rain" again; give one of the two another name',
  },
  {
    title: "names: derived with a covariate's name",
    from: "name: contrast",
    to: "name: snow",
    name: "spec.repeated-name",
    message:
      'p.yaml:46:13 (derive > #1 > name): expected each covariate name once, found "snow" again; give one of the two another name (and 1 more problem further down)',
  },
  {
    title: "names: transform of an unknown covariate",
    from: "winter rain: square root",
    to: "winter rains: square root",
    name: "spec.unknown-name",
    message:
      'p.yaml:48:16 (prepare > transform > winter rains): expected a covariate ("winter rain", "cold nights", "snow", "disturbance", "contrast"), found "winter rains"; did you mean "winter rain"?',
  },
  {
    title: "names: derive from an unknown covariate",
    from: "ratio: [winter rain, snow]",
    to: "ratio: [winter rain, snows]",
    name: "spec.unknown-name",
    message:
      'p.yaml:46:57 (derive > #1 > ratio > #2): expected a covariate that stands above ("winter rain", "cold nights", "snow", "disturbance"), found "snows"; did you mean "snow"?',
  },
  {
    title: "names: derive from itself",
    from: "ratio: [winter rain, snow]",
    to: "ratio: [winter rain, contrast]",
    name: "spec.unknown-name",
    message:
      'p.yaml:46:57 (derive > #1 > ratio > #2): expected a covariate that stands above ("winter rain", "cold nights", "snow", "disturbance"), found "contrast"; name a covariate, or one derived before this one',
  },
  {
    title: "names: decision about an unknown covariate",
    from: "drop: contrast",
    to: "drop: contrats",
    name: "spec.unknown-name",
    message:
      'p.yaml:50:23 (collinearity > decisions > #1 > drop): expected a covariate ("winter rain", "cold nights", "snow", "disturbance", "contrast"), found "contrats"; did you mean "contrast"?',
  },
  {
    title: "names: decision that keeps what it drops",
    from: "drop: contrast, keep: snow",
    to: "drop: contrast, keep: contrast",
    name: "spec.conflict",
    message:
      'p.yaml:50:39 (collinearity > decisions > #1 > keep): expected another covariate than the dropped one, found "contrast"; name the covariate that stays',
  },
  {
    title: "names: decisions that drop what another keeps",
    from: "note: same weeks }]",
    to: "note: same weeks }, { drop: snow, note: why not }]",
    name: "spec.conflict",
    message:
      'p.yaml:50:39 (collinearity > decisions > #1 > keep): expected a covariate that no decision drops, found "snow"; keep another one, or remove the decision that drops it (and 1 more problem further down)',
  },
  {
    title: "names: forced unknown",
    from: "forced: [snow]",
    to: "forced: [hail]",
    name: "spec.unknown-name",
    message:
      'p.yaml:51:37 (survival > forced > #1): expected a covariate ("winter rain", "cold nights", "snow", "disturbance", "contrast"), found "hail"; name a covariate of this file',
  },
  {
    title: "names: forced but dropped",
    from: "forced: [snow]",
    to: "forced: [contrast]",
    name: "spec.conflict",
    message:
      'p.yaml:51:37 (survival > forced > #1): expected a covariate that no decision drops, found "contrast"; remove the decision, or do not force it',
  },
  {
    title: "names: stratum that the captures lack",
    from: "survival: { strata: [sex]",
    to: "survival: { strata: [age]",
    name: "spec.unknown-name",
    message:
      'p.yaml:51:22 (survival > strata > #1): expected a stratum of the captures ("sex"), found "age"; add it to the strata of the captures',
  },
  {
    title: "names: variable named as a layer",
    from: "      rain: {",
    to: "      snow: {",
    name: "spec.conflict",
    message:
      'p.yaml:23:7 (records > #1 > series > snow): expected a name that no layer has, found "snow"; rename the variable or the layer (and 1 more problem further down)',
  },
  {
    title: "needs: effort without effort",
    from: "end: to, effort: hours",
    to: "end: to",
    name: "spec.needs",
    message:
      "p.yaml:52:12 (recapture): expected a column of effort among the occasions, found no effort; add effort: to the occasions, or choose another recapture part",
  },
  {
    title: "needs: forced without captures",
    from: "captures:\n  layout: dated\n  file: captures.csv\n  animal: ring\n  date: date\n  strata: [sex]\n",
    to: "",
    name: "spec.needs",
    message:
      "p.yaml:45:21 (survival > strata): expected captures, which hold the strata, found no captures; add the section captures, or remove this (and 2 more problems further down)",
  },
  {
    title: "needs: dated captures without occasions",
    from: "occasions: { file: occasions.csv, name: visit, start: from, end: to, effort: hours }\n",
    to: "",
    name: "spec.needs",
    message:
      "p.yaml:6:1 (captures): expected occasions, which sort dated captures, found no occasions; add the section occasions (and 2 more problems further down)",
  },
  {
    title: "needs: base period with a window from occasions",
    from: "prepare:",
    to: "prepare:\n  standardise: { base: 1991 to 2020 }",
    name: "spec.conflict",
    message:
      "p.yaml:42:59 (covariates > #2 > window): expected a season or calendar year, which every year of a base period has, found a window counted from occasions; give it a season, or write standardise: sample",
  },
  {
    title: "needs: radius without by radius",
    from: "by: area",
    to: "by: area, radius: 2 km",
    name: "spec.conflict",
    message:
      "p.yaml:43:65 (covariates > #3 > radius): expected a radius only where a layer is read by radius, found by: area; write by: radius, or remove the radius",
  },
  {
    title: "needs: by radius without a radius",
    from: "by: area",
    to: "by: radius",
    name: "spec.missing-key",
    message:
      'p.yaml:43:5 (covariates > #3 > radius): expected the key "radius" where a layer is read by radius, found no such key; add it, e.g. radius: 2 km',
  },
  {
    title: "needs: valid area at a point",
    from: "by: area",
    to: "by: nearest, valid area: 0.5",
    name: "spec.conflict",
    message:
      "p.yaml:43:68 (covariates > #3 > valid area): expected a valid area only where a layer is read by area or radius, found by: nearest; write by: area, or remove the valid area",
  },
  {
    title: "needs: extremes without a second variable",
    from: "{ days below: 0 }",
    to: "{ degree-days of extremes: { base: 5 } }",
    name: "spec.conflict",
    message:
      "p.yaml:42:86 (covariates > #2 > statistic): expected a second variable for degree-days of extremes, and for no other statistic, found no second variable; add the variable with the daily minima, e.g. second: tmin",
  },
  {
    title: "needs: second variable without extremes",
    from: "from: tmin,",
    to: "from: tmin, second: rain,",
    name: "spec.conflict",
    message:
      'p.yaml:42:59 (covariates > #2 > second): expected a second variable for degree-days of extremes, and for no other statistic, found "rain"; remove it',
  },
  {
    title: "choices: unknown statistic with a setting",
    from: "{ days below: 0 }",
    to: "{ percentile: 90 }",
    name: "spec.wrong-type",
    message:
      'p.yaml:42:86 (covariates > #2 > statistic): expected the statistic: a word such as mean, sum or maximum, or a mapping such as { days below: 0 } or { quantile: 0.9 }, found a mapping with "percentile"; write it like mean',
  },
  {
    title: "choices: window of unknown keys",
    from: "{ season: Nov to Feb }",
    to: "{ months: 11 }",
    name: "spec.wrong-type",
    message:
      'p.yaml:40:13 (covariates > #1 > window): expected the window: { season: Nov to Feb }, { from: 60 days before end, to: end }, whole interval or calendar year, found a mapping with "months"; write it like { season: Nov to Feb }',
  },
  {
    title: "keys: misspelt season",
    from: "{ season: Nov to Feb }",
    to: "{ seson: Nov to Feb }",
    name: "spec.unknown-key",
    message:
      'p.yaml:40:15 (covariates > #1 > window > seson): expected one of the keys "season", "lag", found "seson"; did you mean "season"?',
  },
  {
    title: "keys: decimal comma inside braces",
    from: "steps: 50, down to: 0.01",
    to: "gamma: 1,5",
    name: "spec.unknown-key",
    message:
      'p.yaml:53:20 (screen > 5): expected one of the keys "steps", "down to", "gamma", "choose by", "sample size", "fit", "permutations", "resamples", found "5"; write decimals after a point: inside braces a comma begins the next key',
  },
  {
    title: "keys: a wide record that says long",
    from: "    station: { column: site }\n",
    to: "    layout: long\n    variable: rain\n",
    name: "spec.missing-key",
    message:
      'p.yaml:18:5 (records > #1 > station): expected the key "station": where the station\'s identifier stands: { column: … }, { always: … } or { name: … } with {id}, found no such key; add it, e.g. station: { column: site } (and 1 more problem further down)',
  },
  {
    title: "keys: record of neither layout",
    from: "    station: { column: site }\n",
    to: "    layout: tall\n    station: { column: site }\n",
    name: "spec.not-a-choice",
    message:
      'p.yaml:19:13 (records > #1 > layout): expected the layout of the records (if left out: long): long, wide, months across, days across, found "tall"; write one of them',
  },
  {
    title: "keys: station of two ways",
    from: "station: { column: site }",
    to: "station: { column: site, always: x }",
    name: "spec.unknown-key",
    message:
      'p.yaml:19:30 (records > #1 > station > always): expected one of the keys "column", "longitude", "latitude", found "always"; remove it, or use one of those keys',
  },
  {
    title: "keys: place without anything",
    from: "  point: { longitude: 8.25, latitude: 49.5 }",
    to: "  point: {}",
    name: "spec.wrong-type",
    message:
      "p.yaml:15:10 (places > point): expected a feature of a GeoJSON file, a point, or a table of dated positions, found an empty mapping; write it in one of those ways",
  },
  {
    title: "keys: point without latitude",
    from: ", latitude: 49.5 }",
    to: " }",
    name: "spec.missing-key",
    message:
      'p.yaml:15:3 (places > point > latitude): expected the key "latitude": the latitude in degrees, found no such key; add it, e.g. latitude: 49.5',
  },
  {
    title: "types: decimal comma in a block",
    from: "screen: { steps: 50, down to: 0.01 }",
    to: "screen:\n  gamma: 1,5",
    name: "spec.wrong-type",
    message:
      'p.yaml:54:10 (screen > gamma): expected the power of the adaptive weights (if left out: 1), found "1,5"; write the decimals after a point: 1.5',
  },
  {
    title: "types: missing as a mapping",
    from: "missing: [-9999, -99.90, NA]",
    to: "missing: [{ a: 1 }]",
    name: "spec.wrong-type",
    message:
      'p.yaml:21:15 (records > #1 > missing > #1): expected a number or text that means missing, found a mapping with "a"; write it in one of those ways',
  },
  {
    title: "types: a date that YAML keeps as text",
    from: "where: { name: roost }",
    to: "where: { name: roost, since: 2001 }",
    name: "spec.unquoted",
    message:
      'p.yaml:14:63 (places > roost > where > since): expected the property\'s value, found the number 2001; quote it: "2001"',
  },
  {
    title: "choices: degree-days method",
    from: "{ days below: 0 }",
    to: "{ degree-days of extremes: { base: 5, method: 3 } }",
    name: "spec.wrong-type",
    message:
      "p.yaml:42:132 (covariates > #2 > statistic > degree-days of extremes > method): expected 1 clips the mean, 2 clips maximum and minimum first (if left out: 1), found 3; write it like 2",
  },
  {
    title: "forms: share of the variance too large",
    from: "recapture: effort",
    to: "components: { keep: { share: 80 } }\nrecapture: effort",
    name: "spec.out-of-range",
    message:
      "p.yaml:52:30 (components > keep > share): expected the share of variance, at most 1, found 80; write it like 0.8",
  },
  {
    title: "choices: unknown rule for components",
    from: "recapture: effort",
    to: "components: { keep: broken stik }\nrecapture: effort",
    name: "spec.not-a-choice",
    message:
      'p.yaml:52:21 (components > keep): expected how many components are kept: broken stick, eigenvalue, parallel, { share: … } or { number: … } (if left out: broken stick), found "broken stik"; did you mean "broken stick"?',
  },
  {
    title: "needs: two kinds for one variable",
    from: "layers:\n",
    to: "  - { files: [b.csv], station: { always: B }, date: { column: d }, series: { rain: { column: r, unit: mm, kind: mean } } }\nlayers:\n",
    name: "spec.conflict",
    message:
      'p.yaml:25:113 (records > #2 > series > rain > kind): expected the kind total that "rain" has above, found mean; write the same kind, or rename one of the variables',
  },
];
