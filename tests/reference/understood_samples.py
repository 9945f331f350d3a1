"""One small file, or a few that belong together, for each format and trap of tables as people have them, with what a
person who looks at them says that they hold.

    python3 reference/understood_samples.py        (from tests/; needs numpy and scipy)

Writes data/understood/*. All tables tell of one invented watch: twenty-one electrodes and three maps of
../example_maps/watch_*.tsv, moved so that the head's centre is near the origin. `outcomes.json` begins with that watch;
each sample says only how it differs from it. What is expected is written here by hand, beside the text that it is
expected of, never copied from what the program makes of it.

Tables of the Brain Imaging Data Structure follow its specification 1.10.0 (bids-specification.readthedocs.io,
"Electroencephalography": Channels description, Electrodes description, Coordinate System JSON).
"""

import io
import json
import math
import zipfile
from dataclasses import dataclass, field, replace
from pathlib import Path

import numpy as np

from table_samples import ByHand, DATA, STAMP, cell, mat, npy

FOLDER = DATA / "understood"
WATCH = DATA.parent.parent / "example_maps"
SAMPLES = []
WRITTEN = {}

# --- The watch -------------------------------------------------------------------------------------------------------

LABELS = "Fp1 Fpz Fp2 F7 F3 Fz F4 F8 T7 C3 Cz C4 T8 P7 P3 Pz P4 P8 O1 Oz O2".split()
NAMES = ["lamp", "swell", "fog"]
CENTRE = (1.3, 7.2, 42.7)


def rows_of(name):
    head, *rows = [line.split("\t") for line in (WATCH / name).read_text().splitlines()]
    return head, {row[0]: row[1:] for row in rows}


_, placed = rows_of("watch_electrodes.tsv")
heads, valued = rows_of("watch_maps.tsv")
# Tenths of a millimetre and hundredths of a microvolt, as text: every table writes the same digits.
PLACES = {label: [f"{float(at) - move:.1f}" for at, move in zip(placed[label], CENTRE)] for label in LABELS}
VALUES = {label: [valued[label][heads.index(name) - 1] for name in NAMES] for label in LABELS}
LANDMARKS = {"NAS": (1.2, 91.5, -36.0), "LPA": (-73.8, 1.1, -33.4), "RPA": (75.1, -0.6, -32.8)}


def numbers(table):
    return np.array([[float(text) for text in table[label]] for label in LABELS])


XYZ, UV = numbers(PLACES), numbers(VALUES)

# --- Files and what is said about them -------------------------------------------------------------------------------


@dataclass
class File:
    """A file and what its card should say. A pair is a value and how it came about."""

    name: str
    content: bytes
    role: str
    format: str = "delimited-text"
    encoding: tuple = ("utf-8", "found")
    delimiter: tuple = ("tab", "found")
    decimal: tuple = ("point", "found")
    header: bool = True
    rows: int = 21
    columns: int = 4
    label: int = 1
    part: str = None
    passed_over: tuple = ()
    choices: dict = field(default_factory=dict)
    # Where a file has several parts.
    parts: tuple = ()

    def facts(self):
        if self.parts:
            return [fact for part in self.parts for fact in replace(part, name=self.name, format=self.format, encoding=self.encoding).facts()]
        return [{"name": self.name, "part": self.part, "role": self.role, "format": self.format,
                 "encoding": self.encoding and self.encoding[0], "rows": self.rows, "columns": self.columns,
                 "header": self.header, "passed_over": list(self.passed_over)}]

    def own_choices(self, maps):
        """Choices that are about this file alone."""
        own = {"role": [self.role, "found"]}
        if self.encoding:
            own["encoding"] = list(self.encoding)
        if self.format == "delimited-text":
            own["delimiter"] = list(self.delimiter)
        if self.decimal and self.role != "coordinates":
            own["decimal"] = list(self.decimal)
        if maps and self.label:
            own["label"] = [self.label, "found"]
        own.update(self.choices)
        return {f"{self.name}: {key}": value for key, value in own.items() if value}


def text(rows, mark="\t", end="\n"):
    return end.join(mark.join(row) for row in rows) + end


def map_rows(head="label", names=NAMES, labels=LABELS):
    rows = [[label, *VALUES[label]] for label in labels]
    return [[head, *names], *rows] if head is not None else rows


def place_rows(head=("label", "x", "y", "z"), labels=LABELS, change=lambda xyz: xyz, digits=None):
    def written(label):
        xyz = change([float(text) for text in PLACES[label]])
        form = ".10g" if digits is None else f".{digits}f"
        return [label, *(format(value, form) for value in xyz)]
    return [list(head), *map(written, labels)] if head else [written(label) for label in labels]


def file(name, content, role, **facts):
    if isinstance(content, str):
        content = content.encode(facts.pop("write_as", "utf-8"))
    assert name not in WRITTEN or WRITTEN[name] == content, name
    WRITTEN[name] = content
    return File(name, content, role, **facts)


def electrodes_file(name, content, **facts):
    return file(name, content, "electrodes", **facts)


def maps_file(name, content, **facts):
    return file(name, content, "maps", **facts)


ELECTRODES = electrodes_file("electrodes.tsv", text(place_rows()))
MAPS = maps_file("maps.tsv", text(map_rows()))

NOTES = ["average-referenced", "axes-found", "electrodes-projected", "unit-recognised", "unit-relative"]
STANDARD = ["average-referenced", "standard-positions", "unit-relative"]


def sample(what, *files, electrodes=ELECTRODES, xyz=(1, 2, 3, 4), angles=None, given=None, orientation=("channels-in-rows", "found"),
           maps_are=("maps", "assumed"), columns_are=("unrelated", "assumed"), units=("mm", "found"),
           axes=("right-front-up", "found"), choices=None, notes=(), without=(), settings=None, **told):
    """A sample whose maps and electrodes are read. `electrodes` is added to the files; `None` where there are none."""
    files = [*files, *([electrodes] if electrodes else [])]
    maps = next(one for one in files if one.role in ("maps", "electrodes-and-maps") or one.parts)
    positions = told.setdefault("positions", "measured" if xyz or angles else "standard")
    chosen = {"mapsAre": maps_are, "columnsAre": columns_are, "orientation": orientation}
    if positions != "standard":
        chosen |= {"units": units, "axes": axes}
        # (label, x, y, z) or (label, polar, azimuth[, radius]), counted from 1.
        names = ["label", "x", "y", "z"] if xyz else ["label", "polar", "azimuth", "radius"]
        columns = zip(names, xyz or angles)
        chosen |= {f"columns.{name}": (column, "found") for name, column in columns if column}
    chosen = {key: list(value) for key, value in chosen.items() if value}
    for one in files:
        chosen |= one.own_choices(one is maps)
    chosen |= choices or {}
    usual = STANDARD if positions == "standard" else NOTES
    outcome = {"files": [fact for one in files for fact in one.facts()],
               "choices": {key: value for key, value in chosen.items() if value},
               "notes": sorted({*usual, *notes} - set(without)), **told}
    SAMPLES.append({"what": what, "files": given or [one.name for one in files],
                    **({"settings": settings} if settings else {}), "outcome": outcome})


def refused(what, *files, code, settings=None, **place):
    SAMPLES.append({"what": what, "files": [one.name for one in files], **({"settings": settings} if settings else {}),
                    "error": {"code": code, **place}})


def quoted(row, mark=","):
    return ['"' + one.replace('"', '""') + '"' for one in row]


# --- What divides fields ---------------------------------------------------------------------------------------------

