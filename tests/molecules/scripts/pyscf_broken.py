"""Wavefunctions that keep, hide or break the symmetry of their nuclei. Engine: PySCF 2.14.0.

Also writes reference/spin.json with the engine's own <S^2>.
Usage: python pyscf_broken.py [name ...]
"""
import json
import os
import random
import sys

import numpy as np
from pyscf import lo, scf

import shapes as g
from pyscf_run import OUT, molecule, solve, write


def spin_guess(mol, up, down, shift_to):
    """Alpha density from the atoms `up` only, beta from `down` (same number of electrons)."""
    dm = scf.uhf.init_guess_by_minao(mol)
    dm = np.array(dm)
    slices = mol.aoslice_by_atom()
    for spin, atoms in ((0, down), (1, up)):
        for a in atoms:
            dm[spin][slices[a][2]:slices[a][3]] *= shift_to
            dm[spin][:, slices[a][2]:slices[a][3]] *= shift_to
    return dm


def stretched_hydrogen():
    mol = molecule(g.diatomic("H", "H", 2.2), "6-31g**", seed=301)
    return solve(mol, "U", dm0=spin_guess(mol, [0], [1], 0.0)), {}


def square_hydrogen():
    mol = molecule(g.ring("H", 4, 1.2), "6-31g**", seed=302)
    return solve(mol, "U", dm0=spin_guess(mol, [0, 2], [1, 3], 0.0)), {}


def methane_cation():
    mol = molecule(g.tetrahedral("C", "H", 1.09), "6-31g*", charge=1, spin=1, seed=303)
    return solve(mol, "U"), {}


def benzene_cation():
    mol = molecule(g.annulene(6, 1.395, 1.085), "sto-3g", charge=1, spin=1, seed=304)
    return solve(mol, "U"), dict(virtuals=6)


def chromium_d1():
    mol = molecule(g.octahedral("Cr", "F", 1.75), "sto-3g", charge=-1, spin=1, seed=305)
    return solve(mol, "U", shift=0.3), dict(virtuals=6, tol=1e-6)


def helium_cation():
    mol = molecule(g.diatomic("He", "He", 2.4), "6-31g**", charge=1, spin=1, seed=306)
    return solve(mol, "U", dm0=spin_guess(mol, [0], [1], 0.0)), {}


def methyl():
    return solve(molecule(g.planar_xy3("C", "H", 1.08), "6-31g*", spin=1, seed=307), "U"), dict(degenerate=[2])


def nitric_oxide():
    return solve(molecule(g.diatomic("N", "O", 1.151), "6-31g*", spin=1, seed=308), "U"), {}


def boron():
    return solve(molecule([("B", (0, 0, 0))], "6-31g*", spin=1, seed=318), "U"), {}


def ferrocene_lower():
    mol = molecule(g.sandwich("Fe", 36), "sto-3g", seed=309)
    return solve(mol, "R", guess="atom", newton=True), dict(virtuals=4, tol=1e-6)


def occupied_blocks(mf):
    """Runs of equal orbital energy, as index lists."""
    e, out = mf.mo_energy, [[0]]
    for k in range(1, len(e)):
        if e[k] - e[k - 1] < 1e-7:
            out[-1].append(k)
        else:
            out.append([k])
    return out


def turned(atoms, basis, seed):
    """Every degenerate set mixed by a random orthogonal matrix of its own."""
    mf = solve(molecule(atoms, basis, seed=seed))
    rng = random.Random(seed)
    for block in occupied_blocks(mf):
        q, _ = np.linalg.qr(np.array([[rng.gauss(0, 1) for _ in block] for _ in block]))
        mf.mo_coeff[:, block] = mf.mo_coeff[:, block] @ q
    return mf, dict(degenerate=[2])


