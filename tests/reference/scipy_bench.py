"""The same job as the engine's, in NumPy and SciPy, to be timed beside it: the best dipole of each of many maps.

Written from the published formulas alone (see layered_sphere.py); shares no line with the engine. A grid of lead fields gives
five separate starts for each map, `scipy.optimize.least_squares` refines them with differences for several positions at once,
the moment eliminated (Golub & Pereyra 1973). Prints microseconds a fit, grid apart.

    python3 reference/scipy_bench.py [maps]        (from tests/; needs numpy and scipy)
"""

import sys
import time

import numpy as np
from scipy.optimize import least_squares

from layered_sphere import Head

ELECTRODES, STARTS, TOLERANCE = 71, 5, 1e-6


def leads(head, r, e):
    """Lead fields (positions x electrodes x 3) at several positions; as many terms as the farthest one needs."""
    distance = np.maximum(np.linalg.norm(r, axis=1), 1e-6)
    axis = r / distance[:, None]
    c = axis @ e.T
    x = distance / head.inner
    terms = int(min(400, np.ceil(np.log(TOLERANCE) / np.log(min(0.99, distance.max() / head.radius)))))
    weight = head.gain[:terms, None] * x ** (head.n[:terms, None] - 1)
    p0, p1, d0, d1 = np.ones_like(c), c, np.zeros_like(c), np.ones_like(c)
    radial, tangential = np.zeros_like(c), np.zeros_like(c)
    for i in range(terms):
        n = i + 1
        radial += weight[i][:, None] * (n * p1)
        tangential += weight[i][:, None] * d1
        p0, p1, d0, d1 = p1, ((2 * n + 1) * c * p1 - n * p0) / (n + 1), d1, d0 + (2 * n + 1) * p1
    field = (radial - c * tangential)[:, :, None] * axis[:, None, :] + tangential[:, :, None] * e
    return field - field.mean(axis=1, keepdims=True)


class Fitter:
    def __init__(self, head, e):
        self.head, self.e = head, e
        axis = np.linspace(-1, 1, 13) * head.limit
        points = np.stack(np.meshgrid(axis, axis, axis, indexing="ij"), -1).reshape(-1, 3)
        k = np.arange(500)
        z, turn = 1 - (2 * k + 1) / len(k), k * np.pi * (3 - 5**0.5)
        shell = np.stack([np.sqrt(1 - z * z) * np.cos(turn), np.sqrt(1 - z * z) * np.sin(turn), z], -1)
        self.points = np.vstack([points[np.linalg.norm(points, axis=1) < 0.95 * head.limit], head.limit * shell])
        self.bases = np.linalg.qr(leads(head, self.points, e))[0]
        self.flat = self.bases.transpose(0, 2, 1).reshape(-1, len(e))
        self.apart = 1.2 * (axis[1] - axis[0])

    def residuals(self, r, d):
        q = np.linalg.qr(leads(self.head, r, self.e))[0]
        return d - np.einsum("pij,pj->pi", q, np.einsum("pij,i->pj", q, d))

    def inside(self, x):
        size = np.linalg.norm(x)
        return x if size <= self.head.limit else x * (self.head.limit / size)

    def refine(self, start, d):
        h = 1e-3
        found = least_squares(
            lambda x: self.residuals(self.inside(x)[None], d)[0], start,
            jac=lambda x: np.diff(self.residuals(self.inside(x) + h * np.vstack([np.eye(3), -np.eye(3)]), d)
                                  .reshape(2, 3, -1), axis=0)[0].T / (-2 * h),
            xtol=1e-8, ftol=1e-10, gtol=1e-10, max_nfev=50)
        return 2 * found.cost, self.inside(found.x)

    def fit(self, maps):
        maps = maps - maps.mean(axis=0)
        maps /= np.linalg.norm(maps, axis=0)
        energy = (self.flat @ maps).reshape(len(self.points), 3, -1)
        rv = 1 - np.sum(energy**2, axis=1)
        answers = []
        for d, left in zip(maps.T, rv.T):
            left = left.copy()
            ends = []
            for _ in range(STARTS):
                k = np.argmin(left)
                ends.append(self.refine(self.points[k], d))
                left[np.linalg.norm(self.points - self.points[k], axis=1) < self.apart] = np.inf
            answers.append(min(ends, key=lambda end: end[0]))
        return answers


def main():
    rng = np.random.default_rng(71)
    k = np.arange(ELECTRODES)
    z, turn = 1 - 1.34 * (k + 0.5) / ELECTRODES, 2.399963 * k
    e = np.stack([np.sqrt(1 - z * z) * np.cos(turn), np.sqrt(1 - z * z) * np.sin(turn), z], -1)
    head = Head((0, 0, 0), 88.0)
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 30
    maps = []
    for kind in range(count):
        v = 0.3 * rng.uniform(-1, 1, ELECTRODES)
        for _ in range(kind % 3):
            v += leads(head, rng.uniform(-44, 44, (1, 3)), e)[0] @ rng.uniform(-20, 20, 3) * 1e3 / (4 * np.pi * 0.33)
        maps.append(v)
    start = time.perf_counter()
    fitter = Fitter(head, e)
    ready = time.perf_counter()
    answers = fitter.fit(np.array(maps).T)
    done = time.perf_counter()
    print(f"NumPy and SciPy: grid of {len(fitter.points)} points {1e3 * (ready - start):.0f} ms; "
          f"median residual variance {np.median([rv for rv, _ in answers]):.3f}; "
          f"{1e6 * (done - ready) / count:.0f} µs a fit")


if __name__ == "__main__":
    main()
