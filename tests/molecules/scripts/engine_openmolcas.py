"""Engine: OpenMolcas 22.10 (Debian 12). Orbitals, and vibrations in a file of their own.

Usage: python engine_openmolcas.py [name ...]
"""
import os
import sys

from engine_common import attempt, lines, placed, run, store


def by_basis_set(atoms, basis):
    """The older input form, without symmetry: the only one that allows cartesian shells."""
    out = []
    for k, (symbol, p) in enumerate(atoms, 1):
        out += ["Basis set", f"{symbol}.{basis}....", "Cartesian all",
                f"{symbol}{k} " + " ".join(f"{x:.12f}" for x in p) + " / Angstrom", "End of basis"]
    return "\n".join(out) + "\n"


def job(name, molecule, basis, sym=True, cart=False, virtuals=None, modes=False):
    def go():
        atoms, mult = placed(molecule)
        xyz = f"{len(atoms)}\nangstrom\n{lines(atoms)}\n"
        group = "" if sym else "\nGroup = Nosym"
        wave = "\nUHF\nSpin = 2" if mult == 2 else ""
        where = by_basis_set(atoms, basis) if cart else f"Coord = m.xyz\nBasis = {basis}{group}\n"
        text = ("&GATEWAY\n" + where + ("" if modes or cart else "NoMove\n")
                + f"\n&SEWARD\nThreshold = 1.0d-16\nCutOff = 1.0d-18\n\n&SCF{wave}\nThreshold = 1.0d-12 1.0d-8 1.0d-8 0.2d-4\n"
                + ("\n&MCKINLEY\n\n&MCLR\n" if modes else ""))
        folder = run(["pymolcas", "m.inp", "-clean"], {"m.inp": text, "m.xyz": xyz}, timeout=900,
                     env={"MOLCAS_WORKDIR": "", "MOLCAS_MEM": "1000"})
        want = "freq.molden" if modes else "scf.molden"
        found = []
        for top, _, files in os.walk(folder):
            found += [os.path.join(top, f) for f in files if f.endswith(want)]
        if not found:
            raise SystemExit(f"{folder}: {os.listdir(folder)} " + open(os.path.join(folder, "stdout")).read()[-1500:])
        store(name, sorted(found)[0], virtuals)
    return go


# the library set 6-31G* of this engine has cartesian d, the correlation-consistent ones pure
JOBS = {name: job(name, *rest) for name, *rest in [
    ("openmolcas_water_ccpvdz_pure", "water", "cc-pVDZ"),
    ("openmolcas_water_631gs_cart", "water", "6-31G*"),
    ("openmolcas_water_ccpvtz_pure", "water", "cc-pVTZ", True, False, 12),
    ("openmolcas_water_c1_ccpvtz_cart", "water", "cc-pVTZ", False, True, 10),
    ("openmolcas_formaldehyde_c1_ccpvdz_pure", "formaldehyde", "cc-pVDZ", False, False, 18),
    ("openmolcas_formaldehyde_c1_631gs_cart", "formaldehyde", "6-31G*", False),
    ("openmolcas_ammonia_631gs_cart", "ammonia", "6-31G*"),
    ("openmolcas_ethene_ccpvdz_pure", "ethene", "cc-pVDZ", True, False, 16),
    ("openmolcas_benzene_sto3g_pure", "benzene", "STO-3G"),
    ("openmolcas_amidogen_uhf_cart", "amidogen", "6-31G*"),
    ("openmolcas_amidogen_uhf_pure", "amidogen", "cc-pVDZ", True, False, 14),
    ("openmolcas_modes_water", "water", "6-31G", True, False, None, True),
    ("openmolcas_modes_ammonia", "ammonia", "6-31G", False, False, None, True),
]}

if __name__ == "__main__":
    attempt(JOBS, sys.argv[1:])
