"""Bands with weights of the sp3s* model of silicon, in numpy.

The peer of the band benchmark: the same k points, the same model, written
independently from bond sums and Slater-Koster factors (Slater, Koster 1954),
eigenvectors by LAPACK through numpy. In two ways: the plain one, point by
point, and one that is vectorised over k in chunks.

usage: bands_numpy.py KFILE plain|vectorised ROUNDS
KFILE holds k points as raw float64 triples, Cartesian, 1/angstrom.
Prints the seconds of the fastest round (reading excluded), then for each k of
a sample of them the energies and sum_n E_n^2 w_n,group, which no choice of
vectors within a degenerate level changes.

Parameters: P. Vogl, H. P. Hjalmarson, J. D. Dow, J. Phys. Chem. Solids 44,
365 (1983), Table 1, silicon.
"""

import sys
import time

import numpy as np

A = 5.431
ES, EP, ESTAR = -4.2, 1.715, 6.685
VSS, VXX, VXY, VSP, VSTARP = -8.3, 1.715, 4.575, 5.7292, 5.3749
SS, PPS, PPP = VSS / 4, (VXX + 2 * VXY) / 4, (VXX - VXY) / 4
SP, STARP = np.sqrt(3) * VSP / 4, np.sqrt(3) * VSTARP / 4
BONDS = A / 4 * np.array([[1, 1, 1], [1, -1, -1], [-1, 1, -1], [-1, -1, 1]])
# Basis on each atom: s, px, py, pz, s*.


def bond_block(d):
    """<orbital on atom 1|H|orbital on atom 2> for the vector d from 1 to 2."""
    l = d / np.linalg.norm(d)
    h = np.zeros((5, 5))
    h[0, 0] = SS
    h[0, 1:4], h[1:4, 0] = l * SP, -l * SP
    h[4, 1:4], h[1:4, 4] = l * STARP, -l * STARP
    h[1:4, 1:4] = np.outer(l, l) * (PPS - PPP) + np.eye(3) * PPP
    return h


BLOCKS = np.array([bond_block(d) for d in BONDS])
ONSITE = np.diag([ES, EP, EP, EP, ESTAR] * 2).astype(complex)
GROUPS = [[0], [1, 2, 3], [4], [5], [6, 7, 8], [9]]


def plain(k):
    energies = np.empty((len(k), 10))
    weights = np.empty((len(k), 10, len(GROUPS)))
    for i in range(len(k)):
        h = ONSITE.copy()
        for d, block in zip(BONDS, BLOCKS):
            h[:5, 5:] += np.exp(1j * (k[i] @ d)) * block
        h[5:, :5] = h[:5, 5:].conj().T
        energies[i], c = np.linalg.eigh(h)
        square = np.abs(c) ** 2
        for g, members in enumerate(GROUPS):
            weights[i, :, g] = square[members, :].sum(axis=0)
    return energies, weights


def vectorised(k):
    energies = np.empty((len(k), 10))
    weights = np.empty((len(k), 10, len(GROUPS)))
    for first in range(0, len(k), 4096):
        part = k[first : first + 4096]
        h = np.tile(ONSITE, (len(part), 1, 1))
        phase = np.exp(1j * part @ BONDS.T)
        block = np.tensordot(phase, BLOCKS, axes=1)
        h[:, :5, 5:] = block
        h[:, 5:, :5] = block.conj().transpose(0, 2, 1)
        e, c = np.linalg.eigh(h)
        energies[first : first + 4096] = e
        square = np.abs(c) ** 2
        for g, members in enumerate(GROUPS):
            weights[first : first + 4096, :, g] = square[:, members, :].sum(axis=1)
    return energies, weights


def bands_plainly(k):
    energies = np.empty((len(k), 10))
    weights = np.empty((len(k), 10, len(GROUPS)))
    for i in range(len(k)):
        h = ONSITE.copy()
        for d, block in zip(BONDS, BLOCKS):
            h[:5, 5:] += np.exp(1j * (k[i] @ d)) * block
        h[5:, :5] = h[:5, 5:].conj().T
        energies[i], c = np.linalg.eigh(h)
        square = np.abs(c) ** 2
        for g, members in enumerate(GROUPS):
            weights[i, :, g] = square[members, :].sum(axis=0)
    return energies, weights


def main():
    k = np.fromfile(sys.argv[1]).reshape(-1, 3)
    bands = {"plain": plain, "vectorised": vectorised}[sys.argv[2]]
    fastest = np.inf
    for _ in range(int(sys.argv[3])):
        start = time.perf_counter()
        energies, weights = bands(k)
        fastest = min(fastest, time.perf_counter() - start)
    print("seconds", fastest)
    for i in range(0, len(k), max(1, len(k) // 50)):
        moments = (energies[i, :, None] ** 2 * weights[i]).sum(axis=0)
        print(i, *("%.12g" % x for x in (*energies[i], *moments)))


main()
