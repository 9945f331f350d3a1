"""Quantiles by SciPy, and Moran's I of regression residuals by dense matrices, for tests/data/trust_values.json.

SciPy 1.17.1, NumPy 2. Moran's I with its moments for residuals of a regression: Cliff & Ord 1981, Spatial Processes,
section 8.3, here with the whole matrices M and W and, besides, by 400,000 simulated residuals. The points, columns and
errors follow from formulas, so that only the answers are committed. Run from tests/: python3 reference/trust_values.py
"""

import json

import numpy as np
from scipy import stats

levels = [(level, freedom) for level in (0.5, 0.9, 0.95, 0.99) for freedom in (3, 12, 25, 64, 121, 505)]
quantiles = {
    "f3": [{"level": level, "freedom": freedom, "value": stats.f.ppf(level, 3, freedom)} for level, freedom in levels],
    "chi3": [{"level": level, "value": stats.chi2.ppf(level, 3)} for level in (0.5, 0.9, 0.95, 0.99)],
    "normal_above": [{"z": z, "value": stats.norm.sf(z)} for z in (-2.0, 0.0, 0.7, 1.6448536269514722, 3.0, 6.0)],
}


def moran(count, seed):
    k = np.arange(count)
    z = 1.0 - 1.35 * (k + 0.5) / count
    angle = k * np.pi * (3.0 - np.sqrt(5.0))
    ring = np.sqrt(1.0 - z * z)
    points = np.column_stack([ring * np.cos(angle), ring * np.sin(angle), z])
    distance = np.linalg.norm(points[:, None] - points[None], axis=2)
    np.fill_diagonal(distance, np.inf)
    weights = np.zeros((count, count))
    for i in range(count):
        for j in np.argsort(distance[i])[:6]:
            weights[i, j] = weights[j, i] = 1.0
    columns = np.column_stack([np.ones(count)] + [np.sin((j + 2) * points @ [1.0, 0.5 * j, 2.0 - j]) for j in range(6)])
    project = np.eye(count) - columns @ np.linalg.pinv(columns)
    error = project @ (np.sin(1.7 * seed + k * k) + 0.8 * np.cos(3.0 * points[:, 0] + seed))
    scale = count / weights.sum()
    free = count - 7
    mw = project @ weights
    expected = scale * np.trace(mw) / free
    second = scale**2 * (2.0 * np.trace(mw @ mw) + np.trace(mw) ** 2) / (free * (free + 2.0))
    value = scale * (error @ weights @ error) / (error @ error)
    sd = np.sqrt(second - expected**2)
    rng = np.random.default_rng(seed)
    simulated = rng.standard_normal((400_000, count)) @ project
    drawn = scale * np.einsum("ij,jk,ik->i", simulated, weights, simulated, optimize=True) / (simulated**2).sum(axis=1)
    assert abs(drawn.mean() - expected) < 5 * sd / 600 and abs(drawn.std() / sd - 1) < 0.01, (drawn.mean(), drawn.std(), expected, sd)
    return {"count": count, "seed": seed, "pairs": int(weights.sum() / 2), "moran": value, "expected": expected, "z": (value - expected) / sd}


values = {
    "source": "scipy.stats (SciPy 1.17.1) and NumPy; reference/trust_values.py",
    **quantiles,
    "moran": [moran(count, seed) for count, seed in ((19, 1), (32, 2), (71, 3))],
}
with open("data/trust_values.json", "w", encoding="utf-8") as file:
    json.dump(values, file, indent=0)
    file.write("\n")