def dividers():
    sample("tabs, a header", MAPS)
    sample("commas", maps_file("commas.csv", text(map_rows(), ","), delimiter=("comma", "found")))
    sample("commas and a blank after each", maps_file("commas_and_blanks.csv", text(map_rows(), ", "), delimiter=("comma", "found")))
    sample("semicolons", maps_file("semicolons.csv", text(map_rows(), ";"), delimiter=("semicolon", "found")))
    aligned = "".join(f"{row[0]:<6}{row[1]:>8}{row[2]:>8}{row[3]:>8}\n" for row in map_rows())
    sample("blanks, as many as make the columns straight", maps_file("blanks.txt", aligned, delimiter=("blanks", "found")))
    begun = "".join(f"   {line}\n" for line in aligned.splitlines())
    sample("blanks before the first field of each line", maps_file("blanks_first.txt", begun, delimiter=("blanks", "found")))
    wide = [["Electrode name", "x", "y", "z"], *place_rows(None), ["Left ear lobe", "", "", ""]]
    fixed = "".join(f"{row[0]:<20}{row[1]:>7}{row[2]:>8}{row[3]:>8}".rstrip() + "\n" for row in wide)
    sample("fixed columns: names with blanks in them, one electrode without a place", MAPS,
           electrodes=electrodes_file("fixed_columns.txt", fixed, delimiter=("columns", "found"), rows=22))
    everything = "\n".join(",".join(quoted(row)) for row in map_rows()) + "\n"
    sample("every field in quotes", maps_file("quotes.csv", everything, delimiter=("comma", "found")))
    names = ["lamp, lit", "the \"swell\"", "fog\nof the night"]
    hard = "\n".join(",".join(quoted(row)) for row in map_rows(names=names)) + "\n"
    sample("quoted names with a comma, quotes and a line break in them",
           maps_file("hard_quotes.csv", hard, delimiter=("comma", "found")), maps=list(zip(names, NAMES)))
    no_corner = "\n".join([" ".join(quoted(NAMES)), *(f"\"{row[0]}\" {' '.join(row[1:])}" for row in map_rows(None))]) + "\n"
    sample("names of columns without one above the labels", maps_file("no_corner.txt", no_corner, delimiter=("blanks", "found")),
           notes=["header-assumed"])
    trailing = "".join("\t".join(row) + "\t\t\n" for row in map_rows())
    sample("tabs at the end of every line", maps_file("tabs_last.tsv", trailing))
    blank = "".join("\t".join(row) + "  \n" for row in map_rows())
    sample("blanks at the end of every line", maps_file("blanks_last.tsv", blank))
    sheet = text(map_rows(), ",") + ",,,\n" * 5
    sample("rows of a spreadsheet that hold nothing but commas", maps_file("empty_rows.csv", sheet, delimiter=("comma", "found")))
    sheet = "".join(",".join(row) + ",,\n" for row in map_rows()) + ",,,,,\n" * 3
    spaced = map_rows()[:9] + [[""] * 4] + map_rows()[9:]
    sample("a row of a spreadsheet left empty in the middle", maps_file("empty_row.csv", text(spaced, ","), delimiter=("comma", "found")))
    sample("columns and rows of a spreadsheet that hold nothing", maps_file("empty_sheet.csv", sheet, delimiter=("comma", "found")))

    sideways = [["", *LABELS], *([axis, *(PLACES[label][k] for label in LABELS)] for k, axis in enumerate("xyz"))]
    sample("electrodes side by side, x, y and z below them", MAPS, electrodes=electrodes_file("sideways.csv", text(sideways, ","), delimiter=("comma", "found")))
    said = "sep=;\n" + text(map_rows(), ";")
    sample("a first line that tells a spreadsheet the mark", maps_file("sep.csv", said, delimiter=("semicolon", "found")))


# --- Lines, remarks, characters --------------------------------------------------------------------------------------

def lines():
    sample("lines that end in CR and LF", maps_file("crlf.tsv", text(map_rows(), end="\r\n")))
    sample("lines that end in CR", maps_file("cr.tsv", text(map_rows(), end="\r")))
    sample("no line break after the last line", maps_file("no_last_break.tsv", text(map_rows()).rstrip("\n")))
    spaced = "\n\n" + text(map_rows(), end="\n\n") + "   \n\t\t\t\n\n"
    sample("empty lines, and such with blanks and tabs alone", maps_file("empty_lines.tsv", spaced))
    sample("the mark that ends files of old", maps_file("control_z.tsv", text(map_rows()) + "\x1a"))
    remarks = "# night of the 3rd\n% wind: none\n" + text(map_rows()).replace("\nCz", "\n# the middle\nCz") + "% end\n"
    sample("remarks behind # and %, before, between and after", maps_file("remarks.tsv", remarks))
    sample("names of the columns in a remark",
           maps_file("names_in_remark.txt", "# night of the 3rd\n# " + text(map_rows(), " "), delimiter=("blanks", "found")))
    titled = "Watch of the night\nwritten by the keeper\n" + text(map_rows())
    sample("two lines of title above the table", maps_file("title.tsv", titled), notes=["title-passed-over"])
    foreign = ["lämp µV", "swell", "fog"]
    renamed = list(zip(foreign, NAMES))
    for name, write_as, mark, encoding in [
        ("utf_8.tsv", "utf-8", b"", ("utf-8", "found")), ("utf_8_mark.tsv", "utf-8", b"\xef\xbb\xbf", ("utf-8", "declared")),
        ("utf_16_low.tsv", "utf-16-le", b"\xff\xfe", ("utf-16le", "declared")),
        ("utf_16_high.tsv", "utf-16-be", b"\xfe\xff", ("utf-16be", "declared")),
        ("utf_16_no_mark.tsv", "utf-16-le", b"", ("utf-16le", "found")),
        ("latin_1.tsv", "latin-1", b"", ("latin-1", "assumed")),
    ]:
        content = mark + text(map_rows(names=foreign)).encode(write_as)
        sample(f"letters beyond ASCII in {encoding[0]}{', marked' if mark else ''}", maps_file(name, content, encoding=encoding),
               maps=renamed, notes=["encoding-assumed"] if encoding[1] == "assumed" else [])


# --- Headers and columns ---------------------------------------------------------------------------------------------

def headers():
    for name in ["name", "electrode", "Channel", "SITE", "sensor", "Electrode name"]:
        sample(f"labels under “{name}”", maps_file(f"under_{name.lower().replace(' ', '_')}.tsv", text(map_rows(name))))
    sample("labels under a name that is none of the usual", maps_file("under_kanal.tsv", text(map_rows("Kanal"))), notes=["header-assumed"])
    anonymous = [[f"map {n}", name] for n, name in enumerate(NAMES, 1)]
    sample("no header above the maps", maps_file("no_header.tsv", text(map_rows(None)), header=False), maps=anonymous)
    sample("no header above the electrodes", MAPS, electrodes=electrodes_file("electrodes_no_header.tsv", text(place_rows(None)), header=False))
    sample("no header anywhere, commas", maps_file("no_header.csv", text(map_rows(None), ","), header=False, delimiter=("comma", "found")),
           electrodes=electrodes_file("electrodes_no_header.csv", text(place_rows(None), ","), header=False, delimiter=("comma", "found")), maps=anonymous)
    counted = [["No", *NAMES, "label"], *([str(n), *row[1:], row[0]] for n, row in enumerate(map_rows(None), 1))]
    sample("rows counted, labels last", maps_file("labels_last.tsv", text(counted), columns=5, label=5, passed_over=["No"]),
           notes=["columns-passed-over"])
    mixed = [[row[3], row[0], row[1], row[2]] for row in place_rows()]
    sample("coordinates in the order z, label, x, y", MAPS, xyz=(2, 3, 4, 1), electrodes=electrodes_file("z_first.tsv", text(mixed)))
    more = [[*row, "silver" if row[0] != "label" else "material"] for row in place_rows()]
    sample("a column of words beside the coordinates", MAPS, electrodes=electrodes_file("material.tsv", text(more), columns=5))
    index = [["", *NAMES], *map_rows(None)]
    sample("nothing above the labels", maps_file("empty_corner.csv", text(index, ","), delimiter=("comma", "found")), notes=["header-assumed"])
    index = [["", "0", "1", "2"], *map_rows(None)]
    sample("numbers above the maps and nothing above the labels", maps_file("numbers_above.csv", text(index, ","), delimiter=("comma", "found")),
           maps=list(zip("012", NAMES)), notes=["header-assumed"])
    index = [["", "-100", "0", "100"], *map_rows(None)]
    sample("times above the maps and nothing above the labels", maps_file("times_above.csv", text(index, ","), delimiter=("comma", "found")),
           maps=list(zip(["-100", "0", "100"], NAMES)), notes=["header-assumed"], columns_are=("time-points", "found"), times={"times": [-100, 0, 100], "unit": "ms"})
    index = [["", "0"], *([label, VALUES[label][0]] for label in LABELS)]
    sample("0 above a single map and nothing above the labels", maps_file("naught_above.csv", text(index, ","), columns=2, delimiter=("comma", "found")),
           maps=[["0", "lamp"]], notes=["header-assumed"])
    frame = [["", "label", "x", "y", "z"], *([str(n), *row] for n, row in enumerate(place_rows(None)))]
    sample("a column without a name that counts the electrodes", MAPS, xyz=(2, 3, 4, 5),
           electrodes=electrodes_file("counted_electrodes.csv", text(frame, ","), delimiter=("comma", "found"), columns=5))
    frame = [["", "label", *NAMES], *([str(n), *row] for n, row in enumerate(map_rows(None)))]
    sample("a column without a name that counts the rows of the maps",
           maps_file("counted_maps.csv", text(frame, ","), delimiter=("comma", "found"), columns=5, label=2, passed_over=["1"]),
           notes=["columns-passed-over"])
    sample("x_mm, y_mm, z_mm", MAPS, electrodes=electrodes_file("x_mm.tsv", text(place_rows(["Label", "x_mm", "y_mm", "z_mm"]))))
    sample("X (mm), Y (mm), Z (mm)", MAPS, electrodes=electrodes_file("x_in_brackets.csv", text(place_rows(["Name", "X (mm)", "Y (mm)", "Z (mm)"]), ","), delimiter=("comma", "found")))
    sample("names of maps that are numbers", maps_file("numbers_as_names.tsv", text(map_rows(names=["1", "2", "3"]))), maps=list(zip("123", NAMES)))


# --- Numbers and gaps ------------------------------------------------------------------------------------------------

