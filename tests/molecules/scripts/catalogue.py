"""Lists every fixture: writes ../README.md and ../reference/groups.json.

The group named here is checked against the operations of the nuclei found by nuclear_group.py.
Usage: python catalogue.py
"""
import glob
import gzip
import json
import os
import re
import sys

import numpy as np

import shapes as g
from file_basis import read
from nuclear_group import kind, operations

OUT = os.path.dirname(os.path.dirname(os.path.abspath(__file__)))
VERSIONS = {"nwchem": "NWChem 7.0.2", "psi4": "Psi4 1.3.2", "xtb": "xtb 6.5.1", "openmolcas": "OpenMolcas 22.10",
            "bagel": "BAGEL 1.2.2", "cp2k": "CP2K 2023.1", "psi3": "PSI3 3.4.0"}
LIBRARY = {"sto3g": "STO-3G", "631g": "6-31G", "631gs": "6-31G*", "ccpvdz": "cc-pVDZ", "ccpvtz": "cc-pVTZ",
           "def2svp": "def2-SVP", "def2tzvp": "def2-TZVP", "svp": "SVP"}
NAMES = {"water": ("H2O", "C2v"), "formaldehyde": ("H2CO", "C2v"), "ammonia": ("NH3", "C3v"), "ethene": ("C2H4", "D2h"),
         "benzene": ("C6H6", "D6h"), "amidogen": ("NH2 radical", "C2v"), "sulfur_hexafluoride": ("SF6", "Oh"),
         "sf6": ("SF6", "Oh"), "methane": ("CH4", "Td"),
         "allene": ("C3H4", "D2d"), "ethane": ("C2H6 staggered", "D3d"), "boron_trifluoride": ("BF3", "D3h"),
         "cyclopentadienide": ("C5H5-", "D5h"), "carbon_dioxide": ("CO2", "Dinfh")}
# what an engine's files are here for
ENGINE_NOTES = {
    "nwchem": "full-group labels; scale column 0; oriented by the engine",
    "psi4": "contractions not of unit norm; cartesian components with the constant of x^l",
    "xtb": "coefficients hold the primitive's normalisation; valence electrons only; no tags",
    "openmolcas": "grouped by irrep, four decimals in the energies, no scale column",
    "bagel": "lower-case symbols, angstrom, no Sym lines",
    "cp2k": "six decimals in the coordinates, sparse coefficients",
    "psi3": "capital atom names, lexicographic cartesian components",
}
ENDINGS = {"raw": "coefficients hold the primitive's normalisation", "uhf": "unrestricted", "uks": "unrestricted",
           "c1": "run without symmetry", "i": "one shell of each l, s to i", "h": "one shell of each l, s to h",
           "g": "one shell of each l, s to g", "broken": "a defective file: coefficients missing, must be refused",
           "digits": "three digits only"}
