"""P3 peers in SciPy. usage: p3_scipy.py CASEDIR newton|newton-mmd|newton-ilu|transient
  newton      spsolve as it comes (COLAMD)
  newton-mmd  splu told that the pattern is symmetric (minimum degree on A+A', no pivoting)
  newton-ilu  spilu-preconditioned BiCGStab"""
import json
import os
import resource
import sys
import time
import numpy as np
import scipy.sparse as sp
from scipy.integrate import solve_ivp
from scipy.sparse.linalg import spsolve, splu, spilu, bicgstab, LinearOperator
from lattice import load

case, mode = sys.argv[1:3]
t0 = time.perf_counter()
meta, M, vol, fin, fout = load(case)
read = time.perf_counter() - t0
K1, K2 = 2.0, .5
n = len(vol)
t0 = time.perf_counter()
L = sp.kron(M, sp.eye(4), 'csc')
src = np.kron(fin / vol, [1.0, 1.2, 0, 0])
i4 = 4 * np.arange(n)
ROW = [0, 0, 1, 1, 1, 2, 2, 2, 3, 3]
COL = [0, 1, 0, 1, 2, 0, 1, 2, 1, 2]
rows = np.concatenate([i4 + r for r in ROW])
cols = np.concatenate([i4 + c for c in COL])


def fun(y):
    A, B, R = y[0::4], y[1::4], y[2::4]
    r1, r2 = K1 * A * B, K2 * R * B
    f = L @ y + src
    f[0::4] -= r1
    f[1::4] -= r1 + r2
    f[2::4] += r1 - r2
    f[3::4] += r2
    return f


def jac(y):
    A, B, R = y[0::4], y[1::4], y[2::4]
    a1, a2, b1, b2 = K1 * B, K1 * A, K2 * B, K2 * R
    v = np.concatenate([-a1, -a2, -a1, -a2 - b2, -b1, a1, a2 - b2, -b1, b2, b1])
    return L + sp.csc_matrix((v, (rows, cols)), (4 * n, 4 * n))


def direction(y, f):
    J = jac(y)
    if mode == 'newton':
        return spsolve(J, -f)
    if mode == 'newton-mmd':
        return splu(J, permc_spec='MMD_AT_PLUS_A', diag_pivot_thresh=0.0, options=dict(SymmetricMode=True)).solve(-f)
    p = spilu(J, drop_tol=3e-2, fill_factor=1.5, permc_spec='NATURAL', diag_pivot_thresh=0.0)
    d, flag = bicgstab(J, -f, tol=1e-8, atol=1e-15, maxiter=500, M=LinearOperator(J.shape, p.solve))
    assert flag == 0
    return d


y = np.tile([.3, .4, .5, .2], n)
info = {}
if mode.startswith('newton'):
    for it in range(50):
        f = fun(y)
        res = np.abs(f).max()
        if res < 1e-12:
            break
        d = direction(y, f)
        lam = 1.0
        while lam > 1e-3 and np.linalg.norm(fun(y + lam * d)) > np.linalg.norm(f):
            lam /= 2
        y = y + lam * d
        if np.abs(d).max() < 1e-13:
            break
    info = dict(newton_its=it, residual=float(np.abs(fun(y)).max()))
else:
    tau = vol.sum() / fin.sum()
    s = solve_ivp(lambda t, y: fun(y), (0, 1e4 * tau), y, 'BDF', [1e4 * tau], rtol=1e-6, atol=1e-9, jac=lambda t, y: jac(y))
    y = s.y[:, -1]
    info = dict(rhs=int(s.nfev), lu=int(s.nlu), residual=float(np.abs(fun(y)).max()))
el = time.perf_counter() - t0
Q = fout.sum()
o = [float(fout @ y[k::4] / Q) for k in range(4)]
print(json.dumps(dict(peak_kB=resource.getrusage(resource.RUSAGE_SELF).ru_maxrss, peer={'newton': 'scipy Newton + spsolve', 'newton-mmd': 'scipy Newton + splu (symmetric ordering)',
                            'newton-ilu': 'scipy Newton + BiCGStab + spilu', 'transient': 'scipy BDF pseudo-transient'}[mode], N=n, unknowns=4 * n,
                      read_s=read, solve_s=el, conversion_A=1 - o[0], yield_R=o[2], outlet=o, **info)))
