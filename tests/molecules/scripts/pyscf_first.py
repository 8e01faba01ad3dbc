"""The everyday molecules. Engine: PySCF 2.14.0; symmetry off; each file has its own seed.

Usage: python pyscf_first.py [name ...]
"""
import sys

import shapes as g
from pyscf_run import molecule, solve, write

# g-shell set: one shell of each l up to g on oxygen and up to f on hydrogen, made by hand
TALL = {
    "O": [[0, [130.70932, 0.154329], [23.808861, 0.535328], [6.4436083, 0.444635]],
          [0, [0.9, 1.0]], [1, [5.0331513, 0.155916], [1.1695961, 0.607684], [0.380389, 0.391957]],
          [2, [1.1, 1.0]], [3, [1.4, 1.0]], [4, [1.7, 1.0]]],
    "H": [[0, [3.42525091, 0.154329], [0.62391373, 0.535328], [0.1688554, 0.444635]],
          [1, [0.8, 1.0]], [2, [1.0, 1.0]], [3, [1.2, 1.0]]],
}

# name: (atoms, basis, options of molecule, options of solve, options of write)
FILES = {
    "water_sto3g": (g.water(), "sto-3g", dict(seed=101), {}, {}),
    "water_631gs": (g.water(), "6-31g*", dict(seed=102), {}, {}),
    "water_631gs_cart": (g.water(), "6-31g*", dict(seed=103, cart=True), {}, {}),
    "water_g": (g.water(), TALL, dict(seed=104), {}, {}),
    "water_g_cart": (g.water(), TALL, dict(seed=105, cart=True), {}, dict(virtuals=20)),
    "ammonia_631gs": (g.ammonia(), "6-31g*", dict(seed=106), {}, dict(degenerate=[2])),
    "methane_631gs": (g.tetrahedral("C", "H", 1.09), "6-31g*", dict(seed=107), {}, dict(degenerate=[3, 2])),
    "benzene_sto3g": (g.annulene(6, 1.395, 1.085), "sto-3g", dict(seed=108), {}, dict(degenerate=[2])),
    "benzene_631g": (g.annulene(6, 1.395, 1.085), "6-31g", dict(seed=109), {}, dict(virtuals=10, degenerate=[2])),
    "ethene_631gs": (g.ethene(), "6-31g*", dict(seed=110), {}, {}),
    "formaldehyde_631gs": (g.formaldehyde(), "6-31g*", dict(seed=111), {}, {}),
    "formaldehyde_631gs_cart": (g.formaldehyde(), "6-31g*", dict(seed=112, cart=True), {}, {}),
    "sf6_sto3g": (g.octahedral("S", "F", 1.56), "sto-3g", dict(seed=113), {}, dict(degenerate=[2, 3])),
    "sf6_631gs": (g.octahedral("S", "F", 1.56), "6-31g*", dict(seed=114), {}, dict(virtuals=7, degenerate=[2, 3])),
    "ferrocene_d5d_sto3g": (g.sandwich("Fe", 36), "sto-3g", dict(seed=115),
                            dict(shift=0.8, guess="atom", group=g.dihedral(5, "d"), seed=115),
                            dict(virtuals=8, degenerate=[2])),
    "ferrocene_d5h_sto3g": (g.sandwich("Fe", 0), "sto-3g", dict(seed=116),
                            dict(shift=0.8, guess="atom", group=g.dihedral(5, "h"), seed=116),
                            dict(virtuals=4, degenerate=[2])),
    "nitrogen_631gs": (g.diatomic("N", "N", 1.098), "6-31g*", dict(seed=117), {}, dict(degenerate=[2])),
    "carbon_dioxide_631gs": ([("C", (0, 0, 0)), ("O", (0, 0, 1.16)), ("O", (0, 0, -1.16))], "6-31g*",
                             dict(seed=118), {}, dict(degenerate=[2])),
    "hydrogen_fluoride_631gs": (g.diatomic("H", "F", 0.917), "6-31g*", dict(seed=119), {}, dict(degenerate=[2])),
    "neon_def2tzvp": (g.atom("Ne"), "def2-tzvp", dict(seed=120), {}, dict(degenerate=[3, 5, 7])),
    "oxygen_triplet_631gs": (g.diatomic("O", "O", 1.208), "6-31g*", dict(seed=121, spin=2), {}, dict(degenerate=[2])),
}

if __name__ == "__main__":
    for name in sys.argv[1:] or FILES:
        atoms, basis, mol_opts, scf_opts, out_opts = FILES[name]
        write(name, solve(molecule(atoms, basis, **mol_opts), **scf_opts), **out_opts)
