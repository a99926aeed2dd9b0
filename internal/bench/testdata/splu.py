# Factorises the five-point matrix of an n × n grid, Laplacian plus 0.01, or its
# square, with SciPy's sparse LU, and solves once. Prints the seconds of both.
import sys, time
import numpy as np
import scipy.sparse as sp
from scipy.sparse.linalg import splu

n, points = int(sys.argv[1]), int(sys.argv[2])
d = sp.diags([-1, 2, -1], [-1, 0, 1], shape=(n, n))
e = sp.identity(n)
a = sp.kron(d, e) + sp.kron(e, d) + 0.01 * sp.identity(n * n)
if points == 13:
    a = a @ a
a = a.tocsc()
b = np.ones(n * n)
t = time.perf_counter()
x = splu(a, permc_spec="MMD_AT_PLUS_A", options=dict(SymmetricMode=True)).solve(b)
t = time.perf_counter() - t
if not np.abs(a @ x - b).max() < 1e-6:
    sys.exit("wrong solution")
print(f"{t:.6f}")
