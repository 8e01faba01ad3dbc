"""Traces of each set of equal energy under one operation of each class of the nuclei's group.

A label is right only if its characters are these: a check of every label that needs no name of an irrep.
Operations come from nuclear_group.py, their action on the basis from values of libcint at points.
Writes reference/characters.json: for each file the matrices (acting on coordinates relative to `centre`),
and rows [first orbital (0-based, order of the file), size, traces]; alpha orbitals only.
Usage: python reference_characters.py
"""
import glob
import json
import os

import numpy as np

from file_basis import Functions, convention_of, read
from nuclear_group import operations
from pyscf_run import OUT, levels, operation_matrix

SKIP = ("broken_", "localised_", "noisy_", "mixed_", "dialect_", "neon_with",
        "xtb_", "psi3_", "cp2k_", "psi4_", "bagel_", "openmolcas_", "nwchem_")


def classes(ops):
    """One operation of each class, the first in the list of operations."""
    chosen = []
    for m in ops:
        if not any(np.abs(g @ m @ g.T - c).max() < 1e-3 for g in ops for c in chosen):
            chosen.append(m)
    return chosen


def traces(path):
    name = os.path.basename(path).removesuffix(".molden")
    file = read(path)
    if len(file.symbols) == 1 or not file.orbitals:
        return None
    ops = operations(file.symbols, file.xyz)
    if ops is None or len(ops) == 1:
        return None
    xyz = np.array(file.xyz)
    weight = np.array([sum(map(ord, s)) for s in file.symbols], float)
    centre = weight @ xyz / weight.sum()
    f = Functions(file, convention_of(name))
    order = np.argsort([float(o["ene"]) for o in file.orbitals if o.get("spin", "Alpha").lower() == "alpha"], kind="stable")
    energy = np.array([float(o["ene"]) for o in file.orbitals if o.get("spin", "Alpha").lower() == "alpha"])
    if np.any(np.diff(energy) < -1e-7):
        return None
    c = np.zeros((f.mol.nao, len(order)))
    c[f.columns] = f.coefficients("alpha") * f.unit[:, None]
    s = f.mol.intor("int1e_ovlp" + f.kind)
    some = classes(ops)
    matrices = [operation_matrix(f.mol, m, centre, 1e-4) for m in some]
    rows, start = [], 0
    for size in levels(energy, close=1e-6)[0]:
        part = c[:, start:start + size]
        rows.append([start, size, [round(float(np.einsum("pi,pq,qi->", part, s @ m, part)), 3) + 0.0 for m in matrices]])
        start += size
    return {"order": len(ops), "centre": [round(float(x), 10) for x in centre],
            "operations": [[[round(float(x), 8) + 0.0 for x in r] for r in m] for m in some], "sets": rows}


if __name__ == "__main__":
    out = {}
    for path in sorted(glob.glob(OUT + "/*.molden") + glob.glob(OUT + "/scenario/*.molden")):
        name = os.path.relpath(path, OUT)
        if os.path.basename(name).startswith(SKIP) or "modes" in name:
            continue
        row = traces(path)
        if row:
            out[name] = row
            bad = [t for _, n, t in row["sets"] if abs(t[0] - n) > 1e-3]
            assert not bad, name
    target = OUT + "/reference/characters.json"
    with open(target, "w") as f:
        f.write("{\n" + ",\n".join(f' "{k}": {json.dumps(v, separators=(",", ":"))}' for k, v in out.items()) + "\n}\n")
    print(len(out), "files", os.path.getsize(target) // 1024, "KiB")