def figures():
    def comma(rows):
        return [[one.replace(".", ",") if any(c.isdigit() for c in one) and i else one for i, one in enumerate(row)] for row in rows]
    with_comma = dict(decimal=("comma", "found"))
    for name, mark, delimiter in [("decimal_comma.csv", ";", "semicolon"), ("decimal_comma.tsv", "\t", "tab"), ("decimal_comma.txt", "  ", "blanks")]:
        sample(f"decimal commas between {delimiter}s".replace("ss", "s"), maps_file(name, text(comma(map_rows()), mark), delimiter=(delimiter, "found"), **with_comma),
               notes=["decimal-comma"])
    both = "\n".join(",".join(quoted(row) if row[0] != "label" else row) for row in comma(map_rows())) + "\n"
    sample("decimal commas in quotes between commas", maps_file("decimal_comma_quoted.csv", both, delimiter=("comma", "found"), **with_comma),
           notes=["decimal-comma"])
    sample("decimal commas in the electrodes, points in the maps", MAPS, notes=["decimal-comma"],
           electrodes=electrodes_file("electrodes_decimal_comma.csv", text(comma(place_rows()), ";"), delimiter=("semicolon", "found"), **with_comma))
    exponent = [[row[0], *(f"{float(one):+.4E}" for one in row[1:])] for row in map_rows(None)]
    sample("signs before and exponents behind every number", maps_file("exponents.tsv", text([map_rows()[0], *exponent])))
    gaps = {"O1": ["n/a", "NaN", ""], "Oz": ["NA", "nan", "N/A"], "O2": ["", "", ""]}
    rows = [[row[0], *gaps.get(row[0], row[1:])] for row in map_rows()]
    sample("channels without values: n/a, NaN, NA, nothing", maps_file("no_values.tsv", text(rows)), electrodes=ELECTRODES,
           notes=["positions-without-value", "few-electrodes"], electrodes_read=[label for label in LABELS if label not in gaps],
           labels={"without_value": list(gaps)})
    rows = [[row[0], row[1], "n/a" if row[0] == "Cz" else row[2], row[3]] for row in map_rows()]
    sample("one value missing in one map", maps_file("one_gap.tsv", text(rows)), maps=[["lamp", "lamp"], ["swell", {"code": "map-incomplete", "label": "Cz"}], ["fog", "fog"]])
    rows = place_rows()
    rows[LABELS.index("Oz") + 1][1:] = ["n/a", "n/a", "n/a"]
    sample("an electrode without a place", MAPS, electrodes=electrodes_file("one_without_place.tsv", text(rows)),
           electrodes_read=[label for label in LABELS if label != "Oz"], notes=["values-without-position"], labels={"without_position": ["Oz"]})


# --- Positions -------------------------------------------------------------------------------------------------------

def positions():
    for unit, scale in [("m", 1e-3), ("cm", 0.1)]:
        table = text(place_rows(change=lambda xyz: [one * scale for one in xyz]))
        sample(f"positions in {unit}", MAPS, units=(unit, "found"), electrodes=electrodes_file(f"in_{unit}.tsv", table))
    on_sphere = text(place_rows(change=lambda xyz: [one / math.hypot(*xyz) for one in xyz], digits=6))
    sample("positions on a unit sphere", MAPS, units=("sphere", "found"), positions="directions", tolerance_mm=1e-3,
           electrodes=electrodes_file("unit_sphere.tsv", on_sphere), notes=["unit-sphere-scaled"], without=["unit-recognised", "electrodes-projected"])
    infant = text(place_rows(change=lambda xyz: [one / 2 for one in xyz]))
    sample("an infant's head of 46 mm", MAPS, moved=[[0.5, 0, 0], [0, 0.5, 0], [0, 0, 0.5]], electrodes=electrodes_file("infant.tsv", infant))
    shifted = text(place_rows(change=lambda xyz: [xyz[0] + 310, xyz[1] - 200, xyz[2] + 600]))
    sample("an origin far from the head", MAPS, electrodes=electrodes_file("far_origin.tsv", shifted))

    def spherical(names, rows, **facts):
        return text([["label", *names], *([label, *(f"{one:.4f}" for one in row)] for label, row in zip(LABELS, rows))])
    radius = np.linalg.norm(XYZ, axis=1)
    inclination = np.degrees(np.arccos(XYZ[:, 2] / radius))
    azimuth = np.degrees(np.arctan2(XYZ[:, 1], XYZ[:, 0]))
    # To the left of the head inclinations are negative, azimuths within 90° of the right.
    left = XYZ[:, 0] < 0
    signed = np.where(left, -inclination, inclination)
    turned = np.where(left, azimuth + np.where(azimuth > 0, -180, 180), azimuth)
    cases = [
        ("inclination and azimuth in degrees, with a radius", "inclination", ["inclination", "azimuth", "radius"], (inclination, azimuth, radius), "inclination", "declared", "degrees"),
        ("inclination and azimuth without a radius", "no_radius", ["inclination", "azimuth"], (inclination, azimuth), "inclination", "declared", "degrees"),
        ("negative inclinations", "negative", ["theta", "phi", "r"], (signed, turned, radius), "inclination", "found", "degrees"),
        ("elevation and azimuth in degrees", "elevation", ["elevation", "azimuth", "radius"], (90 - inclination, azimuth, radius), "elevation", "declared", "degrees"),
        ("theta that is an elevation", "theta_elevation", ["theta", "phi", "radius"], (90 - inclination, azimuth, radius), "elevation", "found", "degrees"),
        ("inclination in radians", "radians", ["inclination", "azimuth", "radius"], (np.radians(inclination), np.radians(azimuth), radius), "inclination", "declared", "radians"),
        ("elevation in radians, without a radius", "elevation_radians", ["elevation", "azimuth"], (np.radians(90 - inclination), np.radians(azimuth)), "elevation", "declared", "radians"),
        ("a radius in metres", "radius_in_m", ["inclination", "azimuth", "radius"], (inclination, azimuth, radius / 1000), "inclination", "declared", "degrees"),
    ]
    for what, name, names, columns, polar, polar_from, unit in cases:
        measured = len(columns) == 3
        table = electrodes_file(f"angles_{name}.tsv", spherical(names, zip(*columns)), columns=1 + len(columns))
        sphere = dict(units=("sphere", "found"), positions="directions", without=["unit-recognised", "electrodes-projected"])
        sample(what, MAPS, electrodes=table, xyz=None, angles=(1, 2, 3, 4)[:1 + len(columns)], notes=["angles-read"] + ([] if measured else ["unit-sphere-scaled"]),
               tolerance_mm=0.1, choices={"angles.polar": [polar, polar_from], "angles.unit": [unit, "found"]},
               **(dict(units=("m" if "metres" in what else "mm", "found")) if measured else sphere))
    table = electrodes_file("angles_azimuth_first.tsv", spherical(["azimuth_deg", "incl_deg", "radius_mm"], zip(azimuth, inclination, radius)))
    sample("the azimuth first, units in the names", MAPS, electrodes=table, xyz=None, angles=(1, 3, 2, 4), notes=["angles-read"], tolerance_mm=0.03,
           choices={"angles.polar": ["inclination", "declared"], "angles.unit": ["degrees", "declared"]})

    table = electrodes_file("angles_swapped.tsv", spherical(["theta", "phi", "r"], zip(azimuth, inclination, radius)))
    sample("theta that is the azimuth", MAPS, electrodes=table, xyz=None, angles=(1, 3, 2, 4), notes=["angles-read"], tolerance_mm=0.03,
           choices={"angles.polar": ["inclination", "found"], "angles.unit": ["degrees", "found"]})
    table = electrodes_file("angles_from_nose.csv", spherical(["latitude", "longitude"], zip(90 - inclination, azimuth - 90)), columns=3)
    sample("latitude and longitude, 0 at the nose", MAPS, electrodes=table, xyz=None, angles=(1, 2, 3), notes=["angles-read", "unit-sphere-scaled"], tolerance_mm=0.03,
           choices={"angles.polar": ["elevation", "declared"], "angles.unit": ["degrees", "found"]}, axes=("front-left-up", "found"),
           units=("sphere", "found"), positions="directions", without=["unit-recognised", "electrodes-projected"])
    both = text([["label", "theta", "phi", "radius", "x", "y", "z"], *([row[0], *(f"{one:.1f}" for one in angle), *row[1:]] for row, angle in zip(place_rows(None), zip(inclination, azimuth, radius)))])
    sample("angles beside coordinates", MAPS, electrodes=electrodes_file("angles_and_xyz.tsv", both, columns=7), xyz=(1, 5, 6, 7))
    sample("coordinates under x, y, z without labels, in the order of the maps", MAPS, electrodes=electrodes_file("xyz_alone.tsv", text([row[1:] for row in place_rows()]), columns=3),
           xyz=(None, 1, 2, 3), notes=["labels-by-order"])

    nose = lambda xyz: [xyz[1], -xyz[0], xyz[2]]
    sample("the nose along x", MAPS, axes=("front-left-up", "found"), electrodes=electrodes_file("nose_along_x.tsv", text(place_rows(change=nose))))
    back = lambda xyz: [-xyz[0], -xyz[1], xyz[2]]
    sample("x to the left, y to the back", MAPS, axes=("left-back-up", "found"), electrodes=electrodes_file("left_back_up.tsv", text(place_rows(change=back))))
    mirrored = lambda xyz: [-xyz[0], xyz[1], xyz[2]]
    sample("left and right exchanged", MAPS, electrodes=electrodes_file("mirrored.tsv", text(place_rows(change=mirrored))), moved=[[-1, 0, 0], [0, 1, 0], [0, 0, 1]],
           choices={"mirror": [False, "assumed"]}, notes=["mirrored"])
    sample("left and right exchanged, and put right", MAPS, electrodes=replace(ELECTRODES, name="mirrored.tsv"), settings={"mirror": True},
           choices={"mirror": [True, "setting"]})
    tilt = math.radians(20)
    tilted = lambda xyz: [xyz[0], xyz[1] * math.cos(tilt) - xyz[2] * math.sin(tilt), xyz[1] * math.sin(tilt) + xyz[2] * math.cos(tilt)]
    sample("a head tilted by 20 degrees", MAPS, electrodes=electrodes_file("tilted.tsv", text(place_rows(change=tilted, digits=4))), 
           moved=[[1, 0, 0], [0, math.cos(tilt), -math.sin(tilt)], [0, math.sin(tilt), math.cos(tilt)]], tolerance_mm=1e-3)
    sample("labels alone, one in each line", MAPS, electrodes=file("labels.txt", text([[label] for label in LABELS]), "labels", delimiter=("blanks", "found"), header=False, columns=1),
           xyz=None)
    sample("labels alone under a name", MAPS, electrodes=file("labels_named.txt", text([["label"], *([label] for label in LABELS)]), "labels", delimiter=("blanks", "found"), columns=1),
           xyz=None)
    sample("labels alone in one row", MAPS, electrodes=file("labels_row.csv", ",".join(LABELS) + "\n", "labels", delimiter=("comma", "found"), header=False, columns=1), xyz=None)
    sample("no table of electrodes", MAPS, electrodes=None, xyz=None)
    numbered = {label: f"S{n}" for n, label in enumerate(LABELS, 1)}
    rename = lambda rows: [[numbered.get(row[0], row[0]), *row[1:]] for row in rows]
    own = maps_file("own_names_maps.tsv", text(rename(map_rows())))
    sample("names of one's own: nothing tells the axes", own, electrodes=electrodes_file("own_names.tsv", text(rename(place_rows()))),
           axes=("right-front-up", "assumed"), orientation=("channels-in-rows", "found"), names=numbered, notes=["axes-assumed"], without=["axes-found"])
    points = [[name, *(f"{one:.1f}" for one in nose(list(xyz)))] for name, xyz in LANDMARKS.items()]
    sample("names of one's own, and points at nose and ears in the table", own, axes=("front-left-up", "found"), names=numbered, notes=["not-scalp"],
           labels={"not_scalp": list(LANDMARKS)}, electrodes=electrodes_file("own_names_landmarks.tsv", text(rename(place_rows(change=nose)) + points), rows=24))


