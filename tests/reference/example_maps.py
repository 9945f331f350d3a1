"""Writes the invented examples of ../example_maps and, for the tests, what was planted in them (data/example_maps.json):
potentials of chosen dipoles in the default head, with white noise. The same seed gives the same files.

    python3 reference/example_maps.py        (from tests/; needs numpy and scipy)
"""

import json

import numpy as np

from layered_sphere import DATA, STANDARD, Head, centred, fitted_sphere

FOLDER = DATA.parent.parent / "example_maps"
LABELS = ("Fp1 Fp2 AF3 AF4 Fpz AFz AF7 AF8 F9 F7 F5 F3 F1 Fz F2 F4 F6 F8 F10 FT9 FT7 FC5 FC3 FC1 FCz FC2 FC4 FC6 FT8 FT10 "
          "T7 C5 C3 C1 Cz C2 C4 C6 T8 TP9 TP7 CP5 CP3 CP1 CPz CP2 CP4 CP6 TP8 TP10 "
          "P9 P7 P5 P3 P1 Pz P2 P4 P6 P8 P10 PO7 PO3 POz PO4 PO8 O1 Oz O2 Iz").split()
NOISE_UV = 0.2  # of one electrode: what an average over many trials leaves; the tables have one digit more
STRAY_UV = 5.0  # added to the one bad electrode
DIGITS = 2
NAMES = ["lamp", "engine room", "swell", "two horns", "salt", "fog"]


def keeper(rng):
    """The electrodes of an imagined lighthouse keeper in mm, x right, y front, z up, origin between the ears: a head that
    is longer than wide, flatter at the sides and narrower below than a sphere, measured to about 2 mm."""
    at = np.array([STANDARD[label] for label in LABELS])
    x, y, z = at.T
    low = np.minimum(z, 0)
    p = np.stack([
        (78 + 6 * low - 2 * x * x) * x,
        (89 + 5 * low) * y - 2 * z * z,
        81 * z + 5 * (y < 0) * y * z,
    ], -1)
    return np.round(p + np.array([0.0, 6.0, 42.0]) + rng.normal(size=p.shape) * 1.7, 1)


def frame(label):
    """Unit vectors at a standard site: outwards, to the front along the scalp, and across."""
    out = STANDARD[label]
    front = np.array([0.0, 1.0, 0.0]) - out[1] * out
    front /= np.linalg.norm(front)
    return out, front, np.cross(front, out)


def planted(rng, head):
    """Sources of each map: (position from the sphere's centre in mm, moment in nAm)."""

    def source(label, eccentricity, out, front, across):
        axes = frame(label)
        return STANDARD[label] * eccentricity * head.inner, out * axes[0] + front * axes[1] + across * axes[2]

    def anywhere():
        d, m = rng.normal(size=3), rng.normal(size=3)
        d[2] = abs(d[2])
        return d / np.linalg.norm(d) * rng.uniform(0.75, 0.92) * head.inner, m / np.linalg.norm(m) * rng.uniform(10, 20)

    return {
        "lamp": [source("CP3", 0.80, 22, 6, -4)],
        "engine room": [source("Fz", 0.28, 38, 30, 12)],
        "swell": [source("C4", 0.72, 3, -32, 6)],
        "two horns": [source("FT7", 0.66, 4, 3, 30), source("FT8", 0.62, -3, 4, -33)],
        "salt": [source("FC1", 0.70, 24, -9, 0)],
        "fog": [anywhere() for _ in range(24)],
    }


STRAY = {"salt": "P6"}


def write_table(file, rows):
    (FOLDER / file).write_text("".join("\t".join(row) + "\n" for row in rows))


def main():
    rng = np.random.default_rng(20261201)
    p = keeper(rng)
    head = Head(*fitted_sphere(p))
    e = p - head.centre
    distance = np.linalg.norm(e, axis=1)
    e /= distance[:, None]
    columns, record = {}, {}
    for name, sources in planted(rng, head).items():
        v = sum(head.lead(r, e) @ m for r, m in sources) + rng.normal(size=len(e)) * NOISE_UV
        if name in STRAY:
            v[LABELS.index(STRAY[name])] += STRAY_UV
        columns[name] = [f"{value:.{DIGITS}f}" for value in centred(v)]
        record[name] = {
            "sources": [{"position_mm": (r + head.centre).tolist(), "moment_nam": m.tolist()} for r, m in sources],
            "noise_uv": NOISE_UV, "stray": STRAY.get(name),
        }
        print(f"{name:12} {np.ptp(centred(v)):6.1f} microvolt from end to end")
    assert list(columns) == NAMES
    rms, largest = np.sqrt(np.mean((distance - head.radius) ** 2)), np.abs(distance - head.radius).max()
    print(f"{len(LABELS)} electrodes, radius {head.radius:.1f} mm, rms {rms:.1f} mm, largest {largest:.1f} mm off the sphere")

    write_table("watch_electrodes.tsv",
                [["label", "x", "y", "z"]] + [[label] + [f"{x:.1f}" for x in row] for label, row in zip(LABELS, p)])
    write_table("watch_maps.tsv",
                [["label"] + NAMES] + [[label] + [columns[name][i] for name in NAMES] for i, label in enumerate(LABELS)])
    for name, column in columns.items():
        write_table(f"{name.replace(' ', '_')}.tsv", [["label", name]] + [list(pair) for pair in zip(LABELS, column)])
    (DATA / "example_maps.json").write_text(
        json.dumps({"generator": "tests/reference/example_maps.py", "maps": record}, indent=1) + "\n")


if __name__ == "__main__":
    main()
