"""Density of states with projections of the sp3s* model of silicon by linear
tetrahedra, in numpy.

The peer of the density benchmark: the same mesh, energies and projections,
written independently. The mesh is reduced by the 48 rotations of the cube,
tetrahedra with the same corners are merged, and each energy is a vectorised
sum over all tetrahedra and bands.

usage: dos_numpy.py DIVISIONS FROM TO COUNT
Prints the seconds taken, then energy, total, s, p, s* (states per eV and cell,
both spins) at every 20th energy.

Parameters: P. Vogl, H. P. Hjalmarson, J. D. Dow, J. Phys. Chem. Solids 44,
365 (1983). Method: G. Lehmann, M. Taut, phys. stat. sol. (b) 54, 469 (1972).
"""

import itertools
import sys
import time

import numpy as np

A = 5.431
ES, EP, ESTAR = -4.2, 1.715, 6.685
VSS, VXX, VXY, VSP, VSTARP = -8.3, 1.715, 4.575, 5.7292, 5.3749
SS, PPS, PPP = VSS / 4, (VXX + 2 * VXY) / 4, (VXX - VXY) / 4
SP, STARP = np.sqrt(3) * VSP / 4, np.sqrt(3) * VSTARP / 4
BONDS = A / 4 * np.array([[1, 1, 1], [1, -1, -1], [-1, 1, -1], [-1, -1, 1]])
VECTORS = A / 2 * np.array([[0, 1, 1], [1, 0, 1], [1, 1, 0]])
RECIPROCAL = 2 * np.pi * np.linalg.inv(VECTORS).T


def bond_block(d):
    l = d / np.linalg.norm(d)
    h = np.zeros((5, 5))
    h[0, 0] = SS
    h[0, 1:4], h[1:4, 0] = l * SP, -l * SP
    h[4, 1:4], h[1:4, 4] = l * STARP, -l * STARP
    h[1:4, 1:4] = np.outer(l, l) * (PPS - PPP) + np.eye(3) * PPP
    return h


BLOCKS = np.array([bond_block(d) for d in BONDS])
ONSITE = np.diag([ES, EP, EP, EP, ESTAR] * 2).astype(complex)


def levels(k):
    h = np.tile(ONSITE, (len(k), 1, 1))
    block = np.tensordot(np.exp(1j * k @ BONDS.T), BLOCKS, axes=1)
    h[:, :5, 5:] = block
    h[:, 5:, :5] = block.conj().transpose(0, 2, 1)
    e, c = np.linalg.eigh(h)
    square = np.abs(c) ** 2
    w = np.empty((len(k), 10, 3))
    for g, members in enumerate([[0, 5], [1, 2, 3, 6, 7, 8], [4, 9]]):
        w[:, :, g] = square[:, members, :].sum(axis=1)
    for level in range(9):  # degenerate neighbours share their weights
        same = e[:, level + 1] - e[:, level] < 1e-6
        mean = (w[:, level] + w[:, level + 1]) / 2
        triple = same & (e[:, min(level + 2, 9)] - e[:, level + 1] < 1e-6) if level < 8 else same & False
        mean3 = (w[:, level] + w[:, level + 1] + w[:, min(level + 2, 9)]) / 3
        w[same, level] = w[same, level + 1] = mean[same]
        w[triple, level] = w[triple, level + 1] = w[triple, min(level + 2, 9)] = mean3[triple]
    return e, w


def mesh(n):
    """Irreducible points and the index of each full-mesh point into them."""
    i = np.stack(np.meshgrid(*3 * [np.arange(n)], indexing="ij"), axis=-1).reshape(-1, 3)
    number = np.arange(n**3)
    least = number.copy()
    to_cart, to_frac = RECIPROCAL, np.linalg.inv(RECIPROCAL)
    for axes in itertools.permutations(range(3)):
        for signs in itertools.product([1, -1], repeat=3):
            rotation = np.zeros((3, 3))
            rotation[range(3), axes] = signs
            m = np.rint(to_cart @ rotation @ to_frac).astype(int)
            image = (i @ m) % n
            np.minimum(least, image @ [n * n, n, 1], out=least)
    points, index = np.unique(least, return_inverse=True)
    return i[points] / n @ RECIPROCAL, index.reshape(n, n, n)


