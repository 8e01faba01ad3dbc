"""Runs a self-consistent field without symmetry and writes a small Molden file.

Shared by the PySCF scripts of this folder. Engine: PySCF 2.14.0.
"""
import os

os.environ.setdefault("OMP_NUM_THREADS", "1")

import numpy as np
from pyscf import gto, scf, dft, lib
from pyscf.tools import molden

from shapes import moved, random_turn

HERE = os.path.dirname(os.path.abspath(__file__))
OUT = os.path.dirname(HERE)
LIMIT = 200 * 1024
lib.num_threads(1)


def molecule(atoms, basis, charge=0, spin=0, cart=False, seed=None, ecp=None):
    mol = gto.Mole()
    mol.atom = [[s, p] for s, p in moved(atoms, seed)]
    mol.unit = "Angstrom"
    mol.basis, mol.charge, mol.spin, mol.cart = basis, charge, spin, cart
    if ecp:
        mol.ecp = ecp
    mol.symmetry = False
    mol.verbose = 0
    mol.build()
    return mol


def harmonic_turns(mol, matrix, lmax):
    """How the functions of each l turn under `matrix`, from values of libcint at points."""
    points = np.random.default_rng(7).normal(size=(200, 3))
    out = []
    for l in range(lmax + 1):
        one = gto.M(atom="He 0 0 0", basis={"He": [[l, [0.5, 1.0]]]}, unit="Bohr", cart=mol.cart, verbose=0)
        kind = "GTOval_cart" if mol.cart else "GTOval_sph"
        here, there = one.eval_gto(kind, points), one.eval_gto(kind, points @ matrix)
        out.append(np.linalg.lstsq(here, there, rcond=None)[0])
    return out


def operation_matrix(mol, matrix, centre, tolerance=1e-8):
    """The operation on the basis: column k is the image of function k."""
    xyz = mol.atom_coords() - centre
    turns = harmonic_turns(mol, matrix, max(mol.bas_angular(i) for i in range(mol.nbas)))
    loc = mol.ao_loc_nr()
    shells = [[i for i in range(mol.nbas) if mol.bas_atom(i) == a] for a in range(mol.natm)]
    out = np.zeros((mol.nao, mol.nao))
    for a in range(mol.natm):
        b = int(np.argmin(np.linalg.norm(xyz - matrix @ xyz[a], axis=1)))
        assert np.linalg.norm(xyz[b] - matrix @ xyz[a]) < tolerance
        for i, j in zip(shells[a], shells[b]):
            d = turns[mol.bas_angular(i)]
            n = d.shape[0]
            for k in range(mol.bas_nctr(i)):
                out[loc[j] + k * n:loc[j] + (k + 1) * n, loc[i] + k * n:loc[i] + (k + 1) * n] = d
    return out


def averaged(mf, operations, seed):
    """Averages the Fock matrix over a group, so that neither grid nor an instability breaks it.

    `operations` belong to the molecule as built by shapes.py, `seed` is its turn."""
    r, centre = random_turn(seed) if seed is not None else (np.eye(3), np.zeros(3))
    mol = mf.mol
    ops = [operation_matrix(mol, r @ m @ r.T, centre / lib.param.BOHR) for m in operations]
    s = mol.intor_symmetric("int1e_ovlp")
    assert all(np.abs(o.T @ s @ o - s).max() < 1e-9 for o in ops)
    plain = mf.get_veff

    def veff(mol=None, dm=None, *args, **kw):
        v = plain(mol, dm, *args, **kw)
        mean = lambda m: sum(o.T @ m @ o for o in ops) / len(ops)
        arr = np.asarray(v)
        arr = mean(arr) if arr.ndim == 2 else np.array([mean(m) for m in arr])
        return lib.tag_array(arr, **getattr(v, "__dict__", {}))

    mf.get_veff = veff
    return mf


