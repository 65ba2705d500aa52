"""A second opinion on CIFs: gemmi and spglib of Debian's packages python3-gemmi and python3-spglib. JSON on standard input and output.

{"read": [path, ...]} gives [{"atoms", "volume", "number"}, ...]: the atoms in the cell with images of one site within
0.05 Å counted once and sites at one place merged, its volume in Å³, and the number of the space-group type that spglib finds for
the operations that gemmi reads; null where gemmi cannot read the file.
{"settings": seed} gives a CIF for each of the 530 tabulated settings with two atoms on general positions and one at the
origin, and where these are in the cell, by element:
[{"hall", "number", "choice", "hallSymbol", "symbol", "cell", "places", "text"}, ...].
"""
import json
import math
import random
import sys

import gemmi
import spglib

SPECIAL = 0.05


def read(path):
    try:
        block = next(b for b in gemmi.cif.read(path) if b.find_value("_cell_length_a"))
        small = gemmi.make_small_structure_from_block(block)
    except Exception:
        return None
    # The structure's own cell knows the symmetry, and would take images by it for one.
    cell = gemmi.UnitCell(*small.cell.parameters)
    operations = [gemmi.Op(text) for text in triplets(block)]
    if not operations:
        return None
    places = []
    for site in small.sites:
        for operation in operations:
            x = gemmi.Fractional(*operation.apply_to_xyz([site.fract.x, site.fract.y, site.fract.z]))
            if not any(cell.find_nearest_image(cell.orthogonalize(p), cell.orthogonalize(x)).dist() < SPECIAL for p in places):
                places.append(x)
    return {"atoms": len(places), "volume": cell.volume, "number": number_of(operations)}


def triplets(block):
    for name in ("_space_group_symop_operation_xyz", "_symmetry_equiv_pos_as_xyz"):
        found = [gemmi.cif.as_string(v) for v in block.find_values(name)]
        if found:
            return found
    name = gemmi.cif.as_string(block.find_value("_symmetry_space_group_name_H-M") or "")
    name = name.split("{")[0].strip()
    cell = gemmi.make_small_structure_from_block(block).cell
    group = gemmi.find_spacegroup_by_name(name, cell.alpha, cell.gamma)
    return [operation.triplet() for operation in group.operations()] if group else []


def number_of(operations):
    rotations = [[[n // o.DEN for n in row] for row in o.rot] for o in operations]
    translations = [[n / o.DEN for n in o.tran] for o in operations]
    hall = spglib.get_hall_number_from_symmetry(rotations, translations, symprec=1e-3)
    return int(spglib.get_spacegroup_type(hall)["number"]) if hall else None


def lengths(rotations, rng):
    """Lengths and angles of a random cell whose metric is averaged over the rotations."""
    room = max(1.0, len(rotations) / 16) ** (1 / 3)
    base = [room * rng.uniform(6, 10) for _ in range(3)]
    seed = [[base[i] * base[j] * (1 if i == j else 0) for j in range(3)] for i in range(3)]
    for i, j in ((0, 1), (0, 2), (1, 2)):
        seed[i][j] = seed[j][i] = base[i] * base[j] * rng.uniform(-0.2, 0.2)
    metric = [[0.0] * 3 for _ in range(3)]
    for w in rotations:
        for i in range(3):
            for j in range(3):
                metric[i][j] += sum(w[k][i] * seed[k][m] * w[m][j] for k in range(3) for m in range(3)) / len(rotations)
    a, b, c = (math.sqrt(metric[i][i]) for i in range(3))
    angle = lambda i, j: math.degrees(math.acos(metric[i][j] / math.sqrt(metric[i][i] * metric[j][j])))
    return a, b, c, angle(1, 2), angle(0, 2), angle(0, 1)


def settings(seed):
    made = []
    for hall in range(1, 531):
        rng = random.Random(seed * 1000 + hall)
        kind = spglib.get_spacegroup_type(hall)
        operations = spglib.get_symmetry_from_database(hall)
        rotations = operations["rotations"].tolist()
        cell = [f"{x:.9f}".rstrip("0").rstrip(".") for x in lengths(rotations, rng)]
        xyz = [
            triplet(w, t)
            for w, t in zip(rotations, operations["translations"].tolist())
        ]
        sites = [("Na1", "Na", [0.0, 0.0, 0.0])]
        while True:
            sites[1:] = [(f"{e}1", e, [round(rng.random(), 6) for _ in range(3)]) for e in ("Cl", "O")]
            if apart(sites, rotations, operations["translations"].tolist(), [float(x) for x in cell]):
                break
        places = {}
        for _, e, x in sites:
            images = (
                [(sum(w[i][j] * x[j] for j in range(3)) + t[i]) % 1.0 for i in range(3)]
                for w, t in zip(rotations, operations["translations"].tolist())
            )
            places[e] = sorted({tuple(round(y, 7) % 1.0 for y in image) for image in images})
        text = [f"data_hall_{hall}", f"_space_group_IT_number {kind['number']}"]
        for name, value in zip(("length_a", "length_b", "length_c", "angle_alpha", "angle_beta", "angle_gamma"), cell):
            text.append(f"_cell_{name} {value}")
        text += ["loop_", "_space_group_symop_operation_xyz"] + [f"'{op}'" for op in xyz]
        text += ["loop_"] + [f"_atom_site_{n}" for n in ("label", "type_symbol", "fract_x", "fract_y", "fract_z")]
        text += [f"{label} {element} " + " ".join(f"{x:.6f}" for x in position) for label, element, position in sites]
        made.append(
            {
                "hall": hall,
                "number": int(kind["number"]),
                "choice": kind["choice"],
                "hallSymbol": kind["hall_symbol"],
                "symbol": kind["international"],
                "cell": [float(x) for x in cell],
                "places": places,
                "text": "\n".join(text) + "\n",
            }
        )
    return made


def apart(sites, rotations, translations, cell):
    """No image of a site on a general position nearer than 0.75 Å to the site: nothing that looks like disorder."""
    cell = gemmi.UnitCell(*cell)
    for _, _, x in sites[1:]:
        for w, t in list(zip(rotations, translations))[1:]:
            d = [sum(w[i][j] * x[j] for j in range(3)) + t[i] - x[i] for i in range(3)]
            d = gemmi.Fractional(*(y - round(y) for y in d))
            if cell.orthogonalize(d).length() < 0.75:
                return False
    return True


def triplet(rotation, translation):
    operation = gemmi.Op("x,y,z")
    operation.rot = [[n * operation.DEN for n in row] for row in rotation]
    operation.tran = [round(x * operation.DEN) for x in translation]
    return operation.triplet()


asked = json.load(sys.stdin)
if "read" in asked:
    answer = [read(path) for path in asked["read"]]
else:
    answer = settings(asked["settings"])
json.dump(answer, sys.stdout)
