"""Reference numbers from libcint (through PySCF) and numpy for functions as they stand in the files.

Writes reference/overlap.json, moments.json, lowdin.json, spin_squared.json, abelian.json, retention.json.
Usage: python reference_values.py [overlap|moments|lowdin|spin|abelian|retention ...]
"""
import glob
import json
import os
import random
import sys

import numpy as np
from pyscf import dft, gto, scf, symm

from file_basis import Functions, convention_of, read
from nuclear_group import kind, operations

OUT = os.path.dirname(os.path.dirname(os.path.abspath(__file__)))
AXES = "xyz"


def load(name):
    file = read(f"{OUT}/{name}.molden")
    return file, Functions(file, convention_of(name))


def save(name, data):
    with open(f"{OUT}/reference/{name}.json", "w") as f:
        # one entry a line: readable differences, small files
        f.write("{\n" + ",\n".join(f' "{k}": {json.dumps(v)}' for k, v in data.items()) + "\n}\n")
    print(name, os.path.getsize(f"{OUT}/reference/{name}.json") // 1024, "KiB")


def digits(x, n=13):
    return float(f"{x:.{n}g}") if abs(x) > 1e-15 else 0.0


def signs():
    """The signs of the library's derivative integrals, against integration on a grid (1e-8)."""
    _, f = load("water_631gs")
    f.mol.set_common_orig((0, 0, 0))
    grid = dft.gen_grid.Grids(f.mol)
    grid.level, grid.prune = 8, None
    grid.build()
    ao = f.mol.eval_gto("GTOval_sph_deriv1", grid.coords)[:, :, f.columns] * f.unit
    w, x = grid.weights[:, None], grid.coords
    nabla = np.array([ao[0].T @ (ao[1 + k] * w) for k in range(3)])
    rn = [[ao[0].T @ (x[:, a:a + 1] * ao[1 + b] * w) for b in range(3)] for a in range(3)]
    cross = np.array([rn[1][2] - rn[2][1], rn[2][0] - rn[0][2], rn[0][1] - rn[1][0]])
    assert np.abs(nabla + f.integrals("int1e_ipovlp", 3)).max() < 1e-8
    assert np.abs(cross - f.integrals("int1e_cg_irxp", 3)).max() < 1e-8


def overlap():
    """Elements S[i][j] (0-based, file order, unit functions) and the Frobenius norm."""
    out = {}
    for name in ("water_631gs", "water_631gs_cart", "water_g", "water_g_cart", "neon_def2tzvp", "formaldehyde_631gs_cart",
                 "permanganate_td_def2svp", "xef4_d4h_ecp", "psi4_water_i_pure", "psi4_water_h_cart",
                 "psi4_water_ccpvdz_pure", "psi3_formaldehyde_631gs_cart", "xtb_sulfur_hexafluoride"):
        _, f = load(name)
        s = f.integrals("int1e_ovlp")
        rng = random.Random(name)
        pairs = [(i, j) for i in range(len(s)) for j in range(i) if abs(s[i, j]) > 1e-10]
        rng.shuffle(pairs)
        out[name] = {"functions": len(s), "frobenius": digits(float(np.linalg.norm(s))),
                     "elements": [[i, j, digits(float(s[i, j]))] for i, j in sorted(pairs[:120])]}
    save("overlap", out)


def moments():
    """Orbital matrix elements (origin of coordinates at 0, bohr, file order of orbitals, 0-based):
    r, nabla (acting to the right), r cross nabla, and the symmetric second moments."""
    signs()
    out = {}
    for name, low, high in (("water_631gs", 0, 12), ("formaldehyde_631gs_cart", 0, 14), ("benzene_631g", 12, 27),
                            ("sf6_sto3g", 20, 39), ("water_g", 0, 12), ("b12h12_ih_sto3g", 28, 45)):
        _, f = load(name)
        c = f.coefficients("alpha")
        high = min(high, c.shape[1])
        f.mol.set_common_orig((0, 0, 0))
        mo = lambda m: np.array([c.T @ x @ c for x in m])
        r = mo(f.integrals("int1e_r", 3))
        nabla = -mo(f.integrals("int1e_ipovlp", 3))
        cross = mo(f.integrals("int1e_cg_irxp", 3))
        second = mo(f.integrals("int1e_rr", 9))
        # r cross nabla by a second operator of the library: <i| r_a d_b |j>
        rn = mo(f.integrals("int1e_irp", 9)).reshape(3, 3, *r.shape[1:])
        other = np.array([rn[1, 2] - rn[2, 1], rn[2, 0] - rn[0, 2], rn[0, 1] - rn[1, 0]])
        assert np.abs(cross - other).max() < 1e-9, name
        assert np.abs(nabla + nabla.transpose(0, 2, 1)).max() < 1e-9, name
        rng = random.Random(name)
        pairs = [(i, j) for i in range(low, high) for j in range(low, high) if i != j]
        rng.shuffle(pairs)
        rows = []
        for i, j in sorted(pairs[:40]):
            rows.append({"i": i, "j": j, "r": [digits(float(r[k, i, j])) for k in range(3)],
                         "nabla": [digits(float(nabla[k, i, j])) for k in range(3)],
                         "r_cross_nabla": [digits(float(cross[k, i, j])) for k in range(3)],
                         "xx_xy_xz_yy_yz_zz": [digits(float(second[k, i, j])) for k in (0, 1, 2, 4, 5, 8)]})
        out[name] = rows
    save("moments", out)


def lowdin():
    """Population of an orbital by atom and by shell of the file: (S^1/2 c)^2 summed."""
    out = {}
    for name in ("water_631gs", "formaldehyde_631gs_cart", "ferrocene_d5d_sto3g", "scenario/lantern-3", "water_g"):
        file, f = load(name)
        s = f.integrals("int1e_ovlp")
        w, v = np.linalg.eigh(s)
        half = v @ np.diag(np.sqrt(w)) @ v.T
        c = f.coefficients("alpha")
        n = int((f.occupations("alpha") > 0).sum())
        sizes = [(a, l, (2 * l + 1) if file.pure[l] or l < 2 else (l + 1) * (l + 2) // 2) for a, l, _, _ in file.shells]
        rows = []
        for k in range(max(0, n - 8), min(n + 5, c.shape[1])):
            p = (half @ c[:, k]) ** 2
            start, by_shell, by_atom = 0, [], np.zeros(len(file.symbols))
            for a, l, size in sizes:
                share = float(p[start:start + size].sum())
                by_shell.append(digits(share, 10))
                by_atom[a] += share
                start += size
            rows.append({"orbital": k, "by_atom": [digits(float(x), 10) for x in by_atom], "by_shell": by_shell})
        out[name] = {"shells": [[a, l] for a, l, _ in sizes], "orbitals": rows}
    save("lowdin", out)


def spin():
    """<S^2> of every file with alpha and beta orbitals, from occupied overlaps."""
    out = {}
    for path in sorted(glob.glob(OUT + "/*.molden")):
        name = os.path.basename(path)[:-7]
        file = read(path)
        if not any(o.get("spin", "").lower() == "beta" for o in file.orbitals):
            continue
        f = Functions(file, convention_of(name))
        a = f.coefficients("alpha")[:, f.occupations("alpha") > 0.5]
        b = f.coefficients("beta")[:, f.occupations("beta") > 0.5]
        o = a.T @ f.integrals("int1e_ovlp") @ b
        na, nb = a.shape[1], b.shape[1]
        out[name] = {"alpha": na, "beta": nb, "s_squared": digits((na - nb) / 2 * ((na - nb) / 2 + 1) + nb - float((o * o).sum()), 10),
                     "paired_overlaps": [digits(float(x), 8) for x in np.linalg.svd(o)[1]]}
    mine = json.load(open(f"{OUT}/reference/spin.json"))
    for name, row in mine.items():
        assert abs(row["s_squared"] - out[name]["s_squared"]) < 1e-7, name
    save("spin_squared", out)


def abelian():
    """Labels by PySCF's own symmetry code, from a run with symmetry on; matched to the file by energy."""
    out = {}
    cases = [("water_631gs", "6-31g*", {}), ("ammonia_631gs", "6-31g*", {}), ("methane_631gs", "6-31g*", {}),
             ("benzene_631g", "6-31g", {}), ("ethene_631gs", "6-31g*", {}), ("sf6_631gs", "6-31g*", {}),
             ("allene_d2d_631g", "6-31g", {}), ("ethane_staggered_d3d_631g", "6-31g", {}), ("bf3_d3h_631gs", "6-31g*", {}),
             ("butadiene_c2h_631g", "6-31g", {}), ("peroxide_c2_631gs", "6-31g*", {}), ("formaldehyde_631gs", "6-31g*", {}),
             ("nitrogen_631gs", "6-31g*", {}), ("carbon_dioxide_631gs", "6-31g*", {}), ("hydrogen_cyanide_631gs", "6-31g*", {}),
             ("b12h12_ih_sto3g", "sto-3g", dict(charge=-2)), ("dihaloethane_ci_sto3g", "sto-3g", {})]
    for name, basis, options in cases:
        file = read(f"{OUT}/{name}.molden")
        mol = gto.M(atom=list(zip(file.symbols, file.xyz)), unit="Bohr", basis=basis, symmetry=True, verbose=0,
                    symmetry_subgroup=None, **options)
        mf = scf.RHF(mol)
        mf.conv_tol, mf.conv_tol_grad = 1e-12, 1e-8
        mf.kernel()
        labels = symm.label_orb_symm(mol, mol.irrep_name, mol.symm_orb, mf.mo_coeff)
        energies = np.array([float(o["ene"]) for o in file.orbitals])
        order = np.argsort(mf.mo_energy, kind="stable")
        e, labels = mf.mo_energy[order][:len(energies)], [str(labels[k]) for k in order][:len(energies)]
        assert np.abs(e - energies).max() < 2e-7, (name, np.abs(e - energies).max())
        runs, k = [], 0
        while k < len(e):
            m = k + 1
            while m < len(e) and e[m] - e[m - 1] < 1e-6:
                m += 1
            runs.append([k, sorted(labels[k:m])])
            k = m
        out[name] = {"full_group": mol.topgroup, "labelled_in": mol.groupname,
                     "axes": [[digits(float(x), 10) for x in row] for row in mol._symm_axes],
                     "origin_bohr": [digits(float(x), 10) for x in mol._symm_orig],
                     "runs": runs}
        print(name, mol.topgroup, mol.groupname)
    save("abelian", out)


def retention():
    """Traces over the densities turned by each operation, by numerical integration on a grid:
    aa = sum n_i n_j |<i|R|j>|^2 over alpha and alpha, and so on (ab: alpha against turned beta)."""
    out = {}
    for name in ("oxygen_triplet_631gs", "broken_h2_stretched", "broken_h4_square", "broken_methane_cation",
                 "broken_nitric_oxide", "broken_ethene_by_hand", "intact_methyl_radical", "turned_ammonia",
                 "mixed_ethene", "localised_methane_boys"):
        file, f = load(name)
        xyz = np.array(file.xyz)
        ops = operations(file.symbols, xyz)
        weight = np.array([sum(map(ord, s)) for s in file.symbols], float)
        centre = weight @ xyz / weight.sum()
        if ops is None:
            d = (xyz[1] - xyz[0]) / np.linalg.norm(xyz[1] - xyz[0])
            t = np.array([d[1], -d[0], 0]) / np.hypot(d[0], d[1])
            turn = lambda v, a: (np.cos(a) * np.eye(3) + (1 - np.cos(a)) * np.outer(v, v)
                                 + np.sin(a) * np.array([[0, -v[2], v[1]], [v[2], 0, -v[0]], [-v[1], v[0], 0]]))
            ops = [np.eye(3), turn(d, np.pi / 2), turn(d, 0.7), np.eye(3) - 2 * np.outer(t, t)]
            if file.symbols[0] == file.symbols[1]:
                ops += [-np.eye(3), turn(t, np.pi)]
        grid = dft.gen_grid.Grids(f.mol)
        grid.level, grid.prune = 7, None
        grid.build()
        perm = f.columns
        value = lambda points: f.mol.eval_gto("GTOval" + f.kind, points)[:, perm] * f.unit
        here = value(grid.coords)
        open_shell = f.coefficients("beta").size > 0
        spins = ["alpha", "beta"] if open_shell else ["alpha"]
        occ = {}
        for s in spins:
            n = f.occupations(s)
            scale = 1.0 if open_shell else 0.5
            occ[s] = f.coefficients(s)[:, n > 0] * np.sqrt(n[n > 0] * scale)
        rows = []
        for m in ops[:16]:
            # (R phi)(r) = phi(R^-1 r)
            there = value((grid.coords - centre) @ m + centre)
            s = here.T @ (there * grid.weights[:, None])
            row = {"matrix": [[digits(float(x), 12) for x in r] for r in m]}
            for p in spins:
                for q in spins:
                    o = occ[p].T @ s @ occ[q]
                    row[p[0] + q[0]] = round(float((o * o).sum()), 7)
            rows.append(row)
        out[name] = {"centre_bohr": [digits(float(x), 12) for x in centre], "open_shell": open_shell, "operations": rows}
        print(name, len(ops), {k: v for k, v in rows[-1].items() if k != "matrix"})
    save("retention", out)


if __name__ == "__main__":
    parts = {f.__name__: f for f in (overlap, moments, lowdin, spin, abelian, retention)}
    for part in sys.argv[1:] or parts:
        parts[part]()