def noisy_benzene():
    """Degenerate levels pulled apart by some 1e-5 hartree, as loose convergence does."""
    mf, opts = turned(g.annulene(6, 1.395, 1.085), "sto-3g", 312)
    rng = random.Random(313)
    mf.mo_energy = mf.mo_energy + np.array([rng.uniform(-1e-5, 1e-5) for _ in mf.mo_energy])
    return mf, {}


def mixed_ethene():
    """The two occupied valence orbitals nearest in energy, of different irreps, turned by 0.35 rad."""
    mf = solve(molecule(g.ethene(), "6-31g*", seed=314))
    e = mf.mo_energy[:8]
    k = 2 + int(np.argmin(np.diff(e[2:])))
    t = 0.35
    m = np.array([[np.cos(t), -np.sin(t)], [np.sin(t), np.cos(t)]])
    mf.mo_coeff[:, k:k + 2] = mf.mo_coeff[:, k:k + 2] @ m
    low, high = e[k], e[k + 1]
    mf.mo_energy[k:k + 2] = [low * m[0, 0] ** 2 + high * m[1, 0] ** 2, low * m[0, 1] ** 2 + high * m[1, 1] ** 2]
    return mf, {}


def empty_and_filled():
    """Ethene with the highest occupied orbital turned into an empty one of another irrep: a broken density."""
    mf = solve(molecule(g.ethene(), "6-31g*", seed=315))
    h = mf.mol.nelectron // 2 - 1
    t = 0.2
    m = np.array([[np.cos(t), -np.sin(t)], [np.sin(t), np.cos(t)]])
    mf.mo_coeff[:, h:h + 2] = mf.mo_coeff[:, h:h + 2] @ m
    return mf, {}


def localised(atoms, seed, how):
    mf = solve(molecule(atoms, "6-31g*", seed=seed))
    n = mf.mol.nelectron // 2
    fock = mf.get_fock()
    c = mf.mo_coeff[:, :n]
    tool = how(mf.mol, c)
    tool.conv_tol = 1e-12
    local = tool.kernel()
    e = np.einsum("pi,pq,qi->i", local, fock, local)
    order = np.argsort(e)
    mf.mo_coeff[:, :n], mf.mo_energy[:n] = local[:, order], e[order]
    return mf, dict(tol=1e-3)


FILES = {
    "broken_h2_stretched": stretched_hydrogen,
    "broken_h4_square": square_hydrogen,
    "broken_methane_cation": methane_cation,
    "broken_benzene_cation": benzene_cation,
    "broken_chromium_fluoride_d1": chromium_d1,
    "broken_helium_dimer_cation": helium_cation,
    "broken_nitric_oxide": nitric_oxide,
    "broken_boron_atom": boron,
    "broken_ferrocene_restricted": ferrocene_lower,
    "broken_ethene_by_hand": empty_and_filled,
    "intact_methyl_radical": methyl,
    "turned_ammonia": lambda: turned(g.ammonia(), "6-31g*", 310),
    "turned_methane": lambda: turned(g.tetrahedral("C", "H", 1.09), "6-31g*", 311),
    "noisy_benzene": noisy_benzene,
    "mixed_ethene": mixed_ethene,
    "localised_methane_boys": lambda: localised(g.tetrahedral("C", "H", 1.09), 316, lo.Boys),
    "localised_ethene_pipek": lambda: localised(g.ethene(), 317, lo.PipekMezey),
}

if __name__ == "__main__":
    path = os.path.join(OUT, "reference", "spin.json")
    spins = json.load(open(path)) if os.path.exists(path) else {}
    for name in sys.argv[1:] or FILES:
        mf, options = FILES[name]()
        write(name, mf, **options)
        if np.ndim(mf.mo_energy) == 2:
            s2, mult = mf.spin_square()
            spins[name] = {"s_squared": round(float(s2), 12), "electrons": list(map(int, mf.mol.nelec))}
            print(f"    <S^2> = {s2:.10f}")
    with open(path, "w") as f:
        json.dump(dict(sorted(spins.items())), f, indent=1)
