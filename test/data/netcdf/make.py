"""Makes the small NetCDF files of this folder and expected.json: what the Python binding netCDF4 reads of each.

Run with Debian's python3-netcdf4, python3-h5py and python3-gdal:  /usr/bin/python3 make.py
Expected values: raw numbers masked by netCDF4 (its own reading of fill, missing and valid attributes), times scale plus
offset in double precision. Positions of projected cells are PROJ's, through GDAL.
"""

import json
import os

import h5py
import netCDF4
import numpy as np
from osgeo import osr

osr.UseExceptions()
os.chdir(os.path.dirname(os.path.abspath(__file__)))
for name in os.listdir("."):
    if name != "make.py":
        os.remove(name)

T, NY, NX = 4, 6, 8
EXPECTED = {}


def field(kind, shape, seed=3):
    rng = np.random.default_rng(seed)
    if kind.startswith("f"):
        return (rng.integers(-4000, 4000, shape) / 16 + rng.random(shape)).astype(kind)
    info = np.iinfo(kind)
    low, high = max(info.min, -(2**52)), min(info.max, 2**52)
    edge = 2 if info.bits == 8 else 300
    return rng.integers(low + edge, high - edge, shape, dtype="int64").astype(kind)


def axes(d, lats=None, lons=None, bounds=False, time="days since 2001-01-01", times=None):
    lats = np.linspace(52.5, 50, NY) if lats is None else lats
    lons = np.linspace(7, 10.5, NX) if lons is None else lons
    times = [15, 45, 74, 105] if times is None else times
    d.createDimension("time", None)
    d.createDimension("lat", NY)
    d.createDimension("lon", NX)
    t = d.createVariable("time", "f8", ("time",))
    t.units, t.calendar, t.standard_name = time, "standard", "time"
    t[:] = times
    y = d.createVariable("lat", "f8", ("lat",))
    y.units = "degrees_north"
    y[:] = lats
    x = d.createVariable("lon", "f8", ("lon",))
    x.units = "degrees_east"
    x[:] = lons
    return t, y, x


def expect(path, name, **more):
    """Values [time][lat][lon] in that order, whatever the file's; null is missing."""
    with netCDF4.Dataset(path) as d:
        v = d[name]
        v.set_auto_scale(False)
        v.set_always_mask(True)
        data = v[:]
        if getattr(v, "_Unsigned", "false") == "true":
            data = np.ma.array(data.data.view(data.dtype.str.replace("i", "u")), mask=data.mask)
        scale = float(getattr(v, "scale_factor", 1))
        offset = float(getattr(v, "add_offset", 0))
        dims = list(v.dimensions)
        order = [dims.index(k) for k in ("time", "lat", "lon")]
        values = np.ma.filled(data.astype("f8") * scale + offset, np.nan)
        values = np.transpose(values, order + [i for i in range(len(dims)) if i not in order])
    out = [None if np.isnan(one) else float(one) for one in values.reshape(-1)]
    EXPECTED[path] = {"variable": name, "values": out, **more}


def put(v, data):
    v.set_auto_maskandscale(False)
    v[:] = data


# The same content in every format; two record variables, the other of a size that is no multiple of four.
for path, form in {
    "cdf1.nc": "NETCDF3_CLASSIC",
    "cdf2.nc": "NETCDF3_64BIT_OFFSET",
    "cdf5.nc": "NETCDF3_64BIT_DATA",
    "nc4.nc": "NETCDF4",
    "nc4-classic.nc": "NETCDF4_CLASSIC",
}.items():
    with netCDF4.Dataset(path, "w", format=form) as d:
        axes(d)
        d.createDimension("odd", 3)
        o = d.createVariable("odd", "i1", ("time", "odd"))
        v = d.createVariable("rain", "i2", ("time", "lat", "lon"), fill_value=-9999)
        v.scale_factor, v.add_offset, v.units = 0.1, 500.0, "mm"
        v.cell_methods = "time: sum (interval: 1 day) area: mean"
        data = field("i2", (T, NY, NX))
        data[1, 2, 3] = -9999
        put(v, data)
        o[:] = np.arange(3 * T).reshape(T, 3)
    expect(path, "rain")