# PySCF files: name -> (molecule, method/basis, group, what for)
PYSCF = {
    "water_sto3g": ("H2O", "RHF/STO-3G", "C2v", "smallest complete file"),
    "water_631gs": ("H2O", "RHF/6-31G*", "C2v", "pure d"),
    "water_631gs_cart": ("H2O", "RHF/6-31G*", "C2v", "cartesian d"),
    "water_g": ("H2O", "RHF/by hand", "C2v", "s to g, pure"),
    "water_g_cart": ("H2O", "RHF/by hand", "C2v", "s to g, cartesian"),
    "ammonia_631gs": ("NH3", "RHF/6-31G*", "C3v", "e sets"),
    "methane_631gs": ("CH4", "RHF/6-31G*", "Td", "e and t2 sets"),
    "benzene_with_modes_sto3g": ("C6H6", "RHF/STO-3G, relaxed", "D6h", "orbitals and modes of one geometry"),
    "formaldehyde_with_modes_631gs": ("CH2O", "RHF/6-31G*, relaxed", "C2v", "orbitals and modes of one geometry"),
    "benzene_sto3g": ("C6H6", "RHF/STO-3G", "D6h", "the pi set a2u e1g e2u b2g"),
    "benzene_631g": ("C6H6", "RHF/6-31G", "D6h", "the same in a larger set"),
    "ethene_631gs": ("C2H4", "RHF/6-31G*", "D2h", "axis choice"),
    "formaldehyde_631gs": ("H2CO", "RHF/6-31G*", "C2v", "pure d"),
    "formaldehyde_631gs_cart": ("H2CO", "RHF/6-31G*", "C2v", "cartesian d"),
    "sf6_sto3g": ("SF6", "RHF/STO-3G", "Oh", "complete set"),
    "sf6_631gs": ("SF6", "RHF/6-31G*", "Oh", "nearly equal core levels of several irreps"),
    "ferrocene_d5d_sto3g": ("Fe(C5H5)2 staggered", "RHF/STO-3G", "D5d", "sandwich; Fock matrix averaged"),
    "ferrocene_d5h_sto3g": ("Fe(C5H5)2 eclipsed", "RHF/STO-3G", "D5h", "sandwich; Fock matrix averaged"),
    "nitrogen_631gs": ("N2", "RHF/6-31G*", "Dinfh", "linear with inversion"),
    "carbon_dioxide_631gs": ("CO2", "RHF/6-31G*", "Dinfh", "linear with inversion"),
    "hydrogen_fluoride_631gs": ("HF", "RHF/6-31G*", "Cinfv", "linear without inversion"),
    "neon_def2tzvp": ("Ne", "RHF/def2-TZVP", "Kh", "single atom, s to f"),
    "oxygen_triplet_631gs": ("O2, triplet", "UHF/6-31G*", "Dinfh", "open shell pi_g^2"),
    "chfclbr_c1_sto3g": ("CHFClBr", "RHF/STO-3G", "C1", "chiral"),
    "hypochlorous_cs_631gs": ("HOCl", "RHF/6-31G*", "Cs", ""),
    "dihaloethane_ci_sto3g": ("CHFCl-CHFCl, anti", "RHF/STO-3G", "Ci", ""),
    "peroxide_c2_631gs": ("H2O2", "RHF/6-31G*", "C2", ""),
    "trifluoroethane_c3_sto3g": ("CH3-CF3, skew", "RHF/STO-3G", "C3", "complex pair of irreps"),
    "clf5_c4v_sto3g": ("ClF5", "RHF/STO-3G", "C4v", "square pyramid"),
    "lithium_cp_c5v_sto3g": ("Li(C5H5)", "RHF/STO-3G", "C5v", "half sandwich"),
    "difluoroethene_c2h_631g": ("trans-C2H2F2", "RHF/6-31G", "C2h", ""),
    "butadiene_c2h_631g": ("s-trans C4H6", "RHF/6-31G", "C2h", "pi set 2au + 2bg"),
    "boric_acid_c3h_631g": ("B(OH)3", "RHF/6-31G", "C3h", ""),
    "ethene_twisted_d2_631gs": ("C2H4, twisted 35 degrees", "RHF/6-31G*", "D2", ""),
    "ethane_skew_d3_631g": ("C2H6, 20 degrees", "RHF/6-31G", "D3", ""),
    "ethane_eclipsed_d3h_631g": ("C2H6", "RHF/6-31G", "D3h", ""),
    "ethane_staggered_d3d_631g": ("C2H6", "RHF/6-31G", "D3d", ""),
    "bf3_d3h_631gs": ("BF3", "RHF/6-31G*", "D3h", ""),
    "pf5_d3h_sto3g": ("PF5", "RHF/STO-3G", "D3h", "bipyramid"),
    "xef4_d4h_ecp": ("XeF4", "RHF/def2-SVP, core potential on Xe", "D4h", "effective charge in [Atoms]"),
    "ptcl4_d4h_ecp": ("[PtCl4]2-", "RHF/LANL2DZ with core potentials", "D4h", "core potentials on all atoms"),
    "cyclobutadiene_triplet_d4h_sto3g": ("C4H4 square, triplet", "UHF/STO-3G", "D4h", "eg^2 triplet"),
    "cyclopentadienide_d5h_631g": ("C5H5-", "RHF/6-31G", "D5h", ""),
    "allene_d2d_631g": ("C3H4", "RHF/6-31G", "D2d", "both pi pairs e"),
    "cot_tub_d2d_sto3g": ("C8H8 tub", "RHF/STO-3G", "D2d", ""),
    "b10h10_d4d_sto3g": ("[B10H10]2-", "RHF/STO-3G", "D4d", "e1 e2 e3"),
    "ferrocene_turned_d5_sto3g": ("Fe(C5H5)2, 20 degrees", "RHF/STO-3G", "D5", "Fock matrix averaged"),
    "silicic_acid_s4_sto3g": ("Si(OH)4", "RHF/STO-3G", "S4", ""),
    "neopentane_t_sto3g": ("C(CH3)4, methyls turned 20 degrees", "RHF/STO-3G", "T", ""),
    "permanganate_td_def2svp": ("MnO4-", "RKS PBE/def2-SVP", "Td", "f shell on the metal; Fock matrix averaged"),
    "magnesium_aqua_th_sto3g": ("[Mg(H2O)6]2+", "RHF/STO-3G", "Th", "flat ligands in perpendicular planes"),
    "magnesium_aqua_t_sto3g": ("[Mg(H2O)6]2+, waters turned 25 degrees", "RHF/STO-3G", "T", ""),
    "cobalt_ammine_d3d_sto3g": ("[Co(NH3)6]3+", "RHF/STO-3G", "D3d", "octahedral core; Fock matrix averaged"),
    "cobalt_ammine_d3_sto3g": ("[Co(NH3)6]3+, ammines turned 20 degrees", "RHF/STO-3G", "D3", "Fock matrix averaged"),
    "cobalt_en_d3_sto3g": ("[Co(en)3]3+", "RHF/STO-3G", "D3", "tris-chelate; Fock matrix averaged"),
    "manganese_aqua_sextet_th_sto3g": ("[Mn(H2O)6]2+, sextet", "UHF/STO-3G", "Th", "high spin d5, intact"),
    "nickel_carbonyl_td_ecp": ("Ni(CO)4", "RHF/LANL2DZ on Ni, STO-3G", "Td", "core potential on the metal only"),
    "b12h12_ih_sto3g": ("[B12H12]2-", "RHF/STO-3G", "Ih", "t1u t2u gg gu hg"),
    "sf6_shaken_sto3g": ("SF6, atoms moved by up to 0.004 A", "RHF/STO-3G", "C1", "Oh within 0.01 A"),
    "sf6_stretched_d4h_sto3g": ("SF6, stretched by 5 %", "RHF/STO-3G", "D4h", "for labels in the parent Oh"),
    "neon_with_ghost": ("Ne and functions without nucleus", "RHF/6-31G*", "Cinfv", "ghost atom: nuclear charge 0"),
    "helium_pinwheel_c4": ("He8", "RHF/s and p", "C4", ""), "helium_pinwheel_c6": ("He12", "RHF/s and p", "C6", ""),
    "helium_pinwheel_c4h": ("He8", "RHF/s and p", "C4h", ""), "helium_pinwheel_c5h": ("He10", "RHF/s and p", "C5h", ""),
    "helium_pinwheel_c6h": ("He12", "RHF/s and p", "C6h", ""), "helium_s6": ("He12", "RHF/s and p", "S6", ""),
    "helium_s8": ("He16", "RHF/s and p", "S8", ""), "helium_d4": ("He8", "RHF/s and p", "D4", ""),
    "helium_d6": ("He12", "RHF/s and p", "D6", ""), "helium_d6d": ("He12", "RHF/s and p", "D6d", ""),
    "helium_d7h": ("He7", "RHF/s and p", "D7h", ""), "helium_d8h": ("He8", "RHF/s and p", "D8h", ""),
    "helium_o": ("He24", "RHF/6-31G", "O", "one general orbit"), "helium_i": ("He60", "RHF/STO-3G", "I", "one general orbit"),
    "helium_ih": ("He12", "RHF/s and p", "Ih", "s and p on the vertices"),
    "carbon_monoxide_631gs": ("CO", "RHF/6-31G*", "Cinfv", ""), "hydrogen_cyanide_631gs": ("HCN", "RHF/6-31G*", "Cinfv", ""),
    "ethyne_631gs": ("C2H2", "RHF/6-31G*", "Dinfh", ""),
    "nitrogen_atom_quartet": ("N, quartet", "UHF/6-31G*", "Kh", "open-shell atom"),
    "zinc_ion_def2svp": ("Zn2+", "RHF/def2-SVP", "Kh", "filled d, f shell"),
    "xenon_ecp": ("Xe", "RHF/def2-SVP with core potential", "Kh", "effective charge in [Atoms]"),
    "broken_h2_stretched": ("H2 at 2.2 A", "UHF/6-31G**", "Dinfh", "spins on opposite atoms: inversion exchanges them"),
    "broken_h4_square": ("H4 square", "UHF/6-31G**", "D4h", "alternating spins round a ring"),
    "broken_methane_cation": ("CH4+ at tetrahedral nuclei", "UHF/6-31G*", "Td", "Jahn-Teller situation, t2^5"),
    "broken_benzene_cation": ("C6H6+ at hexagonal nuclei", "UHF/STO-3G", "D6h", "Jahn-Teller situation, e1g^3"),
    "broken_chromium_fluoride_d1": ("[CrF6]-, d1", "UHF/STO-3G", "Oh", "Jahn-Teller situation, t2g^1"),
    "broken_helium_dimer_cation": ("He2+ at 2.4 A", "UHF/6-31G**", "Dinfh", "hole on one atom"),
    "broken_boron_atom": ("B atom", "UHF/6-31G*", "Kh", "one component of p filled"),
    "broken_nitric_oxide": ("NO", "UHF/6-31G*", "Cinfv", "one component of pi filled"),
    "broken_ferrocene_restricted": ("Fe(C5H5)2 staggered", "RHF/STO-3G", "D5d", "a restricted solution below the symmetric one"),
    "broken_ethene_by_hand": ("C2H4", "RHF/6-31G*", "D2h", "HOMO turned into an empty orbital by 0.2 rad"),
    "intact_methyl_radical": ("CH3", "UHF/6-31G*", "D3h", "spin-polarised, spatially intact"),
    "turned_ammonia": ("NH3", "RHF/6-31G*", "C3v", "partners turned at random"),
    "turned_methane": ("CH4", "RHF/6-31G*", "Td", "partners turned at random"),
    "noisy_benzene": ("C6H6", "RHF/STO-3G", "D6h", "partners turned, energies moved by up to 1e-5"),
    "mixed_ethene": ("C2H4", "RHF/6-31G*", "D2h", "two occupied orbitals of two irreps turned by 0.35 rad"),
    "localised_methane_boys": ("CH4", "RHF/6-31G*", "Td", "localised occupied orbitals, energies their Fock expectation"),
    "localised_ethene_pipek": ("C2H4", "RHF/6-31G*", "D2h", "localised occupied orbitals"),
    "dialect_water_h_raw_flipped": ("H2O", "RHF/by hand", "C2v", "raw coefficients, high |m| with the other sign, s to h"),
    "dialect_water_g_bare": ("H2O", "RHF/by hand", "C2v", "components with (2i-1)!!(2j-1)!!(2k-1)!!"),
    "dialect_water_g_shell": ("H2O", "RHF/by hand", "C2v", "components with (2l-1)!!"),
    "dialect_water_g_cart_list": ("H2O", "RHF/by hand", "C2v", "pure orbitals over cartesian components"),
    "dialect_formaldehyde_raw_flipped": ("H2CO", "RHF/6-31G*", "C2v", "raw coefficients"),
    "dialect_formaldehyde_shell": ("H2CO", "RHF/6-31G*", "C2v", "as the water file"),
    "scenario/lantern-3": ("[Co(CN)6]3-", "RKS PBE0/def2-SVP on Co, 6-31G", "Oh", "ligand field; Fock matrix averaged"),
    "scenario/bellows-5": ("Fe(C5H5)2 staggered", "RKS PBE0/def2-SVP on Fe, STO-3G", "D5d", "sandwich; Fock matrix averaged"),
    "scenario/ribbon-2": ("tetraazaanthracene", "RKS PBE0/6-31G", "D2h", "chromophore; Fock matrix averaged"),
}


