"""Makes captures.csv (drawn once with numpy's default generator) and expected/*.csv of this case with scipy, apart from covey:
python3 expected.py

History by history with a two-state chain (alive, gone). Survival of a site by its own snow, standardised over both sites and all
strata together (each site stands in two strata, so the mean and the sd with n - 1 are over 4 x 6 rows), and by site; the sexes do
not differ in survival, and recapture is constant. Standard errors by the inverse of the Hessian (complex-step gradient, central
difference). "storms" may not be chosen: asserted from its maximum likelihood.
"""
import csv, pathlib
import numpy as np
from scipy.optimize import minimize
from scipy.stats import norm

here = pathlib.Path(__file__).parent
YEARS = [str(y) for y in range(2001, 2008)]
SITES = ["north", "south"]
# code-unit order of the labels
STRATA = [("female", "north"), ("female", "south"), ("male", "north"), ("male", "south")]
winters = list(csv.DictReader(open(here / "winters.csv")))
snow = {site: np.array([float(w[f"snow_{site}"]) for w in winters]) for site in SITES}
rows_of_snow = np.concatenate([snow[site] for _, site in STRATA])
centre, sd = rows_of_snow.mean(), rows_of_snow.std(ddof=1)
z = {site: (snow[site] - centre) / sd for site in SITES}
storms = np.array([float(w["storms"]) for w in winters])
storms = (storms - storms.mean()) / storms.std(ddof=1)
logistic = lambda x: 1 / (1 + np.exp(-x))

def draw():
    random = np.random.default_rng(5)
    counts = {}
    for sex, site in STRATA:
        for first in range(6):
            for _ in range(25):
                seen = [0] * 7
                seen[first] = 1
                for t in range(first, 6):
                    if random.random() > logistic(0.8 + 0.3 * (site == "south") - 0.7 * z[site][t]):
                        break
                    seen[t + 1] = int(random.random() < 0.65)
                key = (sex, site, *seen)
                counts[key] = counts.get(key, 0) + 1
    with open(here / "captures.csv", "w") as out:
        print("mark", "sex", "site", *YEARS, "animals", sep=",", file=out)
        for i, (key, number) in enumerate(sorted(counts.items())):
            print(f"h{i + 1:03}", *key, number, sep=",", file=out)

draw()
rows = list(csv.DictReader(open(here / "captures.csv")))
RELEASES = sum(int(r["animals"]) * sum(r[y] == "1" for y in YEARS[:6]) for r in rows)

def minus2(b, x):
    k = x.shape[2]
    s, p = logistic(x @ b[:k]), logistic(b[k])
    total = 0
    for r in rows:
        g = SITES.index(r["site"])
        seen = [t for t in range(7) if r[YEARS[t]] == "1"]
        alive, gone = 1, 0
        for t in range(seen[0], 6):
            gone = gone + alive * (1 - s[g, t])
            alive = alive * s[g, t]
            if t + 1 in seen:
                alive, gone = alive * p, 0
            else:
                alive = alive * (1 - p)
        total -= 2 * int(r["animals"]) * np.log(alive + gone)
    return total

def fit(x):
    d = x.shape[2] + 1
    gradient = lambda b: np.array([minus2(b + 1e-30j * e, x).imag / 1e-30 for e in np.eye(d)])
    hessian = lambda b: np.array([(gradient(b + 1e-5 * e) - gradient(b - 1e-5 * e)) / 2e-5 for e in np.eye(d)])
    b = minimize(minus2, np.zeros(d), args=(x,), jac=lambda b, _: gradient(b), method="BFGS").x
    for _ in range(8):
        b = b - np.linalg.solve(hessian(b), gradient(b))
    assert np.abs(gradient(b)).max() < 1e-8
    return b, np.linalg.inv(hessian(b) / 2)

# site x interval: a survival for each, or snow of the site and a shift of the second site
each = np.array([[np.eye(12)[6 * g + t] for t in range(6)] for g in range(2)], float)
model = np.array([[[1, g, z[site][t]] for t in range(6)] for g, site in enumerate(SITES)])
more = np.concatenate([model, np.repeat(storms[None, :, None], 2, axis=0)], 2)
b, v = fit(model)
print("effect of snow", b[2], "se", v[2, 2] ** 0.5)
assert minus2(fit(more)[0], more) + np.log(RELEASES) > minus2(b, model)

q = norm.ppf(0.975)
(here / "expected").mkdir(exist_ok=True)
label = lambda sex, site: f'"sex: {sex}, site: {site}"'
with open(here / "expected/apparent-survival.csv", "w") as out:
    print("model,stratum,interval,survival,se,low,high", file=out)
    for words, x in (("each interval its own", each), *((one, model) for one in
                     ("chosen by years", "chosen by animals", "constant"))):
        estimate, covariance = fit(x)
        k = x.shape[2]
        for sex, site in STRATA:
            for t, w in enumerate(winters):
                row = x[SITES.index(site), t]
                eta, se = row @ estimate[:k], float(np.sqrt(row @ covariance[:k, :k] @ row))
                s = float(logistic(eta))
                print(words, label(sex, site), w["interval"], repr(s), repr(s * (1 - s) * se),
                      repr(float(logistic(eta - q * se))), repr(float(logistic(eta + q * se))), sep=",", file=out)
with open(here / "expected/covariates-by-stratum.csv", "w") as out:
    print("covariate,stratum,interval,made_from,value,unit,standardised", file=out)
    for sex, site in STRATA:
        for t, w in enumerate(winters):
            print("snow", label(sex, site), w["interval"], f"snow {site}", repr(float(snow[site][t])), "cm",
                  repr(float(z[site][t])), sep=",", file=out)