# --- Tables of the Brain Imaging Data Structure ----------------------------------------------------------------------

def bids():
    kinds = [["name", "x", "y", "z", "type", "material", "impedance"], *([*row, "cup", "Ag/AgCl", "n/a" if row[0] == "Cz" else "5.2"] for row in place_rows(None))]
    declared = electrodes_file("sub-keeper_electrodes.tsv", text(kinds), columns=7)
    points = {name: list(xyz) for name, xyz in LANDMARKS.items()}

    def coordsystem(name, unit, landmarks=points, landmark_unit=None, **more):
        record = {"EEGCoordinateSystem": "Other", "EEGCoordinateUnits": unit, "EEGCoordinateSystemDescription": "ears and nose",
                  "AnatomicalLandmarkCoordinates": landmarks, "AnatomicalLandmarkCoordinateSystem": "Other",
                  "AnatomicalLandmarkCoordinateUnits": landmark_unit or unit, **more}
        content = json.dumps(record, indent=2) + "\n"
        return file(name, content, "coordinates", format="json", rows=len(record), columns=2, header=False, decimal=None)

    in_mm = coordsystem("sub-keeper_coordsystem.json", "mm")
    sample("BIDS: electrodes with type, material and impedance, and their coordinates", in_mm, MAPS, electrodes=declared, units=("mm", "declared"))
    in_metres = text([kinds[0], *([row[0], *(f"{float(one) / 1000:.4f}" for one in row[1:4]), *row[4:]] for row in kinds[1:])])
    metres = electrodes_file("sub-metres_electrodes.tsv", in_metres, columns=7)
    points_m = {name: [round(one / 1000, 4) for one in xyz] for name, xyz in LANDMARKS.items()}
    sample("BIDS: metres that are called mm", MAPS, coordsystem("sub-metres_coordsystem.json", "mm", points_m), electrodes=metres, units=("m", "found"), notes=["unit-overruled"])
    sample("BIDS: metres, and landmarks in mm", coordsystem("sub-mixed_coordsystem.json", "m", points, "mm"), MAPS,
           electrodes=electrodes_file("sub-mixed_electrodes.tsv", in_metres, columns=7), units=("m", "declared"))
    nose = lambda xyz: [xyz[1], -xyz[0], xyz[2]]
    numbered = {label: f"EEG{n:03}" for n, label in enumerate(LABELS, 1)}
    rename = lambda rows: [[numbered.get(row[0], row[0]), *row[1:]] for row in rows]
    sample("BIDS: labels that tell nothing, axes by the landmarks", maps_file("sub-nose_maps.tsv", text(rename(map_rows()))),
           coordsystem("sub-nose_coordsystem.json", "mm", {"NAS": nose(points["NAS"]), "LPA": nose(points["LPA"]), "RPA": nose(points["RPA"])}), names=numbered,
           electrodes=electrodes_file("sub-nose_electrodes.tsv", text(rename(place_rows(["name", "x", "y", "z"], change=nose)))), axes=("front-left-up", "found"), units=("mm", "declared"))
    kinds = {"VEOG": "VEOG", "ECG1": "ECG", "Trigger": "TRIG", "X1": "EEG"}
    head = ["name", "type", "units", "sampling_frequency", "reference", "status", "status_description"]
    rows = [[label, "EEG", "uV", "256", "FCz", "bad" if label == "T8" else "good", "flat" if label == "T8" else "n/a"] for label in LABELS]
    rows += [[label, kind, "uV", "256", "n/a", "good", "n/a"] for label, kind in kinds.items()]
    channels = file("sub-keeper_channels.tsv", text([head, *rows]), "channels", rows=25, columns=7, label=None, passed_over=["units", "sampling_frequency", "reference", "status_description"])
    sample("BIDS: a bad channel in the table of channels", channels, MAPS, in_mm, electrodes=declared, units=("mm", "declared"), left_out=["T8"], notes=["channels-bad"])
    more = maps_file("sub-keeper_maps.tsv", text(map_rows() + [[label, "1.00", "-2.00", "0.50"] for label in ["VEOG", "ECG1", "Trigger"]]), rows=24)
    sample("BIDS: types tell what is EEG", more, channels, in_mm, electrodes=declared, units=("mm", "declared"), left_out=["T8"], notes=["channels-bad", "not-scalp"],
           labels={"not_scalp": ["VEOG", "ECG1", "Trigger"]})
    named = [[row[0] if row[0] != "O2" else "Lid", *row[1:]] for row in map_rows()]
    typed = text([["name", "type", "units"], *([row[0], "MISC" if row[0] == "Lid" else "EEG", "uV"] for row in named[1:])])
    lid = file("sub-lid_channels.tsv", typed, "channels", columns=3, label=None, passed_over=["units"])
    sample("BIDS: a channel that only its type tells not to be EEG", maps_file("sub-lid_maps.tsv", text(named)), lid, notes=["not-scalp", "positions-without-value"],
           labels={"not_scalp": ["Lid"], "without_value": ["O2"]}, electrodes_read=LABELS[:-1])


# --- Which way maps lie ----------------------------------------------------------------------------------------------