def generators(group):
    """Matrices of a named group, principal axis z."""
    z = lambda a: g.turn((0, 0, 1), a)
    flat, inv = np.diag([1, 1, -1.0]), -np.eye(3)
    special = {"C1": [np.eye(3)], "Cs": [flat], "Ci": [inv], "T": g.GROUP_T, "Td": g.GROUP_TD, "Th": g.GROUP_TH,
               "O": g.GROUP_O, "Oh": g.GROUP_OH, "I": g.GROUP_I, "Ih": [*g.GROUP_I, inv]}
    if group in special:
        return special[group]
    letter, n, end = re.fullmatch(r"([CDS])(\d+)([vhd]?)", group).groups()
    n = int(n)
    if letter == "S":
        return [flat @ z(360 / n)]
    gens = [z(360 / n)] + ([g.turn((1, 0, 0), 180)] if letter == "D" else [])
    return gens + {"": [], "h": [flat], "v": [np.diag([1, -1.0, 1])], "d": [flat @ z(180 / n)]}[end]


def histogram(ops):
    out = {}
    for m in ops:
        k = "{} {:.0f}".format(*kind(m))
        out[k] = out.get(k, 0) + 1
    return out


def engine_row(name):
    engine, rest = name.split("_", 1)
    is_modes = rest.startswith("modes_")
    rest = rest.removeprefix("modes_")
    molecule = next(k for k in sorted(NAMES, key=len, reverse=True) if rest.startswith(k))
    words = rest[len(molecule):].strip("_").split("_")
    basis = next((LIBRARY[w] for w in words if w in LIBRARY), "by hand" if set(words) & set("ghi") else "6-31G*")
    method = "GFN2-xTB" if engine == "xtb" else ("HF/" + ("STO-3G" if is_modes and molecule == "benzene" else basis))
    if is_modes and engine == "openmolcas":
        method = "HF/6-31G"
    if is_modes and engine == "bagel":
        method = "HF/SVP"
    if engine in ("bagel", "psi4") and molecule == "amidogen":
        method = "UHF/" + ("SVP" if engine == "bagel" else "cc-pVDZ")
    kindword = "cartesian" if "cart" in words else "pure" if "pure" in words else ""
    notes = [x for x in [kindword, *(ENDINGS[w] for w in words if w in ENDINGS)] if x]
    if is_modes:
        notes = ["normal modes, no orbitals"]
    return (NAMES[molecule][0], method, NAMES[molecule][1], "; ".join(notes)), VERSIONS[engine]


