"""One-electron moments between orbitals of the fixtures by libcint, about a common origin.

Per fixture: all fifteen operators (x y z, d/dx d/dy d/dz, r x nabla, xx yy zz xy xz yz) for a few pairs of
orbitals, and for each operator the sum over all pairs (i, j), counted from 0, of the moment times
cos(i + 2j), which no wrong integral leaves alone.

Usage: python moments.py     (writes reference/moments_sums.json)
"""
import json
import os

import numpy as np

from file_basis import Functions, convention_of, read

OUT = os.path.dirname(os.path.dirname(os.path.abspath(__file__)))
ORIGIN = [0.3, -0.7, 1.1]
NAMES = ["water_631gs_cart", "water_g", "water_g_cart", "bagel_water_i_pure", "psi4_water_h_cart", "benzene_sto3g",
         "formaldehyde_631gs", "permanganate_td_def2svp", "sf6_sto3g", "openmolcas_amidogen_uhf_pure"]


def moments(f):
    with f.mol.with_common_orig(ORIGIN):
        r = f.integrals("int1e_r", 3)
        rr = f.integrals("int1e_rr", 9)
        nabla = -f.integrals("int1e_ipovlp", 3)
        turn = f.integrals("int1e_cg_irxp", 3)
    # <py|(r x nabla)_z|px> of one p shell is -1: settles the sign of libcint's operator.
    one = Functions(P_SHELL)
    with one.mol.with_common_orig([0, 0, 0]):
        sign = -1 / one.integrals("int1e_cg_irxp", 3)[2][1, 0]
    return [*r, *nabla, *(sign * turn), rr[0], rr[4], rr[8], rr[1], rr[2], rr[5]]


class P_SHELL:
    symbols, numbers, xyz = ["He"], [2.0], [[0, 0, 0]]
    shells, pure = [(0, 1, [0.7], [1.0])], {l: False for l in range(7)}


if __name__ == "__main__":
    rows = {}
    for name in NAMES:
        file = read(f"{OUT}/{name}.molden")
        f = Functions(file, convention_of(name))
        c = f.coefficients("alpha")
        n = c.shape[1]
        matrices = [c.T @ m @ c for m in moments(f)]
        weight = np.cos(np.arange(n)[:, None] + 2 * np.arange(n)[None, :])
        pairs = [(0, 1), (1, 3), (2, 4), (4, 5), (5, 4), (3, n - 1), (n - 2, n - 1), (4, 4)]
        rows[name] = {"origin_bohr": ORIGIN,
                      "pairs": [{"bra": i, "ket": j, "moments": [float(m[i, j]) for m in matrices]} for i, j in pairs],
                      "sums": [float((m * weight).sum()) for m in matrices]}
        print(name, n, rows[name]["sums"][:3])
    with open(OUT + "/reference/moments_sums.json", "w") as out:
        json.dump(rows, out, indent=1)
