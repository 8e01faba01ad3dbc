"""Engine: NWChem 7.0.2 (Debian 12). Molden files of the property task, both of its norms.

Usage: python engine_nwchem.py [name ...]
"""
import os
import sys

from engine_common import CHARGES, attempt, lines, placed, run, store, tall


def basis_block(basis, kind):
    if isinstance(basis, str):
        return f'basis "ao basis" {kind}\n  * library "{basis}"\nend'
    text = []
    for symbol, shells in basis.items():
        for l, prims in shells:
            text.append(f" {symbol} {l}")
            text += [f"   {a} {c}" for a, c in prims]
    return f'basis "ao basis" {kind}\n' + "\n".join(text) + "\nend"


def job(name, molecule, basis, kind, norm, sym=True, virtuals=None, theory="scf"):
    def go():
        atoms, mult = placed(molecule)
        scf = ("scf\n  " + ("uhf\n  doublet" if mult == 2 else "rhf") + "\n  thresh 1e-10\n  tol2e 1e-14\n  maxiter 200\nend")
        auto = "" if sym else " noautosym"
        text = (f"start m\necho\ncharge {CHARGES.get(molecule, 0)}\ngeometry units angstrom{auto}\n{lines(atoms)}\nend\n{basis_block(basis, kind)}\n{scf}\n"
                f"property\n  moldenfile\n  molden_norm {norm}\nend\ntask scf property\n")
        folder = run(["nwchem", "in.nw"], {"in.nw": text}, want=["m.molden"])
        store(name, os.path.join(folder, "m.molden"), virtuals)
    return go


JOBS = {name: job(name, *rest) for name, *rest in [
    ("nwchem_water_631gs_pure", "water", "6-31g*", "spherical", "janpa"),
    ("nwchem_water_631gs_cart", "water", "6-31g*", "cartesian", "janpa"),
    ("nwchem_water_631gs_cart_raw", "water", "6-31g*", "cartesian", "nwchem"),
    ("nwchem_water_ccpvdz_pure_raw", "water", "cc-pvdz", "spherical", "nwchem"),
    ("nwchem_water_g_pure", "water", tall(4), "spherical", "janpa"),
    ("nwchem_water_g_cart_raw", "water", tall(4), "cartesian", "nwchem", True, 28),
    ("nwchem_formaldehyde_c1_pure", "formaldehyde", "6-31g*", "spherical", "janpa", False),
    ("nwchem_formaldehyde_c1_cart_raw", "formaldehyde", "6-31g*", "cartesian", "nwchem", False),
    ("nwchem_ammonia_ccpvdz_pure", "ammonia", "cc-pvdz", "spherical", "janpa"),
    ("nwchem_ethene_631gs_pure", "ethene", "6-31g*", "spherical", "janpa", True, 20),
    ("nwchem_benzene_sto3g_pure", "benzene", "sto-3g", "spherical", "janpa"),
    ("nwchem_amidogen_uhf_pure", "amidogen", "6-31g*", "spherical", "janpa"),
    ("nwchem_methane_631gs_pure", "methane_upright", "6-31g*", "spherical", "janpa"),
    ("nwchem_allene_sto3g_pure", "allene", "sto-3g", "spherical", "janpa"),
    ("nwchem_ethane_sto3g_pure", "ethane", "sto-3g", "spherical", "janpa"),
    ("nwchem_boron_trifluoride_sto3g_pure", "boron_trifluoride", "sto-3g", "spherical", "janpa"),
    ("nwchem_cyclopentadienide_sto3g_pure", "cyclopentadienide", "sto-3g", "spherical", "janpa"),
    ("nwchem_carbon_dioxide_631gs_pure", "carbon_dioxide", "6-31g*", "spherical", "janpa", True, 12),
    ("nwchem_sf6_sto3g_pure", "sulfur_hexafluoride_upright", "sto-3g", "spherical", "janpa"),
]}

if __name__ == "__main__":
    attempt(JOBS, sys.argv[1:])
