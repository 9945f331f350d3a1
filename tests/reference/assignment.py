"""One-to-one assignments of largest sum by SciPy's linear_sum_assignment, for tests/data/assignment.json.

SciPy 1.17.1, NumPy 2. The gains follow from a formula, so that only the answers are committed. Run from tests/:
python3 reference/assignment.py
"""

import json

import numpy as np
from scipy.optimize import linear_sum_assignment


def gains(rows, columns, seed, modulus):
    k = np.arange(rows * columns, dtype=np.int64)
    return ((k * k * 7919 + k * 104729 + seed * 1299709) % modulus).reshape(rows, columns) / modulus


cases = []
# The last three are full of ties: many assignments have the largest sum, only that is compared.
for rows, columns, seed, modulus in [
    (1, 1, 1, 1000003),
    (5, 5, 2, 1000003),
    (4, 9, 3, 1000003),
    (13, 6, 4, 1000003),
    (20, 20, 5, 1000003),
    (64, 71, 6, 1000003),
    (71, 71, 7, 1000003),
    (128, 40, 8, 1000003),
    (20, 20, 9, 5),
    (33, 15, 10, 3),
    (12, 47, 11, 7),
]:
    gain = gains(rows, columns, seed, modulus)
    row, column = linear_sum_assignment(gain, maximize=True)
    cases.append(
        {
            "rows": rows,
            "columns": columns,
            "seed": seed,
            "modulus": modulus,
            "sum": float(gain[row, column].sum()),
            "pairs": None if modulus < 100 else [[int(r), int(c)] for r, c in zip(row, column)],
        }
    )

with open("data/assignment.json", "w") as file:
    file.write('{"source": "scipy.optimize.linear_sum_assignment, SciPy 1.17.1; reference/assignment.py", "cases": [\n')
    file.write(",\n".join(json.dumps(case) for case in cases) + "\n]}\n")