# One record variable alone is packed without padding between its records.
with netCDF4.Dataset("one-record.nc", "w", format="NETCDF3_CLASSIC") as d:
    d.createDimension("time", None)
    for k, n in (("lat", NY), ("lon", 7)):
        d.createDimension(k, n)
        c = d.createVariable(k, "f4", (k,))
        c.units = "degrees_north" if k == "lat" else "degrees_east"
        c[:] = np.arange(n)
    v = d.createVariable("x", "i1", ("time", "lat", "lon"))
    v[:] = np.arange(T * NY * 7).reshape(T, NY, 7) % 100
expect("one-record.nc", "x")

# Every type.
for kind in ("i1", "u1", "i2", "u2", "i4", "u4", "i8", "u8", "f4", "f8"):
    for path, form in ((f"type-{kind}.nc", "NETCDF4"), (f"type-{kind}-cdf5.nc", "NETCDF3_64BIT_DATA")):
        with netCDF4.Dataset(path, "w", format=form) as d:
            axes(d)
            put(d.createVariable("x", kind, ("time", "lat", "lon")), field(kind, (T, NY, NX)))
        expect(path, "x")

# Storage of NetCDF-4.
for path, options in {
    "big-endian.nc": {"endian": "big"},
    "chunks-map.nc": {"zlib": True, "shuffle": True, "chunksizes": (1, NY, NX)},
    "chunks-time.nc": {"zlib": True, "shuffle": True, "chunksizes": (T, 2, 3)},
    "chunks-odd.nc": {"zlib": True, "shuffle": False, "fletcher32": True, "chunksizes": (3, 4, 5)},
    "contiguous.nc": {"contiguous": True},
}.items():
    with netCDF4.Dataset(path, "w") as d:
        axes(d)
        dims = ("time", "lat", "lon")
        if path == "contiguous.nc":
            d.createDimension("steps", T)
            dims = ("steps", "lat", "lon")
            s = d.createVariable("steps", "i8", ("steps",))
            s.units = "hours since 2001-01-16 00:00"
            s[:] = [0, 24 * 31, 24 * 59, 24 * 90]
        put(d.createVariable("x", "f4", dims, **options), field("f4", (T, NY, NX)))
    if path == "contiguous.nc":
        values = field("f4", (T, NY, NX)).astype("f8").reshape(-1)
        EXPECTED[path] = {"variable": "x", "values": [float(one) for one in values]}
    else:
        expect(path, "x")

# A hole: chunks that were never written hold the fill value.
with netCDF4.Dataset("hole.nc", "w") as d:
    axes(d)
    v = d.createVariable("x", "f4", ("time", "lat", "lon"), chunksizes=(1, 3, 4), zlib=True)
    v[0] = field("f4", (NY, NX))
    v[3, 0:3, 0:4] = 7
expect("hole.nc", "x")

# Orders of dimensions, in both formats.
for dims in (("lat", "lon", "time"), ("lon", "lat", "time"), ("time", "lon", "lat"), ("lat", "time", "lon")):
    for path, form in ((f"order-{'-'.join(dims)}.nc", "NETCDF4"), (f"order-{'-'.join(dims)}-cdf.nc", "NETCDF3_CLASSIC")):
        with netCDF4.Dataset(path, "w", format=form) as d:
            d.createDimension("time", T)
            d.createDimension("lat", NY)
            d.createDimension("lon", NX)
            for k, unit, at in (
                ("time", "days since 2001-01-01", [15, 45, 74, 105]),
                ("lat", "degrees_north", np.linspace(52.5, 50, NY)),
                ("lon", "degrees_east", np.linspace(7, 10.5, NX)),
            ):
                c = d.createVariable(k, "f8", (k,))
                c.units = unit
                c[:] = at
            full = field("f4", (T, NY, NX))
            put(d.createVariable("x", "f4", dims), np.transpose(full, [("time", "lat", "lon").index(k) for k in dims]))
        expect(path, "x")

# Axes: 0 to 360 across Greenwich, rising latitudes, longitudes that jump at 180.
for path, lats, lons in (
    ("lon-360.nc", np.linspace(50, 52.5, NY), np.array([355, 357, 359, 361, 363, 365, 367, 369.0])),
    ("lon-jump.nc", np.linspace(50, 52.5, NY), np.array([174, 176, 178, 180, -178, -176, -174, -172.0])),
    ("lon-falling.nc", np.linspace(52.5, 50, NY), np.linspace(10.5, 7, NX)),
):
    with netCDF4.Dataset(path, "w") as d:
        axes(d, lats, lons)
        put(d.createVariable("x", "f4", ("time", "lat", "lon")), field("f4", (T, NY, NX)))
    expect(path, "x", lats=list(map(float, lats)), lons=[float((one + 180) % 360 - 180) for one in lons])

