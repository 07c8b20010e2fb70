"""P4 peers in SciPy. usage: p4_scipy.py CASEDIR Radau|BDF|LSODA OUT.csv [RTOL ATOL]"""
import json
import sys
import time
import os
import resource
import numpy as np
from scipy.integrate import solve_ivp
from lattice import load

case, mode, out = sys.argv[1:4]
rtol, atol = (float(sys.argv[4]), float(sys.argv[5])) if len(sys.argv) > 5 else (1e-6, 1e-10)
meta, M, vol, fin, fout = load(case)
KF, KR, KS = 1e6, 2.5e5, .8
n = len(vol)
L = np.kron(M.toarray(), np.eye(4))
S = np.kron(fin / vol, [1.0, 0, .7, 0])
F = np.kron(np.eye(n), [[-KF, KR, 0, 0], [KF, -KR, 0, 0], [0, 0, 0, 0], [0, 0, 0, 0]])
L += F
ib, ic, idd = np.arange(n) * 4 + 1, np.arange(n) * 4 + 2, np.arange(n) * 4 + 3


def rhs(t, y):
    d = L @ y + S
    r = KS * y[ib] * y[ic]
    d[ib] -= r
    d[ic] -= r
    d[idd] += r
    return d


def jac(t, y):
    J = L.copy()
    b, c = KS * y[ib], KS * y[ic]
    for rows, s in ((ib, -1), (ic, -1), (idd, 1)):
        J[rows, ib] += s * c
        J[rows, ic] += s * b
    return J


T = 4000 * (np.arange(200) / 199) ** 3
t0 = time.perf_counter()
s = solve_ivp(rhs, (0, 4000), np.zeros(4 * n), mode, T, rtol=rtol, atol=atol, jac=jac)
el = time.perf_counter() - t0
with open(out, 'w') as f:
    f.write('t_min,A,B,C,D\n' + ''.join('%.17g,%.17g,%.17g,%.17g,%.17g\n' % ((t,) + tuple(y)) for t, y in zip(T, s.y[44:48].T)))
print(json.dumps(dict(peak_kB=resource.getrusage(resource.RUSAGE_SELF).ru_maxrss, peer='scipy ' + mode, rtol=rtol, solve_s=el, rhs=int(s.nfev), lu=int(s.nlu), ok=bool(s.success))))
