"""P1 peer: the ordinary script. Tube as 50 tanks, solve_ivp LSODA, least_squares with its default derivatives."""
import json
import resource
import time
import numpy as np
from scipy.integrate import solve_ivp
from scipy.optimize import least_squares
from p1_model import load, std_errors, NAMES

meta, t, c, x0, lo, hi = load()
P = meta['truth']
Q, VT, T = P['Q'], P['Vtot'], P['pulse_min']
CIN = P['dose_g'] / (Q * T)
NC = 50
nfev = 0


def model(p):
    global nfev
    nfev += 1
    b, V1, V3, qx, a0, a1 = p
    qm = Q * (1 - b)
    V2 = VT - V1 - V3
    k = qm / (V1 / NC)

    def rhs(tt, y, cin):
        d = np.empty(NC + 2)
        d[0] = k * (cin - y[0])
        d[1:NC] = k * (y[:NC - 1] - y[1:NC])
        d[NC] = (qm * y[NC - 1] - (qm + qx) * y[NC] + qx * y[NC + 1]) / V2
        d[NC + 1] = qx * (y[NC] - y[NC + 1]) / V3
        return d
    first = t[t < T]
    s1 = solve_ivp(rhs, (0, T), np.zeros(NC + 2), 'LSODA', np.append(first, T), args=(CIN,), rtol=1e-8, atol=1e-11)
    s2 = solve_ivp(rhs, (T, t[-1]), s1.y[:, -1], 'LSODA', t[t >= T], args=(0.0,), rtol=1e-8, atol=1e-11)
    c2 = np.concatenate([s1.y[NC, :len(first)], s2.y[NC]])
    return b * CIN * (t < T) + (1 - b) * c2 + a0 + a1 * t


t0 = time.perf_counter()
sol = least_squares(lambda p: model(p) - c, x0, bounds=(lo, hi), method='trf', x_scale=[.1, 100, 100, 1, 1e-3, 1e-6],
                    ftol=1e-12, xtol=1e-12, gtol=1e-12)
el = time.perf_counter() - t0
se = std_errors(sol.jac, sol.fun)
print(json.dumps(dict(peak_kB=resource.getrusage(resource.RUSAGE_SELF).ru_maxrss, peer='scipy practitioner: 50 cells, LSODA, trf', fit_s=el, iterations=int(sol.njev), model_evals=nfev,
                      ssr=2 * sol.cost, params=dict(zip(NAMES, sol.x)), stderr=dict(zip(NAMES, se)), status=int(sol.status))))
