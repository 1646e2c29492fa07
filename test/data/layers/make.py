"""Makes the small layers of this folder and expected.json: what GDAL reads of each.

Run with Debian's python3-gdal (made with GDAL 3.6.2):  /usr/bin/python3 make.py
Expected values are GDAL's: the SHA-256 of each band's little-endian samples, so that tests compare bits, and the first
few, so that a failure can be read.
"""

import hashlib
import json
import os
import struct
import numpy as np
from osgeo import gdal, osr

gdal.UseExceptions()
os.chdir(os.path.dirname(os.path.abspath(__file__)))
for name in os.listdir("."):
    if name != "make.py":
        os.remove(name)

TYPES = {
    "int8": gdal.GDT_Byte,
    "uint8": gdal.GDT_Byte,
    "int16": gdal.GDT_Int16,
    "uint16": gdal.GDT_UInt16,
    "int32": gdal.GDT_Int32,
    "uint32": gdal.GDT_UInt32,
    "float16": gdal.GDT_Float32,
    "float32": gdal.GDT_Float32,
    "float64": gdal.GDT_Float64,
}
W, H = 24, 19


def field(kind, bands=1, w=W, h=H):
    rng = np.random.default_rng(7)
    r, c = np.mgrid[0:h, 0:w]
    out = []
    for b in range(bands):
        smooth = 40 * np.sin(c / 7 + b) + 30 * np.cos(r / 5)
        if kind.startswith("float"):
            z = smooth + rng.integers(0, 8, (h, w)) / 8
            z = z.astype("float16" if kind == "float16" else kind)
            out.append(z.astype("float32") if kind == "float16" else z)
        elif kind.startswith("u"):
            top = np.iinfo(kind).max
            out.append(np.clip((smooth + 75) / 150 * top * 0.97 + rng.integers(0, 3, (h, w)), 0, top).astype(kind))
        else:
            top = np.iinfo(kind).max
            out.append((smooth / 75 * top * 0.97).astype(kind))
    return np.array(out)


EXPECTED = {}


def srs(text):
    s = osr.SpatialReference()
    s.SetFromUserInput(text)
    s.SetAxisMappingStrategy(osr.OAMS_TRADITIONAL_GIS_ORDER)
    return s


def note(name, extra=None):
    """What GDAL says of a file, with all its values."""
    ds = gdal.Open(name)
    t = ds.GetGeoTransform()
    bands = []
    for i in range(1, ds.RasterCount + 1):
        b = ds.GetRasterBand(i)
        a = b.ReadAsArray()
        if a.dtype.kind == "f":
            a[np.isnan(a)] = np.nan
        mask = b.GetMaskBand().ReadAsArray()
        nod = b.GetNoDataValue()
        bands.append(
            {
                "dtype": str(a.dtype),
                "sha256": hashlib.sha256(a.astype(a.dtype.newbyteorder("<")).tobytes()).hexdigest(),
                "first": [None if v != v or abs(v) == float("inf") else v for v in map(float, a.ravel()[:6])],
                "valid": int((mask != 0).sum()),
                "mask": hashlib.sha256((mask != 0).astype("uint8").tobytes()).hexdigest(),
                "nodata": None if nod is None else repr(nod),
                "scale": b.GetScale(),
                "offset": b.GetOffset(),
                "description": b.GetDescription(),
                "unit": b.GetUnitType(),
            }
        )
    EXPECTED[name] = {"width": ds.RasterXSize, "height": ds.RasterYSize, "transform": list(t), "bands": bands, **(extra or {})}


def write(name, data, kind, options=(), system="EPSG:32632", transform=(500000, 30, 0, 5500000, 0, -30), nodata=None, tweak=None, keep=True):
    n, h, w = data.shape
    opts = list(options)
    if kind == "int8":
        opts.append("PIXELTYPE=SIGNEDBYTE")
    if kind == "float16":
        opts.append("NBITS=16")
    ds = gdal.GetDriverByName("GTiff").Create(name, w, h, n, TYPES[kind], opts)
    if transform is not None:
        ds.SetGeoTransform(transform)
    if system:
        ds.SetProjection(srs(system).ExportToWkt())
    if tweak:
        tweak(ds)
    for i in range(n):
        if nodata is not None:
            ds.GetRasterBand(i + 1).SetNoDataValue(nodata)
        ds.GetRasterBand(i + 1).WriteArray(data[i].astype("uint8") if kind == "int8" else data[i])
    ds.FlushCache()
    ds = None
    if keep:
        note(name)


