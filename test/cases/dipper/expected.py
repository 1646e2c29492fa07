"""Makes expected/*.csv of both dipper cases from test/reference/A_dipper.json (fits in R): python3 expected.py"""
import json, math, pathlib
from statistics import NormalDist

here = pathlib.Path(__file__).parent
reference = json.load(open(here / "../../reference/A_dipper.json"))
fits, anodev = reference["expected"], reference["expected"]["anodev"]
n = reference["data"]["sum_releases"]
YEARS = reference["data"]["years"]
constant = fits["survival_constant_recapture_constant"]
flood = fits["survival_flood_recapture_constant"]
interval = fits["survival_per_interval_recapture_constant"]
both = fits["survival_per_interval_recapture_per_occasion"]
between = lambda fit: (fit["minus2logL"] - interval["minus2logL"]) / (interval["K"] - fit["K"])

def comparison(key, words, chosen, fit, share, ratio, test):
    k, d = fit["K"], fit["minus2logL"]
    return [key, words, chosen, k, d, fit["AICc"], d + k * math.log(n), share, ratio, *test]

def write(case, name, head, rows):
    folder = here.parent / case / "expected"
    folder.mkdir(exist_ok=True)
    with open(folder / f"{name}.csv", "w") as out:
        for row in [head.split(",")] + rows:
            print(*(repr(x) if isinstance(x, float) else x for x in row), sep=",", file=out)

none, share = [""] * 4, anodev["R2_dev"]
tested = [anodev["F"], anodev["df1"], anodev["df2"], anodev["p_value"]]
write(
    "dipper",
    "comparison",
    "candidate,survival,chosen_on_data,parameters,minus_2_log_l,aicc,bic,deviance_explained,between_years,f,df_1,df_2,p",
    [
        comparison("constant", "constant", "false", constant, 0.0, between(constant), none),
        comparison("each interval", "each interval its own", "false", interval, 1.0, "", none),
        comparison("all covariates", "flood", "false", flood, share, between(flood), tested),
        comparison("chosen by animals", "flood", "true", flood, share, between(flood), none),
        comparison("chosen by years", "flood", "true", flood, share, between(flood), none),
        # of the two subsets, none and flood, flood has the lower BIC
        comparison("best small subset", "flood", "true", flood, share, between(flood), none),
    ],
)

z = NormalDist().inv_cdf(0.975)
logistic = lambda x: 1 / (1 + math.exp(-x))

def survival(words, fit):
    rows = []
    for t, (phi, se) in enumerate(zip(fit["phi"], fit["se_phi"])):
        eta, half = math.log(phi / (1 - phi)), z * se / phi / (1 - phi)
        ends = [logistic(eta - half), logistic(eta + half)]
        rows.append([words, "all animals", f"{YEARS[t]} to {YEARS[t + 1]}", phi, se, *ends])
    return rows

write(
    "dipper",
    "apparent-survival",
    "model,stratum,interval,survival,se,low,high",
    [*survival("each interval its own", interval), *survival("chosen by years", flood),
     *survival("chosen by animals", flood), *survival("constant", constant)],
)

def by_flood():
    """One survival per interval, recapture by the flood of the interval before: cell probabilities, scipy."""
    import numpy as np
    from scipy.optimize import minimize
    data = reference["data"]
    flood = np.array(data["flood_covariate_by_interval"], float)
    flood = (flood - flood.mean()) / flood.std(ddof=1)
    released, rows = data["releases"], data["m_array_rows"]
    T = len(released)
    def minus2(b):
        s, p = 1 / (1 + np.exp(-b[:T])), 1 / (1 + np.exp(-b[T] - b[T + 1] * flood))
        total = 0
        for i in range(T):
            cell, left = 1, 1
            row = rows[i][-(T - i):]
            for j in range(i, T):
                now = cell * s[j] * p[j]
                cell = cell * s[j] * (1 - p[j])
                left = left - now
                total -= 2 * row[j - i] * np.log(now)
            total -= 2 * (released[i] - sum(row)) * np.log(left)
        return total
    gradient = lambda b: np.array([minus2(b + 1e-30j * e).imag / 1e-30 for e in np.eye(T + 2)])
    hessian = lambda b: np.array([(gradient(b + 1e-5 * e) - gradient(b - 1e-5 * e)) / 2e-5 for e in np.eye(T + 2)])
    b = minimize(minus2, np.zeros(T + 2), jac=gradient, method="BFGS").x
    for _ in range(8):
        b = b - np.linalg.solve(hessian(b), gradient(b))
    assert np.abs(gradient(b)).max() < 1e-9
    return float(minus2(b)), T + 2

d_flood, k_flood = by_flood()
aicc_flood = d_flood + 2 * k_flood * n / (n - k_flood - 1)
for case in ("dipper", "dipper-each-occasion"):
    used = ["true", "false"] if case == "dipper" else ["false", "true"]
    write(case, "recapture-parts", "recapture,parameters,minus_2_log_l,aicc,in_use", [
        ["constant", interval["K"], interval["minus2logL"], interval["AICc"], used[0]],
        ["covariates", k_flood, d_flood, aicc_flood, "false"],
        ["each occasion", both["K"], both["minus2logL"], both["AICc"], used[1]],
    ])
