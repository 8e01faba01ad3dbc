"""Engine: BAGEL 1.2.2 (Debian 12). Density fitting; pure shells to i, Cartesian to g.

Usage: python engine_bagel.py [name ...]
"""
import json
import os
import sys

from engine_common import BOHR, attempt, placed, run, store, tall

LIBRARY = "/usr/share/bagel"


def basis_file(basis):
    """The engine's own form of a hand-made set."""
    return json.dumps({s: [{"angular": l.lower(), "prim": [a for a, _ in prims], "cont": [[c for _, c in prims]]}
                           for l, prims in shells] for s, shells in basis.items()})


def job(name, molecule, basis, cart=False, virtuals=None, modes=False):
    def go():
        atoms, mult = placed(molecule)
        geometry = [{"atom": s, "xyz": [x / BOHR for x in p]} for s, p in atoms]
        files, where = {}, basis
        if not isinstance(basis, str):
            files["own.json"], where = basis_file(basis), "./own.json"
        scf = {"title": "uhf" if mult == 2 else "hf", "thresh": 1e-10, "nact": mult - 1, "charge": 0, "nspin": mult - 1}
        tasks = [{"title": "molecule", "symmetry": "C1", "basis": where, "df_basis": f"{LIBRARY}/cc-pvqz-jkfit.json",
                  "angstrom": False, "cartesian": cart, "geometry": geometry}]
        if modes:
            tasks += [{"title": "hessian", "dx": 0.001, "method": [scf]},
                      {"title": "print", "file": "m.molden", "vibration": True}]
        else:
            tasks += [scf, {"title": "print", "file": "m.molden", "orbitals": True}]
        files["m.json"] = json.dumps({"bagel": tasks}, indent=1)
        folder = run(["BAGEL", "m.json"], files, want=["m.molden"], timeout=900,
                     env={"BAGEL_NUM_THREADS": "1", "MKL_NUM_THREADS": "1", "OMPI_ALLOW_RUN_AS_ROOT": "1",
                          "OMPI_ALLOW_RUN_AS_ROOT_CONFIRM": "1"})
        store(name, os.path.join(folder, "m.molden"), virtuals)
    return go


JOBS = {name: job(name, *rest) for name, *rest in [
    ("bagel_water_svp_pure", "water", "svp"),
    ("bagel_water_svp_cart", "water", "svp", True),
    ("bagel_water_i_pure", "water", tall(6), False, 28),
    ("bagel_water_g_cart", "water", tall(4), True, 22),
    ("bagel_formaldehyde_ccpvdz_pure", "formaldehyde", "cc-pvdz", False, 16),
    ("bagel_formaldehyde_svp_cart", "formaldehyde", "svp", True, 16),
    ("bagel_ammonia_ccpvdz_pure", "ammonia", "cc-pvdz"),
    ("bagel_ethene_svp_pure", "ethene", "svp", False, 16),
    ("bagel_amidogen_uhf_pure", "amidogen", "svp"),
    ("bagel_modes_water", "water", "svp", False, None, True),
]}

if __name__ == "__main__":
    attempt(JOBS, sys.argv[1:])
