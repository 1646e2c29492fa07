"""Makes expected/*.csv of this case with scipy, apart from covey: python3 expected.py

History by history and year by year: a two-state chain (alive, gone) that nobody looks at in 2003. Survival by sex, ice and
mid-year (both at mean 0 and sd 1 over the five years), recapture by sex. Standard errors as in ../two-strata.
"""
import csv, pathlib
import numpy as np
from scipy.optimize import minimize
from scipy.stats import norm

here = pathlib.Path(__file__).parent
COLUMNS = ["2001", "2002", "2004", "2005", "2006"]
SEXES = ["female", "male"]
OCCASION_AT = {1: 1, 3: 2, 4: 3, 5: 4}                       # years lived since 2001 -> occasion
START = [0, 1, 3, 4, 5]
rows = list(csv.DictReader(open(here / "captures.csv")))
winters = list(csv.DictReader(open(here / "winters.csv")))
standard = lambda x: (x - x.mean()) / x.std(ddof=1)
ice = standard(np.array([float(w["ice"]) for w in winters]))
trend = standard(np.array([0.5, 1.5, 2.5, 3.5, 4.5]))

# a row per sex and year: one survival per interval between occasions (its years share it), or trend and ice
each = np.array([[[*np.eye(4)[t], g] for t in (0, 1, 1, 2, 3)] for g in range(2)], float)
model = np.array([[[1, g, trend[t], ice[t]] for t in range(5)] for g in range(2)])

def minus2(b, x):
    k = x.shape[2]
    s = 1 / (1 + np.exp(-x @ b[:k]))
    p = [1 / (1 + np.exp(-(b[k] + b[k + 1] * g))) for g in range(2)]
    total = 0
    for r in rows:
        g = SEXES.index(r["sex"])
        seen = [t for t in range(5) if r[COLUMNS[t]] == "1"]
        alive, gone = 1, 0
        for year in range(START[seen[0]], START[seen[-1]] if r["fate"] else 5):
            gone = gone + alive * (1 - s[g, year])
            alive = alive * s[g, year]
            at = OCCASION_AT.get(year + 1)
            if at is None:
                continue
            if at in seen:
                alive, gone = alive * p[g], 0
            else:
                alive = alive * (1 - p[g])
        total -= 2 * int(r["animals"]) * np.log(alive + gone)
    return total

def fit(x):
    d = x.shape[2] + 2
    gradient = lambda b: np.array([minus2(b + 1e-30j * e, x).imag / 1e-30 for e in np.eye(d)])
    hessian = lambda b: np.array([(gradient(b + 1e-5 * e) - gradient(b - 1e-5 * e)) / 2e-5 for e in np.eye(d)])
    b = minimize(minus2, np.zeros(d), args=(x,), jac=lambda b, _: gradient(b), method="BFGS").x
    for _ in range(8):
        b = b - np.linalg.solve(hessian(b), gradient(b))
    assert np.abs(gradient(b)).max() < 1e-9
    return b, np.linalg.inv(hessian(b) / 2)

logistic = lambda x: float(1 / (1 + np.exp(-x)))
q = norm.ppf(0.975)
(here / "expected").mkdir(exist_ok=True)
with open(here / "expected/apparent-survival.csv", "w") as out:
    print("model,stratum,interval,survival,se,low,high", file=out)
    for words, x in (("each interval its own", each), *((one, model) for one in
                     ("chosen by years", "chosen by animals", "constant"))):
        b, v = fit(x)
        k = x.shape[2]
        for g in range(2):
            for t, w in enumerate(winters):
                row = x[g, t]
                eta, se = row @ b[:k], float(np.sqrt(row @ v[:k, :k] @ row))
                s = logistic(eta)
                print(words, f"sex: {SEXES[g]}", '"%s"' % w["interval"], s, s * (1 - s) * se,
                      logistic(eta - q * se), logistic(eta + q * se), sep=",", file=out)
