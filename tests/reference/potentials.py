"""Writes data/potentials_axis.csv (a dipole on the z axis) and the potentials of data/potentials_cartesian.csv
(a dipole off the axes; its electrodes are taken from the file itself), 40-digit arithmetic (spheres.py).

    python3 reference/potentials.py        (from tests/; needs mpmath)
"""

import csv
from itertools import groupby
from pathlib import Path

from mpmath import cos, mpf, nstr, pi, sin, sqrt

from spheres import Shells, n4, rd3

ECCENTRICITIES = ["0", "0.1", "0.2", "0.3", "0.4", "0.5", "0.6", "0.7", "0.8", "0.9", "0.95"]
DATA = Path(__file__).resolve().parent.parent / "data"
MOMENT = mpf("1e-8")
TERMS = 1000


def models():
    yield "hom_R92_s0.33", Shells(["0.092"], ["0.33"], N=2000), "92"
    for ratio in (80, 25, 15):
        yield f"3shell_80_85_92_r{ratio}", rd3(ratio, N=TERMS), "80"
    yield "3shell_80_85_92_r80_skulltan10x", rd3(80, aniso=10, N=TERMS), "80"
    for ratio in (80, 40, 20):
        yield f"4shell_79_80_85_90_csf5_r{ratio}", n4(ratio, N=TERMS), "79"
    yield "4shell_79_80_85_90_csf5_r20_skulltan10x", n4(20, aniso=10, N=TERMS), "79"


def off_axis():
    path = DATA / "potentials_cartesian.csv"
    head, *rows = list(csv.reader(path.read_text().splitlines()))
    r = [mpf(x) / 1000 for x in (-30, 24, 32)]
    q = [mpf(x) * mpf("1e-9") for x in (3, -4, 12)]
    size = sqrt(sum(x * x for x in r))
    qr = sum(a * b for a, b in zip(q, r)) / size
    shells = {"3shell_r80": rd3(80, N=TERMS), "3shell_r25": rd3(25, N=TERMS),
              "3shell_r80_skulltan10x": rd3(80, aniso=10, N=TERMS), "4shell_r20": n4(20, N=TERMS)}
    for model, group in groupby(rows, key=lambda row: row[0]):
        group = list(group)
        values = []
        for row in group:
            e = [mpf(x) for x in row[3:6]]
            c = sum(a * b for a, b in zip(e, r)) / size
            along = sum(a * b for a, b in zip(q, e)) - qr * c
            values.append(shells[model].pot(size, c, 1, qr, along) * 10**6)
        mean = sum(values) / len(values)
        for row, v in zip(group, values):
            row[6:] = [nstr(v, 16), nstr(v - mean, 16)]
    with path.open("w", newline="") as file:
        csv.writer(file, lineterminator="\n").writerows([head, *rows])


def main():
    off_axis()
    lines = ["model,r0_mm,orientation,theta_deg,V_uV(10 nAm; azimuth of the moment; zero surface mean)"]
    for name, shells, brain in models():
        for eccentricity in ECCENTRICITIES:
            r0 = mpf(eccentricity) * mpf(brain)
            for kind in ("rad", "tan"):
                for angle in range(0, 181, 15):
                    ct, st = cos(angle * pi / 180), sin(angle * pi / 180)
                    if angle in (0, 90, 180):
                        ct, st = {0: (mpf(1), mpf(0)), 90: (mpf(0), mpf(1)), 180: (mpf(-1), mpf(0))}[angle]
                    qr, qt = (MOMENT, 0) if kind == "rad" else (0, MOMENT)
                    v = shells.pot(r0 / 1000, ct, st, qr, qt) * 10**6
                    lines.append(f"{name},{nstr(r0, 6)},{kind},{angle},{nstr(v, 17)}")
    (DATA / "potentials_axis.csv").write_text("\n".join(lines) + "\n")


if __name__ == "__main__":
    main()
