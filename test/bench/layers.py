"""The other half of layers.mjs (see there): GDAL's Python binding and rasterio (Debian packages python3-gdal and
python3-rasterio), one thread.

    /usr/bin/python3 test/bench/layers.py make FOLDER    makes the stacks: 12 files a layout, 1000 x 1000, tiles of 256
    /usr/bin/python3 test/bench/layers.py serve FOLDER   answers "READER LAYOUT" lines with CPU seconds and values, as JSON
"""

import json
import os
import sys
import time

import numpy as np

os.environ.setdefault("GDAL_NUM_THREADS", "1")
LAYOUTS = {
    "float32 deflate": ("float32", ["TILED=YES", "COMPRESS=DEFLATE"]),
    "float32 deflate, predictor 3": ("float32", ["TILED=YES", "COMPRESS=DEFLATE", "PREDICTOR=3"]),
    "int16 deflate, predictor 2": ("int16", ["TILED=YES", "COMPRESS=DEFLATE", "PREDICTOR=2"]),
    "float32 deflate, strips": ("float32", ["COMPRESS=DEFLATE"]),
    "float32 Zstandard": ("float32", ["TILED=YES", "COMPRESS=ZSTD"]),
    "int16 LZW, predictor 2": ("int16", ["TILED=YES", "COMPRESS=LZW", "PREDICTOR=2"]),
    "float32 LZW": ("float32", ["TILED=YES", "COMPRESS=LZW"]),
    "uncompressed": ("float32", ["TILED=YES"]),
}
FILES = 12


def make(folder):
    from osgeo import gdal, osr

    gdal.UseExceptions()
    s = osr.SpatialReference()
    s.ImportFromEPSG(32632)
    rng = np.random.default_rng(1)
    r, c = np.mgrid[0:1000, 0:1000]
    for name, (kind, options) in LAYOUTS.items():
        os.makedirs(os.path.join(folder, name), exist_ok=True)
        for i, path in enumerate(paths(folder, name)):
            z = 300 + 200 * np.sin(c / 90 + i) * np.cos(r / 70) + rng.normal(0, 2, (1000, 1000))
            number = gdal.GDT_Float32 if kind == "float32" else gdal.GDT_Int16
            ds = gdal.GetDriverByName("GTiff").Create(path, 1000, 1000, 1, number, options)
            ds.SetGeoTransform((500000, 30, 0, 5500000, 0, -30))
            ds.SetProjection(s.ExportToWkt())
            ds.GetRasterBand(1).WriteArray(z.astype(kind))
            ds = None
    points = rng.integers(0, 1000, (20, 2)).tolist()
    with open(os.path.join(folder, "points.json"), "w") as out:
        json.dump({"layouts": list(LAYOUTS), "points": points}, out)


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


def serve(folder):
    points = json.load(open(os.path.join(folder, "points.json")))["points"]
    readers = {"GDAL": with_gdal, "rasterio": with_rasterio}
    for line in sys.stdin:
        reader, name = line.strip().split(" ", 1)
        before = time.process_time()
        values = [readers[reader](path, points) for path in paths(folder, name)]
        print(json.dumps({"seconds": time.process_time() - before, "values": values}), flush=True)


{"make": make, "serve": serve}[sys.argv[1]](sys.argv[2])
