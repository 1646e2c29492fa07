"""CPU time of reading 20 points of each file of a stack: GDAL's Python binding and rasterio (Debian packages).

    /usr/bin/python3 test/bench/layers.py make FOLDER    makes the stacks (6 files a layout, 1000 x 1000, tiles of 256)
    /usr/bin/python3 test/bench/layers.py time FOLDER    prints CPU milliseconds a file, layout by layout

test/bench/layers.mjs reads the same files at the same points with covey and compares the values bit for bit.
"""

import json
import os
import sys
import time

import numpy as np

os.environ.setdefault("GDAL_NUM_THREADS", "1")
LAYOUTS = {
    "float32-deflate": ("float32", ["TILED=YES", "COMPRESS=DEFLATE"]),
    "float32-deflate-p3": ("float32", ["TILED=YES", "COMPRESS=DEFLATE", "PREDICTOR=3"]),
    "int16-deflate-p2": ("int16", ["TILED=YES", "COMPRESS=DEFLATE", "PREDICTOR=2"]),
    "float32-deflate-strips": ("float32", ["COMPRESS=DEFLATE"]),
    "float32-zstd": ("float32", ["TILED=YES", "COMPRESS=ZSTD"]),
    "int16-lzw-p2": ("int16", ["TILED=YES", "COMPRESS=LZW", "PREDICTOR=2"]),
    "float32-lzw": ("float32", ["TILED=YES", "COMPRESS=LZW"]),
    "uncompressed": ("float32", ["TILED=YES"]),
}
FILES = 6


def make(folder):
    from osgeo import gdal, osr

    s = osr.SpatialReference()
    s.ImportFromEPSG(32632)
    rng = np.random.default_rng(1)
    r, c = np.mgrid[0:1000, 0:1000]
    for name, (kind, options) in LAYOUTS.items():
        os.makedirs(os.path.join(folder, name), exist_ok=True)
        for i in range(FILES):
            z = 300 + 200 * np.sin(c / 90 + i) * np.cos(r / 70) + rng.normal(0, 2, (1000, 1000))
            path = os.path.join(folder, name, f"x_2001_{i + 1:02d}.tif")
            ds = gdal.GetDriverByName("GTiff").Create(path, 1000, 1000, 1, gdal.GDT_Float32 if kind == "float32" else gdal.GDT_Int16, options)
            ds.SetGeoTransform((500000, 30, 0, 5500000, 0, -30))
            ds.SetProjection(s.ExportToWkt())
            ds.GetRasterBand(1).WriteArray(z.astype(kind))
            ds = None
    points = rng.integers(0, 1000, (20, 2)).tolist()
    with open(os.path.join(folder, "points.json"), "w") as out:
        json.dump(points, out)


def paths(folder, name):
    return [os.path.join(folder, name, f"x_2001_{i + 1:02d}.tif") for i in range(FILES)]


def with_gdal(path, points):
    from osgeo import gdal

    ds = gdal.Open(path)
    band = ds.GetRasterBand(1)
    return [float(band.ReadAsArray(x, y, 1, 1)[0, 0]) for x, y in points]


def with_rasterio(path, points):
    import rasterio

    with rasterio.open(path) as src:
        xy = [src.xy(y, x) for x, y in points]
        return [float(v[0]) for v in src.sample(xy)]


def main():
    action, folder = sys.argv[1:]
    if action == "make":
        return make(folder)
    points = json.load(open(os.path.join(folder, "points.json")))
    values = {}
    for name in LAYOUTS:
        line = [name]
        for read in (with_gdal, with_rasterio):
            for path in paths(folder, name):
                read(path, points)
            best = 1e9
            for _ in range(5):
                t = time.process_time()
                got = [read(path, points) for path in paths(folder, name)]
                best = min(best, time.process_time() - t)
            values[name] = got
            line.append(f"{read.__name__[5:]} {1000 * best / FILES:.2f}")
        print("  ".join(line))
    with open(os.path.join(folder, "values.json"), "w") as out:
        json.dump(values, out)


main()
