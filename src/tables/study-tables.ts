import { isoDay } from "../data/day.ts";
import { number, text, whole } from "./columns.ts";
import type { StudyResult } from "./study-result.ts";
import type { Table } from "./table.ts";

const day = (value: number) => (Number.isNaN(value) ? undefined : isoDay(value));

export function occasionsTable(study: StudyResult): Table {
  const caught = new Map(study.caught.map((one) => [one.occasion, one]));
  return {
    name: "occasions",
    title: "Sampling occasions",
    description: "One row per occasion, with what was caught.",
    columns: [
      text("occasion", "occasion", "name of the occasion"),
      text("first_day", "first day", "first day, included"),
      text("last_day", "last day", "last day, included"),
      number("effort", "effort", "as recorded", "effort as the study keeps it"),
      whole("newly_marked", "newly marked", "animals", "animals marked for the first time"),
      whole("seen_again", "seen again", "animals", "animals marked at an earlier occasion"),
    ],
    rows: study.occasions.map((one) => [
      one.name,
      day(one.first),
      day(one.last),
      one.effort,
      caught.get(one.name)?.newlyMarked,
      caught.get(one.name)?.seenAgain,
    ]),
  };
}

export function intervalsTable(study: StudyResult): Table {
  return {
    name: "intervals",
    title: "Intervals between occasions",
    description: "Interval t runs from the mid-date of occasion t to that of occasion t + 1.",
    columns: [
      whole("number", "number", "1", "1 for the first interval"),
      text("interval", "interval", "names of the occasions it joins"),
      text("from", "from", "mid-date of the occasion that opens it, included"),
      text("to", "to", "mid-date of the occasion that closes it, not included"),
      number("length", "length", "years", "length Δ that survival is raised to"),
    ],
    rows: study.intervals.map((one) => [one.index + 1, one.name, day(one.start), day(one.end), one.length]),
  };
}

export function findingsTable(study: StudyResult): Table {
  return {
    name: "findings",
    title: "Findings",
    description: "What a person should know about the data and the models, with its place and what to do.",
    columns: [
      text("kind", "kind", "kind of finding, as in the pipeline file"),
      text("severity", "severity", "accept, warn or stop, by the pipeline's policy"),
      text("subject", "about", "station, covariate, animal, layer or model"),
      text("message", "what", "what was found"),
      whole("count", "count", "1", "rows, days or pixels it stands for"),
      text("file", "file", "file, relative to the data folder"),
      whole("line", "line", "1", "line of the file"),
      text("value", "value", "the value as it was written"),
      text("remedy", "what to do", "what to do about it"),
    ],
    rows: study.findings.map((one) => [
      one.kind,
      one.severity,
      one.subject,
      one.message,
      one.count ?? 1,
      one.where?.file,
      one.where?.line,
      one.value,
      one.remedy,
    ]),
  };
}
