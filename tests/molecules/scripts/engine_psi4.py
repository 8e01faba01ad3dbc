"""Engine: Psi4 1.3.2 (Debian 12). Orbitals, and normal modes in a file of their own.

Usage: python engine_psi4.py [name ...]
"""
import os
import sys

from engine_common import attempt, lines, placed, run, store, tall


def basis_block(basis):
    """Psi4 input for a hand-made set; a library name passes through."""
    if isinstance(basis, str):
        return f"set basis {basis}"
    out = ["basis {", "assign byhand", "[byhand]", "spherical"]
    for symbol, shells in basis.items():
        out += ["****", f"{symbol} 0"]
        for l, prims in shells:
            out.append(f"{l} {len(prims)} 1.00")
            out += [f"  {a:.10f} {c:.10f}" for a, c in prims]
    return "\n".join(out + ["****", "}"])


def job(name, molecule, basis, pure, virtuals=None):
    def go():
        atoms, mult = placed(molecule)
        ref = "uhf" if mult == 2 else "rhf"
        text = (f"molecule m {{\n0 {mult}\n{lines(atoms)}\nunits angstrom\n}}\n{basis_block(basis)}\n"
                f"set puream {str(pure).lower()}\nset reference {ref}\nset scf_type pk\n"
                "set e_convergence 1e-12\nset d_convergence 1e-10\nset ints_tolerance 1e-15\n"
                "e, w = energy('scf', return_wfn=True)\nmolden(w, 'm.molden')\n")
        folder = run(["psi4", "in.dat", "out.dat"], {"in.dat": text}, want=["m.molden"])
        store(name, os.path.join(folder, "m.molden"), virtuals)
    return go


def modes(name, molecule, basis, step=None):
    def go():
        atoms, mult = placed(molecule)
        text = (f"molecule m {{\n0 {mult}\n{lines(atoms)}\nunits angstrom\n}}\nset basis {basis}\n"
                "set reference rhf\nset scf_type pk\nset e_convergence 1e-11\nset d_convergence 1e-9\n"
                "set g_convergence gau_verytight\nset normal_modes_write true\n"
                "optimize('scf')\nfrequency('scf', dertype=1)\n")
        folder = run(["psi4", "in.dat", "out.dat"], {"in.dat": text}, timeout=1200)
        found = [f for f in os.listdir(folder) if "molden" in f]
        if len(found) != 1:
            raise SystemExit(f"{folder}: {os.listdir(folder)}")
        store(name, os.path.join(folder, found[0]))
    return go


JOBS = {name: job(name, *rest) for name, *rest in [
    ("psi4_water_631gs_pure", "water", "6-31g*", True),
    ("psi4_water_631gs_cart", "water", "6-31g*", False),
    ("psi4_water_ccpvdz_pure", "water", "cc-pvdz", True),
    ("psi4_water_ccpvtz_cart", "water", "cc-pvtz", False, 12),
    ("psi4_water_i_pure", "water", tall(6), True),
    ("psi4_water_h_cart", "water", tall(5), False, 25),
    ("psi4_formaldehyde_ccpvdz_pure", "formaldehyde", "cc-pvdz", True, 16),
    ("psi4_formaldehyde_631gs_cart", "formaldehyde", "6-31g*", False, 18),
    ("psi4_ammonia_def2svp_pure", "ammonia", "def2-svp", True),
    ("psi4_ethene_631gs_cart", "ethene", "6-31g*", False, 16),
    ("psi4_benzene_sto3g_pure", "benzene", "sto-3g", True),
    ("psi4_amidogen_uhf_pure", "amidogen", "cc-pvdz", True, 14),
]}
JOBS |= {f"psi4_modes_{m}": modes(f"psi4_modes_{m}", m, "sto-3g" if m == "benzene" else "6-31g*")
         for m in ("water", "ammonia", "methane", "carbon_dioxide", "benzene", "sulfur_hexafluoride")}

if __name__ == "__main__":
    attempt(JOBS, sys.argv[1:])
