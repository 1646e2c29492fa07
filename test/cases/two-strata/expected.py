"""Makes expected/*.csv of this case with scipy, apart from covey: python3 expected.py

The likelihood is taken history by history with a two-state chain (alive, gone), not from counts: after its first capture
an animal survives interval t with s_t^length and is caught with p while alive; one that was lost at its last capture
says nothing of what follows. Standard errors by the inverse of the Hessian (complex-step gradient, central difference).
"""
import csv, itertools, pathlib
import numpy as np
from scipy.optimize import minimize
from scipy.stats import f as f_distribution, norm

here = pathlib.Path(__file__).parent
YEARS = ["2001", "2002", "2004", "2005", "2006"]
LENGTHS = np.array([1, 2, 1, 1])
rows = list(csv.DictReader(open(here / "captures.csv")))
winters = list(csv.DictReader(open(here / "winters.csv")))
INTERVALS = [w["interval"] for w in winters]
SEXES = ["female", "male"]

def releases():
    n = 0
    for r in rows:
        seen = [t for t in range(5) if r[YEARS[t]] == "1"]
        n += int(r["animals"]) * sum(t < 4 and not (r["fate"] and t == seen[-1]) for t in seen)
    return n

def minus2(beta, survival, recapture):
    k = survival.shape[2]
    s = 1 / (1 + np.exp(-survival @ beta[:k]))          # sex x interval
    p = 1 / (1 + np.exp(-recapture @ beta[k:]))         # occasion 2..5, or sex x occasion
    p = np.broadcast_to(p, (2, 4))
    total = 0
    for r in rows:
        seen = [t for t in range(5) if r[YEARS[t]] == "1"]
        last = seen[-1] if r["fate"] else 4
        alive, gone = 1, 0
        for t in range(seen[0], last):
            phi = s[SEXES.index(r["sex"]), t] ** LENGTHS[t]
            gone += alive * (1 - phi)
            alive *= phi
            if t + 1 in seen:
                alive, gone = alive * p[SEXES.index(r["sex"]), t], 0
            else:
                alive *= 1 - p[SEXES.index(r["sex"]), t]
        total -= 2 * int(r["animals"]) * np.log(alive + gone)
    return total

def fit(survival, recapture):
    d = survival.shape[2] + recapture.shape[-1]
    value = lambda b: minus2(b, survival, recapture)
    gradient = lambda b: np.array([value(b + 1e-30j * np.eye(d)[i]).imag / 1e-30 for i in range(d)])
    hessian = lambda b: np.array([(gradient(b + 1e-5 * e) - gradient(b - 1e-5 * e)) / 2e-5 for e in np.eye(d)])
    b = minimize(value, np.zeros(d), jac=gradient, method="BFGS").x
    for _ in range(8):
        b = b - np.linalg.solve(hessian(b), gradient(b))
    assert np.abs(gradient(b)).max() < 1e-9
    h = hessian(b) / 2
    k = np.linalg.matrix_rank(h, tol=1e-7 * np.abs(h).max())
    v = np.linalg.inv((h + h.T) / 2)
    k1 = survival.shape[2]
    eta = survival @ b[:k1]
    se = np.sqrt(np.einsum("gti,ij,gtj->gt", survival, v[:k1, :k1], survival))
    return {"d": value(b), "k": int(k), "eta": eta, "se": se}

one = np.ones((2, 4, 1))
sex = np.repeat(np.array([[[0.0]], [[1.0]]]), 4, axis=1)
each = np.repeat(np.eye(4)[None], 2, axis=0)
column = lambda x: np.repeat(np.asarray(x)[None, :, None], 2, axis=0)
z = [np.array([float(w[name]) for w in winters]) for name in ("ice", "storms")]
z = [(x - x.mean()) / x.std(ddof=1) for x in z]
# two columns that correlate below 0: their components are the difference and the sum
components = [(z[0] - z[1]) / 2**0.5, (z[0] + z[1]) / 2**0.5]
constant_p, each_p = np.ones((4, 1)), np.eye(4)

