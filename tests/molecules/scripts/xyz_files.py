"""Plain XYZ geometries for group finding, each in generic orientation. No engine.

Usage: python xyz_files.py
"""
import os

import numpy as np

import shapes as g

OUT = os.path.join(os.path.dirname(os.path.dirname(os.path.abspath(__file__))), "xyz")


def ring_propeller():
    """Three flat six-rings about one atom, each turned out of the plane by the same angle: D3."""
    out = [("B", (0, 0, 0))]
    for k in range(3):
        m = g.turn((0, 0, 1), 120 * k)
        tilt = g.turn((1, 0, 0), 35)
        for s, p in g.annulene(6, 1.395, 1.085):
            q = tilt @ np.asarray(p)
            if not (s == "H" and p[0] < -2):
                out.append((s, tuple(m @ (q + np.array([1.57 + 1.395, 0, 0])))))
    return out


def pyramidal_propeller():
    """The same rings on a raised centre: C3."""
    return [("P", (0, 0, 0.8))] + ring_propeller()[1:]


def tub_with_four():
    """The tub with every other hydrogen, as the fourfold rotoreflection links them, made fluorine: S4."""
    atoms = g.tub()
    first = next(p for s, p in atoms if s == "H")
    images = [p for _, p in g.orbit("F", first, g.GROUP_S4)]
    chosen = lambda s, p: s == "H" and min(np.linalg.norm(np.subtract(p, q)) for q in images) < 1e-6
    return [("F" if chosen(s, p) else s, p) for s, p in atoms]


FILES = {
    "octahedron_shaken": (g.shaken(g.octahedral("S", "F", 1.56), 0.004 / 3 ** 0.5, 1), 701),
    "octahedron_stretched": ([(s, (x, y, 1.06 * z)) for s, (x, y, z) in g.octahedral("Cu", "O", 2.0)], 702),
    "fullerene": (g.fullerene(), 703),
    "sandwich_d5": (g.sandwich("Fe", 15), 704),
    "tris_chelate_d3": (g.tris_chelate(), 705),
    "propeller_d3": (ring_propeller(), 706),
    "propeller_c3": (pyramidal_propeller(), 707),
    "hexaaqua_th": (g.hexaaqua("Fe", 2.1), 708),
    "tub_s4": (tub_with_four(), 709),
    "cyanogen_linear": ([(s, (0, 0, k * z)) for s, z in (("C", 0.69), ("N", 1.85)) for k in (1, -1)], 710),
    "benzene_shaken": (g.shaken(g.annulene(6, 1.395, 1.085), 0.003, 2), 711),
    "icosahedron": (g.icosahedral("B", 1.693, ("H", 2.893)), 712),
}

if __name__ == "__main__":
    for name, (atoms, seed) in FILES.items():
        rows = g.moved(atoms, seed)
        with open(f"{OUT}/{name}.xyz", "w") as f:
            f.write(f"{len(rows)}\n{name}\n" + "".join(f"{s:2s} {x:14.8f} {y:14.8f} {z:14.8f}\n" for s, (x, y, z) in rows))