def tetrahedra(index):
    """Distinct sets of four irreducible corners, and the share of each."""
    n = len(index)
    diagonals = [np.array(s) @ RECIPROCAL for s in ((1, 1, 1), (-1, 1, 1), (1, -1, 1), (1, 1, -1))]
    flip = int(np.argmin([np.round(np.linalg.norm(d), 9) for d in diagonals]))
    corner = {}
    for c in itertools.product(range(2), repeat=3):
        at = list(c)
        if flip:
            at[flip - 1] = 1 - at[flip - 1]
        corner[c] = np.roll(index, (-at[0], -at[1], -at[2]), axis=(0, 1, 2)).ravel()
    all_of_them = []
    for order in itertools.permutations(range(3)):
        at, path = [0, 0, 0], [(0, 0, 0)]
        for axis in order:
            at[axis] = 1
            path.append(tuple(at))
        all_of_them.append(np.stack([corner[p] for p in path], axis=1))
    t = np.sort(np.concatenate(all_of_them), axis=1).astype(np.int64)
    size = index.max() + 1
    key = ((t[:, 0] * size + t[:, 1]) * size + t[:, 2]) * size + t[:, 3]
    _, first, count = np.unique(key, return_index=True, return_counts=True)
    return t[first], count / len(t)


def density(n, grid):
    k, index = mesh(n)
    e, w = levels(k)
    t, share = tetrahedra(index)
    corners = np.moveaxis(e[t], 1, -1).reshape(-1, 4)  # tetrahedra x bands, corners
    weights = np.moveaxis(w[t], 1, 2).reshape(-1, 4, 3)
    share = np.repeat(share, e.shape[1])
    order = np.argsort(corners, axis=1)
    corners = np.take_along_axis(corners, order, axis=1)
    weights = np.take_along_axis(weights, order[:, :, None], axis=1)
    by_bottom = np.argsort(corners[:, 0])
    corners, weights, share = corners[by_bottom], weights[by_bottom], share[by_bottom]
    widest = (corners[:, 3] - corners[:, 0]).max()
    out = np.zeros((len(grid), 4))
    for row, x in zip(out, grid):
        low, high = np.searchsorted(corners[:, 0], [x - widest, x], side="right")
        c = corners[low:high]
        keep = c[:, 3] > x
        c = c[keep]
        v, s = weights[low:high][keep], share[low:high][keep]
        e1, e2, e3, e4 = c.T
        corner_weight = np.zeros_like(c)
        a = x < e2
        p, q, r = ((x - e1[a]) / (y[a] - e1[a]) for y in (e2, e3, e4))
        g = p * q / (e4[a] - e1[a])
        corner_weight[a] = np.stack([g * (3 - p - q - r), g * p, g * q, g * r], axis=1)
        a = (x >= e2) & (x < e3)
        f13, f14 = (x - e1[a]) / (e3[a] - e1[a]), (x - e1[a]) / (e4[a] - e1[a])
        f23, f24 = (x - e2[a]) / (e3[a] - e2[a]), (x - e2[a]) / (e4[a] - e2[a])
        g, h = f14 * (1 - f24) / (e3[a] - e1[a]), (1 - f23) * f24 / (e3[a] - e1[a])
        corner_weight[a] = np.stack(
            [g * (2 - f13 - f14) + h * (1 - f13), g * (1 - f24) + h * (2 - f23 - f24), g * f13 + h * (f13 + f23), g * (f14 + f24) + h * f24],
            axis=1,
        )
        a = x >= e3
        p, q, r = ((x - y[a]) / (e4[a] - y[a]) for y in (e1, e2, e3))
        g = (1 - p) * (1 - q) / (e4[a] - e3[a])
        corner_weight[a] = np.stack([g * (1 - p), g * (1 - q), g * (1 - r), g * (p + q + r)], axis=1)
        corner_weight *= s[:, None]
        row[0] = 2 * corner_weight.sum()
        row[1:] = 2 * np.einsum("tc,tcg->g", corner_weight, v)
    return out


def main():
    n, count = int(sys.argv[1]), int(sys.argv[4])
    grid = np.linspace(float(sys.argv[2]), float(sys.argv[3]), count)
    start = time.perf_counter()
    out = density(n, grid)
    print("seconds", time.perf_counter() - start)
    for x, row in list(zip(grid, out))[::20]:
        print("%.9g" % x, *("%.9g" % y for y in row))


main()