n = releases()
constant = fit(np.concatenate([one, sex], 2), constant_p)
interval = fit(np.concatenate([each, sex], 2), constant_p)
occasion = fit(np.concatenate([each, sex], 2), each_p)
# recapture by sex needs a row per sex and occasion
strata = fit(np.concatenate([each, sex], 2), np.concatenate([one, sex], 2))
both = fit(np.concatenate([each, sex], 2), np.concatenate([each, sex], 2))
component = fit(np.concatenate([one, sex, column(components[0])], 2), constant_p)
bic = lambda m: m["d"] + m["k"] * np.log(n)
aicc = lambda m: m["d"] + 2 * m["k"] * n / (n - m["k"] - 1)
# No set of covariates or components has a lower BIC than none at its maximum, so none has at a shrunken solution.
for columns in (z, components):
    for size in (1, 2):
        for some in itertools.combinations(columns, size):
            assert bic(fit(np.concatenate([one, sex, *map(column, some)], 2), constant_p)) > bic(constant)

def comparison(key, words, chosen, m, test=False):
    share = (constant["d"] - m["d"]) / (constant["d"] - interval["d"])
    left = interval["k"] - m["k"]
    between = (m["d"] - interval["d"]) / left if left else ""
    f = p = df = ""
    if test:
        df = m["k"] - constant["k"]
        f = (constant["d"] - m["d"]) / df / between
        p = f_distribution.sf(f, df, left)
    return [key, words, chosen, m["k"], m["d"], aicc(m), bic(m), share, between, f, df, left if test else "", p]

def write(name, head, body):
    (here / "expected").mkdir(exist_ok=True)
    with open(here / "expected" / f"{name}.csv", "w") as out:
        for row in [head.split(",")] + body:
            print(*(repr(float(x)) if isinstance(x, float) else x for x in row), sep=",", file=out)

write(
    "comparison",
    "candidate,survival,chosen_on_data,parameters,minus_2_log_l,aicc,bic,deviance_explained,between_years,f,df_1,df_2,p",
    [
        comparison("constant", "constant", "false", constant),
        comparison("each interval", "each interval its own", "false", interval),
        comparison("chosen by animals", "constant", "true", constant),
        comparison("chosen by years", "constant", "true", constant),
        # four intervals allow subsets of none only
        comparison("best small subset", "constant", "true", constant),
        comparison("first component", "component 1", "false", component, True),
        comparison("components kept", "component 1", "false", component, True),
        comparison("components screened", "constant", "true", constant),
    ],
)
write(
    "recapture-parts",
    "recapture,parameters,minus_2_log_l,aicc,in_use",
    [["constant", interval["k"], interval["d"], aicc(interval), "true"],
     ["strata", strata["k"], strata["d"], aicc(strata), "false"],
     ["each occasion", occasion["k"], occasion["d"], aicc(occasion), "false"],
     ["each occasion and strata", both["k"], both["d"], aicc(both), "false"]],
)
logistic = lambda x: float(1 / (1 + np.exp(-x)))
q = norm.ppf(0.975)
write(
    "apparent-survival",
    "model,stratum,interval,survival,se,low,high",
    [
        [words, f"sex: {SEXES[g]}", INTERVALS[t], logistic(m["eta"][g, t]),
         logistic(m["eta"][g, t]) * (1 - logistic(m["eta"][g, t])) * float(m["se"][g, t]),
         logistic(m["eta"][g, t] - q * m["se"][g, t]), logistic(m["eta"][g, t] + q * m["se"][g, t])]
        for words, m in (("each interval its own", interval), ("chosen by years", constant),
                         ("chosen by animals", constant), ("constant", constant))
        for g in range(2) for t in range(4)
    ],
)
# caught by hand: newly marked and seen again at each occasion
tally = [[0, 0] for _ in YEARS]
for r in rows:
    seen = [t for t in range(5) if r[YEARS[t]] == "1"]
    for t in seen:
        tally[t][t != seen[0]] += int(r["animals"])
write("occasions", "occasion,first_day,last_day,effort,newly_marked,seen_again",
      [[year, "", "", "", *counts] for year, counts in zip(YEARS, tally)])
