"""C60 with a minimal set, twofold axes along x, y and z. Engine: PySCF 2.x, symmetry off.

The only fixture with its axes on x, y and z: the sets of equal energy are turned afterwards so that
every orbital belongs to one irrep of D2h; equal numbers repeat, and the packed file of all occupied
orbitals stays small. Takes some minutes. Usage: python pyscf_fullerene.py
"""
import gzip
import os

import numpy as np
from pyscf.tools import molden

import shapes as g
from pyscf_run import LIMIT, OUT, kept, levels, molecule, operation_matrix, solve

MIRRORS = [np.diag(d) for d in ([-1.0, 1, 1], [1, -1.0, 1], [1, 1, -1.0])]


def adapted(mol, energies, coeff):
    """Within each run of equal energies, orbitals even or odd under each of three mirrors."""
    s = mol.intor("int1e_ovlp")
    ops = [operation_matrix(mol, m, np.zeros(3)) for m in MIRRORS]
    out, start = coeff.copy(), 0
    for size in levels(energies, close=1e-6)[0]:
        c = coeff[:, start:start + size]
        label = sum(2 ** k * (c.T @ s @ o @ c) for k, o in enumerate(ops))
        c = c @ np.linalg.eigh((label + label.T) / 2)[1]
        for o in ops:
            sign = np.round(np.einsum("pi,pq,qi->i", c, s @ o, c))
            assert np.all(np.abs(sign) == 1)
            c = (c + sign * (o @ c)) / 2
        out[:, start:start + size] = c / np.sqrt(np.einsum("pi,pq,qi->i", c, s, c))
        start += size
    return out


if __name__ == "__main__":
    mf = solve(molecule(g.fullerene(), "sto-3g"))
    mol, e, o = mf.mol, mf.mo_energy, mf.mo_occ
    n = kept(e, 180, 6)
    sizes, spread = levels(e[:n], close=1e-6)
    assert spread < 1e-8 and 5 in sizes, (sizes, spread)
    c = adapted(mol, e[:n], mf.mo_coeff[:, :n])
    path = os.path.join(OUT, "fullerene_ih_sto3g.molden.gz")
    raw = path[:-3]
    with open(raw, "w") as f:
        molden.header(mol, f)
        f.write("[MO]\n")
        for k in range(n):
            f.write(f" Sym= A\n Ene= {e[k]:.8f}\n Spin= Alpha\n Occup= {o[k]:.5f}\n")
            for i, j in enumerate(molden.order_ao_index(mol)):
                if abs(c[j, k]) > 5e-11:
                    f.write(f"{i + 1} {c[j, k]:.10f}\n")
    text = open(raw, "rb").read()
    os.remove(raw)
    with open(path, "wb") as f, gzip.GzipFile(filename="", mode="wb", fileobj=f, mtime=0, compresslevel=9) as z:
        z.write(text)
    print(os.path.getsize(path) // 1024, "KiB", len(text) // 1024, "KiB unpacked", sizes, e[175:n])
    assert os.path.getsize(path) <= LIMIT
