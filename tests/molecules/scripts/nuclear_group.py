"""All symmetry operations of a set of nuclei, by trying every image of two atoms.

Slow and plain on purpose: a second path beside the program. Linear molecules and atoms are not
handled (infinitely many operations).
"""
import numpy as np


def operations(symbols, xyz, tolerance=1e-4):
    """Matrices (about the centre of charge-weighted nuclei) that map the nuclei onto like nuclei."""
    xyz = np.asarray(xyz, float)
    kinds = np.array(symbols)
    weight = np.array([sum(map(ord, s)) for s in symbols], float)
    p = xyz - weight @ xyz / weight.sum()
    length = np.linalg.norm(p, axis=1)
    counts = {}
    for k, l in zip(kinds, np.round(length, 3)):
        counts[k, l] = counts.get((k, l), 0) + 1
    order = sorted(range(len(p)), key=lambda i: (counts[kinds[i], np.round(length[i], 3)], i))
    a = next(i for i in order if length[i] > 0.1)
    b = next((i for i in order if np.linalg.norm(np.cross(p[a], p[i])) > 0.1), None)
    if b is None:
        return None
    frame = np.array([p[a], p[b], np.cross(p[a], p[b])]).T
    back = np.linalg.inv(frame)
    out = []
    for i in range(len(p)):
        if kinds[i] != kinds[a] or abs(length[i] - length[a]) > tolerance:
            continue
        for j in range(len(p)):
            if kinds[j] != kinds[b] or abs(length[j] - length[b]) > tolerance:
                continue
            if abs(p[i] @ p[j] - p[a] @ p[b]) > 10 * tolerance:
                continue
            for sign in (1, -1):
                m = np.array([p[i], p[j], sign * np.cross(p[i], p[j])]).T @ back
                if np.abs(m @ m.T - np.eye(3)).max() > 1e-3:
                    continue
                u, _, v = np.linalg.svd(m)
                m = u @ v
                image = p @ m.T
                fits = all(min((np.linalg.norm(x - y) for y, k in zip(p, kinds) if k == kind), default=9) < 10 * tolerance
                           for x, kind in zip(image, kinds))
                if fits and all(np.abs(m - n).max() > 1e-3 for n in out):
                    out.append(m)
    return out


def kind(m):
    """(proper?, order of the turn, whole turns k): a turn by 360 k / n, or that times the inversion's reflection."""
    det = round(np.linalg.det(m))
    c = np.clip((det * np.trace(m) - 1) / 2, -1, 1)
    angle = np.degrees(np.arccos(c))
    return det, round(float(angle), 2)
