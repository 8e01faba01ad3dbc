"""The invented project of the README: three compounds with code names. Engine: PySCF 2.14.0, PBE0.

The Fock matrix is averaged over the group, because an integration grid has no fivefold axis.
Usage: python pyscf_scenario.py [name ...]
"""
import os
import sys

import numpy as np

import shapes as g
from pyscf_run import OUT, molecule, solve, write

FOLDER = os.path.join(OUT, "scenario")
D2H = g.generated([np.diag([-1.0, 1, 1]), np.diag([1, -1.0, 1]), np.diag([1, 1, -1.0])])

FILES = {
    # a ligand-field complex: low-spin d6 between six linear ligands
    "lantern-3": (g.octahedral("Co", "C", 1.90, [("N", 3.06)]), {"Co": "def2-svp", "C": "6-31g", "N": "6-31g"},
                  dict(charge=-3, seed=401), g.GROUP_OH, dict(virtuals=6, degenerate=[2, 3])),
    # a sandwich complex, staggered
    "bellows-5": (g.sandwich("Fe", 36), {"Fe": "def2-svp", "C": "sto-3g", "H": "sto-3g"}, dict(seed=402),
                  g.dihedral(5, "d"), dict(virtuals=9, degenerate=[2])),
    # a flat organic chromophore
    "ribbon-2": (g.azaacene(), "6-31g", dict(seed=403), D2H, dict(virtuals=7)),
}

if __name__ == "__main__":
    for name in sys.argv[1:] or FILES:
        atoms, basis, options, group, out = FILES[name]
        mf = solve(molecule(atoms, basis, **options), xc="pbe0", grid=3, shift=0.2, group=group, seed=options["seed"])
        n = mf.mol.nelectron // 2
        print("   ", np.round(mf.mo_energy[n - 6:n + 8], 4))
        write(name, mf, folder=FOLDER, **out)
