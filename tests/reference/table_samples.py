"""Small binary files as other programs write them, with what must be read from them.

    python3 reference/table_samples.py        (from tests/; needs numpy and scipy)

Writes data/samples/* and data/samples/parts.json. The .npy and .npz files are NumPy's own, the .mat files SciPy's, the
archives zipfile's; written with NumPy 2.4.6, SciPy 1.17.1, Python 3.11. What those cannot write (numbers in smaller types, high
byte first, characters of two bytes, both as MATLAB does) is put together here after the published description
("MAT-File Format", The MathWorks). Expected values come from the arrays, not from any reading.
"""

import io
import json
import struct
import zipfile
import zlib
from pathlib import Path

import numpy as np
import scipy
import scipy.io
import scipy.sparse

DATA = Path(__file__).resolve().parent.parent / "data"
FOLDER = DATA / "samples"
EXPECTED = {}
RANDOM = np.random.default_rng(4)
STAMP = (2020, 1, 1, 0, 0, 0)


def put(name, content, parts=None, error=None, byte=None, passed_over=None):
    (FOLDER / name).write_bytes(content)
    if error:
        EXPECTED[name] = {"error": error, "byte": byte}
    else:
        EXPECTED[name] = {"parts": parts, "passed_over": passed_over or {}}


def numbers(array, name=None):
    array = np.asarray(array)
    matrix = array.reshape(-1, 1) if array.ndim < 2 else array
    values = [None if np.isnan(value) else value for value in matrix.astype("<f8").ravel().tolist()]
    return {"name": name, "rows": matrix.shape[0], "columns": matrix.shape[1], "values": values}


def words(list_of_words, name=None):
    return {"name": name, "words": list(list_of_words)}


def cells(rows, name=None):
    return {"name": name, "cells": rows}


# --- NumPy -----------------------------------------------------------------------------------------------------------

def npy(array, version=None):
    out = io.BytesIO()
    np.lib.format.write_array(out, np.asanyarray(array), version=version)
    return out.getvalue()


def npy_by_hand(header, body=b""):
    header = header.encode() + b"\n"
    return b"\x93NUMPY\x01\x00" + struct.pack("<H", len(header)) + header + body


def write_npy():
    matrix = RANDOM.standard_normal((5, 3)) * 10.0 ** RANDOM.integers(-9, 9, (5, 3))
    matrix[3, 1] = np.nan
    small = RANDOM.integers(-100, 100, (4, 3))
    for order in "<>":
        side = "little" if order == "<" else "high_first"
        for kind in ["f8", "f4"]:
            typed = matrix.astype(order + kind)
            put(f"{kind}_{side}.npy", npy(typed), [numbers(typed)])
            put(f"{kind}_{side}_columns.npy", npy(np.asfortranarray(typed)), [numbers(typed)])
        for kind in ["i2", "i4", "i8"]:
            typed = (small * (1 if kind == "i2" else 70_001)).astype(order + kind)
            put(f"{kind}_{side}.npy", npy(typed), [numbers(typed)])
    for kind in ["i1", "u1", "?"]:
        typed = abs(small).astype(kind) if kind != "i1" else small.astype(kind)
        put(f"{np.dtype(kind).str[1:]}.npy", npy(typed), [numbers(typed)])
    put("u2.npy", npy(abs(small).astype("<u2")), [numbers(abs(small))])
    put("u4.npy", npy(abs(small).astype(">u4")), [numbers(abs(small))])
    put("u8.npy", npy(np.array([2**53 + 1, 2**64 - 1], "<u8")), [numbers(np.array([2.0**53, 2.0**64]))])
    for version in [(2, 0), (3, 0)]:
        put(f"version_{version[0]}.npy", npy(matrix, version), [numbers(matrix)])
    put("list.npy", npy(matrix[:, 0]), [numbers(matrix[:, 0])])
    put("scalar.npy", npy(np.float64(7.25)), [numbers(np.float64(7.25))])
    put("one_row.npy", npy(matrix[:1]), [numbers(matrix[:1])])
    labels = ["Fp1", "Cz", "T7", "", "Grün", "电极"]
    put("labels_u.npy", npy(np.array(labels)), [words(labels)])
    put("labels_u_high_first.npy", npy(np.array(labels).astype(">U6")), [words(labels)])
    put("labels_s.npy", npy(np.array([b"Fp1", b"Cz", b"Gr\xfcn"])), [words(["Fp1", "Cz", "Grün"])])
    table = np.array([["Fp1", "1.5", "n/a"], ["Cz", "-2", "3"]])
    put("table_u.npy", npy(np.asfortranarray(table)), [cells(table.tolist())])
    put("python_2.npy", npy_by_hand("{'shape': (2L, 1L), \"descr\" : '<i2', 'fortran_order': False}   ",
                                    struct.pack("<2h", 3, -4)), [numbers([3, -4])])

    whole = npy(matrix)
    begin = len(whole) - matrix.nbytes
    put("cut_numbers.npy", whole[:-7], error="input-truncated", byte=len(whole) - 7)
    put("cut_header.npy", whole[:40], error="input-truncated", byte=40)
    put("too_long.npy", whole + b"\0", error="input-damaged", byte=len(whole) + 1)
    put("version_9.npy", whole[:6] + b"\x09" + whole[7:], error="input-damaged", byte=7)
    head = "{'descr': '<f8', 'fortran_order': False, 'shape': "
    put("billion_rows.npy", npy_by_hand(head + "(1000000000, 3), }"), error="array-size", byte=11 + len(head))
    put("many_rows.npy", npy_by_hand(head + "(99999999999999999999999, 3), }"), error="array-size", byte=11 + len(head))
    put("three.npy", npy(np.zeros((2, 2, 2))), error="array-size", byte=11 + len(head))
    put("no_rows.npy", npy(np.zeros((0, 3))), error="input-empty", byte=11 + len(head))
    put("no_shape.npy", npy_by_hand("{'descr': '<f8', 'fortran_order': False, }"), error="input-damaged", byte=54)
    put("twice.npy", npy_by_hand("{'descr': '<f8', 'descr': '<f8', }"), error="input-damaged", byte=28)
    put("complex.npy", npy(matrix.astype(complex)), error="array-type", byte=21)
    put("half.npy", npy(np.ones(3, "<f2")), error="array-type", byte=21)
    put("fields.npy", npy(np.array([(1, 2.0)], [("a", "<i4"), ("b", "<f8")])), error="array-type", byte=21)
    objects = io.BytesIO()
    np.save(objects, np.array(["Cz", None], object), allow_pickle=True)
    put("objects.npy", objects.getvalue(), error="array-type", byte=21)
    infinite = matrix.copy()
    infinite[2, 2] = np.inf
    put("infinite.npy", npy(infinite), error="number-range", byte=begin + 8 * 8 + 1)


