"""Engine: CP2K 2023.1 (Debian 12), all-electron Gaussian runs in a box.

Usage: python engine_cp2k.py [name ...]
"""
import os
import sys

from engine_common import attempt, lines, placed, run, store

DATA = "/usr/share/cp2k"


def job(name, molecule, basis, form="SPHERICAL", digits=10, pseudo=False, virtuals=None):
    def go():
        atoms, mult = placed(molecule)
        kinds = "".join(f"&KIND {s}\n BASIS_SET {basis}\n POTENTIAL {'GTH-HF' if pseudo else 'ALL'}\n&END KIND\n"
                        for s in sorted({s for s, _ in atoms}))
        text = f"""&GLOBAL
PROJECT m
RUN_TYPE ENERGY
&END GLOBAL
&FORCE_EVAL
METHOD QS
&DFT
BASIS_SET_FILE_NAME EMSL_BASIS_SETS
POTENTIAL_FILE_NAME {'HF_POTENTIALS' if pseudo else 'ALL_POTENTIALS'}
MULTIPLICITY {mult}
{'UKS' if mult > 1 else ''}
&MGRID
CUTOFF 300
&END MGRID
&QS
METHOD {'GPW' if pseudo else 'GAPW'}
EPS_DEFAULT 1e-16
&END QS
&POISSON
PERIODIC NONE
POISSON_SOLVER WAVELET
&END POISSON
&SCF
EPS_SCF 1e-8
MAX_SCF 100
ADDED_MOS 40
&END SCF
&XC
&XC_FUNCTIONAL NONE
&END XC_FUNCTIONAL
&HF
&SCREENING
EPS_SCHWARZ 1e-14
&END SCREENING
&END HF
&END XC
&PRINT
&MO_MOLDEN
FILENAME m
NDIGITS {digits}
GTO_KIND {form}
&END MO_MOLDEN
&END PRINT
&END DFT
&SUBSYS
&CELL
ABC 10 10 10
PERIODIC NONE
&END CELL
&TOPOLOGY
&CENTER_COORDINATES
&END CENTER_COORDINATES
&END TOPOLOGY
&COORD
{lines(atoms)}
&END COORD
{kinds}&END SUBSYS
&END FORCE_EVAL
"""
        folder = run(["cp2k.psmp", "-i", "m.inp", "-o", "m.out"], {"m.inp": text}, timeout=900,
                     env={"CP2K_DATA_DIR": DATA, "OMPI_ALLOW_RUN_AS_ROOT": "1", "OMPI_ALLOW_RUN_AS_ROOT_CONFIRM": "1"})
        found = [f for f in os.listdir(folder) if f.endswith(".molden")]
        if not found:
            raise SystemExit(folder + " " + open(os.path.join(folder, "m.out")).read()[-1500:])
        store(name, os.path.join(folder, found[0]), virtuals)
    return go


JOBS = {name: job(name, *rest) for name, *rest in [
    ("cp2k_water_631gs_pure", "water", "6-31Gx"),
    ("cp2k_water_631gs_cart", "water", "6-31Gx", "CARTESIAN"),
    ("cp2k_water_631gs_default_digits", "water", "6-31Gx", "SPHERICAL", 3),
    ("cp2k_formaldehyde_631gs_pure", "formaldehyde", "6-31Gx"),
    ("cp2k_ammonia_631gs_pure", "ammonia", "6-31Gx"),
    ("cp2k_ethene_631gs_pure", "ethene", "6-31Gx", "SPHERICAL", 10, False, 16),
    ("cp2k_amidogen_uks_pure", "amidogen", "6-31Gx"),
]}

if __name__ == "__main__":
    attempt(JOBS, sys.argv[1:])
