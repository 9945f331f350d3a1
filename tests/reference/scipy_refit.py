"""An independent fit of one dipole to scalp maps, in NumPy and SciPy.

Written from the published formulas alone; shares no line with the engine. Writes data/scipy_refit.json:
electrode tables and maps as the text that a person would give, with position, moment and residual variance.

    python3 reference/scipy_refit.py        (from tests/; needs numpy and scipy)

Forward and head: layered_sphere.py.
Fit: residual variance of average-referenced maps, moment by linear least squares (Golub & Pereyra 1973);
every grid minimum is refined, inside 0.98 of the innermost radius or on that sphere.
"""

import json

import numpy as np
from scipy.optimize import least_squares, minimize

from layered_sphere import DATA, STANDARD, Head, centred, check_forward, fitted_sphere


class Fit:
    """The best dipole of one average-referenced map."""

    def __init__(self, head, e):
        self.head, self.e = head, e
        step = 6.0
        axis = np.arange(-head.limit, head.limit + step, step)
        points = np.stack(np.meshgrid(axis, axis, axis, indexing="ij"), -1).reshape(-1, 3)
        points = points[np.linalg.norm(points, axis=1) <= head.limit]
        # The limiting sphere gets points of its own: noisy maps are best explained there.
        k = np.arange(1200)
        z, turn = 1 - (2 * k + 1) / len(k), k * np.pi * (3 - 5**0.5)
        shell = np.stack([np.sqrt(1 - z * z) * np.cos(turn), np.sqrt(1 - z * z) * np.sin(turn), z], -1)
        self.points = np.vstack([points, head.limit * shell])
        self.bases = np.stack([np.linalg.qr(centred(head.lead(r, e)))[0] for r in self.points])

    def moment(self, r, d):
        return np.linalg.lstsq(centred(self.head.lead(r, self.e)), d, rcond=None)[0]

    def rest(self, r, d):
        q, _ = np.linalg.qr(centred(self.head.lead(r, self.e)))
        return d - q @ (q.T @ d)

    def rv(self, r, d):
        return float(np.sum(self.rest(r, d) ** 2) / np.sum(d**2))

    def refine(self, r, d):
        """Nearest minimum: rough steps within the ball, then Gauss-Newton inside or on the limiting sphere."""
        limit = self.head.limit
        unit = d / np.linalg.norm(d)

        def near(x):
            """A step far outside is taken back: the series has no meaning there."""
            size = np.linalg.norm(x)
            return x if size <= 1.02 * limit else x * (1.02 * limit / size)

        rough = minimize(
            lambda x: np.sum(self.rest(near(x * limit), unit) ** 2), r / limit, method="SLSQP",
            constraints={"type": "ineq", "fun": lambda x: 1 - x @ x, "jac": lambda x: -2 * x},
            options={"ftol": 1e-13, "maxiter": 200})
        r = rough.x * limit
        if np.linalg.norm(r) > limit * (1 - 1e-5):
            return self.on_limit(r, unit)
        found = least_squares(lambda x: self.rest(near(x), unit), r, jac="3-point", xtol=1e-15, ftol=1e-15, gtol=1e-15)
        if np.linalg.norm(found.x) > limit:
            return self.on_limit(found.x, unit)
        return found.x, False

    def on_limit(self, r, unit):
        limit = self.head.limit
        axis = r / np.linalg.norm(r)
        other = np.eye(3)[np.argmin(np.abs(axis))]
        t1 = np.cross(axis, other)
        t1 /= np.linalg.norm(t1)
        t2 = np.cross(axis, t1)

        def place(x):
            v = axis + x[0] * t1 + x[1] * t2
            return limit * v / np.linalg.norm(v)

        found = least_squares(lambda x: self.rest(place(x), unit), [0.0, 0.0], jac="3-point",
                              xtol=1e-15, ftol=1e-15, gtol=1e-15)
        return place(found.x), True

    def best(self, d):
        energy = np.einsum("pij,i->pj", self.bases, d)
        rv = 1 - np.sum(energy**2, axis=1) / np.sum(d**2)
        seeds = []
        for k in np.argsort(rv):
            if all(np.linalg.norm(self.points[k] - self.points[s]) > 12 for s in seeds):
                seeds.append(k)
            if len(seeds) == 14:
                break
        answers = [self.refine(self.points[k], d) for k in seeds]
        position, boundary = min(answers, key=lambda a: self.rv(a[0], d))
        if boundary:
            outward = self.rv(position * 1.0005, d) - self.rv(position, d)
            assert outward < 1e-9, f"the limit does not bind: {outward}"
        return position, boundary


NINETEEN = "Fp1 Fp2 F7 F3 Fz F4 F8 T7 C3 Cz C4 T8 P7 P3 Pz P4 P8 O1 O2".split()
THIRTY_TWO = NINETEEN + "FC5 FC1 FC2 FC6 CP5 CP1 CP2 CP6 AF3 AF4 PO3 PO4 Oz".split()
SEVENTY_ONE = [n for n in STANDARD if n not in
               "Nz Iz N1 N2 I1 I2 AF9 AF10 PO9 PO10 AF1 AF2 PO1 PO2 AF5 AF6 PO5 PO6".split()]


def direction(rng):
    v = rng.normal(size=3)
    return v / np.linalg.norm(v)


