"""P2 peers in SciPy. usage: p2_scipy.py CASEDIR bdf|expm|rk45|dop853 OUT.csv"""
import json
import resource
import sys
import time
import numpy as np
from scipy.integrate import solve_ivp
from scipy.sparse.linalg import expm_multiply
from lattice import load

case, mode, out = sys.argv[1:4]
t0 = time.perf_counter()
meta, M, vol, fin, fout = load(case)
read = time.perf_counter() - t0
Q, V = fin.sum(), vol.sum()
T = np.arange(200) * 3 * V / Q / 199
c0 = fin / Q / vol
t0 = time.perf_counter()
info = {}
if mode == 'bdf':
    Mc = M.tocsc()
    s = solve_ivp(lambda t, y: M @ y, (0, T[-1]), c0, 'BDF', T, rtol=1e-6, atol=1e-9 / V, jac=Mc)
    E = fout @ s.y
    info = dict(rhs=int(s.nfev), lu=int(s.nlu))
elif mode in ('rk45', 'dop853'):
    s = solve_ivp(lambda t, y: M @ y, (0, T[-1]), c0, mode.upper(), T, rtol=1e-6, atol=1e-9 / V)
    E = fout @ s.y
    info = dict(rhs=int(s.nfev))
elif mode == 'expm':
    X = expm_multiply(M.tocsc(), c0, 0, T[-1], num=200, endpoint=True, traceA=M.diagonal().sum())
    E = X @ fout
el = time.perf_counter() - t0
with open(out, 'w') as f:
    f.write('t_min,E_per_min\n' + ''.join('%.17g,%.17g\n' % r for r in zip(T, E)))
print(json.dumps(dict(peak_kB=resource.getrusage(resource.RUSAGE_SELF).ru_maxrss, peer='scipy ' + {'bdf': 'solve_ivp BDF, sparse Jacobian', 'expm': 'expm_multiply', 'rk45': 'solve_ivp RK45', 'dop853': 'solve_ivp DOP853'}[mode], N=len(vol),
                      nnz=int(M.nnz), read_s=read, solve_s=el, **info)))
