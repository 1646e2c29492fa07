"""Makes goodness.json: components of the fit of the general model, from histories that are drawn here.

Run: python3 test/reference/goodness.py  (numpy and scipy). Written apart from src/survival: each table is counted
from whole 0/1 histories by its definition, χ² comes from scipy.stats.chi2_contingency without correction, exact
probabilities from scipy.stats.hypergeom. Only the pooling rule is the program's own, written down once more.
"""
import json
from pathlib import Path

import numpy as np
import scipy
from scipy.stats import chi2, chi2_contingency, hypergeom

T = 7


def draw(seed, marked, survival, recapture, loss):
    random = np.random.default_rng(seed)
    out = []
    for first in range(T):
        for _ in range(marked):
            row = [0] * T
            row[first] = 1
            lost = random.random() < loss
            t = first
            while not lost and t < T - 1 and random.random() < survival:
                t += 1
                if random.random() < recapture:
                    row[t] = 1
                    lost = random.random() < loss
            out.append(("".join(map(str, row)), bool(lost)))
    return out


def tables(animals):
    """(component, occasion, 2 × k counts) by the definitions, occasions counted from 0."""
    found = []
    for i in range(1, T - 1):
        again = np.zeros((2, 2), int)
        when = np.zeros((2, T - 1 - i), int)
        for row, lost in animals:
            later = [t for t in range(i + 1, T) if row[t] == "1"]
            if row[i] != "1" or (lost and not later):
                continue
            old = int("1" in row[:i])
            again[old, 0 if later else 1] += 1
            if later:
                when[old, later[0] - i - 1] += 1
        found.append((0, i, again))
        if i <= T - 3:
            found.append((1, i, when))
    for i in range(1, T - 2):
        soon = np.zeros((2, 2), int)
        after = np.zeros((2, T - 2 - i), int)
        for row, _ in animals:
            later = [t for t in range(i + 1, T) if row[t] == "1"]
            if "1" not in row[: i + 1] or not later:
                continue
            passed = int(row[i] != "1")
            soon[passed, 0 if later[0] == i + 1 else 1] += 1
            if later[0] > i + 1:
                after[passed, later[0] - i - 2] += 1
        found.append((2, i, soon))
        if i <= T - 4:
            found.append((3, i, after))
    return sorted(found, key=lambda one: (one[0], one[1]))


def least(table):
    return table.sum(axis=1).min() * table.sum(axis=0) / table.sum()


def judge(table):
    table = table[:, table.sum(axis=0) > 0]
    if table.shape[1] < 2 or (table.sum(axis=1) == 0).any():
        return dict(chi_square=0, df=0, p=None, pooled=0, exact=False)
    wide = table.shape[1]
    while table.shape[1] > 2 and least(table).min() < 2:
        at = int(least(table).argmin())
        sizes = [np.inf, *table.sum(axis=0), np.inf]
        start = at - 1 if sizes[at] < sizes[at + 2] else at
        table = np.hstack(
            [table[:, :start], table[:, start : start + 2].sum(axis=1, keepdims=True), table[:, start + 2 :]]
        )
    pooled = wide - table.shape[1]
    if table.shape[1] == 2 and least(table).min() < 2:
        (a, b), (c, d) = table.tolist()
        outcomes = np.arange(max(0, a + c - (c + d)), min(a + b, a + c) + 1)
        chance = hypergeom.pmf(outcomes, a + b + c + d, a + c, a + b)
        own = hypergeom.pmf(a, a + b + c + d, a + c, a + b)
        same = np.isclose(chance, own, rtol=1e-9, atol=0)
        p = float(chance[(chance < own) & ~same].sum() + chance[same].sum() / 2)
        return dict(chi_square=float(chi2.isf(p, 1)), df=1, p=p, pooled=pooled, exact=True)
    statistic, p, df, _ = chi2_contingency(table, correction=False)
    return dict(chi_square=float(statistic), df=int(df), p=float(p), pooled=pooled, exact=False)


def case(what, *drawing):
    animals = draw(*drawing)
    grouped = {}
    for one in animals:
        grouped[one] = grouped.get(one, 0) + 1
    rows = [
        dict(component=component, occasion=i, first=table[0].tolist(), second=table[1].tolist(), **judge(table))
        for component, i, table in tables(animals)
    ]
    chi_square, df = sum(one["chi_square"] for one in rows), sum(one["df"] for one in rows)
    return dict(
        what=what,
        histories=[[row, lost, number] for (row, lost), number in sorted(grouped.items())],
        rows=rows,
        chi_square=chi_square,
        df=df,
        p=float(chi2.sf(chi_square, df)),
    )


result = dict(
    what="Components of the fit of the general model from drawn histories (0/1 history, lost at the last capture, animals)",
    source=f"test/reference/goodness.py with numpy {np.__version__}, scipy {scipy.__version__}",
    tolerance="1e-9 relative",
    occasions=T,
    cases=[
        case("many animals, few losses", 11, 120, 0.7, 0.5, 0.03),
        case("few animals, sparse tables", 12, 15, 0.6, 0.6, 0.05),
    ],
)
text = json.dumps(result, ensure_ascii=False)
for key in ('"cases"', '{"what"', '"rows"', '{"component"'):
    text = text.replace(key, "\n" + key)
Path(__file__).with_suffix(".json").write_text(text + "\n")