def solve(mol, method="auto", xc=None, shift=0.0, guess="minao", dm0=None, newton=False, grid=6,
          group=None, seed=None):
    """Restricted for closed shells, unrestricted otherwise; gradient below 1e-8."""
    if method == "auto":
        method = "R" if mol.spin == 0 else "U"
    kind = {("R", False): scf.RHF, ("U", False): scf.UHF, ("RO", False): scf.ROHF,
            ("R", True): dft.RKS, ("U", True): dft.UKS}[method, xc is not None]
    mf = kind(mol)
    if xc:
        mf.xc = xc
        mf.grids.level = grid
    if group is not None:
        averaged(mf, group, seed)
    mf.init_guess = guess
    mf.direct_scf_tol = 1e-15
    mf.conv_tol, mf.conv_tol_grad, mf.max_cycle = 1e-12, 1e-8, 400
    mf.diis_space = 12
    if shift:
        rough = mf.copy()
        rough.level_shift, rough.conv_tol, rough.conv_tol_grad = shift, 1e-9, 1e-5
        rough.kernel(dm0)
        dm0 = rough.make_rdm1()
    if newton:
        mf = mf.newton()
        # a flat minimum: rings turn almost freely in the broken density
        mf.conv_tol, mf.conv_tol_grad = 1e-10, 1e-5
    mf.kernel(dm0)
    if not mf.converged:
        raise SystemExit(f"not converged: {mol.atom}")
    return mf


def levels(energies, close=1e-7):
    """Sizes of the runs of equal energies, with the widest spread inside a run."""
    sizes, spread, start = [], 0.0, 0
    for k in range(1, len(energies) + 1):
        if k == len(energies) or energies[k] - energies[k - 1] > close:
            sizes.append(k - start)
            spread = max(spread, energies[k - 1] - energies[start])
            start = k
    return sizes, spread


def kept(energies, occupied, virtuals, close=1e-4):
    """How many orbitals to keep so that no degenerate set is cut."""
    if virtuals is None:
        return len(energies)
    n = min(occupied + virtuals, len(energies))
    while n < len(energies) and energies[n] - energies[n - 1] < close:
        n += 1
    return n


def shorten(path):
    """Ten decimals for the coefficients of a large file, to spare room."""
    head, mark, body = open(path).read().partition("[MO]\n")
    lines = []
    for line in body.splitlines():
        part = line.split()
        lines.append(f" {part[0]} {float(part[1]):.10f}" if part[0].isdigit() else line)
    open(path, "w").write(head + mark + "\n".join(lines) + "\n")


def write(name, mf, virtuals=None, degenerate=(), tol=1e-8, folder=OUT, coeff=None, energy=None):
    """Writes the file; checks orthonormality and that sets of the sizes `degenerate` occur
    and are equal within `tol` hartree."""
    mol = mf.mol
    c = mf.mo_coeff if coeff is None else coeff
    e = mf.mo_energy if energy is None else energy
    o = mf.mo_occ
    open_shell = np.ndim(mf.mo_energy) == 2
    blocks = zip(c, e, o, ("Alpha", "Beta")) if open_shell else [(c, e, o, "Alpha")]
    s = mol.intor("int1e_ovlp_cart" if mol.cart else "int1e_ovlp_sph")
    path = os.path.join(folder, name + ".molden")
    seen = []
    with open(path, "w") as f:
        molden.header(mol, f)
        for cc, ee, oo, spin in blocks:
            cc, ee, oo = np.asarray(cc), np.asarray(ee), np.asarray(oo)
            n = kept(ee, int(np.max(np.nonzero(oo > 0)[0], initial=-1)) + 1, virtuals)
            cc, ee, oo = cc[:, :n], ee[:n], oo[:n]
            assert np.abs(cc.T @ s @ cc - np.eye(n)).max() < 1e-9, name
            molden.orbital_coeff(mol, f, cc, spin=spin, ene=ee, occ=oo)
            sizes, spread = levels(ee)
            assert spread < tol, f"{name}: sets spread by {spread:.1e}"
            seen.append(sizes)
    if os.path.getsize(path) > 20 * 1024:
        shorten(path)
    for d in degenerate:
        assert any(d in sizes for sizes in seen), f"{name}: no set of {d} in {seen}"
    size = os.path.getsize(path)
    assert size <= LIMIT, f"{name}: {size} bytes"
    print(f"{name:28s} {size // 1024:4d} KiB  E = {mf.e_tot:.10f}  sets {seen[0]}", flush=True)
