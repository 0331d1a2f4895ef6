#!/usr/bin/python3
"""Writes lib/geometry/epsg-table.ts and test/reference/epsg-check.csv.

Run with Debian's python3 beside proj-bin (libproj 9.1, /usr/share/proj/proj.db) and
node; from the project root: /usr/bin/python3 test/reference/epsg-table.py

What it does
- takes every current EPSG geographic 2D system in degrees and every current projected
  system from PROJ's copy of the EPSG dataset;
- writes each as a PROJ string with the ellipsoid as numbers (proj4 silently takes WGS 84
  for an ellipsoid name that it does not know) and without any datum shift;
- keeps a projected system only if proj4 agrees with PROJ to 1 mm, forward and inverse,
  at the centre of its area of use and at four points a quarter of the way in, and if its
  axes x, y are right-handed (azimuths mean nothing in a mirror image);
- marks the datums that lie within 2 m of WGS 84 by the dataset's own transformations.
"""
import ctypes
import json
import math
import os
import sqlite3
import subprocess
import sys

HERE = os.path.dirname(os.path.abspath(__file__))
ROOT = os.path.dirname(os.path.dirname(HERE))
DATABASE = "/usr/share/proj/proj.db"
TOLERANCE = 1e-3  # metres
NEAR = 2.0  # metres: the threshold under which two datums are taken as one
SAMPLE_STEP = 20  # every so many of the kept systems goes into epsg-check.csv
ALWAYS_CHECKED = {
    2056, 21781, 2154, 2157, 29903, 2180, 2193, 27700, 28992, 3006, 3035, 3067, 31467, 32633, 32733, 25832, 26915,
    28355, 7855, 31983, 3395, 3413, 3031, 24378, 2443, 6677, 2227, 3857, 5514, 28404, 31370, 31287, 5880,
}
# Common practice, no source: the dataset gives no transformation to WGS 84 itself for these.
NEAR_BY_PRACTICE = ("China 2000", "International Terrestrial Reference Frame ")

lib = ctypes.CDLL("libproj.so.25")


class Coord(ctypes.Structure):
    _fields_ = [("v", ctypes.c_double * 4)]


for name, result, arguments in [
    ("proj_context_create", ctypes.c_void_p, []),
    ("proj_create_from_database", ctypes.c_void_p,
     [ctypes.c_void_p, ctypes.c_char_p, ctypes.c_char_p, ctypes.c_int, ctypes.c_int, ctypes.c_void_p]),
    ("proj_as_proj_string", ctypes.c_char_p, [ctypes.c_void_p, ctypes.c_void_p, ctypes.c_int, ctypes.c_void_p]),
    ("proj_create_crs_to_crs", ctypes.c_void_p,
     [ctypes.c_void_p, ctypes.c_char_p, ctypes.c_char_p, ctypes.c_void_p]),
    ("proj_normalize_for_visualization", ctypes.c_void_p, [ctypes.c_void_p, ctypes.c_void_p]),
    ("proj_trans", Coord, [ctypes.c_void_p, ctypes.c_int, Coord]),
    ("proj_destroy", ctypes.c_void_p, [ctypes.c_void_p]),
    ("proj_log_level", ctypes.c_int, [ctypes.c_void_p, ctypes.c_int]),
]:
    function = getattr(lib, name)
    function.restype = result
    function.argtypes = arguments

context = lib.proj_context_create()
lib.proj_log_level(context, 0)
db = sqlite3.connect(DATABASE)
units = {code: factor for code, factor in db.execute(
    "select code, conv_factor from unit_of_measure where auth_name = 'EPSG'")}


def number(value):
    """The shortest decimal that reads back as the same double; 12.0 as 12."""
    text = repr(float(value))
    return text[:-2] if text.endswith(".0") else text


def proj_string(code):
    crs = lib.proj_create_from_database(context, b"EPSG", str(code).encode(), 3, 0, None)
    if not crs:
        return None
    text = lib.proj_as_proj_string(context, crs, 1, None)
    text = None if text is None else text.decode()
    lib.proj_destroy(crs)
    return text


US_FOOT = 1200 / 3937


