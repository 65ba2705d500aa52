"""spglib's own reduction of meshes (Debian's package python3-spglib), timed inside: JSON on standard input and output.

{"rotations": [...], "divisions": [[n1, n2, n3], ...], "rounds": n} gives for each mesh the milliseconds of each round and
the number of irreducible points. Rotations act on columns of atomic fractions.
"""
import json
import sys
import time

import numpy
import spglib

request = json.load(sys.stdin)
rotations = numpy.array(request["rotations"], dtype="intc")
answer = []
for divisions in request["divisions"]:
    times = []
    for turn in range(-5, request["rounds"]):
        start = time.perf_counter()
        mapping, _ = spglib.get_stabilized_reciprocal_mesh(divisions, rotations, is_time_reversal=True)
        if turn >= 0:
            times.append((time.perf_counter() - start) * 1000)
    answer.append({"times": times, "irreducible": len(numpy.unique(mapping))})
json.dump(answer, sys.stdout)
