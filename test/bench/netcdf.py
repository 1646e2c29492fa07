"""CPU time of reading 20 points of a NetCDF stack: the Python binding netCDF4 (Debian's python3-netcdf4).

    /usr/bin/python3 test/bench/netcdf.py make FOLDER    makes 5 layouts of 60 x 1000 x 1000 int16 and one of 2 GB
    /usr/bin/python3 test/bench/netcdf.py time FOLDER    CPU milliseconds, layout by layout; writes values.json

Chunked layouts are read as is best for them: image by image where chunks are maps, piece by piece along their chunks
elsewhere. test/bench/netcdf.mjs reads the same points with covey and compares the values bit for bit.
"""

import json
import os
import sys
import time

import netCDF4
import numpy as np

T, N = 60, 1000
LAYOUTS = {
    "maps": ("NETCDF4", {"zlib": True, "shuffle": True, "chunksizes": (1, N, N)}),
    "cubes": ("NETCDF4", {"zlib": True, "shuffle": True, "chunksizes": (30, 100, 100)}),
    "series": ("NETCDF4", {"zlib": True, "shuffle": True, "chunksizes": (T, 20, 20)}),
    "classic": ("NETCDF3_64BIT_OFFSET", {}),
    "classic-records": ("NETCDF3_64BIT_OFFSET", {"records": True}),
}


def write(path, form, options, steps=T, side=N):
    options = dict(options)
    records = options.pop("records", False)
    with netCDF4.Dataset(path, "w", format=form) as d:
        d.createDimension("time", None if records else steps)
        d.createDimension("lat", side)
        d.createDimension("lon", side)
        for k, unit, at in (
            ("time", "days since 2001-01-01", np.arange(steps)),
            ("lat", "degrees_north", 60 - 0.01 * (np.arange(side) + 0.5)),
            ("lon", "degrees_east", 0.01 * (np.arange(side) + 0.5)),
        ):
            c = d.createVariable(k, "f8", (k,))
            c.units = unit
            c[:] = at
        v = d.createVariable("x", "i2", ("time", "lat", "lon"), **options)
        v.set_auto_maskandscale(False)
        rng = np.random.default_rng(1)
        r, c = np.mgrid[0:side, 0:side]
        def image(t):
            return (300 + 200 * np.sin(c / 90 + t) * np.cos(r / 70) + rng.normal(0, 2, (side, side))).astype("i2")

        if side == N:
            v[:] = np.array([image(t) for t in range(steps)])
        else:
            first = image(0)
            for t in range(steps):
                v[t] = first + t


def read(path, points):
    with netCDF4.Dataset(path) as d:
        v = d["x"]
        v.set_auto_maskandscale(False)
        chunks = v.chunking()
        out = np.empty((len(points), T), "i2")
        if chunks in (None, "contiguous"):
            for i, (x, y) in enumerate(points):
                out[i] = v[:, y, x]
        elif chunks[1] == N:
            for t in range(T):
                image = v[t]
                for i, (x, y) in enumerate(points):
                    out[i, t] = image[y, x]
        else:
            for i, (x, y) in enumerate(points):
                out[i] = v[:, y, x]
    return out


def main():
    action, folder = sys.argv[1:]
    os.makedirs(folder, exist_ok=True)
    if action == "make":
        for name, (form, options) in LAYOUTS.items():
            write(os.path.join(folder, name + ".nc"), form, options)
        points = np.random.default_rng(2).integers(0, N, (20, 2)).tolist()
        json.dump(points, open(os.path.join(folder, "points.json"), "w"))
        write(os.path.join(folder, "two-gigabytes.nc"), "NETCDF3_64BIT_OFFSET", {"records": True}, 250, 2000)
        return
    points = json.load(open(os.path.join(folder, "points.json")))
    values = {}
    for name in LAYOUTS:
        path = os.path.join(folder, name + ".nc")
        read(path, points)
        best = 1e9
        for _ in range(5):
            t = time.process_time()
            got = read(path, points)
            best = min(best, time.process_time() - t)
        values[name] = got.tolist()
        print(f"{name}  netCDF4 {1000 * best:.1f} ms")
    json.dump(values, open(os.path.join(folder, "values.json"), "w"))


main()
