"""The molecules that every engine runs, and small tools for the engine scripts.

Each molecule is in generic orientation; an engine may turn it again. A file too large is cut
to its lowest orbitals by `trimmed`, which keeps whole every set within 1e-4 hartree.
"""
import os
import re
import subprocess
import tempfile

import shapes as g

HERE = os.path.dirname(os.path.abspath(__file__))
OUT = os.path.dirname(HERE)
LIMIT = 200 * 1024
BOHR = 0.52917721092

MOLECULES = {
    "water": (g.water(), 501, 1),
    "formaldehyde": (g.formaldehyde(), 502, 1),
    "ammonia": (g.ammonia(), 503, 1),
    "ethene": (g.ethene(), 504, 1),
    "benzene": (g.annulene(6, 1.395, 1.085), 505, 1),
    # NH2 radical, 2B1: water's shape with other numbers
    "amidogen": ([("N", p) if s == "O" else (s, p) for s, p in g.water(1.024, 103.4)], 506, 2),
    "sulfur_hexafluoride": (g.octahedral("S", "F", 1.56), 507, 1),
    # for an engine that finds no cubic group in the turned ones
    "methane_upright": (g.tetrahedral("C", "H", 1.09), None, 1),
    "sulfur_hexafluoride_upright": (g.octahedral("S", "F", 1.56), None, 1),
    "methane": (g.tetrahedral("C", "H", 1.09), 508, 1),
    "allene": (g.allene(), 510, 1),
    "ethane": (g.ethane(60), 511, 1),
    "boron_trifluoride": (g.planar_xy3("B", "F", 1.31), 512, 1),
    "cyclopentadienide": (g.annulene(5, 1.41, 1.085), 513, 1),
    "carbon_dioxide": ([("C", (0, 0, 0)), ("O", (0, 0, 1.16)), ("O", (0, 0, -1.16))], 509, 1),
}

CHARGES = {"cyclopentadienide": -1}

# one shell of each l on oxygen, made by hand; hydrogen s and p
TALL_O = ([("S", [(130.70932, 0.154329), (23.808861, 0.535328), (6.4436083, 0.444635)]), ("S", [(0.9, 1.0)]),
           ("P", [(5.0331513, 0.155916), (1.1695961, 0.607684), (0.380389, 0.391957)])]
          + [(l, [(1.1 + 0.3 * k, 1.0)]) for k, l in enumerate("DFGHI")])
TALL_H = [("S", [(3.42525091, 0.154329), (0.62391373, 0.535328), (0.1688554, 0.444635)]), ("P", [(0.8, 1.0)])]


def tall(lmax):
    """The hand-made set up to l = lmax on oxygen."""
    return {"O": [s for s in TALL_O if "SPDFGHI".index(s[0]) <= lmax], "H": TALL_H}


def placed(name):
    atoms, seed, mult = MOLECULES[name]
    return g.moved(atoms, seed), mult


def lines(atoms, form="{:2s} {:18.12f} {:18.12f} {:18.12f}"):
    return "\n".join(form.format(s, *p) for s, p in atoms)


def run(command, files, want=(), timeout=600, env=None):
    """Runs an engine in a fresh folder holding `files`; returns the folder."""
    folder = tempfile.mkdtemp(prefix="engine-")
    for name, text in files.items():
        with open(os.path.join(folder, name), "w") as f:
            f.write(text)
    full = dict(os.environ, OMP_NUM_THREADS="1", **(env or {}))
    done = subprocess.run(command, cwd=folder, env=full, capture_output=True, text=True, timeout=timeout)
    with open(os.path.join(folder, "stdout"), "w") as f:
        f.write(done.stdout + done.stderr)
    for name in want:
        path = os.path.join(folder, name)
        if not os.path.exists(path) or os.path.getsize(path) == 0:
            raise SystemExit(f"{command}: no {name} in {folder}\n{(done.stdout + done.stderr)[-1500:]}")
    return folder


def trimmed(text, virtuals):
    """Keeps the occupied orbitals and about `virtuals` more of each spin, by energy."""
    mark = re.search(r"^ *\[MO\].*\n", text, re.M)
    head, body = text[:mark.end()], text[mark.end():]
    blocks, now = [], []
    seen_number = False
    for line in body.splitlines(keepends=True):
        if line.lstrip().startswith("["):
            raise ValueError("a section follows the orbitals")
        keyed = "=" in line
        if keyed and seen_number:
            blocks.append(now)
            now, seen_number = [], False
        seen_number |= not keyed
        now.append(line)
    blocks.append(now)

    def value(block, key):
        for line in block:
            if "=" in line and line.split("=")[0].strip().lower() == key:
                return line.split("=")[1].strip()
        return ""

    keep = set()
    for spin in {value(b, "spin") for b in blocks}:
        mine = sorted((float(value(b, "ene")), k) for k, b in enumerate(blocks) if value(b, "spin") == spin)
        last = max((i for i, (_, k) in enumerate(mine) if float(value(blocks[k], "occup")) > 0), default=-1)
        n = min(last + 1 + virtuals, len(mine))
        while n < len(mine) and mine[n][0] - mine[n - 1][0] < 1e-4:
            n += 1
        keep |= {k for _, k in mine[:n]}
    return head + "".join("".join(b) for k, b in enumerate(blocks) if k in keep)


def store(name, path, virtuals=None, folder=OUT):
    with open(path, errors="replace", newline="") as f:
        text = f.read()
    if virtuals is not None:
        text = trimmed(text, virtuals)
    target = os.path.join(folder, name + ".molden")
    with open(target, "w", newline="") as f:
        f.write(text)
    size = os.path.getsize(target)
    assert 0 < size <= LIMIT, f"{name}: {size} bytes"
    print(f"{name:36s} {size / 1024:6.1f} KiB", flush=True)


def attempt(jobs, chosen):
    """Runs the named jobs (all without names); a failure does not stop the others."""
    import sys
    failed = []
    for name in chosen or jobs:
        try:
            jobs[name]()
        except (Exception, SystemExit) as e:
            failed.append(name)
            print("FAILED", name, str(e)[-1500:], flush=True)
    if failed:
        sys.exit(f"failed: {failed}")


