"""Ward's groups and mean silhouettes by scikit-learn, for tests/data/grouping.json.

scikit-learn 1.9.1 (AgglomerativeClustering with linkage "ward", silhouette_score), NumPy 2. The dipoles are invented: five
places in the head with axes of their own, of which two share a place and differ in axis alone, scattered, with a few strays.
What is grouped is the position in mm in a head of 88 mm and the matrix of the unit axis with itself, scaled so that axes at a
right angle are 30 mm apart. Run from tests/: python3 reference/grouping.py
"""

import json

import numpy as np
from sklearn.cluster import AgglomerativeClustering
from sklearn.metrics import silhouette_score

RADIUS, AXIS_MM = 88.0, 30.0
rng = np.random.default_rng(20240)
places = [([-40, -20, 45], [1, 0, 0.2]), ([40, -22, 44], [-1, 0.1, 0.2]), ([0, 45, 30], [0, 1, 0]), ([2, -60, 20], [0, 0, 1]), ([2, -60, 20], [1, 0, 0])]
dipoles = []
for (place, axis), count in zip(places, (14, 11, 9, 8, 7)):
    for _ in range(count):
        direction = np.array(axis, float) / np.linalg.norm(axis) + 0.15 * rng.standard_normal(3)
        dipoles.append((np.array(place, float) + 6.0 * rng.standard_normal(3), direction * rng.choice([-1, 1])))
for _ in range(6):
    place = rng.standard_normal(3)
    dipoles.append((55.0 * rng.random() * place / np.linalg.norm(place), rng.standard_normal(3)))
order = rng.permutation(len(dipoles))
dipoles = [(np.round(dipoles[k][0] / RADIUS, 5), np.round(dipoles[k][1], 4)) for k in order]

features = []
for position, direction in dipoles:
    unit = direction / np.linalg.norm(direction)
    features.append(np.concatenate([position * RADIUS, (AXIS_MM / np.sqrt(2.0) * np.outer(unit, unit)).ravel()]))
features = np.array(features)

cuts = []
for groups in range(2, 13):
    labels = AgglomerativeClustering(n_clusters=groups, linkage="ward").fit_predict(features)
    cuts.append({"groups": groups, "labels": labels.tolist(), "silhouette": silhouette_score(features, labels)})
values = {
    "source": "scikit-learn 1.9.1; reference/grouping.py",
    "axis_mm": AXIS_MM,
    "dipoles": [{"position": p.tolist(), "direction": d.tolist()} for p, d in dipoles],
    "cuts": cuts,
}
with open("data/grouping.json", "w", encoding="utf-8") as file:
    file.write("{\n")
    file.write(",\n".join(f" {json.dumps(key)}: " + ("[\n" + ",\n".join("  " + json.dumps(one) for one in value) + "\n ]" if isinstance(value, list) else json.dumps(value)) for key, value in values.items()))
    file.write("\n}\n")
print(features.shape, [(c["groups"], round(c["silhouette"], 3)) for c in cuts])
