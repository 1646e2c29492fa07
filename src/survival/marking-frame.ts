import type { Frame, NamedColumn } from "./design.ts";

/** The coefficient by which survival differs in the interval after an animal was marked. */
const FIRST_INTERVAL = "first interval after marking";

/**
 * The frame in which every stratum stands twice: later intervals (even places), then the first interval after marking
 * (odd places), as `sinceMarking` orders the data. Survival has the differences between strata and one of the first interval
 * against later ones; recapture those between strata alone.
 */
export function markingFrame(frame: Frame): Frame {
  const { strata, intervals: n } = frame;
  const rows = 2 * strata.length * n;
  const column = (name: string, where: (stratum: number, first: boolean) => boolean): NamedColumn => ({
    name,
    values: Float64Array.from({ length: rows }, (_, r) => {
      const place = Math.floor(r / n);
      return where(Math.floor(place / 2), place % 2 === 1) ? 1 : 0;
    }),
  });
  const all = strata
    .slice(1)
    .map((name, g) => column(`${name} against ${strata[0]}`, (stratum) => stratum === g + 1));
  const doubled = (columns: readonly NamedColumn[] | undefined) =>
    columns?.map(({ name, values }) => ({ name, values: overMarking(frame, values) })) ?? all;
  return {
    ...frame,
    strata: strata.flatMap((name) => [`${name}, later intervals`, `${name}, first interval`]),
    ...(frame.groups === undefined
      ? {}
      : { groups: Int32Array.from({ length: 2 * strata.length }, (_, g) => frame.groups?.[g >> 1] ?? 0) }),
    contrasts: {
      survival: [...doubled(frame.contrasts?.survival), column(FIRST_INTERVAL, (_, first) => first)],
      recapture: doubled(frame.contrasts?.recapture),
    },
  };
}

/** A value per interval that acts on later intervals alone: 0, the mean, in the first one after marking. */
export function onLaterIntervals(frame: Frame, one: NamedColumn): NamedColumn {
  const n = frame.intervals;
  const values = Float64Array.from({ length: frame.strata.length * n }, (_, r) =>
    Math.floor(r / n) % 2 === 1 ? 0 : one.values[one.values.length === n ? r % n : r],
  );
  return { name: one.name, values };
}

/** Values by interval, or by stratum × interval of the frame as it was, in the rows of `markingFrame`. */
export function overMarking(frame: Frame, values: Float64Array): Float64Array {
  const n = frame.intervals;
  if (values.length === n) return values;
  return Float64Array.from(
    { length: 2 * values.length },
    (_, r) => values[n * Math.floor(r / (2 * n)) + (r % n)],
  );
}