TILED = ["TILED=YES", "BLOCKXSIZE=16", "BLOCKYSIZE=16"]
STRIPS = ["BLOCKYSIZE=8"]

# 1. Sample types, each uncompressed in strips.
for kind in ["int8", "uint8", "int16", "uint16", "int32", "uint32", "float16", "float32", "float64"]:
    d = field(kind, 1, 19, 11)
    write(f"type-{kind}.tif", d, kind, STRIPS + (["COMPRESS=DEFLATE"] if kind == "float16" else []))

# 2. Compressions, predictors, layouts, byte orders.
for comp in ["NONE", "DEFLATE", "LZW", "PACKBITS", "ZSTD", "LERC", "LERC_DEFLATE", "LERC_ZSTD"]:
    for kind in ["int16", "float32"]:
        write(f"c-{comp.lower()}-{kind}.tif", field(kind), kind, TILED + [f"COMPRESS={comp}"])
for kind in ["uint8", "int16", "int32", "float32", "float64"]:
    write(f"p2-{kind}.tif", field(kind), kind, STRIPS + ["COMPRESS=DEFLATE", "PREDICTOR=2"])
for kind in ["float16", "float32", "float64"]:
    write(f"p3-{kind}.tif", field(kind), kind, TILED + ["COMPRESS=DEFLATE", "PREDICTOR=3"])
for comp, pred, kind in [("NONE", 1, "int16"), ("DEFLATE", 2, "int16"), ("LZW", 2, "int32"), ("DEFLATE", 2, "float32"), ("LERC", 1, "float32")]:
    o = ["ENDIANNESS=BIG", f"COMPRESS={comp}"] + ([f"PREDICTOR={pred}"] if pred > 1 else [])
    write(f"big-{comp.lower()}{pred}-{kind}.tif", field(kind), kind, TILED + o)


def turn_headers(source, name):
    """The same blocks under headers of the other byte order. The planes of predictor 3 have the most significant byte
    first in either order, so this is a right big-endian file (libtiff 4.5.0 writes wrong ones that it cannot read)."""
    old = open(source, "rb").read()
    new = bytearray(old)
    new[:4] = b"MM" + struct.pack(">H", 42)
    at = struct.unpack("<I", old[4:8])[0]
    new[4:8] = struct.pack(">I", at)
    sizes = {1: "B", 2: "s", 3: "H", 4: "I", 12: "d"}
    count = struct.unpack_from("<H", old, at)[0]
    struct.pack_into(">H", new, at, count)
    for i in range(count):
        e = at + 2 + 12 * i
        tag, kind, n = struct.unpack_from("<HHI", old, e)
        struct.pack_into(">HHI", new, e, tag, kind, n)
        size = struct.calcsize(sizes[kind]) * n
        place = e + 8 if size <= 4 else struct.unpack_from("<I", old, e + 8)[0]
        if size > 4:
            struct.pack_into(">I", new, e + 8, place)
        if kind != 2:
            struct.pack_into(f">{n}{sizes[kind]}", new, place, *struct.unpack_from(f"<{n}{sizes[kind]}", old, place))
    end = at + 2 + 12 * count
    struct.pack_into(">I", new, end, struct.unpack_from("<I", old, end)[0])
    open(name, "wb").write(new)
    note(name)
    assert (gdal.Open(name).ReadAsArray() == gdal.Open(source).ReadAsArray()).all()


for kind in ["float16", "float32", "float64"]:
    turn_headers(f"p3-{kind}.tif", f"big-p3-{kind}.tif")
write("bigtiff.tif", field("int16"), "int16", TILED + ["BIGTIFF=YES", "COMPRESS=DEFLATE"])
write("bigtiff-big.tif", field("int16"), "int16", TILED + ["BIGTIFF=YES", "ENDIANNESS=BIG", "COMPRESS=DEFLATE"])
for inter in ["PIXEL", "BAND"]:
    for tag, lay in [("tiles", TILED), ("strips", STRIPS)]:
        write(f"bands-{inter.lower()}-{tag}.tif", field("int16", 3), "int16", lay + [f"INTERLEAVE={inter}", "COMPRESS=DEFLATE", "PREDICTOR=2"])
