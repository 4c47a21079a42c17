"""One run of SLEPc's shift-invert Krylov-Schur on matrices of a folder, timed; see race_test.go.

usage: race_slepc.py folder package ordering modes shift

package factorises K - shift*M by Cholesky: cholmod or mumps, with the given fill-reducing ordering (external: the
package's own choice). Without arguments it only tells, by its exit code, whether all it needs is installed.
"""
import glob
import json
import sys
import time

# Debian keeps the builds of PETSc and SLEPc in places of their own.
for name in ("petsc", "slepc"):
    sys.path += glob.glob(f"/usr/lib/{name}dir/*/*-real/lib/python3/dist-packages")

import numpy as np
from petsc4py import PETSc
from slepc4py import SLEPc


def read(folder, name):
    """The upper triangle by rows, as the packages want it, from a lower triangle stored by columns."""
    ptr = np.fromfile(f"{folder}/{name}.ptr", np.int64).astype(np.int32)
    row = np.fromfile(f"{folder}/{name}.row", np.int32)
    val = np.fromfile(f"{folder}/{name}.val", np.float64)
    a = PETSc.Mat().create(PETSc.COMM_SELF)
    a.setSizes((len(ptr) - 1, len(ptr) - 1))
    a.setType("seqsbaij")
    a.setBlockSize(1)
    a.setPreallocationCSR((ptr, row, val))
    return a


def memory(key):
    """A line of the memory status in bytes. The peak is that of this process alone, unlike that of getrusage."""
    with open("/proc/self/status") as f:
        return next(int(line.split()[1]) * 1024 for line in f if line.startswith(key))


def run(folder, package, ordering, modes, shift):
    if package == "mumps":
        PETSc.Options()["mat_mumps_icntl_7"] = {"amd": 0, "scotch": 3, "pord": 4, "metis": 5}[ordering]
    K, M = read(folder, "k"), read(folder, "m")
    before = memory("VmRSS:")
    began, busy = time.perf_counter(), time.process_time()
    eps = SLEPc.EPS().create(PETSc.COMM_SELF)
    eps.setOperators(K, M)
    eps.setProblemType(SLEPc.EPS.ProblemType.GHEP)
    eps.setType(SLEPc.EPS.Type.KRYLOVSCHUR)
    eps.setWhichEigenpairs(SLEPc.EPS.Which.TARGET_MAGNITUDE)
    eps.setTarget(shift)
    eps.setDimensions(modes)
    eps.setTolerances(1e-9)  # as ours
    st = eps.getST()
    st.setType(SLEPc.ST.Type.SINVERT)
    st.setShift(shift)
    st.setMatStructure(PETSc.Mat.Structure.SUBSET_NONZERO_PATTERN)
    st.getKSP().setType("preonly")
    pc = st.getKSP().getPC()
    pc.setType("cholesky")
    pc.setFactorSolverType(package)
    pc.setFactorOrdering("external" if package == "mumps" else ordering)
    eps.setUp()
    factor = time.perf_counter() - began
    eps.solve()
    values = [eps.getEigenvalue(i).real for i in range(min(modes, eps.getConverged()))]
    print(json.dumps({
        "Seconds": time.perf_counter() - began,
        "Factor": factor,
        "CPU": time.process_time() - busy,
        "Values": sorted(values),
        "Bytes": memory("VmHWM:") - before,
    }))


if len(sys.argv) > 1:
    run(sys.argv[1], sys.argv[2], sys.argv[3], int(sys.argv[4]), float(sys.argv[5]))
