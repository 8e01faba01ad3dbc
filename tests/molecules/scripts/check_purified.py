"""Reads what `orbsieve purify` wrote with libcint: largest deviation of the orbitals from orthonormality.

Usage: python check_purified.py FOLDER     (holds NAME.molden, purified; writes reference/purified.json)
    for f in NAMES; do orbsieve purify tests/molecules/$f.molden --output FOLDER/$f.molden; done
"""
import json
import os
import sys

import numpy as np

from file_basis import Functions, convention_of, read

OUT = os.path.dirname(os.path.dirname(os.path.abspath(__file__)))

if __name__ == "__main__":
    rows = {}
    for entry in sorted(os.listdir(sys.argv[1])):
        name = entry[:-7]
        file = read(os.path.join(sys.argv[1], entry))
        f = Functions(file, convention_of(name))
        s = f.integrals("int1e_ovlp")
        row = {"deviation": 0.0, "overlap_with_old": []}
        # The old orbitals in the same functions: what each spin's occupied space keeps.
        old = Functions(read(f"{OUT}/{name}.molden"), convention_of(name))
        for spin in ("alpha", "beta"):
            c, b = f.coefficients(spin), old.coefficients(spin)
            if c.size:
                gram = c.T @ s @ c - np.eye(c.shape[1])
                row["deviation"] = max(row["deviation"], float(f"{np.abs(gram).max():.1e}"))
                n = f.occupations(spin) > 0
                kept = (b[:, n].T @ s @ c[:, n]) ** 2
                row["overlap_with_old"].append([int(n.sum()), round(float(kept.sum()), 8)])
        rows[name] = row
        print(name, row)
    with open(OUT + "/reference/purified.json", "w") as out:
        out.write("{\n" + ",\n".join(f' "{k}": {json.dumps(v)}' for k, v in rows.items()) + "\n}\n")
