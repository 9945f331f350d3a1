"""Layered sphere and fitted head in NumPy, written from the published formulas alone.

Forward: layered sphere, series of Legendre terms (de Munck & Peters 1993; Zhang 1995),
  V = 1/(4 pi s1) sum_n G_n (r0/r1)^(n-1) [ n q_r P_n(c) + P_n'(c) (q.e - q_r c) ],
with (v, j) carried inward from (1, 0) on the scalp and G_n = (2n+1) / (r1^3 (n v1/r1 - j1/s1)).
Default head: outer radii 79 : 81 : 85 : 88 (Cuffin & Cohen 1979), 0.33 / 1.79 / 0.0132 / 0.33 S/m
(Geddes & Baker 1967; Baumann 1997; Lai 2005).
Head: centre and radius minimise sum (|p - c| - R)^2; labels alone: radius 88 mm, centre 0.
"""

import csv
from pathlib import Path

import numpy as np
from scipy.optimize import least_squares

DATA = Path(__file__).resolve().parent.parent / "data"
DEFAULT_SHELLS = [
    {"tissue": "brain", "ratio": 79 / 88, "conductivity": 0.33},
    {"tissue": "cerebrospinal fluid", "ratio": 81 / 88, "conductivity": 1.79},
    {"tissue": "skull", "ratio": 85 / 88, "conductivity": 0.0132},
    {"tissue": "scalp", "ratio": 1.0, "conductivity": 0.33},
]
LIMIT = 0.98  # of the innermost radius
TERMS = 420  # 0.98 * 79/88 to this power is 2e-23


class Head:
    """Concentric shells around a centre; lengths in mm, moments in nAm, potentials in microvolt."""

    def __init__(self, centre, radius, shells=None):
        shells = shells or DEFAULT_SHELLS
        self.centre = np.asarray(centre, float)
        self.radius = float(radius)
        self.radii = [s["ratio"] * radius for s in shells]
        self.sigma = [s["conductivity"] for s in shells]
        self.inner = self.radii[0]
        self.limit = LIMIT * self.inner
        n = np.arange(1, TERMS + 1, dtype=float)
        v, j = np.ones_like(n), np.zeros_like(n)
        for k in range(len(shells) - 1, 0, -1):
            outer, inside, s = self.radii[k], self.radii[k - 1], self.sigma[k]
            a = ((n + 1) * v + j * outer / s) / (2 * n + 1)
            b = (n * v - j * outer / s) / (2 * n + 1)
            t = inside / outer
            v = a * t**n + b * t ** (-n - 1)
            j = s / outer * (n * a * t ** (n - 1) - (n + 1) * b * t ** (-n - 2))
        self.n = n
        self.gain = (2 * n + 1) / (self.inner**3 * (n * v / self.inner - j / self.sigma[0]))

    def lead(self, r, e):
        """Lead field (electrodes x 3) of a dipole at r from the centre, e the electrodes' unit vectors."""
        factor = 1e3 / (4 * np.pi * self.sigma[0])
        distance = np.linalg.norm(r)
        if distance == 0:
            return factor * self.gain[0] * e
        axis = r / distance
        c = e @ axis
        weight = self.gain * (distance / self.inner) ** (self.n - 1)
        p0, p1 = np.ones_like(c), c.copy()
        d0, d1 = np.zeros_like(c), np.ones_like(c)
        radial, tangential = np.zeros_like(c), np.zeros_like(c)
        for i in range(TERMS):
            n = i + 1
            radial += weight[i] * n * p1
            tangential += weight[i] * d1
            p2 = ((2 * n + 1) * c * p1 - n * p0) / (n + 1)
            d2 = d0 + (2 * n + 1) * p1
            p0, p1, d0, d1 = p1, p2, d1, d2
            if weight[i] * n * n * n < 1e-18 * abs(weight[0]):
                break
        return factor * (np.outer(radial - c * tangential, axis) + tangential[:, None] * e)


def centred(x):
    return x - x.mean(axis=0)


def fitted_sphere(p):
    start = np.append(p.mean(axis=0), np.linalg.norm(centred(p), axis=1).mean())
    found = least_squares(
        lambda u: np.linalg.norm(p - u[:3], axis=1) - u[3],
        start, jac=lambda u: np.hstack([(u[:3] - p) / np.linalg.norm(p - u[:3], axis=1)[:, None], -np.ones((len(p), 1))]),
        xtol=1e-15, ftol=1e-15, gtol=1e-15, method="lm")
    return found.x[:3], found.x[3]


def read_standard():
    with open(DATA / "standard_positions.csv", newline="") as file:
        return {row["name"]: np.array([float(row[k]) for k in ("x_right", "y_front", "z_up")])
                for row in csv.DictReader(file)}


STANDARD = read_standard()


def check_forward():
    """The layered series against 40-digit values (data/potentials_axis.csv), three isotropic models."""
    brain, skull = 80 / 92, 85 / 92
    worst = 0.0
    with open(DATA / "potentials_axis.csv", newline="") as file:
        for row in csv.DictReader(file):
            if not row["model"].startswith("3shell_80_85_92_r") or row["model"].endswith("10x"):
                continue
            ratio = float(row["model"].rpartition("_r")[2])
            head = Head((0, 0, 0), 92, [{"ratio": k, "conductivity": s} for k, s in
                                        ((brain, 0.33), (skull, 0.33 / ratio), (1.0, 0.33))])
            r = float(row["r0_mm"])
            if r > 0.95 * head.inner:
                continue
            angle = np.radians(float(row["theta_deg"]))
            e = np.array([[np.sin(angle), 0.0, np.cos(angle)]])
            moment = np.array([0.0, 0.0, 10.0] if row["orientation"] == "rad" else [10.0, 0.0, 0.0])
            worst = max(worst, abs((head.lead(np.array([0.0, 0.0, r]), e) @ moment)[0] - float(list(row.values())[4])))
    assert worst < 1e-11, worst
    print(f"forward: worst difference {worst:.1e} microvolt for 10 nAm")
