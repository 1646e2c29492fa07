"""Makes expected/*.csv of this case with numpy, apart from covey: python3 expected.py

Windows: a season of interval y to y+1 (early July to early July) lies in the winter and spring of y to y+1, with `lag: 1`
a year before. Means weight months by days,
minima take the months as they are, sums and means need every month. Several stations: v_st = a_s + b_t by least squares
over the windows that are complete, the value of t is mean(a) + mean over the stations there of (v_st - a_s).
"""
import calendar, csv, pathlib
import numpy as np

here = pathlib.Path(__file__).parent
values = {}
for row in csv.DictReader(open(here / "../../data/colorado-monthly.csv")):
    year, month = map(int, row["month"].split("-"))
    for variable, column in (("rain", "precipitation_cm"), ("tmax", "tmax_c"), ("tmin", "tmin_c")):
        cell = row[column]
        values[variable, row["station"], year, month] = float(cell) if cell else np.nan
stations = sorted({key[1] for key in values})
YEARS = range(1955, 1985)

def window(variable, station, months, how):
    v = np.array([values.get((variable, station, y, m), np.nan) for y, m in months])
    w = np.array([calendar.monthrange(y, m)[1] for y, m in months])
    if np.isnan(v).any():
        return np.nan
    return {"sum": v.sum() * 10, "mean": (v * w).sum() / w.sum(), "minimum": v.min()}[how]

def joined(variable, names, months_of, how):
    v = np.array([[window(variable, s, months_of(y), how) for y in YEARS] for s in names])
    v = v[~np.isnan(v).all(axis=1)]
    if not np.isnan(v).any():
        return v.mean(axis=0)
    n, t = v.shape
    s, u = np.nonzero(~np.isnan(v))
    x = np.zeros((len(s), n + t))
    x[np.arange(len(s)), s] = 1
    x[np.arange(len(s)), n + u] = 1
    a = np.linalg.lstsq(x, v[s, u], rcond=None)[0][:n]
    # there is one free constant between a and b; it cancels in mean(a) + mean(v - a)
    return a.mean() + np.nanmean(v - a[:, None], axis=0)

winter = lambda first, last: lambda y: [(y, m) for m in range(first, 13)] + [(y + 1, m) for m in range(1, last + 1)]
spring = lambda y: [(y + 1, m) for m in (3, 4, 5)]
columns = {
    "winter_rain_at_dillon": joined("rain", ["052281"], winter(11, 2), "sum"),
    "winter_rain": joined("rain", stations, winter(11, 2), "sum"),
    "spring_warmth": joined("tmax", ["343628", "487990", "057936"], spring, "mean"),
    "winter_nights": joined("tmin", stations, winter(12, 2), "mean"),
    "coldest_month": joined("tmin", ["343628"], winter(11, 3), "minimum"),
    "spring_before": joined("tmax", ["057936"], lambda y: [(y, 5), (y, 6)], "mean"),
}
print({name: int(np.isnan(v).sum()) for name, v in columns.items()})
(here / "expected").mkdir(exist_ok=True)
with open(here / "expected/covariates.csv", "w") as out:
    print("interval", *columns, sep=",", file=out)
    for i, y in enumerate(YEARS):
        print(f"{y} to {y + 1}", *(repr(float(v[i])) for v in columns.values()), sep=",", file=out)
z = {name: (v - v.mean()) / v.std(ddof=1) for name, v in columns.items()}
with open(here / "expected/covariates-standardised.csv", "w") as out:
    print("interval", *columns, sep=",", file=out)
    for i, y in enumerate(YEARS):
        print(f"{y} to {y + 1}", *(repr(float(v[i])) for v in z.values()), sep=",", file=out)
