"""The job of stations.mjs in pandas, written as a user who knows pandas would: read, then twenty covariates of thirty
stations over forty intervals. Prints one JSON line. Usage: stations.py FILE"""
import json
import resource
import sys
import time

import numpy as np
import pandas as pd

SEASONS = [(11, 2), (12, 2), (3, 5), (9, 11), (1, 6)]
STATISTICS = [
    ("rain", "sum"),
    ("tn", lambda x: (x < 0).sum()),
    ("tx", lambda x: x.quantile(0.9)),
    ("tn", "mean"),
]
FIRST, INTERVALS = 1981, 40

began = time.perf_counter()
table = pd.read_csv(sys.argv[1], parse_dates=["day"], na_values=["-9999"], dtype={"site": "category"})
read = time.perf_counter()
stations = table["site"].cat.categories[:30]
table = table[table["site"].isin(stations)].copy()
table["site"] = table["site"].cat.remove_unused_categories()
month, year = table["day"].dt.month, table["day"].dt.year

values = 0
total = 0.0
for first, last in SEASONS:
    crosses = last < first
    inside = (month >= first) | (month <= last) if crosses else (month >= first) & (month <= last)
    part = table[inside]
    # Intervals run from 20 July to 20 July: a season belongs to the one that wholly holds it.
    season = year[inside] - ((month[inside] <= last) if crosses or last < 7 else 0)
    part = part.assign(interval=season)
    part = part[(part["interval"] >= FIRST) & (part["interval"] < FIRST + INTERVALS)]
    groups = part.groupby(["interval", "site"], observed=True)
    due = groups["day"].count().groupby(level=0).max()
    for column, statistic in STATISTICS:
        taken = groups[column]
        count = taken.count()
        value = taken.agg(statistic)
        enough = count >= 0.9 * due.reindex(count.index, level=0)
        value = value.where(enough)
        if statistic == "sum":
            value = value * due.reindex(count.index, level=0) / count
        # Departures from each station's own mean, the mean of the means added back.
        wide = value.unstack()
        base = wide.mean()
        joined = (wide - base).mean(axis=1) + base.mean()
        values += len(joined)
        total += float(np.nansum(joined))
usage = resource.getrusage(resource.RUSAGE_SELF)
print(
    json.dumps(
        {
            "step": "pandas",
            "values": values,
            "check": round(total, 3),
            "reading wall s": round(read - began, 2),
            "CPU s": round(usage.ru_utime + usage.ru_stime, 2),
            "wall s": round(time.perf_counter() - began, 2),
            "peak MB": round(usage.ru_maxrss / 1024),
        }
    )
)
