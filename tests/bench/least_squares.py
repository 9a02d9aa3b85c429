"""Least squares on tall tables against the best that numpy and scipy give, on the same data, in one thread.

    python3 tests/bench/least_squares.py FOLDER_OF_THE_LIBRARY [--quick]

Prints ratios only, as CSV: how many times longer the other took (median over interleaved runs), and how many digits
the two agree to. Times are those of the processor, so that other work on the machine counts little. "best" is put together by hand from BLAS and LAPACK calls, plain doubles, no concern for accuracy:
one symmetric product of the columns, a Cholesky factor and its inverse; "QR" takes a Householder factor instead;
"ready-made" is one library call for the estimates alone.
"""
import os

for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ[name] = "1"  # before numpy is loaded

import ctypes
import statistics
import sys
import time

import numpy as np
import scipy.linalg
from scipy.linalg import blas, lapack

DOUBLES = ctypes.POINTER(ctypes.c_double)


def made_table(rng, n, p):
    """Columns in groups of five that move together (VIF about 10), means of the order of the spread, half noise."""
    x = np.empty((n, p), order="F")
    for j in range(p):
        if j % 5 == 0:
            shared = rng.standard_normal(n)
        x[:, j] = 10 + j + shared + 0.6 * rng.standard_normal(n)
    y = x @ rng.standard_normal(p) + np.sqrt(p) * rng.standard_normal(n)
    return x, y


class Ours:
    def __init__(self, folder):
        self.library = ctypes.CDLL(os.path.join(folder, "libleast_squares_bench.so"))
        self.library.bench_fit.restype = ctypes.c_double
        self.library.bench_read.restype = ctypes.c_double
        self.library.bench_choose.restype = ctypes.c_char_p
        self.library.bench_choose.argtypes = [ctypes.c_size_t]
        self.library.bench_instruction_sets.restype = ctypes.c_size_t

    def sizes(self, x, y):
        return (x.ctypes.data_as(DOUBLES), y.ctypes.data_as(DOUBLES), ctypes.c_size_t(x.shape[0]),
                ctypes.c_size_t(x.shape[1]))

    def fit(self, x, y, collinearity=False):
        p = x.shape[1]
        out = np.empty(3 * p + (p + 1) * (p + 2))
        self.library.bench_fit(*self.sizes(x, y), ctypes.c_int(collinearity), out.ctypes.data_as(DOUBLES))
        return out[:p], out[p:2 * p]

    def read(self, x, y):
        self.library.bench_read(*self.sizes(x, y))


def best_by_hand(x, y, collinearity=False):
    """One pass: means, symmetric product of the columns, then everything from the small matrix."""
    n, p = x.shape
    ones = np.ones(n)
    product = blas.dsyrk(1.0, x, trans=1)
    with_y = x.T @ y
    sums = x.T @ ones
    gram = np.triu(product) - np.outer(sums, sums) / n
    cross = with_y - sums * (y.sum() / n)
    factor, _ = lapack.dpotrf(gram)
    inverse, _ = lapack.dpotri(factor)
    inverse = np.triu(inverse) + np.triu(inverse, 1).T
    b = inverse @ cross
    rss = y @ y - y.sum() ** 2 / n - b @ cross
    errors = np.sqrt(rss / (n - p - 1) * np.diag(inverse))
    inflation = np.diag(inverse) * np.diag(gram)
    if collinearity:
        whole = np.empty((p + 1, p + 1))
        whole[0, 0] = n
        whole[0, 1:] = whole[1:, 0] = sums
        whole[1:, 1:] = np.triu(product) + np.triu(product, 1).T
        scale = 1 / np.sqrt(np.diag(whole))
        values, vectors = np.linalg.eigh(whole * scale * scale[:, None])
        shares = vectors ** 2 / values
        shares /= shares.sum(axis=1, keepdims=True)
        np.sqrt(values[-1] / values)
    return b, errors, inflation