write("bands-pixel-p3.tif", field("float32", 3, 18, 15), "float32", TILED + ["INTERLEAVE=PIXEL", "COMPRESS=LZW", "PREDICTOR=3"])
write("bands-pixel-lerc.tif", field("float32", 3, 18, 5), "float32", TILED + ["INTERLEAVE=PIXEL", "COMPRESS=LERC"])
write("lerc-lossy.tif", field("float32"), "float32", TILED + ["COMPRESS=LERC", "MAX_Z_ERROR=0.01"])
hole = field("float32")
hole[0, 3:9, 5:12] = np.nan
write("lerc-holes.tif", hole, "float32", TILED + ["COMPRESS=LERC"])
big = field("int16", 1, 120, 100) * 0 + np.random.default_rng(3).integers(-3000, 3000, (1, 100, 120)).astype("int16") // 8
write("lzw-long.tif", big[:, :25, :], "int16", ["BLOCKYSIZE=25", "COMPRESS=LZW"])
write("big-many-tiles.tif", field("uint8", 1, 80, 80) // 16, "uint8", ["ENDIANNESS=BIG", "TILED=YES", "BLOCKXSIZE=16", "BLOCKYSIZE=16", "COMPRESS=DEFLATE"])

# 3. Where pixels lie.
small = field("int16", 1, 8, 6)


def point(ds):
    ds.SetMetadataItem("AREA_OR_POINT", "Point")


write("geo-point.tif", small, "int16", system="EPSG:4326", transform=(10, 0.25, 0, 50, 0, -0.25), tweak=point)
write("geo-southup.tif", small, "int16", system="EPSG:4326", transform=(10, 0.25, 0, 48.5, 0, 0.25))
write("geo-rotated.tif", small, "int16", transform=(500000, 25, 10, 5500000, 10, -25))
write("geo-rotated-point.tif", small, "int16", transform=(500000, 25, 10, 5500000, 10, -25), tweak=point)
write("geo-tfw.tif", small, "int16", ["PROFILE=BASELINE", "TFW=YES"])
write("geo-none.tif", small, "int16", ["PROFILE=BASELINE"], transform=None, system=None, keep=False)
write("geo-360.tif", field("int16", 1, 36, 18), "int16", ["COMPRESS=DEFLATE"], system="EPSG:4326", transform=(0, 10, 0, 90, 0, -10))
for name in os.listdir("."):
    if name.startswith("geo-tfw") and name.endswith(".aux.xml"):
        os.remove(name)
note("geo-tfw.tif")


# 4. Missing values.
def withnd(name, kind, nd, opts=STRIPS):
    d = field(kind, 1, 11, 7)
    d[0, 2:4, 3:6] = np.array(nd).astype(d.dtype)
    write(name, d, kind, list(opts), nodata=nd)


withnd("nd-int16.tif", "int16", -3000)
withnd("nd-float32-frac.tif", "float32", -99.9)
withnd("nd-float32-1e20.tif", "float32", 1e20)
withnd("nd-float32-max.tif", "float32", -3.4028234663852886e38)
withnd("nd-nan.tif", "float32", float("nan"))
withnd("nd-inf.tif", "float32", float("inf"))
withnd("nd-minf.tif", "float64", float("-inf"))
withnd("nd-outofrange.tif", "uint8", 0)


def mask_file(name, internal, opts=()):
    gdal.SetConfigOption("GDAL_TIFF_INTERNAL_MASK", "YES" if internal else "NO")
    ds = gdal.GetDriverByName("GTiff").Create(name, 21, 13, 1, gdal.GDT_Int16, list(opts))
    ds.SetGeoTransform((500000, 30, 0, 5500000, 0, -30))
    ds.SetProjection(srs("EPSG:32632").ExportToWkt())
    ds.GetRasterBand(1).WriteArray(field("int16", 1, 21, 13)[0])
    ds.CreateMaskBand(gdal.GMF_PER_DATASET)
    m = np.full((13, 21), 255, "uint8")
    m[3:8, 4:15] = 0
    ds.GetRasterBand(1).GetMaskBand().WriteArray(m)
    ds.FlushCache()
    ds = None
    note(name)


mask_file("mask-internal.tif", True, TILED + ["COMPRESS=DEFLATE"])
mask_file("mask-beside.tif", False, TILED + ["COMPRESS=DEFLATE"])
gdal.SetConfigOption("GDAL_TIFF_INTERNAL_MASK", "YES")
ds = gdal.GetDriverByName("GTiff").Create("sparse.tif", 40, 40, 1, gdal.GDT_Int16, TILED + ["SPARSE_OK=TRUE", "COMPRESS=DEFLATE"])
ds.SetGeoTransform((500000, 30, 0, 5500000, 0, -30))
ds.SetProjection(srs("EPSG:32632").ExportToWkt())
ds.GetRasterBand(1).SetNoDataValue(-1)
ds.GetRasterBand(1).WriteArray(field("int16", 1, 10, 10)[0])
ds.FlushCache()
ds = None
note("sparse.tif")


# 5. Scale, offset, descriptions, units; also from a side file.
def bandmeta(ds):
    for i, (s, o, d) in enumerate([(0.0001, 0, "green 2001-01 <R&D>"), (0.5, -273.15, "green 2001-02"), (2, 1, "é 2001-03")]):
        b = ds.GetRasterBand(i + 1)
        b.SetScale(s)
        b.SetOffset(o)
        b.SetDescription(d)
        b.SetUnitType("K & more")


write("meta-bands.tif", field("int16", 3, 8, 6), "int16", tweak=bandmeta)
write("meta-side.tif", small, "int16", nodata=-5)
ds = gdal.Open("meta-side.tif")
ds.GetRasterBand(1).SetScale(0.01)
ds.GetRasterBand(1).SetOffset(3)
ds.GetRasterBand(1).SetDescription("from <beside>")
ds.GetRasterBand(1).SetNoDataValue(float(small[0, 2, 2]))
ds = None
note("meta-side.tif")

# 6. Systems, with what GDAL says of their corners and centre in longitude and latitude.
SYSTEMS = {
    "sys-sinusoidal": ("+proj=sinu +lon_0=0 +x_0=0 +y_0=0 +R=6371007.181 +units=m +no_defs", (-9000000, 1e6, 0, 6000000, 0, -1e6)),
    "sys-3031": ("EPSG:3031", (-2000000, 500000, 0, 2000000, 0, -500000)),
    "sys-3995": ("EPSG:3995", (-2000000, 500000, 0, 2000000, 0, -500000)),
    "sys-3035": ("EPSG:3035", (4000000, 10000, 0, 3000000, 0, -10000)),
    "sys-27700": ("EPSG:27700", (400000, 1000, 0, 300000, 0, -1000)),
    "sys-2154": ("EPSG:2154", (600000, 1000, 0, 6600000, 0, -1000)),
    "sys-polar-own": ("+proj=stere +lat_0=-90 +lat_ts=-70 +lon_0=10 +x_0=0 +y_0=0 +ellps=GRS80 +units=m", (-2000000, 500000, 0, 2000000, 0, -500000)),
    "sys-polar-scale": ("+proj=stere +lat_0=90 +lon_0=-45 +k=0.994 +x_0=2000000 +y_0=2000000 +ellps=GRS80 +units=m", (1000000, 300000, 0, 3000000, 0, -300000)),
    "sys-laea-own": ("+proj=laea +lat_0=45 +lon_0=7 +x_0=100 +y_0=200 +ellps=GRS80 +units=m", (-100000, 20000, 0, 100000, 0, -20000)),
    "sys-laea-km": ("+proj=laea +lat_0=45 +lon_0=7 +x_0=100000 +y_0=200000 +ellps=GRS80 +units=km", (0, 20, 0, 300, 0, -20)),
    "sys-albers-own": ("+proj=aea +lat_1=29.5 +lat_2=45.5 +lat_0=23 +lon_0=-96.5 +x_0=10 +y_0=20 +ellps=GRS80 +units=m", (-1000000, 200000, 0, 2000000, 0, -200000)),
    "sys-lcc2-own": ("+proj=lcc +lat_1=33 +lat_2=45 +lat_0=40 +lon_0=-97.5 +x_0=0 +y_0=0 +a=6370000 +b=6370000 +units=m", (-1000000, 200000, 0, 600000, 0, -200000)),
    "sys-lcc1-own": ("+proj=lcc +lat_1=47 +lat_0=47 +lon_0=3 +k_0=0.9999 +x_0=600000 +y_0=200000 +ellps=intl +units=m", (500000, 20000, 0, 300000, 0, -20000)),
    "sys-tmerc-own": ("+proj=tmerc +lat_0=0 +lon_0=11.5 +k=0.9998 +x_0=500000 +y_0=10 +ellps=bessel +units=m", (450000, 10000, 0, 5500000, 0, -10000)),
    "sys-merc-own": ("+proj=merc +lon_0=20 +lat_ts=30 +x_0=5 +y_0=6 +ellps=WGS84 +units=m", (0, 100000, 0, 5000000, 0, -100000)),
    "sys-aeqd-own": ("+proj=aeqd +lat_0=10 +lon_0=20 +x_0=0 +y_0=0 +ellps=WGS84 +units=m", (-500000, 100000, 0, 500000, 0, -100000)),
    "sys-cea-own": ("+proj=cea +lat_ts=30 +lon_0=0 +x_0=0 +y_0=0 +ellps=WGS84 +units=m", (0, 25000, 0, 5000000, 0, -25000)),
    "sys-eqc-own": ("+proj=eqc +lat_ts=40 +lat_0=0 +lon_0=0 +x_0=0 +y_0=0 +ellps=sphere +units=m", (0, 25000, 0, 5000000, 0, -25000)),
    "sys-usft": ("EPSG:2263", (900000, 1000, 0, 200000, 0, -1000)),
    "sys-3857": ("EPSG:3857", (1000000, 1000, 0, 6000000, 0, -1000)),
    "sys-geo-sphere": ("+proj=longlat +R=6371229 +no_defs", (0, 2, 0, 60, 0, -2)),
    "sys-igh": ("+proj=igh +lon_0=0 +x_0=0 +y_0=0 +datum=WGS84 +units=m", (0, 100000, 0, 5000000, 0, -100000)),
}
for name, (text, t) in SYSTEMS.items():
    d = field("uint8", 1, 8, 8)
    write(f"{name}.tif", d, "uint8", ["COMPRESS=DEFLATE"], system=text, transform=t, keep=False)
    for side in [f"{name}.tif.aux.xml"]:
        if os.path.exists(side):
            os.rename(side, side + ".kept")
    ds = gdal.Open(f"{name}.tif")
    s = srs(text)
    wgs = srs("EPSG:4326")
    ct = osr.CoordinateTransformation(s, wgs)
    places = []
    for c, r in [(0, 0), (8, 0), (4, 4), (1.5, 6.25), (8, 8)]:
        x, y = t[0] + c * t[1], t[3] + r * t[5]
        lon, lat, _ = ct.TransformPoint(x, y)
        places.append([x, y, lon, lat])
    EXPECTED[f"{name}.tif"] = {"system": text, "places": places}
    if os.path.exists(f"{name}.tif.aux.xml.kept"):
        os.rename(f"{name}.tif.aux.xml.kept", f"{name}.tif.aux.xml")
        EXPECTED[f"{name}.tif"]["side"] = True

# 7. What is refused by name.
for comp, kind in [("LZMA", "int16"), ("WEBP", "uint8"), ("JPEG", "uint8"), ("CCITTFAX4", "bits")]:
    d = field("uint8", 3 if comp == "WEBP" else 1, 16, 16)
    o = [f"COMPRESS={comp}"] + (["NBITS=1"] if kind == "bits" else [])
    if kind == "bits":
        d = d // 128
    write(f"no-{comp.lower()}.tif", d, "uint8", o, keep=False)
for tag, gt in [("complex", gdal.GDT_CFloat32), ("int64", gdal.GDT_Int64)]:
    ds = gdal.GetDriverByName("GTiff").Create(f"no-{tag}.tif", 4, 4, 1, gt)
    ds.SetGeoTransform((500000, 30, 0, 5500000, 0, -30))
    ds.GetRasterBand(1).WriteArray(np.ones((4, 4), "int64" if tag == "int64" else "complex64"))
    ds = None
write("no-nbits.tif", field("uint16", 1, 16, 16) // 16, "uint16", ["NBITS=12"], keep=False)

# 8. Overviews.
write("overviews.tif", np.round(field("float32", 1, 96, 64) / 20), "float32", ["TILED=YES", "BLOCKXSIZE=32", "BLOCKYSIZE=32", "COMPRESS=DEFLATE"], keep=False)
ds = gdal.Open("overviews.tif", gdal.GA_Update)
ds.BuildOverviews("AVERAGE", [2, 4])
ds = None

with open("expected.json", "w") as out:
    json.dump(EXPECTED, out, separators=(",", ":"))
print(sum(os.path.getsize(n) for n in os.listdir(".")), "bytes,", len(os.listdir(".")), "files")
