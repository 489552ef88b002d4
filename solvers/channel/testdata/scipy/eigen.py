#!/usr/bin/env python3
"""Eigenvalues of (A + L B) x = 0 for symmetric sparse A and B, real or complex (the transpose, not the conjugate).

    eigen.py A.mtx B.mtx SHIFT COUNT                       the COUNT eigenvalues L nearest SHIFT, by ARPACK
    eigen.py A.mtx B.mtx SHIFT COUNT --dense --above L     the same by LAPACK's QZ, and how many lie above L (n up to 1500)

A and B are Matrix Market coordinate files, symmetric with the lower triangle. It is another library's factorisation and
another algorithm than ours, so that what it finds checks our solver. SHIFT is a Python number, 90 or 90+0.1j.

Prints JSON: unknowns, shift, and eigenvalues, the nearest first, each with l_real, l_imag, x'Bx of the vector of unit length
(xbx_real, xbx_imag: in a real pencil positive where a mode carries power forwards; it means nothing for one vector of a
repeated eigenvalue) and residual |F x| / |L B x|. With --above also its counts: real, complex, and of the real ones negative
(those with x'Bx < 0).
"""
import os

# One core; numpy reads these when it is loaded.
os.environ.update(dict.fromkeys(("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"), "1"))

import argparse
import json
import sys

import numpy as np
import scipy.linalg
from scipy.io import mmread
from scipy.sparse.linalg import LinearOperator, eigs, splu

DENSE_LARGEST = 1500  # QZ takes a minute there, a few seconds at half of it
REAL = 1e-7  # an imaginary part of less than this share is rounding: QZ is exact to about 1e-15 of the largest L


def read(path):
    """A square symmetric matrix, both triangles."""
    m = mmread(path).tocsc()
    if m.shape[0] != m.shape[1]:
        sys.exit(f"{path}: expected a square matrix, found {m.shape[0]} x {m.shape[1]}")
    if abs(m - m.T).max() > 0:
        sys.exit(f"{path}: expected a symmetric matrix, found entries that differ from their mirror images")
    return m


def nearest(a, b, shift, count):
    """Eigenpairs nearest the shift: with F = A + shift B, F^-1 B x = x / (shift - L). No definite B is needed."""
    n = a.shape[0]
    f = (a + shift * b).tocsc()
    lu = splu(f)
    kind = np.result_type(f.dtype, float)
    start = np.random.default_rng(1).standard_normal(n).astype(kind)  # the same answer every time
    inverse = LinearOperator((n, n), lambda v: lu.solve((b @ v.ravel()).astype(kind)), dtype=kind)
    mu, x = eigs(inverse, k=count, which="LM", v0=start)
    return shift - 1 / mu, x


def quotient(b, x):
    """x'Bx of every column of unit length, turned so that a real vector in complex disguise is real again."""
    x = x / np.linalg.norm(x, axis=0)
    x = x * np.exp(-1j * np.angle(np.take_along_axis(x, abs(x).argmax(axis=0)[None], axis=0)))
    return np.sum(x * (b @ x), axis=0)


def above(b, l, x, limit):
    """How many eigenvalues lie above the limit. Those at infinity, where B is singular, are no eigenvalues."""
    high = np.isfinite(l) & (l.real > limit)
    real = high & (abs(l.imag) <= REAL * abs(l))
    return {"limit": limit, "real": int(real.sum()), "complex": int((high & ~real).sum()),
            "negative": int((quotient(b, x[:, real]).real < 0).sum())}


def listing(a, b, shift, l, x):
    """The eigenpairs for the output, nearest the shift first."""
    order = np.argsort(abs(l - shift))
    l, x = l[order], x[:, order]
    weighed = (b @ x) * l
    residual = np.linalg.norm(a @ x + weighed, axis=0) / np.linalg.norm(weighed, axis=0)
    return [{"l_real": v.real, "l_imag": v.imag, "xbx_real": q.real, "xbx_imag": q.imag, "residual": r}
            for v, q, r in zip(l, quotient(b, x), residual)]


def main():
    """Reads the arguments and the files, prints the answer."""
    parser = argparse.ArgumentParser(description="eigenvalues L of (A + L B) x = 0 near a shift, as JSON")
    parser.add_argument("a")
    parser.add_argument("b")
    parser.add_argument("shift", type=complex)
    parser.add_argument("count", type=int)
    parser.add_argument("--dense", action="store_true", help="by QZ of the whole pencil")
    parser.add_argument("--above", type=float, help="with --dense: count the eigenvalues above this, too")
    given = parser.parse_args()
    if given.above is not None and not given.dense:
        parser.error("--above needs --dense: only then all eigenvalues are known")
    a, b = read(given.a), read(given.b)
    n = a.shape[0]
    if a.shape != b.shape:
        sys.exit(f"A and B: expected the same size, found {n} and {b.shape[0]}")
    if not 1 <= given.count <= n - 2:
        parser.error(f"COUNT: expected 1 to {n - 2}, found {given.count}")
    shift = given.shift if given.shift.imag else given.shift.real
    answer = {"unknowns": n, "shift": [given.shift.real, given.shift.imag]}
    if given.dense:
        if n > DENSE_LARGEST:
            sys.exit(f"--dense: expected at most {DENSE_LARGEST} unknowns, found {n}")
        l, x = scipy.linalg.eig(-a.toarray(), b.toarray())
        if given.above is not None:
            answer["above"] = above(b, l, x, given.above)
        some = np.argsort(np.where(np.isfinite(l), abs(l - shift), np.inf))[: given.count]
        l, x = l[some], x[:, some]
    else:
        l, x = nearest(a, b, shift, given.count)
    answer["eigenvalues"] = listing(a, b, shift, l, x)
    print(json.dumps(answer, indent=1))


if __name__ == "__main__":
    main()