def householder(x, y, collinearity=False):
    n, p = x.shape
    whole = np.empty((n, p + 2), order="F")
    whole[:, 0] = 1
    whole[:, 1:p + 1] = x
    whole[:, p + 1] = y
    r = np.triu(lapack.dgeqrf(whole, overwrite_a=1)[0][:p + 2])
    b = scipy.linalg.solve_triangular(r[:p + 1, :p + 1], r[:p + 1, p + 1])
    inverse = scipy.linalg.solve_triangular(r[:p + 1, :p + 1], np.eye(p + 1))
    s = abs(r[p + 1, p + 1]) / np.sqrt(n - p - 1)
    errors = s * np.sqrt((inverse ** 2).sum(axis=1))
    if collinearity:
        factor = r[:p + 1, :p + 1] / np.sqrt((r[:p + 1, :p + 1] ** 2).sum(axis=0))
        _, values, vectors = np.linalg.svd(factor)
        shares = (vectors.T / values) ** 2
        shares /= shares.sum(axis=1, keepdims=True)
    return b[1:], errors[1:]


def ready_made(x, y, collinearity=False):
    whole = np.column_stack([np.ones(len(y)), x])
    b = np.linalg.lstsq(whole, y, rcond=None)[0]
    if collinearity:
        np.linalg.inv(np.corrcoef(x, rowvar=False))
        np.linalg.svd(whole / np.sqrt((whole ** 2).sum(axis=0)), full_matrices=False)
    return b[1:], None


def ready_made_scipy(x, y, collinearity=False):
    whole = np.column_stack([np.ones(len(y)), x])
    b = scipy.linalg.lstsq(whole, y)[0]
    if collinearity:
        np.linalg.inv(np.corrcoef(x, rowvar=False))
        scipy.linalg.svd(whole / np.sqrt((whole ** 2).sum(axis=0)), full_matrices=False)
    return b[1:], None


def interleaved(functions, runs):
    for f in functions:
        f()  # warm
    times = [[] for _ in functions]
    for _ in range(runs):
        for f, taken in zip(functions, times):
            start = time.process_time()
            f()
            taken.append(time.process_time() - start)
    return [statistics.median(taken) for taken in times]


def digits(a, b):
    return float(np.min(-np.log10(np.maximum(np.abs(a - b) / np.abs(b), 1e-16))))


def main():
    quick = "--quick" in sys.argv
    ours = Ours(sys.argv[1])
    rng = np.random.default_rng(1)
    print("work,rows,columns,instruction set,best by hand / ours,QR by hand / ours,numpy lstsq / ours,"
          "scipy lstsq / ours,ours / reading alone,digits shared with best by hand")
    sizes = [(100_000, 20), (1_000_000, 10)] + ([] if quick else [(1_000_000, 50)])
    sets = ours.library.bench_instruction_sets()
    for n, p in sizes:
        x, y = made_table(rng, n, p)
        for work, collinearity in (("W1", False), ("W2", True)):
            for which in reversed(range(sets)) if work == "W1" else [sets - 1]:
                name = ours.library.bench_choose(which).decode()
                shared = digits(ours.fit(x, y)[0], best_by_hand(x, y)[0])
                fast = interleaved([lambda: ours.fit(x, y, collinearity), lambda: best_by_hand(x, y, collinearity),
                                    lambda: ours.read(x, y)], 15 if n * p < 2e7 else 7)
                if which == sets - 1:
                    slow = interleaved([lambda: ours.fit(x, y, collinearity), lambda: householder(x, y, collinearity),
                                        lambda: ready_made(x, y, collinearity),
                                        lambda: ready_made_scipy(x, y, collinearity)], 3)
                    others = [f"{slow[k] / slow[0]:.3g}" for k in (1, 2, 3)]
                else:
                    others = ["", "", ""]
                print(f"{work},{n},{p},{name},{fast[1] / fast[0]:.3g},{','.join(others)},{fast[0] / fast[2]:.3g},"
                      f"{shared:.1f}", flush=True)
                if "--times" in sys.argv:
                    print([f"{t * 1e3:.2f}" for t in fast], file=sys.stderr)
            ours.library.bench_choose(sets - 1)


if __name__ == "__main__":
    main()
