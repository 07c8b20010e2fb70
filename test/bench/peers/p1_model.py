"""Shared by the P1/P5 scripts: reads the case, holds start values and bounds, reports."""
import csv
import json
import os
import numpy as np

HERE = os.path.dirname(os.path.abspath(__file__))
DATA = os.path.join(HERE, '..', '..', 'fit', 'p1', 'p1-data.csv')
NAMES = ['b', 'V1', 'V3', 'qx', 'a0', 'a1']


def load():
    meta = json.load(open(os.path.join(HERE, 'p1_case.json')))
    rows = list(csv.reader(open(DATA)))[1:]
    d = np.array(rows, float)
    g = lambda k: np.array([meta[k][n] for n in NAMES])
    return meta, d[:, 0], d[:, 1], g('start'), g('lower'), g('upper')


def std_errors(J, r):
    s2 = float(r @ r) / (len(r) - J.shape[1])
    return np.sqrt(np.diag(s2 * np.linalg.inv(J.T @ J)))
