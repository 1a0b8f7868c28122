"""Potential and field of point charges at targets in numpy, blocks of targets at a time.

Prints million pairs a second of CPU time of the best of several block sizes.
"""

import time

import numpy as np

CHARGES = 8000
TARGETS = 512
SIZES = (1, 2, 4, 8, 16, 32, 64)


def sums(charges, q, targets, size):
    out = np.empty((4, len(targets)))
    for start in range(0, len(targets), size):
        part = targets[start : start + size]
        d = [part[:, axis, None] - charges[axis] for axis in range(3)]
        inverse = d[0] * d[0]
        inverse += d[1] * d[1]
        inverse += d[2] * d[2]
        np.sqrt(inverse, out=inverse)
        np.divide(1.0, inverse, out=inverse)
        strength = inverse * q
        out[0, start : start + size] = strength.sum(axis=1)
        inverse *= inverse
        strength *= inverse
        for axis in range(3):
            out[1 + axis, start : start + size] = np.einsum("ij,ij->i", strength, d[axis])
    return out


def main():
    random = np.random.default_rng(1)
    charges = np.ascontiguousarray(random.random((3, CHARGES)))
    q = random.random(CHARGES) - 0.5
    targets = random.random((TARGETS, 3))
    best = 0.0
    for size in SIZES:
        for _ in range(2):
            start = time.process_time()
            out = sums(charges, q, targets, size)
            took = time.process_time() - start
            best = max(best, 1e-6 * CHARGES * TARGETS / took)
    print(f"{best:.2f} {out.sum():g}")


main()
