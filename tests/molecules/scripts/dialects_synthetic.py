"""Results of PySCF written again in conventions of engines that were not at hand.

Synthetic: the numbers are PySCF's, the meaning of the numbers is changed exactly.
  raw_flipped  contraction coefficients hold the primitive's normalisation (of the most mixed
               monomial up to g, of x^5 for h); pure components of high |m| have the other sign
  bare         cartesian components with norm^2 (2i-1)!!(2j-1)!!(2k-1)!!
  shell        all cartesian components of a shell with norm^2 (2l-1)!!; numbers without leading zero
  cart_list    the published reading, pure orbitals listed over cartesian components
Usage: python dialects_synthetic.py
"""
import os
from math import pi, sqrt

import numpy as np

import shapes as g
from file_basis import CART_ORDER, LETTERS, ORCA_FLIPS, bare_norm2, double_factorial, lexicographic
from pyscf_run import LIMIT, OUT, molecule, solve

# one shell of each l, as in engine_common.py, to h and to g
LOW = [[0, [130.70932, 0.154329], [23.808861, 0.535328], [6.4436083, 0.444635]], [0, [0.9, 1.0]],
       [1, [5.0331513, 0.155916], [1.1695961, 0.607684], [0.380389, 0.391957]]]
HIGH = [[l, [1.1 + 0.3 * (l - 2), 1.0]] for l in range(2, 6)]
H = [[0, [3.42525091, 0.154329], [0.62391373, 0.535328], [0.1688554, 0.444635]], [1, [0.8, 1.0]]]


def primitive_constant(l, a):
    """Normalisation of x^l exp(-a r^2)."""
    return (2 * a / pi) ** 0.75 * (4 * a) ** (l / 2) / sqrt(double_factorial(2 * l - 1))


def fortran(x):
    """A number as -.1408E-01."""
    if x == 0:
        return "0.0000000000000E+00"
    mantissa, exponent = f"{x:.13E}".split("E")
    digits = mantissa.replace("-", "").replace(".", "")
    return f"{'-' if x < 0 else ''}.{digits}E{int(exponent) + 1:+03d}"


def write(name, mf, raw=False, flips=(), cart=None, tags="", head="", lower=False, sym=lambda k: "A"):
    """`cart` None: pure components; else a function (l, monomial) -> norm^2 of the component."""
    mol = mf.mol
    plain = lambda x: f"{x:.12f}"
    text = "[Molden Format]\n" + head + "[Atoms] AU\n"
    for k in range(mol.natm):
        s = mol.atom_symbol(k)
        text += (f"{s.lower() if lower else s} {k + 1} {mol.atom_charge(k)} "
                 + " ".join(plain(x) for x in mol.atom_coord(k)) + "\n")
    text += "[GTO]\n"
    rows = []                                        # place in the coefficients and factor, in file order
    loc = mol.ao_loc_nr(cart=cart is not None)
    for k in range(mol.natm):
        text += f"{k + 1} 0\n"
        for b in range(mol.nbas):
            if mol.bas_atom(b) != k:
                continue
            l = mol.bas_angular(b)
            mine = [x for x in range(mol.nbas) if mol.bas_atom(x) == k]
            entry = sorted(mol._basis[mol.atom_symbol(k)], key=lambda e: e[0])[mine.index(b)]
            text += f"{LETTERS[l]} {len(entry) - 1} 1.00\n"
            most_mixed = {0: 1, 1: 1, 2: sqrt(3), 3: sqrt(15), 4: sqrt(35), 5: 1}[l]
            norm = contraction_norm(l, entry[1:])
            for a, c in entry[1:]:
                c = c / norm * (primitive_constant(l, a) * most_mixed if raw else 1)
                text += f" {a:.10f} {c:.14f}\n" if not lower else f" {fortran(a)} {fortran(c)}\n"
            start = loc[b]
            if l < 2:
                rows += [(start + o, 1.0) for o in range(2 * l + 1)]
            elif cart is None:
                ms = [0] + [s * m for m in range(1, l + 1) for s in (1, -1)]
                rows += [(start + l + m, -1.0 if (l, abs(m)) in flips else 1.0) for m in ms]
            else:
                rows += [(start + lexicographic(l).index("".join(sorted(m))), 1 / sqrt(cart(l, m))) for m in CART_ORDER[l]]
        text += "\n"
    text += tags + "[MO]\n"
    c = mf.mo_coeff if cart is None else cartesian_coefficients(mol, mf.mo_coeff)
    for k in range(c.shape[1]):
        text += f"Sym= {sym(k)}\nEne= {mf.mo_energy[k]:.10f}\nSpin= Alpha\nOccup= {mf.mo_occ[k]:.6f}\n"
        for n, (where, factor) in enumerate(rows):
            v = factor * c[where, k]
            text += f"{n + 1:5d} {fortran(v) if lower else f'{v:.12f}'}\n"
    path = f"{OUT}/{name}.molden"
    with open(path, "w") as f:
        f.write(text)
    assert os.path.getsize(path) <= LIMIT
    print(f"{name:36s} {os.path.getsize(path) / 1024:6.1f} KiB")


def contraction_norm(l, prims):
    """Norm of a contraction of normalised primitives."""
    return sqrt(sum(c * d * (2 * sqrt(a * b) / (a + b)) ** (l + 1.5) for a, c in prims for b, d in prims))


def cartesian_coefficients(mol, c):
    """Coefficients over unit-normalised cartesian components, lexicographic within a shell."""
    wide = mol.cart2sph_coeff(normalized="sp") @ c
    norm = np.sqrt(np.diag(mol.intor("int1e_ovlp_cart")))
    return wide * norm[:, None]


if __name__ == "__main__":
    top = solve(molecule(g.water(), {"O": LOW + HIGH, "H": H}, seed=601))
    title = "[Title]\nwritten by the script of a test folder\n"
    write("dialect_water_h_raw_flipped", top, raw=True, flips=ORCA_FLIPS, tags="[5D]\n[7F]\n[9G]\n", head=title,
          sym=lambda k: f"{k}a")
    tall = solve(molecule(g.water(), {"O": LOW + HIGH[:3], "H": H}, seed=602))
    write("dialect_water_g_bare", tall, cart=lambda l, m: bare_norm2(m))
    write("dialect_water_g_shell", tall, cart=lambda l, m: double_factorial(2 * l - 1), lower=True)
    write("dialect_water_g_cart_list", tall, cart=lambda l, m: 1.0, sym=lambda k: f"{k + 1}.1")
    tilted = solve(molecule(g.formaldehyde(), "6-31g*", seed=603))
    write("dialect_formaldehyde_raw_flipped", tilted, raw=True, flips=ORCA_FLIPS, tags="[5D]\n[7F]\n[9G]\n", head=title,
          sym=lambda k: f"{k}a")
    write("dialect_formaldehyde_shell", tilted, cart=lambda l, m: double_factorial(2 * l - 1), lower=True)