def nuclei(path):
    """Symbols and positions of a file, from [Atoms] or [FR-COORD]."""
    if path.endswith(".gz"):
        plain = path[:-3]
        with open(plain, "wb") as f:
            f.write(gzip.open(path).read())
        file = read(plain)
        os.remove(plain)
        return file.symbols, file.xyz
    file = read(path)
    if file.xyz:
        return file.symbols, file.xyz
    text = re.search(r"\[FR-COORD\][^\n]*\n(.*?)\n\s*\[", open(path).read(), re.S).group(1)
    rows = [r.split() for r in text.splitlines() if len(r.split()) == 4]
    return [re.sub(r"\d", "", r[0]).capitalize() for r in rows], [[float(x) for x in r[1:]] for r in rows]


def main():
    listed, groups, wrong = [], {}, []
    paths = glob.glob(OUT + "/*.molden") + glob.glob(OUT + "/*.molden.gz") + glob.glob(OUT + "/scenario/*.molden")
    for path in sorted(paths):
        name = os.path.relpath(path, OUT).removesuffix(".gz").removesuffix(".molden")
        if name in PYSCF:
            row, engine = PYSCF[name], "PySCF, rewritten" if name.startswith("dialect") else "PySCF"
        else:
            row, engine = engine_row(name)
        symbols, xyz = nuclei(path)
        group = row[2]
        ops = operations(symbols, xyz, 1e-4) if len(symbols) > 1 else None
        if ops is None:
            ok = group in ("Kh", "Cinfv", "Dinfh")
        else:
            ok = histogram(ops) == histogram(g.generated(generators(group)))
        if not ok:
            wrong.append((name, group, ops and histogram(ops)))
        groups[os.path.relpath(path, OUT)] = {"group": group, "order": len(ops) if ops else None}
        listed.append((os.path.relpath(path, OUT), row, engine))
    with open(OUT + "/reference/groups.json", "w") as f:
        f.write("{\n" + ",\n".join(f' "{k}": {json.dumps(v)}' for k, v in groups.items()) + "\n}\n")
    head = open(os.path.join(os.path.dirname(os.path.abspath(__file__)), "readme_head.md")).read()
    import pyscf
    with open(OUT + "/README.md", "w") as f:
        f.write(head.replace("PYSCF_VERSION", pyscf.__version__)
                .replace("ENGINE_NOTES", "\n".join(f"- {VERSIONS[k]}: {v}." for k, v in ENGINE_NOTES.items())))
        f.write("\n## Files\n\n| file | molecule | method/basis | group of the nuclei | engine | what for |\n|---|---|---|---|---|---|\n")
        for path, (molecule, method, group, note), engine in listed:
            f.write(f"| {path} | {molecule} | {method} | {group} | {engine} | {note} |\n")
    if wrong:
        sys.exit("wrong groups: " + "\n".join(map(str, wrong)))
    print(len(listed), "files, all groups as named")


if __name__ == "__main__":
    main()
