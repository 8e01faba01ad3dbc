"""Checks every fixture with libcint: largest deviation of the orbitals from orthonormality.

Usage: python check_files.py [name ...]     (writes reference/orthonormality.json without names)
"""
import glob
import json
import os
import sys

import numpy as np

from file_basis import Functions, convention_of, read

OUT = os.path.dirname(os.path.dirname(os.path.abspath(__file__)))

if __name__ == "__main__":
    rows = {}
    for path in sorted(glob.glob(OUT + "/*.molden") + glob.glob(OUT + "/scenario/*.molden")):
        name = os.path.basename(path)[:-7]
        if sys.argv[1:] and name not in sys.argv[1:]:
            continue
        file = read(path)
        if not file.orbitals:
            continue
        f = Functions(file, convention_of(name))
        s = f.integrals("int1e_ovlp")
        worst, electrons, counts = 0.0, 0.0, []
        for spin in ("alpha", "beta"):
            c = f.coefficients(spin)
            if c.size:
                worst = max(worst, float(np.abs(c.T @ s @ c - np.eye(c.shape[1])).max()))
                electrons += float(f.occupations(spin).sum())
                counts.append(c.shape[1])
        rows[name] = {"deviation": float(f"{worst:.1e}"), "functions": len(s), "orbitals": counts,
                      "occupation_sum": round(electrons, 4), "nuclear_charge": sum(file.numbers)}
        print(f"{name:42s} {worst:8.1e} {len(s):4d} {counts} {electrons:8.3f} {sum(file.numbers):6.1f}")
    if not sys.argv[1:]:
        with open(OUT + "/reference/orthonormality.json", "w") as out:
            json.dump(rows, out, indent=1)