def parameters(text):
    """The projection's own parameters, bare: 'utm zone=33', or None if a shift grid is part of it."""
    kept = []
    # Web Mercator: the sphere of the projection is no datum's ellipsoid.
    own_sphere = "+nadgrids=@null" in text
    for word in text.split():
        key, _, value = word[1:].partition("=")
        if own_sphere and key in ("a", "b"):
            kept.append(word[1:])
            continue
        if key in ("ellps", "datum", "a", "b", "rf", "R", "pm", "no_defs", "type", "towgs84"):
            continue
        if key in ("nadgrids", "geoidgrids", "wktext"):
            if value != "@null" and key != "wktext":
                return None
            continue
        if key == "proj":
            kept.append(value)
        elif key == "units":
            if value == "us-ft":
                kept.append("to_meter=" + number(US_FOOT))
            elif value == "ft":
                kept.append("to_meter=0.3048")
            elif value == "km":
                kept.append("to_meter=1000")
            elif value != "m":
                factor = lib_units.get(value)
                if factor is None:
                    return None
                kept.append("to_meter=" + number(factor))
        elif key in ("x_0", "y_0", "lat_0", "lon_0") and float(value) == 0:
            continue  # the reader puts the zeros back: proj4 makes NaN of a missing y_0
        elif key in ("k", "k_0") and float(value) == 1:
            continue
        else:
            kept.append(key + ("=" + value if value else ""))
    return " ".join(kept)


# PROJ prints a linear unit by name; these are its definitions (proj -lu).
lib_units = {}
for line in subprocess.run(["proj", "-lu"], capture_output=True, text=True, check=True).stdout.splitlines():
    words = line.split()
    if len(words) >= 2:
        if "/" in words[1]:
            top, bottom = words[1].split("/")
            lib_units[words[0]] = float(top) / float(bottom)
        else:
            lib_units[words[0]] = float(words[1])

# ---------------------------------------------------------------- datums
ellipsoids = {}
for code, a, uom, rf, b in db.execute(
        "select code, semi_major_axis, uom_code, inv_flattening, semi_minor_axis from ellipsoid where auth_name = 'EPSG'"):
    a *= units[uom]
    if rf is None and b is not None:
        b *= units[uom]
        rf = 0 if b == a else a / (a - b)
    ellipsoids[code] = (a, rf or 0)
meridians = {}
for code, longitude, uom in db.execute(
        "select code, longitude, uom_code from prime_meridian where auth_name = 'EPSG'"):
    if uom == 9110:  # sexagesimal DDD.MMSSsss
        sign = -1 if longitude < 0 else 1
        text = f"{abs(longitude):.9f}"
        degrees, fraction = text.split(".")
        longitude = sign * (int(degrees) + int(fraction[:2]) / 60 + float(fraction[2:4] + "." + fraction[4:]) / 3600)
    else:
        longitude = math.degrees(longitude * units[uom])
    meridians[code] = longitude
datums = {code: (name, *ellipsoids[ellipsoid], meridians[meridian]) for code, name, ellipsoid, meridian in db.execute(
    "select code, name, ellipsoid_code, prime_meridian_code from geodetic_datum where auth_name = 'EPSG'")}


def extent(table, code):
    """South, north, west, east (east > west) of the area of use, or None."""
    row = db.execute(
        """select e.south_lat, e.north_lat, e.west_lon, e.east_lon from usage u
           join extent e on e.auth_name = u.extent_auth_name and e.code = u.extent_code
           where u.object_table_name = ? and u.object_auth_name = 'EPSG' and u.object_code = ? order by u.code""",
        (table, code)).fetchone()
    if row is None or None in row:
        return None
    south, north, west, east = row
    return south, north, west, east + 360 if east < west else east


def geocentric(longitude, latitude, a, rf):
    f = 1 / rf
    e2 = f * (2 - f)
    n = a / math.sqrt(1 - e2 * math.sin(latitude) ** 2)
    return (n * math.cos(latitude) * math.cos(longitude), n * math.cos(latitude) * math.sin(longitude),
            n * (1 - e2) * math.sin(latitude))


def horizontal_shift(datum, row, area):
    """Metres by which a Helmert transformation to WGS 84 moves the centre of the area, horizontally."""
    method, tx, ty, tz, t_unit, rx, ry, rz, r_unit, scale, s_unit = row
    if "ime" in method.split("(")[0] and "dependent" in method:
        return None
    if not any(word in method for word in ("Geocentric translations", "Position Vector", "Coordinate Frame")):
        return None
    south, north, west, east = area
    lon, lat = math.radians((west + east) / 2), math.radians((south + north) / 2)
    _, a, rf, _ = datums[datum]
    x, y, z = geocentric(lon, lat, a, rf)
    tx, ty, tz = (v * units[t_unit] for v in (tx, ty, tz))
    if rx is None:
        rx = ry = rz = ds = 0.0
    else:
        sign = -1 if "Coordinate Frame" in method else 1
        rx, ry, rz = (sign * v * units[r_unit] for v in (rx, ry, rz))
        ds = scale * units[s_unit]
    m = 1 + ds
    moved = (tx + m * (x - rz * y + ry * z), ty + m * (rz * x + y - rx * z), tz + m * (-ry * x + rx * y + z))
    home = geocentric(lon, lat, 6378137.0, 298.257223563)
    dx, dy, dz = (p - q for p, q in zip(moved, home))
    east_part = -math.sin(lon) * dx + math.cos(lon) * dy
    north_part = (-math.sin(lat) * math.cos(lon) * dx - math.sin(lat) * math.sin(lon) * dy + math.cos(lat) * dz)
    return math.hypot(east_part, north_part)


