"""Orbitals and normal modes of one geometry in one file: benzene and formaldehyde, RHF, relaxed here.

Usage: python pyscf_modes.py     (writes benzene_with_modes_sto3g.molden, formaldehyde_with_modes_631gs.molden)
"""
import os

os.environ.setdefault("OMP_NUM_THREADS", "1")

import numpy as np
from pyscf import gto, scf
from pyscf.hessian import thermo
from pyscf.tools import molden

HERE = os.path.dirname(os.path.abspath(__file__))
OUT = os.path.dirname(HERE)


def turned(xyz, seed):
    q = np.linalg.qr(np.random.default_rng(seed).normal(size=(3, 3)))[0]
    return xyz @ (q * np.sign(np.linalg.det(q))).T


def ring():
    out = []
    for r, s in ((1.387, "C"), (2.470, "H")):
        for k in range(6):
            out.append((s, [r * np.cos(k * np.pi / 3), r * np.sin(k * np.pi / 3), 0.0]))
    return out


CARBONYL = [("C", [0, 0, 0]), ("O", [0, 0, 1.184]), ("H", [0, 0.934, -0.580]), ("H", [0, -0.934, -0.580])]


def made(name, atoms, basis, seed):
    xyz = turned(np.array([p for _, p in atoms], float), seed) / 0.52917721092
    mol = gto.M(atom=[[s, p] for (s, _), p in zip(atoms, xyz)], unit="Bohr", basis=basis, verbose=0)
    for _ in range(12):
        mf = scf.RHF(mol)
        mf.conv_tol, mf.conv_tol_grad = 1e-12, 1e-8
        mf.kernel()
        gradient = mf.nuc_grad_method().kernel().ravel()
        hessian = mf.Hessian().kernel()
        if np.abs(gradient).max() < 1e-7:
            break
        full = hessian.transpose(0, 2, 1, 3).reshape(3 * mol.natm, -1)
        values, vectors = np.linalg.eigh((full + full.T) / 2)
        keep = np.abs(values) > 1e-3
        step = -vectors[:, keep] @ ((vectors[:, keep].T @ gradient) / values[keep])
        mol.set_geom_(mol.atom_coords() + step.reshape(-1, 3), unit="Bohr")
    else:
        raise SystemExit(f"{name}: not relaxed, {np.abs(gradient).max():.1e}")
    result = thermo.harmonic_analysis(mol, hessian)
    path = os.path.join(OUT, name + ".molden")
    molden.from_mo(mol, path, mf.mo_coeff, ene=mf.mo_energy, occ=mf.mo_occ)
    numbers = result["freq_wavenumber"]
    with open(path, "a") as f:
        f.write("[FREQ]\n" + "".join(f"{x.real - x.imag:12.4f}\n" for x in np.asarray(numbers, complex)))
        f.write("[FR-COORD]\n")
        for k in range(mol.natm):
            f.write(f"{mol.atom_symbol(k)} " + " ".join(f"{x:16.10f}" for x in mol.atom_coord(k)) + "\n")
        f.write("[FR-NORM-COORD]\n")
        for k, mode in enumerate(result["norm_mode"]):
            f.write(f"vibration {k + 1}\n" + "".join(" ".join(f"{x:12.8f}" for x in row) + "\n" for row in mode))
    print(name, np.round(np.real(numbers), 1), os.path.getsize(path))


if __name__ == "__main__":
    made("benzene_with_modes_sto3g", ring(), "sto-3g", 5)
    made("formaldehyde_with_modes_631gs", CARBONYL, "6-31g*", 6)
