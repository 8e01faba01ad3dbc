"""One file for each point group not covered by pyscf_first.py, and atoms and core potentials.

Engine: PySCF 2.14.0; symmetry off; each file has its own seed. `group` averages the Fock matrix
over the molecule's rotations where grid or an instability would break them.
Usage: python pyscf_groups.py [name ...]
"""
import sys

import numpy as np

import shapes as g
from pyscf_run import molecule, solve, write

# s and p on helium, so that clusters of helium show every kind of orbital of a ring
SP = {"He": [[0, [6.36242139, 0.154329], [1.158923, 0.535328], [0.31364979, 0.444635]], [1, [0.9, 1.0]]]}
MX4 = g.dihedral(4, "h")

# name: (atoms, basis, options of molecule, options of solve, options of write)
FILES = {
    "chfclbr_c1_sto3g": (g.chiral_methane(), "sto-3g", dict(seed=201), {}, {}),
    "hypochlorous_cs_631gs": (g.hypochlorous(), "6-31g*", dict(seed=202), {}, dict(virtuals=14)),
    "dihaloethane_ci_sto3g": (g.anti_dihalide(), "sto-3g", dict(seed=203), {}, {}),
    "peroxide_c2_631gs": (g.peroxide(), "6-31g*", dict(seed=204), {}, {}),
    "trifluoroethane_c3_sto3g": (g.fluoromethyl_skew(), "sto-3g", dict(seed=205), {}, dict(degenerate=[2])),
    "clf5_c4v_sto3g": (g.square_pyramid("Cl", "F", 1.67, 1.60), "sto-3g", dict(seed=206), {}, dict(degenerate=[2])),
    "lithium_cp_c5v_sto3g": (g.half_sandwich("Li"), "sto-3g", dict(seed=207), {}, dict(degenerate=[2])),
    "difluoroethene_c2h_631g": (g.trans_difluoroethene(), "6-31g", dict(seed=208), {}, dict(virtuals=14)),
    "butadiene_c2h_631g": (g.butadiene(), "6-31g", dict(seed=209), {}, dict(virtuals=14)),
    "boric_acid_c3h_631g": (g.boric_acid(), "6-31g", dict(seed=210), {}, dict(virtuals=12, degenerate=[2])),
    "ethene_twisted_d2_631gs": (g.ethene(35), "6-31g*", dict(seed=211), {}, {}),
    "ethane_skew_d3_631g": (g.ethane(20), "6-31g", dict(seed=212), {}, dict(degenerate=[2])),
    "ethane_eclipsed_d3h_631g": (g.ethane(0), "6-31g", dict(seed=213), {}, dict(degenerate=[2])),
    "ethane_staggered_d3d_631g": (g.ethane(60), "6-31g", dict(seed=214), {}, dict(degenerate=[2])),
    "bf3_d3h_631gs": (g.planar_xy3("B", "F", 1.31), "6-31g*", dict(seed=215), {}, dict(virtuals=14, degenerate=[2])),
    "pf5_d3h_sto3g": (g.trigonal_bipyramid("P", "F", 1.53, 1.58), "sto-3g", dict(seed=216), {}, dict(degenerate=[2])),
    "xef4_d4h_ecp": (g.square_planar("Xe", "F", 1.95), "def2-svp", dict(seed=217, ecp={"Xe": "def2-svp"}), {},
                     dict(virtuals=5, degenerate=[2])),
    "ptcl4_d4h_ecp": (g.square_planar("Pt", "Cl", 2.32), "lanl2dz", dict(seed=218, charge=-2, ecp="lanl2dz"),
                      dict(shift=0.3), dict(virtuals=8, degenerate=[2])),
    "cyclobutadiene_triplet_d4h_sto3g": (g.annulene(4, 1.44, 1.08), "sto-3g", dict(seed=219, spin=2),
                                         dict(group=MX4, seed=219), dict(degenerate=[2])),
    "cyclopentadienide_d5h_631g": (g.annulene(5, 1.41, 1.085), "6-31g", dict(seed=220, charge=-1), {},
                                   dict(virtuals=12, degenerate=[2])),
    "allene_d2d_631g": (g.allene(), "6-31g", dict(seed=221), {}, dict(degenerate=[2])),
    "cot_tub_d2d_sto3g": (g.tub(), "sto-3g", dict(seed=222), {}, dict(virtuals=10, degenerate=[2])),
    "b10h10_d4d_sto3g": (g.decaborate(), "sto-3g", dict(seed=223, charge=-2), {}, dict(virtuals=6, degenerate=[2])),
    "ferrocene_turned_d5_sto3g": (g.sandwich("Fe", 20), "sto-3g", dict(seed=224),
                                  dict(shift=0.8, guess="atom", group=g.dihedral(5), seed=224),
                                  dict(virtuals=4, degenerate=[2])),
    "silicic_acid_s4_sto3g": (g.silicic_acid(), "sto-3g", dict(seed=225), {}, dict(degenerate=[2])),
    "neopentane_t_sto3g": (g.neopentane(), "sto-3g", dict(seed=226), {}, dict(degenerate=[2, 3])),
    "permanganate_td_def2svp": (g.tetrahedral("Mn", "O", 1.629), "def2-svp", dict(seed=227, charge=-1),
                                dict(xc="pbe", grid=3, shift=0.2, group=g.GROUP_TD, seed=227),
                                dict(virtuals=9, degenerate=[2, 3])),
    "magnesium_aqua_th_sto3g": (g.hexaaqua("Mg", 2.07), "sto-3g", dict(seed=228, charge=2), {},
                                dict(virtuals=8, degenerate=[2, 3])),
    "magnesium_aqua_t_sto3g": (g.hexaaqua("Mg", 2.07, 25), "sto-3g", dict(seed=229, charge=2), {},
                               dict(virtuals=4, degenerate=[2, 3])),
    "cobalt_ammine_d3d_sto3g": (g.hexaammine("Co", 1.97), "sto-3g", dict(seed=230, charge=3),
                                dict(shift=0.5, group=g.GROUP_D3D_111, seed=230), dict(virtuals=6, degenerate=[2])),
    "cobalt_ammine_d3_sto3g": (g.hexaammine("Co", 1.97, 20), "sto-3g", dict(seed=231, charge=3),
                               dict(shift=0.5, group=g.GROUP_D3_111, seed=231), dict(virtuals=4, degenerate=[2])),
    "cobalt_en_d3_sto3g": (g.tris_chelate(), "sto-3g", dict(seed=232, charge=3),
                           dict(shift=0.5, group=g.dihedral(3), seed=232),
                           dict(virtuals=4, degenerate=[2])),
    "manganese_aqua_sextet_th_sto3g": (g.hexaaqua("Mn", 2.18), "sto-3g", dict(seed=233, charge=2, spin=5),
                                       dict(shift=0.5, group=g.GROUP_TH, seed=233),
                                       dict(virtuals=2, degenerate=[2, 3])),
    "nickel_carbonyl_td_ecp": (g.tetrahedral("Ni", "C", 1.82) + g.tetrahedral("Ni", "O", 2.96)[1:],
                               {"Ni": "lanl2dz", "C": "sto-3g", "O": "sto-3g"},
                               dict(seed=234, ecp={"Ni": "lanl2dz"}), dict(shift=0.3), dict(virtuals=6, degenerate=[2, 3])),
    "b12h12_ih_sto3g": (g.icosahedral("B", 1.693, ("H", 2.893)), "sto-3g", dict(seed=235, charge=-2), {},
                        dict(virtuals=8, degenerate=[3, 4, 5])),
    # nearly octahedral: off by at most 0.004 angstrom, and clearly stretched along one axis
    "sf6_shaken_sto3g": (g.shaken(g.octahedral("S", "F", 1.56), 0.004 / 3 ** 0.5, 3), "sto-3g", dict(seed=236), {}, {}),
    "sf6_stretched_d4h_sto3g": ([(s, (x, y, 1.05 * z)) for s, (x, y, z) in g.octahedral("S", "F", 1.56)], "sto-3g",
                                dict(seed=237), {}, dict(degenerate=[2])),
    "neon_with_ghost": (g.atom("Ne") + [("ghost-Ne", (0, 0, 1.5))], "6-31g*", dict(seed=238), {}, dict(degenerate=[2])),
    # clusters of helium: groups that small molecules seldom have
    "helium_pinwheel_c4": (g.pinwheel(4, False), SP, dict(seed=241), {}, dict(degenerate=[2])),
    "helium_pinwheel_c6": (g.pinwheel(6, False), SP, dict(seed=242), {}, dict(virtuals=12, degenerate=[2])),
    "helium_pinwheel_c4h": (g.pinwheel(4, True), SP, dict(seed=243), {}, dict(degenerate=[2])),
    "helium_pinwheel_c5h": (g.pinwheel(5, True), SP, dict(seed=244), {}, dict(virtuals=14, degenerate=[2])),
    "helium_pinwheel_c6h": (g.pinwheel(6, True), SP, dict(seed=245), {}, dict(virtuals=12, degenerate=[2])),
    "helium_s6": (g.rotoreflection(6), SP, dict(seed=246), {}, dict(virtuals=12, degenerate=[2])),
    "helium_s8": (g.rotoreflection(8), SP, dict(seed=247), {}, dict(virtuals=12, degenerate=[2])),
    "helium_d4": (g.dimer_of_rings("He", 4, 1.9, 2.2, 25), SP, dict(seed=248), {}, dict(degenerate=[2])),
    "helium_d6": (g.dimer_of_rings("He", 6, 2.4, 2.4, 13), SP, dict(seed=249), {}, dict(virtuals=12, degenerate=[2])),
    "helium_d6d": (g.dimer_of_rings("He", 6, 2.4, 2.2, 30), SP, dict(seed=250), {},
                   dict(virtuals=12, degenerate=[2])),
    "helium_d7h": (g.ring("He", 7, 2.6), SP, dict(seed=251), {}, dict(degenerate=[2])),
    "helium_d8h": (g.ring("He", 8, 2.8), SP, dict(seed=252), {}, dict(degenerate=[2])),
    "helium_o": (g.orbit("He", (2.9, 1.9, 0.8), g.GROUP_O), "6-31g", dict(seed=253), {}, dict(virtuals=8, degenerate=[2, 3])),
    "helium_i": (g.orbit("He", (3.1, 2.2, 4.2), g.GROUP_I), "sto-3g", dict(seed=254), {},
                 dict(degenerate=[3, 4, 5])),
    "helium_ih": (g.icosahedral("He", 2.4), SP, dict(seed=255), {}, dict(virtuals=14, degenerate=[3, 4, 5])),
    # linear molecules and atoms
    "carbon_monoxide_631gs": (g.diatomic("C", "O", 1.128), "6-31g*", dict(seed=261), {}, dict(degenerate=[2])),
    "hydrogen_cyanide_631gs": ([("C", (0, 0, 0)), ("N", (0, 0, 1.155)), ("H", (0, 0, -1.066))], "6-31g*",
                               dict(seed=262), {}, dict(degenerate=[2])),
    "ethyne_631gs": ([(s, (0, 0, k * z)) for s, z in (("C", 0.6015), ("H", 1.663)) for k in (1, -1)], "6-31g*",
                     dict(seed=263), {}, dict(degenerate=[2])),
    "nitrogen_atom_quartet": (g.atom("N"), "6-31g*", dict(seed=264, spin=3), {}, dict(degenerate=[3])),
    "zinc_ion_def2svp": (g.atom("Zn"), "def2-svp", dict(seed=265, charge=2), {}, dict(degenerate=[3, 5])),
    "xenon_ecp": (g.atom("Xe"), "def2-svp", dict(seed=266, ecp="def2-svp"), {}, dict(virtuals=22, degenerate=[3, 5])),
}

if __name__ == "__main__":
    failed = []
    for name in sys.argv[1:] or FILES:
        atoms, basis, mol_opts, scf_opts, out_opts = FILES[name]
        try:
            write(name, solve(molecule(atoms, basis, **mol_opts), **scf_opts), **out_opts)
        except (AssertionError, SystemExit) as e:
            failed.append(name)
            print("FAILED", name, str(e)[:200], flush=True)
    sys.exit(f"failed: {failed}" if failed else 0)