shifts = {}
for datum, table, code, accuracy, *row in db.execute(
        """select g.datum_code, 'geodetic_crs', g.code, h.accuracy, h.method_name, h.tx, h.ty, h.tz,
                  h.translation_uom_code, h.rx, h.ry, h.rz, h.rotation_uom_code, h.scale_difference,
                  h.scale_difference_uom_code
           from helmert_transformation h
           join geodetic_crs g on g.auth_name = 'EPSG' and g.code = h.source_crs_code
           where h.auth_name = 'EPSG' and h.target_crs_auth_name = 'EPSG' and h.deprecated = 0
             and h.target_crs_code in (4326, 4978, 4979)"""):
    area = extent(table, code)
    if area is None:
        continue
    shift = horizontal_shift(datum, row, area)
    if shift is not None:
        shifts.setdefault(datum, []).append((shift, accuracy or 0))
near = {6326}
for datum, found in shifts.items():
    # Null transformations are stated for many datums; one that is better than 2 m overrules them.
    if min(s for s, _ in found) < NEAR and all(s < NEAR for s, accuracy in found if accuracy <= 2):
        near.add(datum)
for ensemble, member in db.execute(
        "select ensemble_code, member_code from geodetic_datum_ensemble_member where ensemble_auth_name = 'EPSG'"):
    if ensemble in near:
        near.add(member)
for code, (name, *_rest) in datums.items():
    if name.startswith(NEAR_BY_PRACTICE):
        near.add(code)

# ---------------------------------------------------------------- geographic systems
DEGREES = {9102, 9122}
geographic = {}
dropped = {}
for code, name, datum, unit in db.execute(
        """select g.code, g.name, g.datum_code, (select a.uom_code from axis a
             where a.coordinate_system_auth_name = g.coordinate_system_auth_name
               and a.coordinate_system_code = g.coordinate_system_code limit 1)
           from geodetic_crs g where g.auth_name = 'EPSG' and g.type = 'geographic 2D' and g.deprecated = 0
           order by cast(g.code as integer)"""):
    if datum not in datums:
        continue
    geographic[code] = (name, datum, unit in DEGREES)

# ---------------------------------------------------------------- projected systems
candidates = []
for code, name, base in db.execute(
        """select code, name, geodetic_crs_code from projected_crs
           where auth_name = 'EPSG' and deprecated = 0 order by cast(code as integer)"""):
    if base not in geographic:
        dropped[code] = "base is not a geographic 2D system"
        continue
    text = proj_string(code)
    found = None if text is None else parameters(text)
    if found is None:
        dropped[code] = "PROJ gives no plain projection"
        continue
    area = extent("projected_crs", code)
    if area is None:
        dropped[code] = "no area of use"
        continue
    south, north, west, east = area
    transformation = lib.proj_create_crs_to_crs(context, f"EPSG:{base}".encode(), f"EPSG:{code}".encode(), None)
    turned = transformation and lib.proj_normalize_for_visualization(context, transformation)
    if not turned:
        dropped[code] = "PROJ makes no transformation"
        continue
    # The base system may count in grads; PROJ then takes grads.
    angle = 1.0 if geographic[base][2] else 400 / 360
    points = []
    for u, v in ((0.5, 0.5), (0.25, 0.25), (0.75, 0.25), (0.25, 0.75), (0.75, 0.75)):
        lat = south + v * (north - south)
        # Longitudes of the area are from Greenwich, those of the base system from its own meridian.
        lon = west + u * (east - west) - datums[geographic[base][1]][3]
        lon = (lon + 180) % 360 - 180
        there = lib.proj_trans(turned, 1, Coord((lon * angle, lat * angle, 0.0, math.inf)))
        if math.isfinite(there.v[0]) and math.isfinite(there.v[1]):
            points.append((lon, lat, there.v[0], there.v[1]))
        elif u == 0.5:
            break
    lib.proj_destroy(turned)
    lib.proj_destroy(transformation)
    if not points:
        dropped[code] = "PROJ has no value at the centre of the area"
        continue
    datum = geographic[base][1]
    _, a, rf, meridian = datums[datum]
    shape = f"+a={number(a)} " + (f"+rf={number(rf)}" if rf else f"+b={number(a)}")
    prime = f" +pm={number(meridian)}" if meridian else ""
    words = ("proj=" + found).split()
    for key in ("lat_0", "lon_0", "x_0", "y_0"):
        if not any(word.startswith(key + "=") for word in words):
            words.append(key + "=0")
    if not any(word.startswith("a=") for word in words):
        words += shape.replace("+", "").split()
    definition = " ".join("+" + word for word in words) + f"{prime} +no_defs"
    candidates.append({"code": code, "name": name, "base": base, "parameters": found, "definition": definition,
                       "geographic": f"+proj=longlat {shape}{prime} +no_defs", "points": points})