# Bounds win: coordinates stand at the south-west corners, times at the ends of their months.
with netCDF4.Dataset("bounds.nc", "w") as d:
    t, y, x = axes(d, np.linspace(50, 52.5, NY), np.linspace(7, 10.5, NX), times=[31, 59, 90, 120])
    d.createDimension("nv", 2)
    t.bounds, y.bounds, x.bounds = "time_bnds", "lat_bnds", "lon_bnds"
    d.createVariable("time_bnds", "f8", ("time", "nv"))[:] = [[0, 31], [31, 59], [59, 90], [90, 120]]
    d.createVariable("lat_bnds", "f8", ("lat", "nv"))[:] = np.c_[y[:], y[:] + 0.5]
    d.createVariable("lon_bnds", "f8", ("lon", "nv"))[:] = np.c_[x[:], x[:] + 0.5]
    put(d.createVariable("x", "f4", ("time", "lat", "lon")), field("f4", (T, NY, NX)))
expect("bounds.nc", "x", lats=[float(50.25 + 0.5 * i) for i in range(NY)], lons=[float(7.25 + 0.5 * i) for i in range(NX)])

# Packing and missing values.
def packed(path, kind, raw, fill=None, **attributes):
    with netCDF4.Dataset(path, "w") as d:
        axes(d)
        v = d.createVariable("x", kind, ("time", "lat", "lon"), fill_value=fill)
        v.setncatts(attributes)
        put(v, raw)
    expect(path, "x")


raw = field("i2", (T, NY, NX)) // 40
raw[0, 0, :4] = [-99, -98, -97, -900]
packed("pack-missing.nc", "i2", raw, fill=-99, missing_value=np.array([-98, -97], "i2"), scale_factor=0.01, add_offset=273.15)
packed("pack-range.nc", "i2", raw, valid_range=np.array([-300, 400], "i2"), scale_factor=np.float32(0.01))
packed("pack-min-max.nc", "i2", raw, valid_min=np.int16(-300), valid_max=np.int16(400), scale_factor=0.5, add_offset=-2.5)
packed("pack-unsigned.nc", "i1", field("i1", (T, NY, NX)), fill=-1, _Unsigned="true", scale_factor=0.004)
full = field("f4", (T, NY, NX))
full[2, 1, 1:4] = [netCDF4.default_fillvals["f4"], 1e20, np.nan]
packed("pack-default-fill.nc", "f4", full, missing_value=np.float32(1e20))
# What netCDF4 does not do: a valid range in the type of the unpacked values is of those (NetCDF Users Guide, appendix A).
with netCDF4.Dataset("pack-range-unpacked.nc", "w") as d:
    axes(d)
    v = d.createVariable("x", "i2", ("time", "lat", "lon"))
    v.setncatts({"scale_factor": 0.01, "add_offset": 10.0, "valid_range": np.array([8.0, 13.0])})
    put(v, raw)
values = raw.astype("f8") * 0.01 + 10.0
EXPECTED["pack-range-unpacked.nc"] = {
    "variable": "x",
    "values": [float(one) if 8 <= one <= 13 else None for one in values.reshape(-1)],
}

# Level and member.
with netCDF4.Dataset("level-member.nc", "w") as d:
    axes(d)
    d.createDimension("level", 3)
    d.createDimension("member", 2)
    z = d.createVariable("level", "f4", ("level",))
    z.units, z.positive = "hPa", "down"
    z[:] = [1000, 850, 500.5]
    m = d.createVariable("member", str, ("member",))
    m[0], m[1] = "r1i1p1f1", "r2i1p1f1"
    put(d.createVariable("x", "f4", ("member", "time", "level", "lat", "lon"), chunksizes=(1, 2, 2, 3, 4), zlib=True), field("f4", (2, T, 3, NY, NX)))
EXPECTED["level-member.nc"] = {
    "variable": "x",
    "values": [float(one) for one in field("f4", (2, T, 3, NY, NX))[1, :, 1].astype("f8").reshape(-1)],
}

