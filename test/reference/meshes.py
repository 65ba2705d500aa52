"""A second opinion on meshes: spglib of Debian's package python3-spglib, and orbits counted one by one.

Reads [{"lattice", "positions", "numbers", "divisions", "halves", "timeReversal"}, ...] and gives for each
{"order", "kept", "orbits", "spglib"}: how many rotations there are in k-space, how many of them carry the set of mesh
points into itself, the sizes of the orbits under those, sorted, and the sizes that spglib gives.
"""
import json
import math
import sys

import numpy
import spglib


def k_rotations(cell, time_reversal):
    """On columns of k-fractions: a group of W holds each inverse, so the transposes are all W⁻ᵀ."""
    rotations = spglib.get_symmetry(cell, symprec=1e-5)["rotations"]
    found = {tuple(map(tuple, w.T.tolist())) for w in rotations}
    if time_reversal:
        found |= {tuple(tuple(-x for x in row) for row in w) for w in found}
    return [numpy.array(w) for w in sorted(found)]


def brute_force(divisions, halves, rotations):
    """All points as whole multiples of 1/D, D = 2·lcm(divisions), compared as sets: no theory of which rotations may."""
    common = 2 * math.lcm(*divisions)
    axes = [(2 * numpy.arange(n) + s) * (common // (2 * n)) for n, s in zip(divisions, halves)]
    points = numpy.stack(numpy.meshgrid(*axes, indexing="ij"), -1).reshape(-1, 3)
    name = lambda k: ((k[:, 0] % common) * common + k[:, 1] % common) * common + k[:, 2] % common
    own = name(points)
    known = numpy.sort(own)
    first = own.copy()
    kept = 0
    for w in rotations:
        image = name(points @ w.T)
        if not numpy.array_equal(numpy.sort(image), known):
            continue
        kept += 1
        first = numpy.minimum(first, image)
    return kept, sizes(first)


def sizes(representatives):
    return sorted(numpy.unique(representatives, return_counts=True)[1].tolist())


answers = []
for case in json.load(sys.stdin):
    cell = (case["lattice"], case["positions"], case["numbers"])
    rotations = k_rotations(cell, case["timeReversal"])
    kept, orbits = brute_force(case["divisions"], case["halves"], rotations)
    mapping, _ = spglib.get_ir_reciprocal_mesh(
        case["divisions"], cell, is_shift=case["halves"], is_time_reversal=case["timeReversal"]
    )
    answers.append({"order": len(rotations), "kept": kept, "orbits": orbits, "spglib": sizes(mapping)})
json.dump(answers, sys.stdout)
