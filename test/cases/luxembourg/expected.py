"""Makes expected/interval-values.csv of this case from test/reference/K_layers.json (GDAL): python3 expected.py"""
import json, pathlib

here = pathlib.Path(__file__).parent
cases = [c for c in json.load(open(here / "../../reference/K_layers.json"))["cases"] if c["file"].endswith(".tif")]
point = lambda at: next(c["nearest"] for c in cases if c.get("point") == at)
area = lambda name: next(c["mean"] for c in cases if c.get("area") == name)
VALUES = [
    ("in the valley", point([6.36, 49.52])),
    ("in the city", point([6.13, 49.61])),
    ("over the triangle", area("triangle")),
    ("over the frame", area("with-hole")),
    ("over the sliver", area("sliver-smaller-than-a-pixel")),
]
(here / "expected").mkdir(exist_ok=True)
with open(here / "expected/interval-values.csv", "w") as out:
    print("covariate,interval,value,unit,first_day,last_day,days_covered,missing_because", file=out)
    for name, value in VALUES:
        print(f"{name},start of 2001 to start of 2002,{value!r},m,2001-01-01,2001-12-31,365,", file=out)
        print(f"{name},start of 2002 to start of 2003,,m,2002-01-01,2002-12-31,0,none of 365 days covered", file=out)