def ways():
    anonymous = [[f"map {n}", name] for n, name in enumerate(NAMES, 1)]
    one = [["label", "lamp"], *([label, VALUES[label][0]] for label in LABELS)]
    sample("one map in a column", maps_file("one_map.tsv", text(one), columns=2), maps=[["lamp", "lamp"]])
    sample("one map in a column, without a header", maps_file("one_map_bare.txt", text(one[1:], " "), columns=2, header=False, delimiter=("blanks", "found")), maps=[["map 1", "lamp"]])
    turned = [["map", *LABELS], *([name, *(VALUES[label][k] for label in LABELS)] for k, name in enumerate(NAMES))]
    in_columns = ("channels-in-columns", "found")
    sample("maps in rows, with names", maps_file("rows.tsv", text(turned), rows=3, columns=22, label=None), orientation=in_columns, notes=["header-assumed"])
    sample("maps in rows under “label”", maps_file("rows_label.csv", text([["label", *LABELS], *turned[1:]], ","), rows=3, columns=22, label=None, delimiter=("comma", "found")), orientation=in_columns)
    sample("maps in rows, nothing in the corner", maps_file("rows_corner.csv", text([["", *LABELS], *turned[1:]], ","), rows=3, columns=22, label=None, delimiter=("comma", "found")),
           orientation=in_columns, notes=["header-assumed"])
    sample("maps in rows without names", maps_file("rows_unnamed.tsv", text([row[1:] for row in turned]), rows=3, columns=21, label=None), orientation=in_columns,
           maps=anonymous, notes=["header-assumed"])
    sample("one map in a row", maps_file("one_row.csv", text([row[1:] for row in turned[:2]], ","), rows=1, columns=21, label=None, delimiter=("comma", "found")), orientation=in_columns,
           maps=[["map 1", "lamp"]], notes=["header-assumed"])
    bare = dict(header=False, label=None)
    sample("a matrix of numbers, a row for each electrode", maps_file("matrix.txt", text([row[1:] for row in map_rows(None)], " "), columns=3, delimiter=("blanks", "found"), **bare), maps=anonymous, notes=["labels-by-order"])
    sample("a matrix of numbers, a column for each electrode", maps_file("matrix_turned.csv", text([row[1:] for row in turned[1:]], ","), rows=3, columns=21, delimiter=("comma", "found"), **bare),
           maps=anonymous, orientation=in_columns, notes=["labels-by-order"])
    recorded = file("recorded_channels.tsv", text([["name", "type", "units"], ["ECG1", "ECG", "uV"], *([label, "EEG", "uV"] for label in LABELS)]), "channels", rows=22, columns=3, label=None, passed_over=["units"])
    sample("a matrix of numbers in the order of the table of channels, not in that of the electrodes", maps_file("matrix_recorded.txt", text([row[1:] for row in map_rows(None)], " "), columns=3, delimiter=("blanks", "found"), **bare),
           recorded, electrodes=electrodes_file("electrodes_backwards.tsv", text(place_rows(labels=LABELS[::-1]))), maps=anonymous, notes=["labels-by-order"])
    with_heart = [*map_rows(None)[:5], ["ECG1", "40.00", "-3.00", "12.00"], *map_rows(None)[5:]]
    every = file("every_channel.tsv", text([["name", "type", "units"], *([row[0], "ECG" if row[0] == "ECG1" else "EEG", "uV"] for row in with_heart)]), "channels", rows=22, columns=3, label=None, passed_over=["units"])
    sample("a matrix of numbers with a row for every channel of the table of channels", maps_file("matrix_of_channels.txt", text([row[1:] for row in with_heart], " "), rows=22, columns=3, delimiter=("blanks", "found"), **bare),
           every, maps=anonymous, notes=["labels-by-order", "not-scalp"], labels={"not_scalp": ["ECG1"]})
    column = "".join(VALUES[label][0] + "\n" for label in LABELS)
    sample("a column of numbers", maps_file("column.txt", column, columns=1, delimiter=("blanks", "found"), **bare), maps=[["map 1", "lamp"]], notes=["labels-by-order"])
    row = " ".join(VALUES[label][0] for label in LABELS) + "\n"
    sample("a row of numbers", maps_file("row.txt", row, rows=1, columns=21, delimiter=("blanks", "found"), **bare), maps=[["map 1", "lamp"]], orientation=in_columns, notes=["labels-by-order"])
    named = [[name, *row[1:]] for name, row in zip(["IC1", "IC2", "IC3"], turned[1:])]
    sample("a row for each component, named, in the order of the electrodes", maps_file("rows_by_order.txt", text(named, " "), rows=3, columns=22, delimiter=("blanks", "found"), header=False, label=None),
           orientation=in_columns, maps=list(zip(["IC1", "IC2", "IC3"], NAMES)), columns_are=("components", "found"), notes=["labels-by-order"])
    three = file("labels_row.csv", ",".join(LABELS) + "\n", "labels", delimiter=("comma", "found"), header=False, columns=1)
    places = electrodes_file("xyz_bare.txt", text([row[1:] for row in place_rows(None)], " "), columns=3, delimiter=("blanks", "found"), header=False)
    sample("labels, positions and values in three files of text", maps_file("matrix.txt", WRITTEN["matrix.txt"], columns=3, delimiter=("blanks", "found"), **bare), three,
           electrodes=places, xyz=(None, 1, 2, 3), maps=anonymous, notes=["labels-by-order"])
    beside = [[*place, *values[1:]] for place, values in zip(place_rows(), map_rows())]
    sample("values beside the positions", file("beside.tsv", text(beside), "electrodes-and-maps", columns=7), electrodes=None)
    sample("values beside the positions, without a header", file("beside_bare.txt", text(beside[1:], " "), "electrodes-and-maps", columns=7, header=False, delimiter=("blanks", "found")),
           electrodes=None, maps=anonymous)
    wrong = [[*place[:1], *(one if n == 0 else f"{float(one) * 1.1 + 3:.1f}" for one in place[1:]), *values[1:]] for n, (place, values) in enumerate(zip(place_rows(), map_rows()))]
    sample("values beside positions, and other positions in a file of their own", maps_file("beside_replaced.tsv", text(wrong), columns=7, passed_over=["x", "y", "z"]), notes=["part-unused"])
    square = [[f"{((7 * row + 3 * column * column) % 23) - 11}" for column in range(21)] for row in range(21)]
    SQUARE = {f"map {n + 1}": [int(row[n]) for row in square] for n in range(21)}
    sample("a square of numbers, which may lie either way", maps_file("square.txt", text(square, " "), columns=21, delimiter=("blanks", "found"), **bare), orientation=("channels-in-rows", "assumed"),
           maps=[[name, values] for name, values in SQUARE.items()], notes=["labels-by-order", "orientation-assumed"])
    turned_square = {f"map {n + 1}": [int(one) for one in square[n]] for n in range(21)}
    sample("a square of numbers, told to lie the other way", replace(file("square.txt", text(square, " "), "maps"), columns=21, delimiter=("blanks", "found"), **bare), orientation=("channels-in-columns", "setting"),
           settings={"orientation": "channels-in-columns"}, maps=[[name, values] for name, values in turned_square.items()], notes=["labels-by-order"])


# --- JSON ------------------------------------------------------------------------------------------------------------

def json_files():
    as_numbers = {label: [float(one) for one in VALUES[label]] for label in LABELS}
    xyz = {label: [float(one) for one in PLACES[label]] for label in LABELS}
    of_json = dict(format="json")
    dump = lambda value: json.dumps(value, ensure_ascii=False).replace("], [", "],\n [").replace("}, {", "},\n {") + "\n"
    anonymous = [[f"map {n}", name] for n, name in enumerate(NAMES, 1)]
    sample("JSON: rows with their labels", maps_file("rows.json", dump([[label, *as_numbers[label]] for label in LABELS]), header=False, **of_json), maps=anonymous)
    sample("JSON: rows under a row of names", maps_file("rows_named.json", dump([["label", *NAMES], *([label, *as_numbers[label]] for label in LABELS)]), **of_json))
    sample("JSON: records", maps_file("records.json", dump([dict(zip(["label", *NAMES], [label, *as_numbers[label]])) for label in LABELS]), **of_json))
    columns = {"label": LABELS, **{name: [as_numbers[label][k] for label in LABELS] for k, name in enumerate(NAMES)}}
    sample("JSON: a record of columns", maps_file("columns.json", dump(columns), **of_json))
    sample("JSON: electrodes with x, y and z", MAPS, electrodes=electrodes_file("electrodes.json", dump([{"name": label, "x": x, "y": y, "z": z} for label, (x, y, z) in xyz.items()]), **of_json))
    sample("JSON: electrodes with a position of three numbers", MAPS,
           electrodes=electrodes_file("positions.json", dump([{"label": label, "position": place} for label, place in xyz.items()]), **of_json))
    plain = dict(header=False, label=None, decimal=None)

    def parts(maps_shape):
        return (File("", b"", "labels", part="labels", columns=1, **plain), File("", b"", "electrodes", part="positions", columns=3, **plain),
                File("", b"", "maps", part="maps", rows=maps_shape[0], columns=maps_shape[1], **plain))
    whole = {"labels": LABELS, "positions": list(xyz.values()), "maps": list(as_numbers.values())}
    by_order = ["labels-by-order"]
    sample("JSON: labels, positions and maps", file("whole.json", dump(whole), "maps", parts=parts((21, 3)), label=None, decimal=None, choices={"role": ["electrodes-and-maps", "found"]}, **of_json), electrodes=None, xyz=(None, 1, 2, 3), maps=anonymous, notes=by_order)
    lying = {**whole, "maps": [[as_numbers[label][k] for label in LABELS] for k in range(3)]}
    sample("JSON: labels, positions and maps, a list for each map", file("whole_lists.json", dump(lying), "maps", parts=parts((3, 21)), label=None, decimal=None, choices={"role": ["electrodes-and-maps", "found"]}, **of_json), electrodes=None, xyz=(None, 1, 2, 3),
           maps=anonymous, orientation=("channels-in-columns", "found"), notes=by_order)
    named = {**whole, "names": NAMES}
    words = File("", b"", "labels", part="names", rows=3, columns=1, **plain)
    sample("JSON: names of the maps in a list of their own", file("whole_names.json", dump(named), "maps", parts=(*parts((21, 3)), words), label=None, decimal=None, choices={"role": ["electrodes-and-maps", "found"]}, **of_json),
           electrodes=None, xyz=(None, 1, 2, 3), notes=by_order)
    by_label = {label: place for label, place in xyz.items()}
    sample("JSON: a position under each label", MAPS, electrodes=electrodes_file("by_label.json", dump(by_label), header=False, **of_json), xyz=(1, 2, 3, 4))
    values = {label: as_numbers[label] for label in LABELS}
    sample("JSON: values under each label", maps_file("values_by_label.json", dump(values), rows=3, columns=21, label=None, **of_json), orientation=("channels-in-columns", "found"), maps=anonymous)
    lists = {"electrodes": [{"label": label, "x": x, "y": y, "z": z} for label, (x, y, z) in xyz.items()], "maps": [dict(zip(["label", *NAMES], [label, *as_numbers[label]])) for label in LABELS]}
    records = (File("", b"", "electrodes", part="electrodes"), File("", b"", "maps", part="maps"))
    sample("JSON: electrodes and maps as two lists of records", file("two_lists.json", dump(lists), "maps", parts=records, choices={"role": ["electrodes-and-maps", "found"]}, **of_json), electrodes=None)
    gaps = dump([[label, *(None if label == "Oz" else one for one in as_numbers[label])] for label in LABELS])
    sample("JSON: null where there is no value", maps_file("null.json", gaps, header=False, **of_json), maps=anonymous, notes=["positions-without-value"],
           electrodes_read=[label for label in LABELS if label != "Oz"], labels={"without_value": ["Oz"]})


