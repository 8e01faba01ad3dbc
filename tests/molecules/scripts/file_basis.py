"""Reads a Molden file plainly and rebuilds its functions with libcint (through PySCF).

A second path beside the program: no grammar, no detection. The convention of a file is told
by whoever calls. Shared by the scripts that make reference values.
"""
import os

os.environ.setdefault("OMP_NUM_THREADS", "1")

import re
from dataclasses import dataclass, field
from math import prod, sqrt

import numpy as np
from pyscf import gto

BOHR = 0.52917721092
LETTERS = "spdfghi"
CART_ORDER = {
    0: [""], 1: ["x", "y", "z"],
    2: "xx yy zz xy xz yz".split(),
    3: "xxx yyy zzz xyy xxy xxz xzz yzz yyz xyz".split(),
    4: "xxxx yyyy zzzz xxxy xxxz yyyx yyyz zzzx zzzy xxyy xxzz yyzz xxyz yyxz zzxy".split(),
}


def lexicographic(l):
    return ["x" * i + "y" * j + "z" * (l - i - j) for i in range(l, -1, -1) for j in range(l - i, -1, -1)]


def double_factorial(n):
    return prod(range(n, 0, -2)) if n > 0 else 1


def bare_norm2(mono):
    """(2i-1)!!(2j-1)!!(2k-1)!! of a monomial; 1 for xy, 3 for xx, 15 for xxx."""
    return prod(double_factorial(2 * mono.count(c) - 1) for c in "xyz")


@dataclass
class Convention:
    """What the numbers of a file mean."""
    raw: bool = False              # contraction coefficients hold the primitive's normalisation
    cart: str = "unit"             # unit, axis, bare or shell: norm of the cartesian components
    lexical: bool = False          # cartesian d and f in lexicographic order
    flips: tuple = ()              # pure (l, |m|) with the opposite sign


@dataclass
class File:
    symbols: list = field(default_factory=list)
    numbers: list = field(default_factory=list)
    xyz: list = field(default_factory=list)       # bohr
    shells: list = field(default_factory=list)    # (atom, l, exponents, coefficients)
    pure: dict = field(default_factory=dict)
    orbitals: list = field(default_factory=list)  # dicts: sym ene spin occup coeff


def number(text):
    return float(text.replace("D", "e").replace("d", "e"))


def read(path):
    out = File()
    section, unit, atom, tags = "", 1.0, None, set()
    pending = 0
    for line in open(path, errors="replace"):
        text = line.strip()
        m = re.match(r"\[([^\]]*)\]\s*(.*)", text)
        if m:
            section = m.group(1).strip().lower()
            tags.add(section)
            if section == "atoms":
                unit = 1 / BOHR if "ang" in m.group(2).lower() else 1.0
            continue
        part = text.split()
        if section == "atoms" and len(part) >= 6:
            name = re.sub(r"[^A-Za-z]", "", part[0])
            full = {"OXYGEN": "O", "HYDROGEN": "H", "NITROGEN": "N", "CARBON": "C"}
            out.symbols.append(full.get(name.upper(), name.capitalize()))
            out.numbers.append(float(part[2]))
            out.xyz.append([number(x) * unit for x in part[3:6]])
        elif section == "gto" and part:
            if pending:
                out.shells[-1][2].append(number(part[0]))
                out.shells[-1][3].append(number(part[1]))
                pending -= 1
            elif part[0].lower() in LETTERS:
                out.shells.append((atom, LETTERS.index(part[0].lower()), [], []))
                pending = int(part[1])
            else:
                atom = int(part[0]) - 1
        elif section == "mo" and part:
            if "=" in text:
                key, value = (x.strip() for x in text.split("=", 1))
                if not out.orbitals or out.orbitals[-1]["coeff"]:
                    out.orbitals.append({"coeff": {}})
                out.orbitals[-1][key.lower()] = value
            else:
                out.orbitals[-1]["coeff"][int(part[0])] = number(part[1])
    d = bool(tags & {"5d", "5d7f", "5d10f"})
    f = bool(tags & {"7f", "5d7f"}) or ("5d" in tags and "10f" not in tags)
    g = "9g" in tags
    out.pure = {0: False, 1: False, 2: d, 3: f, 4: g, 5: g, 6: g}
    return out


