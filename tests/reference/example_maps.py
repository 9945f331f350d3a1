"""Writes the invented examples of ../example_maps: potentials of chosen dipoles in the default head, with noise.

    python3 reference/example_maps.py        (from tests/; needs numpy and scipy)
"""

import numpy as np

from layered_sphere import DATA, STANDARD, Head, centred, fitted_sphere

FOLDER = DATA.parent.parent / "example_maps"
LABELS = ("Fp1 Fp2 AF3 AF4 F7 F3 Fz F4 F8 FC5 FC1 FC2 FC6 T7 C3 Cz C4 T8 "
          "CP5 CP1 CP2 CP6 P7 P3 Pz P4 P8 PO3 PO4 O1 Oz O2").split()


def under(label, eccentricity, head):
    return STANDARD[label] * eccentricity * head.inner


def main():
    rng = np.random.default_rng(20260704)
    at = np.array([STANDARD[label] for label in LABELS])
    # An invented listener: slightly narrow head, positions measured to about 2 mm, origin between the ears.
    p = at * np.array([80.0, 90.0, 88.0]) + np.array([0.0, 6.0, 28.0]) + rng.normal(size=at.shape) * 2
    p = np.round(p, 1)
    head = Head(*fitted_sphere(p))
    e = p - head.centre
    e /= np.linalg.norm(e, axis=1)[:, None]
    right = np.array([1.0, 0.0, 0.0])
    up = np.array([0.0, 0.0, 1.0])
    maps = {
        "left tap": head.lead(under("C3", 0.72, head), e) @ (np.array([0.3, 0.9, 0.3]) * 25),
        "both ears": head.lead(under("T7", 0.6, head), e) @ (up * 30) + head.lead(under("T8", 0.6, head), e) @ (up * 27),
        "glance": head.lead(under("Fp2", 0.95, head), e) @ (right * 60),
        "hum": np.zeros(len(e)),
    }
    noise = {"left tap": 0.1, "both ears": 0.1, "glance": 0.08, "hum": 0.0}
    columns = []
    for name, v in maps.items():
        level = noise[name] * centred(v).std() or 1.5
        columns.append(v + rng.normal(size=len(v)) * level)
    with (FOLDER / "listening_electrodes.tsv").open("w") as file:
        file.write("label\tx\ty\tz\n")
        file.writelines(f"{label}\t" + "\t".join(f"{x:.1f}" for x in row) + "\n" for label, row in zip(LABELS, p))
    with (FOLDER / "listening_maps.tsv").open("w") as file:
        file.write("label\t" + "\t".join(maps) + "\n")
        file.writelines(f"{label}\t" + "\t".join(f"{v[i]:.3f}" for v in columns) + "\n" for i, label in enumerate(LABELS))


if __name__ == "__main__":
    main()