# --- Arrays ----------------------------------------------------------------------------------------------------------

def zipped(members):
    out = io.BytesIO()
    with zipfile.ZipFile(out, "w") as target:
        for name, content in members:
            target.writestr(zipfile.ZipInfo(name, STAMP), content, compress_type=zipfile.ZIP_DEFLATED)
    return out.getvalue()


def arrays():
    anonymous = [[f"map {n}", name] for n, name in enumerate(NAMES, 1)]
    plain = dict(encoding=None, decimal=None, header=False, label=None)
    by_order = dict(maps=anonymous, notes=["labels-by-order"])
    in_columns = ("channels-in-columns", "found")
    sample("NumPy: a row for each electrode", maps_file("maps.npy", npy(UV), format="npy", columns=3, **plain), **by_order)
    sample("NumPy: a column for each electrode", maps_file("maps_turned.npy", npy(UV.T.copy()), format="npy", rows=3, columns=21, **plain), orientation=in_columns, **by_order)
    sample("NumPy: columns first, high byte first", maps_file("maps_columns_first.npy", npy(np.asfortranarray(UV).astype(">f8")), format="npy", columns=3, **plain), **by_order)
    sample("NumPy: one map", maps_file("one_map.npy", npy(UV[:, 0].copy()), format="npy", columns=1, **plain), maps=[["map 1", "lamp"]], notes=["labels-by-order"])
    words = file("labels.npy", npy(np.array(LABELS)), "labels", format="npy", columns=1, **plain)
    places = electrodes_file("positions.npy", npy(XYZ / 1000), format="npy", columns=3, **plain)
    sample("NumPy: labels, positions and maps in three files", replace(file("maps.npy", npy(UV), "maps"), format="npy", columns=3, **plain), words, electrodes=places, units=("m", "found"), xyz=(None, 1, 2, 3), **by_order)
    sample("NumPy: maps beside a list of labels", replace(file("maps.npy", npy(UV), "maps"), format="npy", columns=3, **plain), words, electrodes=None, xyz=None, **by_order)

    def parts(maps):
        return (File("", b"", "labels", part="labels", columns=1, **plain), File("", b"", "electrodes", part="positions", columns=3, **plain),
                File("", b"", "maps", part=maps, columns=3, **plain))
    npz = zipped([("labels.npy", npy(np.array(LABELS))), ("positions.npy", npy(XYZ)), ("A.npy", npy(UV))])
    whole = dict(encoding=None, decimal=None, label=None, choices={"role": ["electrodes-and-maps", "found"]})
    together = dict(electrodes=None, xyz=(None, 1, 2, 3), **by_order)
    sample("NumPy: labels, positions and maps in one file", file("watch.npz", npz, "maps", format="zip", parts=parts("A"), **whole), **together)
    variables = {"labels": cell(LABELS), "positions": XYZ, "A": UV}
    sample("MATLAB: labels, positions and maps", file("watch.mat", mat(variables), "maps", format="mat", parts=parts("A"), **whole), **together)
    sample("MATLAB: the same, packed", file("watch_packed.mat", mat(variables, do_compression=True), "maps", format="mat", parts=parts("A"), **whole), **together)
    structure = {"watch": {"labels": cell(LABELS), "positions": XYZ, "maps": UV, "unit": "mm"}}
    named = (*(replace(part, part=f"watch.{part.part}") for part in parts("maps")), File("", b"", "unused", part="watch.unit", rows=1, columns=1, **plain))
    sample("MATLAB: a structure", file("structure.mat", mat(structure), "maps", format="mat", parts=named, **whole), **together)
    rows = [field for label in LABELS for field in [label, *map(float, VALUES[label])]]
    sample("MATLAB: cells of labels and values", maps_file("cells.mat", mat({"table": cell(rows, (21, 4))}), format="mat", encoding=None, header=False), maps=anonymous)
    tables = zipped([("night/electrodes.tsv", text(place_rows())), ("night/maps.csv", text(map_rows(), ","))])
    WRITTEN["watch.zip"] = tables
    inside = [File("watch.zip/night/electrodes.tsv", b"", "electrodes"), File("watch.zip/night/maps.csv", b"", "maps", delimiter=("comma", "found"))]
    sample("an archive of two tables", inside[1], electrodes=inside[0], given=["watch.zip"])
    study = {"dataset_description.json": json.dumps({"Name": "Watch", "BIDSVersion": "1.10.0"}), "sub-keeper/eeg/sub-keeper_electrodes.tsv": WRITTEN["sub-keeper_electrodes.tsv"],
             "sub-keeper/eeg/sub-keeper_coordsystem.json": WRITTEN["sub-keeper_coordsystem.json"], "sub-keeper/eeg/sub-keeper_channels.tsv": WRITTEN["sub-keeper_channels.tsv"], "maps.tsv": text(map_rows())}
    WRITTEN["study.zip"] = zipped(list(study.items()))
    inside = [File("study.zip/" + name, b"", "unused") for name in study]
    of_json = dict(format="json", decimal=None, header=False, columns=2)
    inside[0] = replace(inside[0], rows=2, **of_json)
    inside[2] = replace(inside[2], role="coordinates", rows=6, **of_json)
    inside[3] = replace(inside[3], role="channels", rows=25, columns=7, label=None, passed_over=["units", "sampling_frequency", "reference", "status_description"])
    sample("an archive of a BIDS folder", replace(inside[4], role="maps"), *inside[:1], *inside[2:4], electrodes=replace(inside[1], role="electrodes", columns=7), given=["study.zip"],
           units=("mm", "declared"), left_out=["T8"], notes=["channels-bad", "file-unused"])
    WRITTEN["here.zip"] = zipped([("./electrodes.tsv", text(place_rows())), ("./maps.tsv", text(map_rows()))])
    here = [File("here.zip/./electrodes.tsv", b"", "electrodes"), File("here.zip/./maps.tsv", b"", "maps")]
    sample("an archive whose paths begin with ./", here[1], electrodes=here[0], given=["here.zip"])
    letter = zipped([("maps.tsv", text(map_rows())), ("letter", "Dear all,\nthe wind has turned,\nthe keeper\n"), ("electrodes.tsv", text(place_rows()))])
    WRITTEN["letter.zip"] = letter
    inside = [File("letter.zip/electrodes.tsv", b"", "electrodes"), File("letter.zip/maps.tsv", b"", "maps"), File("letter.zip/letter", b"", "unused", header=False, delimiter=("blanks", "found"), rows=3, columns=2)]
    refused("an archive with a letter", replace(MAPS, name="letter.zip"), code="table-ragged", file="letter.zip/letter")
    sample("an archive with a letter that is said not to be needed", inside[1], replace(inside[2], encoding=None, rows=0, columns=0, delimiter=("", ""), decimal=None, choices={"role": ["unused", "setting"], "delimiter": None}), electrodes=inside[0], given=["letter.zip"],
           settings={"files": {"letter.zip/letter": {"role": "unused"}}})
    mixed = zipped([("maps.npy", npy(UV)), ("electrodes.csv", text(place_rows(), ";")), ("LIESMICH", "# the keeper's watch\n")])
    refused("an archive with a file that holds nothing but a remark", file("remark.zip", mixed, "maps"), code="input-empty", file="remark.zip/LIESMICH")


# --- Unmixing --------------------------------------------------------------------------------------------------------

def unmixings():
    anonymous = [[f"map {n}", name] for n, name in enumerate(NAMES, 1)]
    plain = dict(format="npy", encoding=None, decimal=None, header=False, label=None)
    weights = np.linalg.pinv(UV)
    told = dict(settings={"mapsAre": "unmixing"}, maps_are=("unmixing", "setting"), columns_are=("components", "found"), orientation=("channels-in-columns", "found"), tolerance=1e-8)
    sample("an unmixing matrix whose sphering is in it", maps_file("unmixing.npy", npy(weights), rows=3, columns=21, **plain), maps=anonymous, **told,
           notes=["labels-by-order", "unmixing-inverted", "sphering-absent"])
    turn = np.linalg.qr(np.add.outer(np.arange(21.0), np.arange(21.0) ** 2) % 11 - 5.2)[0]
    sphering = (turn * np.linspace(0.2, 3, 21)) @ turn.T
    sphere = file("sphering.npy", npy(sphering), "sphering", rows=21, columns=21, **plain)
    sample("weights with the sphering matrix in another file", maps_file("weights.npy", npy(weights @ np.linalg.inv(sphering)), rows=3, columns=21, **plain), sphere, maps=anonymous, **told,
           notes=["labels-by-order", "unmixing-inverted"])
    rows = [["component", *LABELS], *([name, *(f"{one:.17g}" for one in row)] for name, row in zip(NAMES, weights))]
    sample("an unmixing matrix as a table with names", maps_file("unmixing.tsv", text(rows), rows=3, columns=22, label=None), **told,
           notes=["header-assumed", "unmixing-inverted", "sphering-absent"])


