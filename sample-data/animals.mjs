import { dayOf, iso } from "./dates.mjs";

export const YEARS = Array.from({ length: 21 }, (_, t) => 2001 + t);

const logistic = (x) => 1 / (1 + Math.exp(-x));

/** Visits to the roost: a few nights in late July, with the hours that nets stood open. */
export function visits(random) {
  return YEARS.map((year) => {
    const from = dayOf(year, 7, random.whole(21, 26));
    return { year, from, to: from + random.whole(2, 4), netHours: random.whole(16, 44) };
  });
}

/** Centred, divided by the sample standard deviation (n − 1). */
export function standardised(values) {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
  const sd = Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1));
  return values.map((value) => (value - mean) / sd);
}

/** Chance of being caught again at each occasion after the first, by the effort. */
export function recapture(occasions, effects) {
  const efforts = standardised(occasions.slice(1).map(({ netHours }) => netHours));
  return efforts.map((effort) => logistic(effects.intercept + effects.effortPerSd * effort));
}

/** Apparent annual survival per interval for animals ringed as adults and as young. */
export function survival(effects, columns, residual) {
  return residual.map((epsilon, t) => {
    const logit =
      effects.intercept +
      epsilon +
      Object.entries(effects.perSd).reduce((sum, [name, beta]) => sum + beta * columns[name][t], 0);
    return { adult: logistic(logit), young: logistic(logit + effects.ringedAsYoung) };
  });
}

/** Dated records of every animal, as they would stand in the ringers' book, in order of date and ring. */
export function captures(random, occasions, phi, p) {
  const records = [];
  const alive = [];
  let next = 42_117;
  const night = (t) => occasions[t].from + random.whole(0, occasions[t].to - occasions[t].from);
  const add = (animal, date, fate) => {
    records.push({ ring: animal.ring, date, age: animal.age, fate });
    if (fate !== "released") animal.gone = true;
  };
  const fateOf = () => (random.chance(0.006) ? (random.chance(0.4) ? "died" : "ring removed") : "released");
  occasions.forEach((_, t) => {
    for (const animal of alive) {
      if (animal.gone) continue;
      if (!random.chance(animal.age === "adult" ? phi[t - 1].adult : phi[t - 1].young)) animal.gone = true;
      else if (random.chance(p[t - 1])) add(animal, night(t), fateOf());
    }
    for (const [age, number] of [
      ["adult", random.whole(9, 11)],
      ["young", random.whole(8, 10)],
    ])
      for (let i = 0; i < number; i++) {
        // Leading zeros on purpose: a ring is a name, never a number.
        const animal = { ring: String(next++).padStart(7, "0"), age, gone: false };
        add(animal, night(t), fateOf());
        alive.push(animal);
      }
  });
  const released = records.filter((record) => record.fate === "released");
  // Met again on another night of the same visit: counts once.
  for (let i = 0; i < 5; i++) {
    const record = released[random.whole(0, released.length - 1)];
    const { from, to } = occasions.find((one) => record.date >= one.from && record.date <= one.to);
    records.push({ ...record, date: record.date === from ? to : from });
  }
  // Met outside every visit, in a winter's count or a chance find: recorded, not used.
  for (let i = 0; i < 6; i++) {
    const record = released[random.whole(0, released.length - 1)];
    records.push({ ...record, date: record.date + random.whole(20, 60) });
  }
  const key = ({ date, ring }) => `${iso(date)} ${ring}`;
  return records.sort((a, b) => (key(a) < key(b) ? -1 : 1));
}
