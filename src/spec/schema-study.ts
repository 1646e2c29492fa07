import {
  allStated,
  choice,
  column,
  flag,
  inputPath,
  keys,
  list,
  named,
  number,
  oneOf,
  prose,
  someOf,
  stated,
  text,
  word,
} from "./words.ts";

export const study = keys("the study's title and how far its places are hidden", {
  title: prose("the study's title", "An invented maternity roost"),
  sensitive: stated(flag("whether the places must not be published, true or false"), false),
  coarsen: stated(
    text(
      "to what length sensitive places are rounded in what is published",
      "10 km",
      /^\d+(?:\.\d+)? (?:m|km)$/,
    ),
    "10 km",
  ),
});

export const figures = allStated("the figures beside the page, drawn for columns of 85 and 170 mm", {
  svg: stated(flag("whether there are SVG files, true or false"), true),
  png: stated(flag("whether there are PNG files of 300 dots per inch, true or false"), true),
});

const dateFormat = () =>
  stated(
    text("the pattern of dates, with yyyy, MM, dd, or D for the day of the year", "dd.MM.yyyy"),
    "yyyy-MM-dd",
  );

export const occasions = keys("the table of occasions, a row each", {
  file: inputPath("the CSV file of occasions", "occasions.csv"),
  name: column("the occasion's name", "visit"),
  start: column("the occasion's first day", "from"),
  end: column("the occasion's last day", "to"),
  format: dateFormat(),
  lengths: stated(choice("how interval lengths are counted", ["exact", "whole years"]), "exact"),
  effort: column("the effort of each occasion", "net_hours").optional(),
});

const strata = () =>
  stated(list("the columns that split the animals", text("the name of a column", "sex"), ["sex"]), []);

const lost = () =>
  keys("how animals that were not released again are told", {
    column: column("the animal's fate", "fate"),
    values: someOf("the values that mean lost", text("a value that means lost", "died"), ["died"]),
  }).optional();

const lengths = () =>
  someOf(
    "the lengths of the intervals in years where occasions have no dates; 1 each if left out",
    number("a length in years", 1, { above: 0, max: 100 }),
    [1, 1, 2],
  ).optional();

const captureFile = () => inputPath("the CSV file of captures", "captures.csv");

export const captures = oneOf("the captures, by one of three layouts", [
  keys("captures with a row each", {
    layout: word("the layout of the captures", "dated"),
    file: captureFile(),
    animal: column("the animal's mark", "ring"),
    date: column("the date of the capture", "date"),
    format: dateFormat(),
    strata: strata(),
    lost: lost(),
  }),
  keys("captures with a row per animal and a 0 or 1 per occasion", {
    layout: word("the layout of the captures", "zero-one"),
    file: captureFile(),
    animal: column("the animal's mark", "ring"),
    number: column("how many animals share the row", "animals").optional(),
    columns: someOf(
      "the columns of the occasions, in order",
      text("the name of a column", "2001"),
    ).optional(),
    strata: strata(),
    lengths: lengths(),
    lost: lost(),
  }),
  keys("captures as counts, a row per release occasion", {
    layout: word("the layout of the captures", "counts"),
    file: captureFile(),
    "released at": column("the occasion of release", "occasion"),
    released: column("how many animals were released", "released"),
    columns: someOf(
      "the columns of the occasions, in order",
      text("the name of a column", "2002"),
    ).optional(),
    strata: strata(),
    lengths: lengths(),
  }),
]);

export const place = oneOf("a feature of a GeoJSON file, a point, or a table of dated positions", [
  keys("a feature of a GeoJSON file", {
    file: inputPath("the GeoJSON file", "places.geojson"),
    where: stated(
      named(
        "the properties that pick the feature",
        "the name of a property",
        text("the property's value", "roost"),
      ),
      {},
    ),
  }),
  keys("a point in WGS 84 degrees", {
    longitude: number("the longitude in degrees", 8.25, { min: -180, max: 180 }),
    latitude: number("the latitude in degrees", 49.5, { min: -90, max: 90 }),
  }),
  keys("a place that moves: a table of dated positions, a row each", {
    fixes: inputPath("the CSV file of positions", "fixes.csv"),
    date: column("the date, with the time of day behind it if there is one (UTC)", "time"),
    format: dateFormat(),
    longitude: column("the longitude in WGS 84 degrees", "lon"),
    latitude: column("the latitude in WGS 84 degrees", "lat"),
    animal: column("the animal's mark", "ring").optional(),
    where: stated(
      named("the rows to use, by column", "the name of a column", text("the cell's value", "roost")),
      {},
    ),
    weigh: stated(
      choice("what a fix counts in the mean of an image, one or the time it stands for", ["fixes", "time"]),
      "fixes",
    ),
    "at least": stated(
      number("the fixes an image's period must have", 5, { min: 1, max: 1_000_000, whole: true }),
      5,
    ),
  }),
]);

export const survival = allStated("the part of the model that speaks of survival", {
  strata: list(
    "columns of the captures' strata that shift survival (if left out: all of them)",
    text("the name of a stratum", "sex"),
    ["sex"],
  ).optional(),
  "covariates by stratum": stated(
    named(
      "covariates whose values differ between strata, by name",
      "the name of the covariate",
      keys("the covariates that give a covariate its values, stratum by stratum", {
        by: text("the column of the captures' strata that tells them apart", "site"),
        values: named(
          "a covariate of this file for each value of that column",
          "a value of the column",
          text("the name of a covariate", "winter rain north"),
        ),
      }),
    ),
    {},
  ),
  forced: stated(
    list("covariates that are always in the model, unpenalised", text("the name of a covariate"), [
      "winter rain",
    ]),
    [],
  ),
  "year trend": stated(
    flag("whether a linear trend over the years is always in the model, unpenalised"),
    false,
  ),
  "time since marking": stated(
    choice("whether survival differs in the interval after marking", ["ignored", "first interval apart"]),
    "ignored",
  ),
  "covariates act on": stated(
    choice("the intervals of an animal's life that covariates act on, where the first stands apart", [
      "all intervals",
      "later intervals",
    ]),
    "all intervals",
  ),
  split: stated(
    choice("whether intervals of several years are cut into years with covariates of their own", [
      "none",
      "years",
    ]),
    "none",
  ),
});

export const recapture = stated(
  oneOf(
    "the recapture part by name, or { covariates: … }; `choose` takes the least AICc under one survival per interval",
    [
      choice("a recapture part by name", [
        "choose",
        "constant",
        "effort",
        "strata",
        "effort and strata",
        "each occasion",
        "each occasion and strata",
      ]),
      keys("recapture by covariates of the interval that the occasion closes", {
        covariates: someOf("the covariates", text("the name of a covariate", "winter rain"), ["winter rain"]),
      }),
    ],
    "choose",
  ),
  "choose",
);
