"""P5 peer: 500 bootstrap refits of P1 with the expert script on 2 processes.
Replicate r: seed the case generator's random source with 1000+r, draw 200 indices floor(200*u) with replacement from the
centred residuals of the optimum, add them to the fitted curve, refit from the optimum.
usage: p5_bootstrap.py [PROCESSES] [REPLICATES] [--multistart]"""
import json
import os
import resource
import sys
import time
from multiprocessing import Pool
import numpy as np
from p1_model import load, NAMES
from p1_expert_fit import make, fit

ARGS = [a for a in sys.argv[1:] if not a.startswith('-')]
NP = int(ARGS[0]) if ARGS else 2
NB = int(ARGS[1]) if len(ARGS) > 1 else 500
MULTI = '--multistart' in sys.argv
meta, t, c, x0, lo, hi = load()
model = make(meta, t)


def best(data, tol):
    top = []
    for v1 in np.arange(10, 480, 20):
        x = x0.copy()
        x[1] = v1
        top.append(fit(model, data, x, lo, hi, 1e-4))
    top.sort(key=lambda r: r.cost)
    return min((fit(model, data, r.x, lo, hi, tol) for r in top[:3]), key=lambda r: r.cost)


BASE = best(c, 1e-12)
RES = -BASE.fun
RES = RES - RES.mean()
FIT = c + BASE.fun


def one(r):
    s = 1000 + r
    for _ in range(10):
        s = 48271 * s % 2147483647
    idx = np.empty(len(t), int)
    for i in range(len(t)):
        s = 48271 * s % 2147483647
        idx[i] = int(len(t) * (s / 2147483647))
    d = FIT + RES[idx]
    q = best(d, 1e-10) if MULTI else fit(model, d, BASE.x, lo, hi, 1e-10)
    return np.append(q.x, 2 * q.cost)


if __name__ == '__main__':
    t0 = time.perf_counter()
    if NP == 1:
        X = [one(r) for r in range(NB)]
    else:
        with Pool(NP) as pool:
            X = pool.map(one, range(NB), 10)
    el = time.perf_counter() - t0
    X = np.array(X)
    S = X[:, :6]
    q = np.percentile(S, [2.5, 50, 97.5], axis=0)
    print(json.dumps(dict(peak_kB=resource.getrusage(resource.RUSAGE_SELF).ru_maxrss, peer='scipy expert bootstrap, %d process(es)%s' % (NP, ', 24 starts each' if MULTI else ''), replicates=NB, solve_s=el,
                          ms_per_refit=1e3 * el / NB, sd=dict(zip(NAMES, S.std(0, ddof=1))), p2_5=dict(zip(NAMES, q[0])),
                          median=dict(zip(NAMES, q[1])), p97_5=dict(zip(NAMES, q[2])), mean_ssr=float(X[:, 6].mean()))))
