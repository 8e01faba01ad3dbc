"""Engine: PSI3 3.4.0 (Debian 12). Its Molden writer lists cartesian shells in its own order.

Usage: python engine_psi3.py [name ...]
"""
import os
import sys

from engine_common import attempt, placed, run, store


def job(name, molecule, basis, pure):
    def go():
        atoms, mult = placed(molecule)
        rows = "\n".join(f"    ({s} {p[0]:.12f} {p[1]:.12f} {p[2]:.12f})" for s, p in atoms)
        text = (f"psi: (\n  label = \"{molecule}\"\n  jobtype = sp\n  wfn = scf\n  reference = {'uhf' if mult == 2 else 'rhf'}\n"
                f"  multp = {mult}\n  charge = 0\n  units = angstrom\n  basis = \"{basis}\"\n  puream = {str(pure).lower()}\n"
                f"  convergence = 11\n  geometry = (\n{rows}\n  )\n)\n")
        folder = run(["psi3", "input.dat", "output.dat"], {"input.dat": text})
        run_in = dict(os.environ)
        import subprocess
        done = subprocess.run(["/usr/lib/psi/psi2molden"], cwd=folder, env=run_in, capture_output=True, text=True)
        found = [f for f in os.listdir(folder) if "molden" in f]
        if not found:
            raise SystemExit(folder + str(os.listdir(folder)) + done.stdout[-500:] + done.stderr[-500:])
        store(name, os.path.join(folder, found[0]))
    return go


JOBS = {name: job(name, *rest) for name, *rest in [
    ("psi3_water_631gs_cart", "water", "6-31G*", False),
    ("psi3_water_631gs_broken", "water", "6-31G*", True),
    ("psi3_formaldehyde_631gs_cart", "formaldehyde", "6-31G*", False),
    ("psi3_ammonia_631gs_cart", "ammonia", "6-31G*", False),
]}

if __name__ == "__main__":
    attempt(JOBS, sys.argv[1:])