# --- Labels ----------------------------------------------------------------------------------------------------------

def labels():
    ways = {
        "upper case": (str.upper, False), "lower case": (str.lower, False), "a dot behind": (lambda one: one + ".", True),
        "a prefix": (lambda one: f"EEG {one}", True), "a prefix and a reference": (lambda one: f"EEG {one}-Ref", True),
        "a reference of both ears": (lambda one: f"{one}-A1A2", True), "a unit behind": (lambda one: f"{one} [uV]", True),
        "a blank before the number": (lambda one: one[:-1] + " " + one[-1], True),
    }
    for number, (what, (way, changed)) in enumerate(ways.items(), 1):
        rows = [map_rows()[0], *([way(row[0]), *row[1:]] for row in map_rows(None))]
        reference = {"a prefix and a reference": "Ref", "a reference of both ears": "A1A2"}.get(what)
        renamed = [{"from": way(label), "to": label} for label in LABELS]
        sample(f"labels with {what}" if "case" not in what else f"labels in {what}", maps_file(f"labels_{number}.tsv", text(rows)),
               notes=(["labels-renamed"] if changed else []) + (["reference-named"] if reference else []),
               labels={**({"renamed": renamed} if changed else {}), **({"reference": reference} if reference else {})})
    old = {"T7": "T3", "T8": "T4", "P7": "T5", "P8": "T6"}
    rows = [[old.get(row[0], row[0]), *row[1:]] for row in map_rows()]
    sample("old temporal names", maps_file("old_names.tsv", text(rows)), notes=["labels-renamed"], labels={"renamed": [{"from": old[new], "to": new} for new in LABELS if new in old]})
    more = [["HEOG", "1", "2", "3"], ["ECG", "4", "5", "6"], ["STI 014", "0", "0", "1"], ["Resp", "1", "1", "2"]]
    sample("eyes, heart, stimuli and breath", maps_file("other_channels.tsv", text(map_rows() + more), rows=25), notes=["not-scalp"], labels={"not_scalp": [row[0] for row in more]})
    sample("a value whose label has no position", maps_file("q9.tsv", text(map_rows() + [["Q9", "1", "2", "3"]]), rows=22), notes=["values-without-position"], labels={"without_position": ["Q9"]})
    sample("a position whose label has no value", maps_file("no_oz.tsv", text([row for row in map_rows() if row[0] != "Oz"]), rows=20), notes=["positions-without-value"],
           labels={"without_value": ["Oz"]}, electrodes_read=[label for label in LABELS if label != "Oz"])
    swap = dict(zip(LABELS[:9], ["AFF1h", "AFpz", "AFF2h", "FFT7h", "FFC3h", "FFCz", "FFC4h", "FFT8h", "FTT7h"]))
    rename = [[swap.get(row[0], row[0]), *row[1:]] for row in map_rows()]
    sample("names of the 10-5 system", maps_file("ten_five.tsv", text(rename)), electrodes=None, xyz=None, names=swap)
    ears = [["M1", "1.00", "2.00", "3.00"], ["A2", "3.00", "1.00", "2.00"]]
    sample("a mastoid and an ear lobe", maps_file("ears.tsv", text(map_rows() + ears), rows=23), electrodes=None, xyz=None, notes=["positions-approximate"],
           electrodes_read=LABELS + ["M1", "A2"], maps=[[name, [float(VALUES[label][k]) for label in LABELS] + [float(row[k + 1]) for row in ears]] for k, name in enumerate(NAMES)])
    kept = [[row[0], *("0" if row[0] == "Cz" else one for one in row[1:])] for row in map_rows(None)]
    zero = [[name, [float(row[k + 1]) for row in kept]] for k, name in enumerate(NAMES)]
    sample("a channel that is zero throughout: the recording reference", maps_file("reference.tsv", text([map_rows()[0], *kept])), maps=zero, notes=["reference-channel"])
    hinted = ["CSD lamp", "CSD swell", "CSD fog"]
    sample("names that speak of a surface Laplacian", maps_file("laplacian.tsv", text(map_rows(names=hinted))), maps=list(zip(hinted, NAMES)), notes=["laplacian-suspected"])
    flat = [[*map_rows()[0], "calm", "naught"], *([*row, "2.5", "0"] for row in map_rows(None))]
    constant = {"code": "map-constant"}
    sample("a constant map and one of zeros beside others", maps_file("flat.tsv", text(flat), columns=6), maps=[*([name, name] for name in NAMES), ["calm", constant], ["naught", constant]])
    sample("channels interpolated, another left out", MAPS, settings={"interpolated": ["T8"], "exclude": ["Fz"]}, left_out=["T8", "Fz"], notes=["interpolated", "excluded"], labels={"interpolated": ["T8"]})


# --- What the columns are --------------------------------------------------------------------------------------------

def sequences():
    def named(name, names, what, are, **told):
        sample(what, maps_file(name, text(map_rows(names=names))), maps=list(zip(names, NAMES)), columns_are=are, **told)
    named("components.tsv", ["IC1", "IC2", "IC3"], "components", ("components", "found"))
    named("repeats.tsv", ["half_1", "half_2", "half_3"], "repeats", ("repeats", "found"))
    named("times.tsv", ["-100", "0", "100"], "time points in ms", ("time-points", "found"), times={"times": [-100, 0, 100], "unit": "ms"})
    named("times_in_s.tsv", ["-0.1", "0", "0.1"], "time points in s", ("time-points", "found"), times={"times": [-0.1, 0, 0.1], "unit": "s"})
    named("times_with_unit.tsv", ["96 ms", "100 ms", "104 ms"], "time points with their unit", ("time-points", "found"), times={"times": [96, 100, 104], "unit": "ms"})
    comma = [[one.replace(".", ",") if n else one for n, one in enumerate(row)] for row in map_rows(names=["-0.1", "0", "0.1"])]
    sample("time points in s, decimal commas", maps_file("times_with_comma.csv", text(comma, ";"), delimiter=("semicolon", "found"), decimal=("comma", "found")), maps=list(zip(["-0,1", "0", "0,1"], NAMES)),
           columns_are=("time-points", "found"), times={"times": [-0.1, 0, 0.1], "unit": "s"}, notes=["decimal-comma"])
    mixed = [["label", "-0.1", "0", "0.1"], *comma[1:]]
    sample("decimal commas below names with points", maps_file("points_above.csv", text(mixed, ";"), delimiter=("semicolon", "found"), decimal=("comma", "found")), maps=list(zip(["-0.1", "0", "0.1"], NAMES)),
           columns_are=("time-points", "found"), times={"times": [-0.1, 0, 0.1], "unit": "s"}, notes=["decimal-comma"])
    rows = [["time", *LABELS], *([when, *(VALUES[label][k] for label in LABELS)] for k, when in enumerate(["-4", "0", "4"]))]
    sample("time points in rows", maps_file("times_in_rows.tsv", text(rows), rows=3, columns=22, label=None), orientation=("channels-in-columns", "found"), columns_are=("time-points", "found"),
           maps=list(zip(["-4", "0", "4"], NAMES)), times={"times": [-4, 0, 4], "unit": "ms"}, notes=["header-assumed"])
    base = [[name, [float(VALUES[label][k]) - float(VALUES[label][0]) for label in LABELS]] for k, name in enumerate(["-100", "0", "100"])]
    flat = base[0][:1] + [{"code": "map-constant"}]
    sample("the baseline subtracted", replace(file("times.tsv", text(map_rows(names=["-100", "0", "100"])), "maps"), name="times.tsv"), columns_are=("time-points", "found"), settings={"baseline": {"from": -200, "to": -50}},
           maps=[flat, *base[1:]], times={"times": [-100, 0, 100], "unit": "ms"}, notes=["baseline-subtracted"])


# --- What is refused -------------------------------------------------------------------------------------------------

