"""Writes the invented recording of ../example_maps that is unmixed twice, and for the tests what was planted in it
(data/example_night.json).

    python3 reference/example_night.py        (from tests/; needs numpy and scipy)

A minute of 32 channels is made of 16 dipoles of sparse activity, a background of many weak sources and the noise of the
amplifier, then unmixed into as many components: once by maximising non-Gaussianity (fixed-point iteration with the
contrast log cosh, all components at once; Hyvärinen 1999, IEEE Trans Neural Netw 10:626-634), once into principal
components. The maps are the columns of the mixing matrices. The background is Gaussian, so that nothing tells its components
apart: theirs depend on the rounding of the machine, and another run gives other ones.
"""

import json

import numpy as np

from example_maps import frame, write_table
from layered_sphere import DATA, STANDARD, Head, centred

LABELS = ("Fp1 Fp2 AF3 AF4 F7 F3 Fz F4 F8 FT7 FC3 FCz FC4 FT8 T7 C3 Cz C4 T8 TP7 CP3 CPz CP4 TP8 "
          "P7 P3 Pz P4 P8 O1 Oz O2").split()
# Site above, share of the way out to the edge of the brain, moment outwards, to the front and across, in nAm.
PLANTED = [
    ("POz", .72, 40, 10, 0), ("O1", .62, 20, 30, -15), ("PO4", .70, 30, -10, 25), ("Pz", .55, 35, 25, 0),
    ("P4", .78, 25, 5, -20), ("CP3", .80, 8, -32, 6), ("C3", .74, 10, 30, -8), ("C4", .76, -6, 32, 5),
    ("FCz", .50, 30, 35, 0), ("Fz", .66, 30, 12, -4), ("F4", .75, 22, -18, 10), ("AF3", .82, 35, 15, 0),
    ("T7", .70, 25, 0, 25), ("T8", .68, 10, 5, -32), ("TP8", .60, 30, -20, 10), ("FT7", .78, 30, 10, 10),
]
BACKGROUND = 300  # sources
BACKGROUND_NAM = 7  # of each
NOISE_UV = 0.25
SAMPLES = 128 * 60
STEPS = 300  # what can be told apart is so after a few dozen
DIGITS = 2


def recording(rng, head, e):
    mixing = []
    for label, share, *moment in PLANTED:
        axes = np.array(frame(label))
        mixing.append(head.lead(STANDARD[label] * share * head.inner, e) @ (np.array(moment) @ axes))
    mixing = np.array(mixing).T
    sizes = np.geomspace(1.0, 0.35, len(PLANTED))
    data = mixing @ (rng.laplace(size=(len(PLANTED), SAMPLES)) * sizes[:, None] / np.sqrt(2))
    for _ in range(BACKGROUND):
        d, m = rng.normal(size=3), rng.normal(size=3)
        d[2] = d[2] if d[2] > -0.3 * np.linalg.norm(d) else -d[2]
        at = d / np.linalg.norm(d) * head.inner * 0.9 * rng.uniform() ** (1 / 3)
        data += np.outer(head.lead(at, e) @ (m / np.linalg.norm(m)) * BACKGROUND_NAM, rng.normal(size=SAMPLES))
    return centred(data + rng.normal(size=data.shape) * NOISE_UV), mixing


def principal(data):
    """Mixing matrix and its inverse: the eigenvectors of the covariance, times the standard deviations."""
    values, vectors = np.linalg.eigh(data @ data.T / data.shape[1])
    keep = np.argsort(values)[::-1][:len(LABELS) - 1]  # of an average reference one is missing
    return vectors[:, keep] * np.sqrt(values[keep]), (vectors[:, keep] / np.sqrt(values[keep])).T


def independent(data, rng):
    mixing, unmixing = principal(data)
    white = unmixing @ data
    w, _, v = np.linalg.svd(rng.normal(size=(len(white), len(white))))
    w = w @ v
    for _ in range(STEPS):
        y = np.tanh(w @ white)
        new = y @ white.T / SAMPLES - (1 - y * y).mean(axis=1)[:, None] * w
        u, _, v = np.linalg.svd(new)
        w = u @ v
    mixing = mixing @ w.T
    order = np.argsort(-(mixing**2).sum(axis=0))
    mixing = mixing[:, order]
    # The sign of a component is arbitrary: the larger end up.
    return mixing * np.where(mixing.max(axis=0) < -mixing.min(axis=0), -1, 1)


def main():
    rng = np.random.default_rng(20261205)
    head = Head((0.0, 0.0, 0.0), 88.0)
    e = np.array([STANDARD[label] for label in LABELS])
    data, mixing = recording(rng, head, e)
    found = {"independent": independent(data, rng), "principal": principal(data)[0]}
    for name, maps in found.items():
        names = [f"{name[0].upper()}C{i + 1}" for i in range(maps.shape[1])]
        rows = [[label] + [f"{v:.{DIGITS}f}" for v in row] for label, row in zip(LABELS, centred(maps))]
        write_table(f"night_{name}.tsv", [["label"] + names] + rows)
        c = centred(mixing)
        r = np.abs((c / np.linalg.norm(c, axis=0)).T @ (maps / np.linalg.norm(maps, axis=0)))
        print(name, "best match of each planted source:", np.round(r.max(axis=1), 2))
    (DATA / "example_night.json").write_text(json.dumps({
        "generator": "tests/reference/example_night.py",
        "planted": [{"site": label, "position_mm": (STANDARD[label] * share * head.inner).tolist()}
                    for label, share, *_ in PLANTED]}, indent=1) + "\n")


if __name__ == "__main__":
    main()
