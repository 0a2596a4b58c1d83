"""Times numpy on the matrices of zheevd.c (generator described there).

    OPENBLAS_NUM_THREADS=1 python3 eig_numpy.py N V|N MILLISECONDS

Prints the nanoseconds per solve (in the fastest pass over all), then the eigenvalues of the first matrix.
All matrices go to numpy in one stack, its fastest way for small ones.
"""
import sys
import time

import numpy as np

MATRICES = 32


def matrices(n):
    state = n
    a = np.zeros((MATRICES, n, n), complex)

    def following():
        nonlocal state
        state = (state * 6364136223846793005 + 1442695040888963407) % 2**64
        return (state >> 11) / 4503599627370496.0 - 1

    for m in a:
        for i in range(n):
            for j in range(i):
                re = following()
                m[i, j] = complex(re, following())
            m[i, i] = following()
    return a


def main():
    n, job, limit = int(sys.argv[1]), sys.argv[2], float(sys.argv[3]) / 1e3
    a = matrices(n)
    solve = np.linalg.eigh if job == "V" else np.linalg.eigvalsh
    values = solve(a)
    if job == "V":
        values = values[0]
    best, begin = float("inf"), time.perf_counter()
    while time.perf_counter() - begin < limit:
        start = time.perf_counter()
        solve(a)
        best = min(best, time.perf_counter() - start)
    print(f"{best / MATRICES * 1e9:.3f}")
    for value in values[0]:
        print(repr(float(value)))


main()