print(f"{len(candidates)} candidates of {len(candidates) + len(dropped)}", file=sys.stderr)
answer = subprocess.run(["node", os.path.join(HERE, "epsg-agree.mjs")], input=json.dumps(candidates), text=True,
                        stdout=subprocess.PIPE, check=True, cwd=ROOT)
kept = []
for candidate, verdict in zip(candidates, json.loads(answer.stdout)):
    if verdict["problem"] is not None:
        dropped[candidate["code"]] = verdict["problem"]
    elif not verdict["rightHanded"]:
        dropped[candidate["code"]] = "axes are left-handed"
    elif not verdict["error"] <= TOLERANCE:
        dropped[candidate["code"]] = "differs from PROJ by more than 1 mm"
    else:
        kept.append(candidate)

reasons = {}
for code, reason in dropped.items():
    reasons.setdefault(reason, []).append(code)
for reason, codes in sorted(reasons.items()):
    print(f"{len(codes):5d} dropped: {reason}: {' '.join(map(str, codes[:12]))}", file=sys.stderr)
print(f"{len(kept)} projected systems kept", file=sys.stderr)

# ---------------------------------------------------------------- output
needed_datums = sorted({row[1] for row in geographic.values()}, key=int)
version = db.execute("select value from metadata where key = 'EPSG.VERSION'").fetchone()[0]
release = db.execute("select value from metadata where key = 'PROJ.VERSION'").fetchone()[0]


def clean(text):
    assert "|" not in text and "`" not in text and "\\" not in text and "${" not in text, text
    return text


datum_rows = [f"{code}|{clean(datums[code][0])}|{number(datums[code][1])}|{number(datums[code][2])}|"
              f"{number(datums[code][3]) if datums[code][3] else ''}|{'near' if code in near else ''}"
              for code in needed_datums]
rows = [f"{code}|{clean(name)}|{datum}|{'' if in_degrees else 'grads'}"
        for code, (name, datum, in_degrees) in geographic.items()]
projected_rows = [f"{c['code']}|{clean(c['name'])}|{c['base']}|{clean(c['parameters'])}" for c in kept]
refused = {}
for code, reason in dropped.items():
    refused.setdefault(reason, []).append(int(code))
with open(os.path.join(ROOT, "lib/geometry/epsg-table.ts"), "w", encoding="utf-8") as out:
    out.write(f"""/**
 * Coordinate systems by EPSG code. Written by test/reference/epsg-table.py: do not edit.
 *
 * Source: EPSG dataset {version} as shipped with PROJ {release}. Kept are the systems where
 * proj4 agrees with PROJ to 1 mm over the area of use, as projections only: no definition
 * here shifts a datum. The tables are text, so that importing them costs next to
 * nothing; a code is looked up by a search.
 */

/** Datum code | name | semi-major axis, m | inverse flattening, 0 for a sphere | prime meridian, degrees, if not Greenwich | "near" if within 2 m of WGS 84. */
export const DATUMS = `
""")
    out.write("\n".join(datum_rows))
    out.write("""
`;

/** Geographic code | name | datum code | "grads" if it does not count in degrees. */
export const GEOGRAPHIC = `
""")
    out.write("\n".join(rows))
    out.write("""
`;

/** Projected code | name | geographic code | projection and parameters in PROJ's words, metres unless to_meter. */
export const PROJECTED = `
""")
    out.write("\n".join(projected_rows))
    out.write("""
`;

/** Why a projected system of the dataset is not in the table | its codes. */
export const REFUSED = `
""")
    out.write("\n".join(f"{reason}|{' '.join(str(c) for c in sorted(codes))}" for reason, codes in sorted(refused.items())))
    out.write("\n`;\n")

sample = [c for i, c in enumerate(kept) if i % SAMPLE_STEP == 0 or int(c["code"]) in ALWAYS_CHECKED]
with open(os.path.join(HERE, "epsg-check.csv"), "w", encoding="utf-8") as out:
    out.write(f"# PROJ {release}, EPSG {version}: x, y of a point, projection only. Written by epsg-table.py.\n")
    out.write("code,longitude,latitude,x,y\n")
    for c in sample:
        for lon, lat, x, y in c["points"][:2]:
            out.write(f"{c['code']},{lon!r},{lat!r},{x!r},{y!r}\n")