def source(rng, head, lowest, highest):
    """Position within the upper two thirds of the head and a moment of 5 to 40 nAm."""
    while True:
        u = direction(rng)
        if u[2] > -0.35:
            return u * head.inner * rng.uniform(lowest, highest), direction(rng) * rng.uniform(5, 40)


def invented_maps(rng, head, e, kinds):
    maps = {}
    for number, (kind, level) in enumerate(kinds, 1):
        if kind == "noise":
            v = rng.normal(size=len(e))
        else:
            v = np.zeros(len(e))
            for _ in range(2 if kind == "pair" else 1):
                r, m = source(rng, head, 0.15, 0.93)
                v += head.lead(r, e) @ m
            if kind == "deep":
                r, m = source(rng, head, 0.0, 0.1)
                v = head.lead(r, e) @ m
            v += rng.normal(size=len(e)) * level * centred(v).std()
        maps[f"{kind}{number}"] = v + rng.normal()
    return maps


def text_table(head_row, rows, separator):
    lines = [separator.join(head_row)] if head_row else []
    return "\n".join(lines + [separator.join(row) for row in rows]) + "\n"


def case(name, rng, labels, kinds, scale=1.0, unit=1.0, jitter=2.0, centre=(0, 0, 0), separator="\t",
         labels_alone=False, settings=None, exclude=()):
    settings = settings or {}
    head_settings = settings.get("head", {})
    at = np.array([STANDARD[label] for label in labels])
    if labels_alone:
        table, p = None, 88.0 * at
    else:
        p = 88.0 * scale * at + rng.normal(size=at.shape) * jitter + np.array(centre)
        table = text_table(["label", "x", "y", "z"],
                           [[label] + [f"{x * unit:.6g}" for x in row] for label, row in zip(labels, p)], separator)
        p = np.array([[float(x) for x in line.split(separator)[1:]] for line in table.splitlines()[1:]]) / unit
    fitted = (np.zeros(3), 88.0) if labels_alone else fitted_sphere(p)
    head = Head(head_settings.get("centre_mm", fitted[0]), head_settings.get("radius_mm", fitted[1]),
                head_settings.get("shells"))
    e = p - head.centre
    e /= np.linalg.norm(e, axis=1)[:, None]
    maps = invented_maps(rng, head, e, kinds)
    maps_text = text_table(["label"] + list(maps),
                           [[label] + [f"{v[i]:.7g}" for v in maps.values()] for i, label in enumerate(labels)], separator)
    values = np.array([[float(x) for x in line.split(separator)[1:]] for line in maps_text.splitlines()[1:]])
    used = np.array([label not in exclude for label in labels])
    fit = Fit(head, e[used])
    answers = []
    for column, map_name in enumerate(maps):
        d = centred(values[used, column])
        r, boundary = fit.best(d)
        m = fit.moment(r, d)
        rv = fit.rv(r, d)
        answers.append({
            "name": map_name, "residual_variance": rv,
            "position_mm": (r + head.centre).tolist(), "moment_nam": m.tolist(), "at_boundary": boundary,
        })
        print(name, map_name, f"rv {rv:.6f}", "boundary" if boundary else f"eccentricity {np.linalg.norm(r) / head.inner:.3f}")
    if exclude:
        settings = settings | {"exclude": list(exclude)}
    return {"name": name, "electrodes": table, "maps": maps_text, "settings": settings,
            "head": {"centre_mm": head.centre.tolist(), "radius_mm": head.radius}, "answers": answers}


def main():
    check_forward()
    rng = np.random.default_rng(19540616)
    usual = [("one", 0.0), ("one", 0.02), ("one", 0.1), ("one", 0.3), ("pair", 0.0), ("pair", 0.05), ("deep", 0.02), ("noise", 1.0)]
    three_shells = {"head": {"shells": [
        {"tissue": "brain", "ratio": 80 / 92, "conductivity": 0.33},
        {"tissue": "skull", "ratio": 85 / 92, "conductivity": 0.33 / 80},
        {"tissue": "scalp", "ratio": 1.0, "conductivity": 0.33}]}}
    given_head = {"head": {"centre_mm": [1.0, -3.0, 4.0], "radius_mm": 95.0}}
    cases = [
        case("19 measured, mm", rng, NINETEEN, usual, scale=0.97, centre=(0, 4, -9)),
        case("32 measured, cm", rng, THIRTY_TWO, usual, scale=1.02, unit=0.1, separator=","),
        case("71 measured, m", rng, SEVENTY_ONE, usual, scale=1.04, unit=1e-3, centre=(2, 11, 25), separator=";"),
        case("19 labels alone", rng, NINETEEN, usual, labels_alone=True, separator=" "),
        case("71 labels alone", rng, SEVENTY_ONE, usual, labels_alone=True),
        case("32 measured, three shells", rng, THIRTY_TWO, usual[1:7], settings=three_shells),
        case("71 measured, centre and radius given", rng, SEVENTY_ONE, usual[1:6], centre=(0, -2, 3), settings=given_head),
        case("32 measured, two left out", rng, THIRTY_TWO, usual[1:6], exclude=("Cz", "T8")),
    ]
    written = {"generator": "tests/reference/scipy_refit.py", "cases": cases}
    (DATA / "scipy_refit.json").write_text(json.dumps(written, indent=1) + "\n")
    print(sum(len(c["answers"]) for c in cases), "maps")


if __name__ == "__main__":
    main()