# Projected grids; positions of the cells' middles by PROJ.
def projected(path, proj, attributes, xs, ys, wkt=False, units="m"):
    s, g = osr.SpatialReference(), osr.SpatialReference()
    s.ImportFromProj4(proj)
    g.ImportFromEPSG(4326)
    g.SetAxisMappingStrategy(osr.OAMS_TRADITIONAL_GIS_ORDER)
    turn = osr.CoordinateTransformation(s, g)
    with netCDF4.Dataset(path, "w") as d:
        d.createDimension("time", None)
        d.createDimension("y", NY)
        d.createDimension("x", NX)
        t = d.createVariable("time", "f8", ("time",))
        t.units = "days since 2001-01-01"
        t[:] = [15, 45, 74, 105]
        for k, at in (("x", xs), ("y", ys)):
            c = d.createVariable(k, "f8", (k,))
            c.standard_name, c.units = f"projection_{k}_coordinate", units
            c[:] = at / (1000 if units == "km" else 1)
        crs = d.createVariable("crs", "i4", ())
        crs.setncatts(attributes)
        if wkt:
            crs.crs_wkt = s.ExportToWkt()
        v = d.createVariable("v", "f4", ("time", "y", "x"))
        v.grid_mapping = "crs"
        put(v, field("f4", (T, NY, NX)))
    EXPECTED[path] = {
        "variable": "v",
        "values": [float(one) for one in field("f4", (T, NY, NX)).astype("f8").reshape(-1)],
        "cells": [list(turn.TransformPoint(float(x), float(y))[:2]) for y in ys for x in xs],
    }


XS, YS = np.linspace(-7000, 7000, NX), np.linspace(5000, -5000, NY)
GRS80 = {"semi_major_axis": 6378137.0, "inverse_flattening": 298.257222101}
projected(
    "crs-laea.nc",
    "+proj=laea +lat_0=52 +lon_0=10 +x_0=4321000 +y_0=3210000 +ellps=GRS80 +units=m",
    {"grid_mapping_name": "lambert_azimuthal_equal_area", "latitude_of_projection_origin": 52.0, "longitude_of_projection_origin": 10.0, "false_easting": 4321000.0, "false_northing": 3210000.0, **GRS80},
    XS + 4321000,
    YS + 3110000,
)
projected(
    "crs-lcc-km.nc",
    "+proj=lcc +lat_1=30 +lat_2=60 +lat_0=48 +lon_0=10 +a=6371229 +b=6371229 +units=m",
    {"grid_mapping_name": "lambert_conformal_conic", "standard_parallel": np.array([30.0, 60.0]), "latitude_of_projection_origin": 48.0, "longitude_of_central_meridian": 10.0, "earth_radius": 6371229.0},
    XS,
    YS,
    units="km",
)
projected(
    "crs-polar.nc",
    "+proj=stere +lat_0=90 +lat_ts=60 +lon_0=0 +ellps=WGS84 +units=m",
    {"grid_mapping_name": "polar_stereographic", "latitude_of_projection_origin": 90.0, "straight_vertical_longitude_from_pole": 0.0, "standard_parallel": 60.0, "semi_major_axis": 6378137.0, "inverse_flattening": 298.257223563},
    XS + 500000,
    YS - 3000000,
)
projected("crs-wkt.nc", "+proj=utm +zone=32 +ellps=WGS84 +units=m", {"spatial_note": "only text"}, XS + 500000, YS + 5500000, wkt=True)
projected(
    "crs-disagree.nc",
    "+proj=tmerc +lat_0=0 +lon_0=9 +k=0.9996 +x_0=500000 +y_0=0 +ellps=WGS84 +units=m",
    {"grid_mapping_name": "transverse_mercator", "scale_factor_at_central_meridian": 0.9996, "latitude_of_projection_origin": 0.0, "longitude_of_central_meridian": 9.0, "false_easting": 500000.0, "false_northing": 0.0, "crs_wkt": (lambda s: (s.ImportFromEPSG(32633), s.ExportToWkt())[1])(osr.SpatialReference())},
    XS + 500000,
    YS + 5500000,
)

