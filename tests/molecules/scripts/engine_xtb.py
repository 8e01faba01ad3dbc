"""Engine: xtb 6.5.1 (Debian 12), its second tight-binding method.

Usage: python engine_xtb.py [name ...]
"""
import os
import sys

from engine_common import attempt, lines, placed, run, store


def job(name, molecule):
    def go():
        atoms, mult = placed(molecule)
        xyz = f"{len(atoms)}\n\n{lines(atoms)}\n"
        folder = run(["xtb", "m.xyz", "--gfn", "2", "--molden", "--acc", "0.0001", "--uhf", str(mult - 1)],
                     {"m.xyz": xyz}, want=["molden.input"])
        store(name, os.path.join(folder, "molden.input"))
    return go


JOBS = {f"xtb_{m}": job(f"xtb_{m}", m)
        for m in ("water", "formaldehyde", "ammonia", "ethene", "benzene", "amidogen", "sulfur_hexafluoride")}

if __name__ == "__main__":
    attempt(JOBS, sys.argv[1:])
