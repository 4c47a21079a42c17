"""One run of SciPy's shift-invert eigensolver on matrices of a folder, timed; see race_test.go.

usage: race.py folder route modes shift

Routes: plain is eigsh as it comes; prepared gives it the factor of K - shift*M made by splu in symmetric mode; loose is
prepared with the tolerance 1e-9 instead of machine precision.
"""
import json
import sys
import time

import numpy as np
import scipy.sparse as sp
from scipy.sparse.linalg import LinearOperator, eigsh, splu

folder, route, modes, shift = sys.argv[1], sys.argv[2], int(sys.argv[3]), float(sys.argv[4])


def read(name):
    """The full matrix of a lower triangle stored by columns."""
    ptr = np.fromfile(f"{folder}/{name}.ptr", np.int64)
    row = np.fromfile(f"{folder}/{name}.row", np.int32)
    val = np.fromfile(f"{folder}/{name}.val", np.float64)
    n = len(ptr) - 1
    low = sp.csc_matrix((val, row, ptr), shape=(n, n))
    return (low + sp.tril(low, -1).T).tocsc()


def memory(key):
    """A line of the memory status in bytes. The peak is that of this process alone, unlike that of getrusage."""
    with open("/proc/self/status") as f:
        return next(int(line.split()[1]) * 1024 for line in f if line.startswith(key))


K, M = read("k"), read("m")
before = memory("VmRSS:")
began, busy = time.perf_counter(), time.process_time()
factor = 0.0
if route == "plain":
    values = eigsh(K, k=modes, M=M, sigma=shift, which="LM")[0]
else:
    lu = splu((K - shift * M).tocsc(), diag_pivot_thresh=0, permc_spec="MMD_AT_PLUS_A", options=dict(SymmetricMode=True))
    factor = time.perf_counter() - began
    inverse = LinearOperator(K.shape, matvec=lu.solve, dtype=float)
    values = eigsh(K, k=modes, M=M, sigma=shift, which="LM", OPinv=inverse, tol=1e-9 if route == "loose" else 0)[0]
print(json.dumps({
    "Seconds": time.perf_counter() - began,
    "Factor": factor,
    "CPU": time.process_time() - busy,
    "Values": sorted(values.tolist()),
    "Bytes": memory("VmHWM:") - before,
}))