class Functions:
    """Unit-normalised functions in the order of the file, as combinations of libcint's."""

    def __init__(self, file, convention=Convention()):
        self.file, self.convention = file, convention
        self.pure = any(file.pure[l] for _, l, _, _ in file.shells)
        kinds = {file.pure[l] for _, l, _, _ in file.shells if l > 1}
        assert len(kinds) <= 1, "mixed pure and cartesian shells are not handled here"
        basis = {}
        for k in range(len(file.symbols)):
            mine = [(l, e, c) for a, l, e, c in file.shells if a == k]
            basis[f"{file.symbols[k]}{k + 1}"] = [
                [l] + [[x, y / x ** ((2 * l + 3) / 4) if convention.raw else y] for x, y in zip(e, c)]
                for l, e, c in mine]
        self.mol = gto.M(atom=[[f"{s}{k + 1}", p] for k, (s, p) in enumerate(zip(file.symbols, file.xyz))],
                         unit="Bohr", basis=basis, cart=not self.pure, spin=None, verbose=0)
        self.kind = "_sph" if self.pure else "_cart"
        # libcint keeps the shells of an atom sorted by l
        position, self.columns, factors = {}, [], []
        loc = self.mol.ao_loc_nr()
        for k in range(self.mol.nbas):
            position.setdefault((self.mol.bas_atom(k), self.mol.bas_angular(k)), []).append(loc[k])
        for atom, l, _, _ in file.shells:
            start = position[(atom, l)].pop(0)
            names, here = self.components(l)
            self.columns += [start + h for h in here]
            factors += [self.factor(l, n) for n in names]
        self.factors = np.array(factors)
        s = self.mol.intor("int1e_ovlp" + self.kind)
        self.unit = 1 / np.sqrt(np.diag(s))[self.columns]

    def components(self, l):
        """Names in file order and their places within libcint's shell."""
        if self.pure or l < 2:
            if l < 2:
                return (["s"], [0]) if l == 0 else (["x", "y", "z"], [0, 1, 2])
            ms = [0] + [s * m for m in range(1, l + 1) for s in (1, -1)]
            return ms, [m + l for m in ms]
        lex = lexicographic(l)
        names = lex if self.convention.lexical or l > 4 else CART_ORDER[l]
        return names, [lex.index("".join(sorted(n))) for n in names]

    def factor(self, l, name):
        """What a coefficient of the file must be multiplied with, to refer to unit functions."""
        if l < 2:
            return 1.0
        if self.pure:
            return -1.0 if (l, abs(name)) in self.convention.flips else 1.0
        top = double_factorial(2 * l - 1)
        return {"unit": 1.0, "axis": sqrt(bare_norm2(name) / top), "bare": sqrt(bare_norm2(name)),
                "shell": sqrt(top)}[self.convention.cart]

    def integrals(self, name, comp=None):
        """Matrix (or list of matrices) over the unit functions in file order."""
        m = self.mol.intor(name + self.kind, comp=comp) if comp else self.mol.intor(name + self.kind)
        u = self.unit
        pick = lambda x: x[np.ix_(self.columns, self.columns)] * u[:, None] * u[None, :]
        return pick(m) if m.ndim == 2 else np.array([pick(x) for x in m])

    def coefficients(self, spin=None):
        """Columns of the orbitals over the unit functions, in the order of the file."""
        cols = []
        for o in self.file.orbitals:
            if spin and o.get("spin", "Alpha").lower() != spin:
                continue
            c = np.zeros(len(self.columns))
            for k, v in o["coeff"].items():
                c[k - 1] = v
            cols.append(c * self.factors)
        return np.array(cols).T

    def occupations(self, spin=None):
        return np.array([number(o["occup"]) for o in self.file.orbitals
                         if not spin or o.get("spin", "Alpha").lower() == spin])


ORCA_FLIPS = ((3, 3), (4, 3), (4, 4), (5, 3), (5, 4))
CONVENTIONS = {
    "xtb": Convention(raw=True), "psi3": Convention(raw=True, cart="axis", lexical=True),
    "psi4": Convention(cart="axis"),
    "nwchem_raw": Convention(raw=True),
    "raw_flipped": Convention(raw=True, flips=ORCA_FLIPS),
    "bare": Convention(cart="bare"), "shell": Convention(cart="shell"),
}


def convention_of(name):
    """By the name of the fixture: the engine in front, `raw` behind."""
    first = name.split("_")[0]
    if first == "nwchem":
        return CONVENTIONS["nwchem_raw"] if name.endswith("_raw") else Convention()
    if first == "dialect":
        return next(c for k, c in CONVENTIONS.items() if k in name) if any(
            k in name for k in ("raw_flipped", "bare", "shell")) else Convention()
    return CONVENTIONS.get(first, Convention())
