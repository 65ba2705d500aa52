"""A second opinion on space groups: spglib of Debian's package python3-spglib. JSON on standard input and output.

{"find": [{"lattice", "positions", "numbers", "tolerance"}, ...]} gives [{"number", "pointgroup", "operations"}, ...].
{"make": seed} gives, for each of the 530 tabulated settings, a crystal with two atoms on general positions:
[{"hall", "number", "symbol", "lattice", "positions", "numbers"}, ...].
"""
import json
import random
import sys

import spglib


def find(cell):
    found = spglib.get_symmetry_dataset(
        (cell["lattice"], cell["positions"], cell["numbers"]), symprec=cell["tolerance"]
    )
    return {
        "number": int(found["number"]),
        "pointGroup": found["pointgroup"],
        "operations": len(found["rotations"]),
    }


def lattice_for(rotations, rng):
    """Rows whose metric is that of a random cell averaged over the rotations (which act on columns of fractions)."""
    metric = [[0.0] * 3 for _ in range(3)]
    lengths = [rng.uniform(6, 10) for _ in range(3)]
    seed = [[lengths[i] * lengths[j] * (1 if i == j else rng.uniform(-0.2, 0.2)) for j in range(3)] for i in range(3)]
    seed = [[(seed[i][j] + seed[j][i]) / 2 for j in range(3)] for i in range(3)]
    for w in rotations:
        for i in range(3):
            for j in range(3):
                metric[i][j] += sum(
                    w[k][i] * seed[k][m] * w[m][j] for k in range(3) for m in range(3)
                ) / len(rotations)
    # Cholesky: metric = rows · rowsᵀ.
    rows = [[0.0] * 3 for _ in range(3)]
    for i in range(3):
        for j in range(i + 1):
            rest = metric[i][j] - sum(rows[i][k] * rows[j][k] for k in range(j))
            rows[i][j] = rest ** 0.5 if i == j else rest / rows[j][j]
    return rows


def make(seed):
    crystals = []
    for hall in range(1, 531):
        rng = random.Random(seed * 1000 + hall)
        kind = spglib.get_spacegroup_type(hall)
        operations = spglib.get_symmetry_from_database(hall)
        rotations = operations["rotations"].tolist()
        translations = operations["translations"].tolist()
        positions, numbers = [], []
        for number in (1, 2):
            x = [rng.random() for _ in range(3)]
            for w, t in zip(rotations, translations):
                positions.append([sum(w[i][j] * x[j] for j in range(3)) + t[i] for i in range(3)])
                numbers.append(number)
        crystals.append(
            {
                "hall": hall,
                "number": int(kind["number"]),
                "symbol": kind["international_short"],
                "full": kind["international_full"],
                "pointGroup": kind["pointgroup_international"],
                "lattice": lattice_for(rotations, rng),
                "positions": positions,
                "numbers": numbers,
            }
        )
    return crystals


request = json.load(sys.stdin)
answer = make(request["make"]) if "make" in request else [find(cell) for cell in request["find"]]
json.dump(answer, sys.stdout)