# A rotated pole, as regional climate models use; two-dimensional latitudes and longitudes stand beside it.
s, g = osr.SpatialReference(), osr.SpatialReference()
s.ImportFromProj4("+proj=ob_tran +o_proj=longlat +o_lat_p=39.25 +o_lon_p=0 +lon_0=18 +a=6378137 +b=6378137 +to_meter=0.0174532925199433")
g.ImportFromProj4("+proj=longlat +a=6378137 +b=6378137")
turn = osr.CoordinateTransformation(s, g)
rlon, rlat = np.linspace(-8.0, -1.0, NX), np.linspace(-2.5, 2.5, NY)
cells = [list(turn.TransformPoint(float(x), float(y))[:2]) for y in rlat for x in rlon]
for path, rotated in (("rotated.nc", True), ("two-dimensional.nc", False)):
    with netCDF4.Dataset(path, "w") as d:
        d.createDimension("time", None)
        ky, kx = ("rlat", "rlon") if rotated else ("j", "i")
        d.createDimension(ky, NY)
        d.createDimension(kx, NX)
        t = d.createVariable("time", "f8", ("time",))
        t.units = "days since 2001-01-01"
        t[:] = [15, 45, 74, 105]
        for k, unit, n in (("lat", "degrees_north", 1), ("lon", "degrees_east", 0)):
            c = d.createVariable(k, "f8", (ky, kx))
            c.units = unit
            c[:] = np.array([one[n] for one in cells]).reshape(NY, NX)
        v = d.createVariable("tas", "f4", ("time", ky, kx))
        v.coordinates = "lat lon"
        if rotated:
            for k, name, at in (("rlat", "grid_latitude", rlat), ("rlon", "grid_longitude", rlon)):
                c = d.createVariable(k, "f8", (k,))
                c.standard_name, c.units = name, "degrees"
                c[:] = at
            r = d.createVariable("rotated_pole", "S1", ())
            r.setncatts({"grid_mapping_name": "rotated_latitude_longitude", "grid_north_pole_latitude": 39.25, "grid_north_pole_longitude": -162.0})
            v.grid_mapping = "rotated_pole"
        put(v, field("f4", (T, NY, NX)))
EXPECTED["rotated.nc"] = {
    "variable": "tas",
    "values": [float(one) for one in field("f4", (T, NY, NX)).astype("f8").reshape(-1)],
    "cells": cells,
}

# Quality: bits 0 and 1 tell goodness (0 good, 1 fair, 2 poor, 3 none), bit 2 cloud, bits 6 and 7 snow.
quality = np.random.default_rng(5).integers(0, 256, (T, NY, NX)).astype("u1")
with netCDF4.Dataset("quality.nc", "w") as d:
    axes(d)
    put(d.createVariable("green", "f4", ("time", "lat", "lon")), field("f4", (T, NY, NX)))
    put(d.createVariable("qa", "u1", ("time", "lat", "lon"), chunksizes=(2, 4, 5), zlib=True), quality)
passes = ((quality & 3) <= 1) & ((quality >> 2 & 1) == 0)
EXPECTED["quality.nc"] = {
    "variable": "green",
    "values": [float(v) if ok else None for v, ok in zip(field("f4", (T, NY, NX)).astype("f8").reshape(-1), passes.reshape(-1))],
}

# Another writer of HDF5: no housekeeping of NetCDF-4, only dimension scales; one variable packed by a filter HDF5 lacks.
with h5py.File("h5py.nc", "w") as d:
    d["lat"], d["lon"], d["time"] = np.linspace(52.5, 50, NY), np.linspace(7, 10.5, NX), np.array([15, 45, 74, 105], "i8")
    d["lat"].attrs["units"], d["lon"].attrs["units"] = "degrees_north", "degrees_east"
    d["time"].attrs["units"] = "days since 2001-01-01"
    for k in ("time", "lat", "lon"):
        d[k].make_scale(k)
    for name, pack in (("x", "gzip"), ("y", "lzf")):
        v = d.create_dataset(name, data=field("f4", (T, NY, NX)), chunks=(2, 3, 4), compression=pack)
        for i, k in enumerate(("time", "lat", "lon")):
            v.dims[i].attach_scale(d[k])
EXPECTED["h5py.nc"] = {
    "variable": "x",
    "values": [float(one) for one in field("f4", (T, NY, NX)).astype("f8").reshape(-1)],
}

# Along a dimension without a limit each variable of a NetCDF-4 file has a length of its own: values lag behind times.
with netCDF4.Dataset("lagging.nc", "w") as d:
    d.createDimension("time", None)
    d.createDimension("lat", 2)
    d.createDimension("lon", 2)
    for k, unit, at in (("time", "days since 2001-01-01", range(5)), ("lat", "degrees_north", (51, 50)), ("lon", "degrees_east", (7, 8))):
        c = d.createVariable(k, "f8", (k,))
        c.units = unit
        c[:] = list(at)
    d.createVariable("x", "f4", ("time", "lat", "lon"))[0:3] = np.ones((3, 2, 2))

with open("expected.json", "w") as out:
    json.dump(EXPECTED, out)