def refusals():
    def changed(row, column, word, rows=None):
        rows = [list(one) for one in rows or map_rows()]
        rows[row - 1][column - 1] = word
        return rows
    field = dict(input="maps", label="Fz", map="swell", line=7, column=3)
    bad = maps_file("letter.tsv", text(changed(7, 3, "1.8O")))
    refused("a letter in a number", bad, ELECTRODES, code="number-expected", file="letter.tsv", **field, says=["1.8O"])
    refused("two decimal points", maps_file("points.tsv", text(changed(7, 3, "1.234.5"))), ELECTRODES, code="number-expected", file="points.tsv", **field, says=["1.234.5"])
    refused("a number beyond all bounds", maps_file("huge.tsv", text(changed(7, 3, "1e400"))), ELECTRODES, code="number-range", file="huge.tsv", **field, says=["1e400"])
    refused("a letter in a coordinate", MAPS, electrodes_file("letter_in_place.tsv", text(changed(5, 4, "3l.0", place_rows()))), code="number-expected", file="letter_in_place.tsv",
            input="electrodes", line=5, column=4, label="F7", says=["3l.0"])
    rows = map_rows()
    rows[8] = rows[8] + ["7"]
    refused("a field too many", maps_file("too_many.tsv", text(rows)), ELECTRODES, code="table-ragged", file="too_many.tsv", line=9, says=["5", "4"])
    rows = map_rows()
    rows[8] = rows[8][:-1]
    refused("a field too few", maps_file("too_few.tsv", text(rows)), ELECTRODES, code="table-ragged", file="too_few.tsv", line=9, says=["3", "4"])
    refused("a line without a label", maps_file("no_label.tsv", text(changed(10, 1, ""))), ELECTRODES, code="table-columns", file="no_label.tsv", input="maps", line=10, column=1)
    refused("a label twice in the maps", maps_file("twice.tsv", text(changed(9, 1, "fp1"))), ELECTRODES, code="label-duplicate", file="twice.tsv", input="maps", line=9, label="fp1", says=["2"])
    refused("a label twice among the electrodes", MAPS, electrodes_file("twice_placed.tsv", text(changed(9, 1, "Fp1", place_rows()))), code="label-duplicate", file="twice_placed.tsv",
            input="electrodes", line=9, label="Fp1", says=["2"])
    refused("an old and a new name of one site", maps_file("t3_t7.tsv", text(map_rows() + [["T3", "1", "2", "3"]])), ELECTRODES, code="label-duplicate", file="t3_t7.tsv", input="maps", line=23, label="T3", says=["T7", "10"])
    refused("a bipolar derivation", maps_file("bipolar.tsv", text(changed(2, 1, "Fp1-F7"))), ELECTRODES, code="label-bipolar", file="bipolar.tsv", input="maps", line=2, label="Fp1-F7")
    ears = [map_rows()[0], *([f"{row[0]}-{'A2' if row[0][-1] in '2468' else 'A1'}", *row[1:]] for row in map_rows(None))]
    refused("one reference on the left, another on the right", maps_file("mixed_references.tsv", text(ears)), ELECTRODES, code="reference-mixed", file="mixed_references.tsv", input="maps")
    refused("surface Laplacians, said by the user", MAPS, ELECTRODES, settings={"laplacian": True}, code="map-laplacian", input="maps")
    calm = [["label", "calm"], *([label, "2.5"] for label in LABELS)]
    refused("nothing but a constant map", maps_file("calm.tsv", text(calm)), ELECTRODES, code="map-constant", file="calm.tsv", input="maps", map="calm", says=["calm"])
    naught = [["label", "naught"], *([label, "0"] for label in LABELS)]
    refused("nothing but zeros", maps_file("naught.tsv", text(naught)), ELECTRODES, code="map-constant", file="naught.tsv", input="maps", map="naught", says=["naught"])
    sunken = [row if row[0] != "Fz" else [row[0], *(f"{float(one) * 0.4:.1f}" for one in row[1:])] for row in place_rows()]
    refused("an electrode 50 mm off the sphere", MAPS, electrodes_file("inside.tsv", text(sunken)), code="electrode-off", file="inside.tsv", input="electrodes", line=7, label="Fz", says=["Fz"])
    seven = text(place_rows(change=lambda xyz: [one * 7 for one in xyz]))
    refused("a head of 64 cm", MAPS, electrodes_file("giant.tsv", seven), code="units-unrecognised", file="giant.tsv", input="electrodes")
    refused("labels of which none is known", maps_file("strangers.tsv", text([map_rows()[0], *([f"Q{n}", *row[1:]] for n, row in enumerate(map_rows(None), 1))])), ELECTRODES, code="labels-unmatched", file="strangers.tsv", input="maps")
    refused("nine electrodes", maps_file("nine.tsv", text(map_rows()[:10])), ELECTRODES, code="electrodes-too-few", file="nine.tsv", input="maps", says=["9", "10"])
    refused("two tables of maps", MAPS, maps_file("one_map.tsv", WRITTEN["one_map.tsv"]), ELECTRODES, code="files-several", says=["maps.tsv", "one_map.tsv"])
    refused("electrodes alone", ELECTRODES, code="maps-missing", file="electrodes.tsv")
    refused("numbers that fit no side", maps_file("eight.txt", text([["1.5", "2", "3"]] * 8, " ")), ELECTRODES, code="shape-unmatched", file="eight.txt", input="maps", says=["8", "3", "21"])
    refused("numbers without labels or electrodes", maps_file("alone.txt", text([["1.5", "2", "3"]] * 8, " ")), code="table-columns", file="alone.txt", input="maps")
    refused("an empty file", maps_file("empty.tsv", b""), ELECTRODES, code="input-empty", file="empty.tsv")
    refused("blanks and line breaks alone", maps_file("blank.tsv", " \n\t\r\n"), ELECTRODES, code="input-empty", file="blank.tsv")
    refused("names of columns and no rows", maps_file("names_alone.tsv", text([map_rows()[0]])), ELECTRODES, code="maps-none", file="names_alone.tsv", input="maps")
    broken = '[["Fp1", 1.5],\n ["Fp2", 2.5,]]\n'
    refused("JSON with a comma too many", maps_file("comma.json", broken), ELECTRODES, code="json-syntax", file="comma.json", line=2, byte=broken.index("]]") + 1)
    refused("JSON cut short", maps_file("cut.json", '[["Fp1", 1.5],\n ["Fp2"'), ELECTRODES, code="json-syntax", file="cut.json", line=2, byte=23)
    refused("JSON nested without end", maps_file("deep.json", "[" * 3000 + "]" * 3000), ELECTRODES, code="json-content", file="deep.json", line=1)
    refused("a control character in Latin-1", maps_file("control.tsv", text(map_rows()).encode() + b"\xfc\x01"), ELECTRODES, code="input-encoding", file="control.tsv", byte=len(text(map_rows())) + 2)
    refused("UTF-16 that ends within a character", maps_file("half.tsv", b"\xff\xfe" + text(map_rows()).encode("utf-16-le") + b"7"), ELECTRODES, code="input-encoding", file="half.tsv",
            byte=2 + 2 * len(text(map_rows())) + 1)
    array = npy(UV)
    refused("an array cut short", maps_file("cut.npy", array[:-5]), ELECTRODES, code="input-truncated", file="cut.npy", byte=len(array) - 5)
    refused("an array of complex numbers", maps_file("complex.npy", npy(UV.astype(complex))), ELECTRODES, code="array-type", file="complex.npy")
    weights = UV.T.copy()
    weights[1, 4] = np.nan
    refused("an unmixing matrix with a gap", maps_file("gap.npy", npy(weights)), ELECTRODES, settings={"mapsAre": "unmixing"}, code="unmixing-singular", file="gap.npy", input="maps")
    refused("a sphering matrix of other channels", replace(MAPS, name="weights.npy"), file("small_sphering.npy", npy(np.eye(20)), "sphering"), ELECTRODES, settings={"mapsAre": "unmixing", "files": {"small_sphering.npy": {"role": "sphering"}}},
            code="unmixing-singular", file="small_sphering.npy")
    refused("a column that is not there", MAPS, ELECTRODES, settings={"columns": {"x": "east"}}, code="column-unknown", file="electrodes.tsv", says=["east", "x"])
    refused("a baseline in which no map lies", replace(MAPS, name="times.tsv"), ELECTRODES, settings={"baseline": {"from": 5, "to": 8}}, code="baseline-empty", file="times.tsv", input="maps")
    refused("an archive within an archive", file("nested.zip", zipped([("a/watch.zip", WRITTEN["watch.zip"])]), "maps"), code="input-no-table", file="nested.zip/a/watch.zip")
    refused("a number spoilt in an archive", file("spoilt.zip", zipped([("electrodes.tsv", text(place_rows())), ("maps.tsv", text(changed(7, 3, "1.8O")))]), "maps"), code="number-expected", file="spoilt.zip/maps.tsv", **field)


def compact(value):
    return json.dumps(value, ensure_ascii=False, allow_nan=False)


if __name__ == "__main__":
    FOLDER.mkdir(exist_ok=True)
    for group in [dividers, lines, headers, figures, positions, bids, ways, json_files, arrays, unmixings, labels, sequences, refusals]:
        group()
    for old in FOLDER.iterdir():
        old.unlink()
    for name, content in WRITTEN.items():
        (FOLDER / name).write_bytes(content)
    watch = {"labels": LABELS, "positions_mm": XYZ.tolist(), "names": NAMES, "maps": {name: UV[:, k].tolist() for k, name in enumerate(NAMES)}}
    samples = ",\n".join(compact(one) for one in SAMPLES)
    (FOLDER / "outcomes.json").write_text(f'{{"watch": {compact(watch)},\n"samples": [\n{samples}\n]}}\n')
    print(len(SAMPLES), "samples,", len(WRITTEN), "files,", sum(map(len, WRITTEN.values())), "bytes")
