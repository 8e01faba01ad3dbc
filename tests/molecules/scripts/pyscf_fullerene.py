"""C60 with a minimal set, run in D2h so that one file of all occupied orbitals packs well. Engine: PySCF 2.x.

The only fixture with symmetry on and with axes along x, y and z: equal numbers repeat, and the
packed file stays small. Takes some minutes. Usage: python pyscf_fullerene.py
"""
import gzip
import os

import numpy as np
from pyscf import gto, lib, scf
from pyscf.tools import molden

import shapes as g
from pyscf_run import LIMIT, OUT, kept

if __name__ == "__main__":
    lib.num_threads(1)
    mol = gto.M(atom=g.fullerene(), basis="sto-3g", symmetry="D2h", verbose=4)
    mf = scf.RHF(mol)
    mf.conv_tol, mf.conv_tol_grad, mf.direct_scf_tol = 1e-11, 1e-7, 1e-14
    mf.kernel()
    assert mf.converged
    order = np.argsort(mf.mo_energy, kind="stable")
    e, c, o = mf.mo_energy[order], mf.mo_coeff[:, order], mf.mo_occ[order]
    n = kept(e, 180, 6)
    plain = mol.copy()
    plain.symmetry = False
    path = os.path.join(OUT, "fullerene_ih_sto3g.molden.gz")
    raw = path[:-3]
    with open(raw, "w") as f:
        molden.header(plain, f)
        f.write("[MO]\n")
        index = molden.order_ao_index(plain)
        for k in range(n):
            f.write(f" Sym= A\n Ene= {e[k]:.8f}\n Spin= Alpha\n Occup= {o[k]:.5f}\n")
            for i, j in enumerate(index):
                v = f"{c[j, k]:.10f}"
                if float(v):
                    f.write(f"{i + 1} {v}\n")
    text = open(raw, "rb").read()
    os.remove(raw)
    with open(path, "wb") as f, gzip.GzipFile(filename="", mode="wb", fileobj=f, mtime=0, compresslevel=9) as z:
        z.write(text)
    print(os.path.getsize(path), n, e[170:n])
    assert os.path.getsize(path) <= LIMIT