# --- MATLAB ----------------------------------------------------------------------------------------------------------

def mat(variables, **options):
    out = io.BytesIO()
    scipy.io.savemat(out, variables, **options)
    # The header holds the date of writing.
    return b"MATLAB 5.0 MAT-file".ljust(116) + out.getvalue()[116:]


def cell(items, shape=None):
    out = np.empty(len(items), object)
    out[:] = items
    return out.reshape(shape or (-1, 1), order="C")


class ByHand:
    """Elements of a level-5 file in either order of bytes."""

    TYPES = {"i1": 1, "u1": 2, "i2": 3, "u2": 4, "i4": 5, "u4": 6, "f4": 7, "f8": 9, "i8": 12, "u8": 13}

    def __init__(self, order):
        self.order = order

    def element(self, code, data):
        if 0 < len(data) <= 4:
            return struct.pack(self.order + "I", len(data) << 16 | code) + data.ljust(4, b"\0")
        return struct.pack(self.order + "II", code, len(data)) + data.ljust(-(-len(data) // 8) * 8, b"\0")

    def array(self, kind, values):
        return self.element(self.TYPES[kind], np.asarray(values).astype(self.order + kind).tobytes("F"))

    def matrix(self, code, shape, name, rest, flags=0):
        head = self.array("u4", [flags | code, 0]) + self.array("i4", shape) + self.array("i1", list(name.encode()))
        return self.element(14, head + rest)

    def file(self, *variables):
        mark = struct.pack(self.order + "HH", 0x0100, 0x4D49)
        return b"MATLAB 5.0 MAT-file, by hand".ljust(124) + mark + b"".join(variables)

    def packed(self, variable):
        data = zlib.compress(variable)
        return struct.pack(self.order + "II", 15, len(data)) + data


def cap():
    """Nineteen electrodes of the international system at their standard places, in metres, and four maps."""
    rows = [line.split(",") for line in (DATA / "standard_positions.csv").read_text().split("\n")[1:] if line]
    sites = {row[0]: np.array([float(field) for field in row[1:4]]) for row in rows}
    labels = "Fp1 Fp2 F7 F3 Fz F4 F8 T7 C3 Cz C4 T8 P7 P3 Pz P4 P8 O1 O2".split()
    positions = np.array([sites[label] for label in labels]) * 0.09
    maps = np.stack([np.cos((positions - place) @ axis * 30) for place, axis in
                     [([0.02, 0, 0.05], [1, 0, 0.3]), ([-0.03, 0.02, 0.04], [0, 1, 0]),
                      ([0, -0.05, 0.02], [0.5, 0.5, 1]), ([0.01, 0.01, 0.06], [-1, 0.2, 0])]], axis=1)
    return labels, positions, maps * 20 - 5


def write_mat():
    labels, positions, maps = cap()
    variables = {"labels": cell(labels), "positions": positions, "A": maps}
    parts = [words(labels, "labels"), numbers(positions, "positions"), numbers(maps, "A")]
    put("cap.mat", mat(variables), parts)
    put("cap_packed.mat", mat(variables, do_compression=True), parts)

    structure = {"montage": {"label": cell(labels), "xyz": positions, "unit": "m", "count": 19.0,
                             "inner": {"maps": maps}}}
    put("structure.mat", mat(structure),
        [words(labels, "montage.label"), numbers(positions, "montage.xyz"), words(["m"], "montage.unit"),
         numbers([19.0], "montage.count"), numbers(maps, "montage.inner.maps")])

    records = np.empty((1, 19), [("label", object), ("x", object), ("y", object), ("xyz", object), ("type", object)])
    for index, label in enumerate(labels):
        x = np.empty((0, 0)) if label == "Cz" else positions[index, 0]
        records[0, index] = (label, x, positions[index, 1], positions[index], np.empty((0, 0)))
    x = np.where(np.array(labels) == "Cz", np.nan, positions[:, 0])
    put("records.mat", mat({"channels": records}, do_compression=True),
        [words(labels, "channels.label"), numbers(x, "channels.x"), numbers(positions[:, 1], "channels.y"),
         numbers(positions, "channels.xyz")])

    mixed = [[label, *map(float, row)] for label, row in zip(labels, positions)]
    put("mixed_cells.mat", mat({"table": cell([field for row in mixed for field in row], (19, 4))}),
        [cells([[label, *map(repr, row)] for label, *row in mixed], "table")])
    put("nested_words.mat", mat({"labels": cell([cell([label]) for label in labels])}), [words(labels, "labels")])
    put("letters.mat", mat({"names": np.array(["Fp1 ", "Cz  ", "Grün"]), "word": "Fz", "none": np.empty((0, 0))}),
        [words(["Fp1", "Cz", "Grün"], "names"), words(["Fz"], "word")])

    kinds = {kind: RANDOM.integers(0, 100, (2, 3)).astype(kind) for kind in
             ["int8", "uint8", "int16", "uint16", "int32", "uint32", "int64", "uint64", "float32", "float64", "bool"]}
    put("kinds.mat", mat(kinds), [numbers(array, name) for name, array in kinds.items()])

    sparse = scipy.sparse.csc_matrix(np.eye(3))
    huge = np.zeros((513, 600), np.int8)
    rest = {"S": sparse, "Z": np.ones((2, 2)) * 1j, "cube": np.zeros((2, 2, 2)), "huge": huge,
            "inf": np.array([[1.0, np.inf]]), "mixed": cell(["Cz", np.eye(2)]), "ok": np.array([[1.0, 2.0]])}
    why = {"sparse": ["S"], "complex": ["Z"], "dimensions": ["cube"], "size": ["huge"], "range": ["inf"], "mixed": ["mixed"]}
    put("passed_over.mat", mat(rest, do_compression=True), [numbers([[1.0, 2.0]], "ok")], passed_over=why)
    put("only_sparse.mat", mat({"S": sparse}), error="array-type")
    put("nothing.mat", mat({}), error="input-empty")

    small = np.array([[1.0, -2, 3], [4, 5, 127]])
    for order, side in [("<", "little"), (">", "high_first")]:
        hand = ByHand(order)
        small_types = [hand.matrix(6, (2, 3), f"as_{kind}", hand.array(kind, np.abs(small) if kind[0] == "u" else small))
                       for kind in ["i1", "u1", "i2", "u2", "i4", "f4", "f8"]]
        expected = [numbers(np.abs(small) if kind[0] == "u" else small, f"as_{kind}")
                    for kind in ["i1", "u1", "i2", "u2", "i4", "f4", "f8"]]
        scalar = hand.matrix(6, (1, 1), "s", hand.array("u1", [7]))
        logical = hand.matrix(9, (1, 2), "logical", hand.array("u1", [1, 0]), flags=0x200)
        units = np.array([list("Fp1é".encode("utf-16-le")[::2]), list("Oz  ".encode("utf-16-le")[::2])])
        letters = hand.matrix(4, (2, 4), "letters", hand.array("u2", units))
        smile = hand.matrix(4, (1, 4), "wide", hand.element(17, "C\U0001f600z".encode("utf-16" + ("-le" if order == "<" else "-be"))))
        quads = hand.matrix(4, (1, 2), "quads", hand.element(18, "Cz".encode("utf-32" + ("-le" if order == "<" else "-be"))))
        function = hand.matrix(16, (1, 1), "f", b"")
        thing = hand.matrix(3, (1, 1), "o", b"")
        opaque = hand.element(14, hand.array("u4", [17, 0]) + hand.array("i1", list(b"table")) + hand.array("i1", list(b"MCOS")))
        store = hand.matrix(9, (1, 8), "", hand.array("u1", range(8)))
        variables = small_types + [scalar, logical, letters, smile, quads, function, thing, opaque, store]
        parts = expected + [numbers([7], "s"), numbers([[1, 0]], "logical"), words(["Fp1é", "Oz"], "letters"),
                            words(["C\U0001f600z"], "wide"), words(["Cz"], "quads")]
        passed = {"function": ["f"], "object": ["o", "table"]}
        put(f"by_hand_{side}.mat", hand.file(*variables), parts, passed_over=passed)
        put(f"by_hand_{side}_packed.mat", hand.file(*map(hand.packed, variables)), parts, passed_over=passed)

    hand = ByHand("<")
    one = hand.matrix(6, (1, 2), "a", hand.array("f8", [1.5, 2.5]))
    two = hand.matrix(6, (2, 2), "b", hand.array("f8", [[1.5, 2.5], [3.5, 4.5]]))
    whole = hand.file(one, two)
    put("cut.mat", whole[:-9], error="input-truncated", byte=len(whole) - 9)
    put("cut_header.mat", whole[:100], error="input-truncated", byte=100)
    put("cut_packed.mat", hand.file(one, hand.packed(two))[:-5], error="input-truncated",
        byte=128 + len(one) + len(hand.packed(two)) - 5)
    spoilt = bytearray(hand.file(one, hand.packed(two)))
    spoilt[128 + len(one) + 20] ^= 0x55
    put("spoilt_packed.mat", bytes(spoilt), error="input-damaged", byte=129 + len(one))
    wrong = hand.matrix(6, (3, 2), "c", hand.array("f8", [1.5, 2.5]))
    put("wrong_size.mat", hand.file(one, wrong), error="input-damaged", byte=129 + len(one))
    put("wrong_kind.mat", hand.file(one, hand.element(99, b"12345678")), error="input-damaged", byte=129 + len(one))
    deep = hand.matrix(6, (1, 1), "", hand.array("f8", [1.5]))
    for _ in range(20):
        deep = hand.matrix(1, (1, 1), "", deep)
    deep = hand.matrix(1, (1, 2), "deep", deep + deep)
    put("deep.mat", hand.file(one, deep), [numbers([[1.5, 2.5]], "a")], passed_over={"nested": ["deep"]})
    put("level_7_3.mat", b"MATLAB 7.3 MAT-file".ljust(124) + b"\0\2IM" + bytes(384) + b"\x89HDF\r\n\x1a\n" + bytes(88),
        error="input-hdf5")
    level_4 = io.BytesIO()
    scipy.io.savemat(level_4, {"A": maps}, format="4")
    put("level_4.mat", level_4.getvalue(), error="input-matlab-4")


# --- Archives --------------------------------------------------------------------------------------------------------

def archive(files, comment=b""):
    out = io.BytesIO()
    with zipfile.ZipFile(out, "w") as target:
        target.comment = comment
        for name, content, method in files:
            info = zipfile.ZipInfo(name, STAMP)
            info.compress_type = method
            target.writestr(info, content)
    return out.getvalue()


def write_zip():
    stored, deflated = zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED
    labels, positions, maps = cap()
    electrodes = "label\tx\ty\tz\n" + "".join(f"{label}\t{x!r}\t{y!r}\t{z!r}\n" for label, (x, y, z) in
                                              zip(labels, positions.tolist()))
    table = "label\tA\tB\tC\tD\n" + "".join("\t".join([label, *map(repr, row)]) + "\n" for label, row in
                                            zip(labels, maps.tolist()))

    def members(pairs):
        return {"members": [{"name": name, "text": content} for name, content in pairs]}

    def put_zip(name, content, pairs):
        (FOLDER / name).write_bytes(content)
        EXPECTED[name] = members(pairs)

    both = [("cap_electrodes.tsv", electrodes, deflated), ("maps/Wärme.tsv", table, stored)]
    put_zip("cap.zip", archive(both, b"a comment"), [(name, content) for name, content, _ in both])
    extra = [("maps/", "", stored), *both, ("__MACOSX/._cap.tsv", "x", stored), (".hidden", "x", stored),
             ("a/.git/b.tsv", "x", deflated), ("Thumbs.db", "x", stored)]
    put_zip("with_hidden.zip", archive(extra), [(name, content) for name, content, _ in both])

    out = io.BytesIO()
    with zipfile.ZipFile(out, "w") as target:
        for name, array in [("labels", np.array(labels)), ("positions", positions), ("A", maps)]:
            target.writestr(zipfile.ZipInfo(f"{name}.npy", STAMP), npy(array), compress_type=deflated)
    (FOLDER / "cap.npz").write_bytes(out.getvalue())
    EXPECTED["cap.npz"] = {"members": [
        {"name": "labels.npy", "parts": [words(labels)]}, {"name": "positions.npy", "parts": [numbers(positions)]},
        {"name": "A.npy", "parts": [numbers(maps)]}]}

    whole = archive(both)
    directory = whole.index(b"PK\1\2")
    end = whole.rindex(b"PK\5\6")

    def spoilt(at, content):
        return whole[:at] + content + whole[at + len(content):]

    put("encrypted.zip", spoilt(directory + 8, b"\1\0"), error="input-zip", byte=directory + 1)
    put("method.zip", spoilt(directory + 10, b"\x0c\0"), error="input-zip", byte=directory + 1)
    put("sixty_four.zip", spoilt(end + 16, b"\xff" * 4), error="input-zip", byte=end + 1)
    put("divided.zip", spoilt(end + 4, b"\1\0"), error="input-zip", byte=end + 1)
    put("checksum.zip", spoilt(directory + 16, b"\0" * 4), error="input-damaged", byte=directory + 1)
    put("cut.zip", whole[:-30], error="input-truncated", byte=len(whole) - 30)
    put("spreadsheet.zip", archive([("[Content_Types].xml", "<Types/>", deflated)]), error="input-no-table")
    put("empty.zip", archive([]), error="input-empty", byte=1)
    put("archive_inside.zip", archive([("inner.zip", whole, stored)]), error="input-no-table")


# --- Text and others -------------------------------------------------------------------------------------------------

def write_text():
    text = "label\tµV left\tµV right\nFp1\t1.5\t-2\nGrün\t3.25\t4\nOz\t-5\t6.125\n"
    for name, encoding, mark in [("utf_16_low_first", "utf-16-le", b"\xff\xfe"), ("utf_16_high_first", "utf-16-be", b"\xfe\xff"),
                                 ("latin_1", "latin-1", b""), ("utf_8_mark", "utf-8", b"\xef\xbb\xbf"),
                                 ("utf_16_no_mark", "utf-16-le", b"")]:
        (FOLDER / f"{name}.txt").write_bytes(mark + text.encode(encoding))
    pixel = zlib.compress(b"\0\0")
    chunk = lambda kind, data: struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))
    put("picture.txt", b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", struct.pack(">IIBBBBB", 1, 1, 8, 0, 0, 0, 0))
        + chunk(b"IDAT", pixel) + chunk(b"IEND", b""), error="input-no-table")
    put("document.txt", b"%PDF-1.4\n%%EOF\n", error="input-no-table")
    signals = 2
    recording = (b"0".ljust(8) + b"X".ljust(80) + b"X".ljust(80) + b"01.01.2000.00.00" + str(256 * (signals + 1)).encode().ljust(8)
                 + b"".ljust(44) + b"1".ljust(8) + b"1".ljust(8) + str(signals).encode().ljust(4) + b" " * 512)
    put("recording.txt", recording, error="input-no-table")
    put("noise.txt", RANDOM.bytes(600), error="input-no-table")


if __name__ == "__main__":
    FOLDER.mkdir(exist_ok=True)
    write_npy()
    write_mat()
    write_zip()
    write_text()
    written = json.dumps(EXPECTED, ensure_ascii=False, allow_nan=False)
    (FOLDER / "parts.json").write_text(written.replace('}, "', '},\n"') + "\n")
    print(len(EXPECTED), "files;", "NumPy", np.__version__, "SciPy", scipy.__version__)
