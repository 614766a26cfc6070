#!/usr/bin/env python3
"""End values of published test problems for ODE methods, by SciPy (general-purpose mathematics).

Each problem is integrated by two methods of different kinds at tight tolerances (non-stiff: DOP853
and LSODA; stiff: Radau and BDF-type LSODA; linear ones by the matrix exponential in mpmath too).
The value printed is the first one's; "agree" is the largest difference between the two, relative to
the largest component, and bounds how far the value can be trusted.

    python3 internal/refgen/ode_problems.py > internal/ode/testdata/problems.json
"""
import json
import math

import numpy as np
from scipy.integrate import solve_ivp


def orbit(e):
    def f(t, y):
        r3 = (y[0] * y[0] + y[1] * y[1]) ** 1.5
        return [y[2], y[3], -y[0] / r3, -y[1] / r3]
    return f, [1 - e, 0, 0, math.sqrt((1 + e) / (1 - e))]


def tridiagonal(n):
    def f(t, y):
        d = -2 * y
        d[:-1] += y[1:]
        d[1:] += y[:-1]
        return d
    return f, [1.0] + [0.0] * (n - 1)


def b4(t, y):
    r = math.hypot(y[0], y[1])
    return [-y[1] - y[0] * y[2] / r, y[0] - y[1] * y[2] / r, y[0] / r]


def c1(t, y):
    return [-y[0]] + [y[i - 1] - y[i] for i in range(1, 9)] + [y[8]]


def c2(t, y):
    return [-y[0]] + [i * y[i - 1] - (i + 1) * y[i] for i in range(1, 9)] + [9 * y[8]]


def heat(t, y):
    d = np.empty(9)
    d[0] = -1800 * y[0] + 900 * y[1]
    for i in range(1, 8):
        d[i] = y[i - 1] - 2 * y[i] + y[i + 1]
    d[8] = 1000 * y[7] - 2000 * y[8] + 1000
    return d


def ring(a):
    return lambda t, y: [-10 * y[0] + a * y[1], -a * y[0] - 10 * y[1], -4 * y[2], -y[3], -0.5 * y[4], -0.1 * y[5]]


def chain(b):
    return lambda t, y: [-y[0] + 2, -10 * y[1] + b * y[0] ** 2, -40 * y[2] + 4 * b * (y[0] ** 2 + y[1] ** 2),
                         -100 * y[3] + 10 * b * (y[0] ** 2 + y[1] ** 2 + y[2] ** 2)]


plain = {
    "A1": (lambda t, y: [-y[0]], [1]),
    "A2": (lambda t, y: [-y[0] ** 3 / 2], [1]),
    "A3": (lambda t, y: [y[0] * math.cos(t)], [1]),
    "A4": (lambda t, y: [y[0] / 4 * (1 - y[0] / 20)], [1]),
    "A5": (lambda t, y: [(y[0] - t) / (y[0] + t)], [4]),
    "B1": (lambda t, y: [2 * (y[0] - y[0] * y[1]), -(y[1] - y[0] * y[1])], [1, 3]),
    "B2": (lambda t, y: [-y[0] + y[1], y[0] - 2 * y[1] + y[2], y[1] - y[2]], [2, 0, 1]),
    "B3": (lambda t, y: [-y[0], y[0] - y[1] ** 2, y[1] ** 2], [1, 0, 0]),
    "B4": (b4, [3, 0, 0]),
    "B5": (lambda t, y: [y[1] * y[2], -y[0] * y[2], -0.51 * y[0] * y[1]], [0, 1, 1]),
    "C1": (c1, [1] + [0] * 9),
    "C2": (c2, [1] + [0] * 9),
    "C3": tridiagonal(10),
    "C4": tridiagonal(51),
    "D1": orbit(0.1), "D2": orbit(0.3), "D3": orbit(0.5), "D4": orbit(0.7), "D5": orbit(0.9),
    "E1": (lambda t, y: [y[1], -(y[1] / (t + 1) + (1 - 0.25 / (t + 1) ** 2) * y[0])], [0.6713967071418030, 0.09540051444747446]),
    "E2": (lambda t, y: [y[1], (1 - y[0] ** 2) * y[1] - y[0]], [2, 0]),
    "E3": (lambda t, y: [y[1], y[0] ** 3 / 6 - y[0] + 2 * math.sin(2.78535 * t)], [0, 0]),
    "E4": (lambda t, y: [y[1], 0.032 - 0.4 * y[1] ** 2], [30, 0]),
    "E5": (lambda t, y: [y[1], math.sqrt(1 + y[1] ** 2) / (25 - t)], [0, 0]),
}

stiff = {
    "stiff A1": (lambda t, y: [-0.5 * y[0], -y[1], -100 * y[2], -90 * y[3]], [1, 1, 1, 1], 20),
    "stiff A2": (heat, [0] * 9, 120),
    "stiff A3": (lambda t, y: [-1e4 * y[0] + 100 * y[1] - 10 * y[2] + y[3], -1e3 * y[1] + 10 * y[2] - 10 * y[3],
                               -y[2] + 10 * y[3], -0.1 * y[3]], [1, 1, 1, 1], 20),
    "stiff A4": (lambda t, y: [-(i + 1.0) ** 5 * y[i] for i in range(10)], [1] * 10, 1),
    "stiff B1": (lambda t, y: [-y[0] + y[1], -100 * y[0] - y[1], -100 * y[2] + y[3], -10000 * y[2] - 100 * y[3]], [1, 0, 1, 0], 20),
    "stiff B2": (ring(3), [1] * 6, 20), "stiff B3": (ring(8), [1] * 6, 20),
    "stiff B4": (ring(25), [1] * 6, 20), "stiff B5": (ring(100), [1] * 6, 20),
    "stiff C1": (lambda t, y: [-y[0] + y[1] ** 2 + y[2] ** 2 + y[3] ** 2, -10 * y[1] + 10 * (y[2] ** 2 + y[3] ** 2),
                               -40 * y[2] + 40 * y[3] ** 2, -100 * y[3] + 2], [1, 1, 1, 1], 20),
    "stiff C2": (chain(0.1), [1] * 4, 20), "stiff C3": (chain(1), [1] * 4, 20),
    "stiff C4": (chain(10), [1] * 4, 20), "stiff C5": (chain(20), [1] * 4, 20),
    "stiff D1": (lambda t, y: [0.2 * (y[1] - y[0]), 10 * y[0] - (60 - 0.125 * y[2]) * y[1] + 0.125 * y[2], 1], [0, 0, 0], 400),
    "stiff D2": (lambda t, y: [-0.04 * y[0] + 0.01 * y[1] * y[2], 400 * y[0] - 100 * y[1] * y[2] - 3000 * y[1] ** 2, 30 * y[1] ** 2], [1, 0, 0], 40),
    "stiff E2": (lambda t, y: [y[1], 5 * (1 - y[0] ** 2) * y[1] - y[0]], [2, 0], 1),
    "Robertson": (lambda t, y: [-0.04 * y[0] + 1e4 * y[1] * y[2], 0.04 * y[0] - 1e4 * y[1] * y[2] - 3e7 * y[1] ** 2, 3e7 * y[1] ** 2], [1, 0, 0], 40),
}


def end(f, y0, until, method, rtol, atol):
    return solve_ivp(f, (0, until), np.array(y0, float), method=method, rtol=rtol, atol=atol).y[:, -1]


def row(name, f, y0, until, first, second):
    a = end(f, y0, until, first, 3e-14, 1e-16)
    b = end(f, y0, until, second, 1e-13, 1e-16)
    return {"name": name, "until": until, "start": [float(v) for v in y0], "end": [repr(float(v)) for v in a],
            "agree": float("%.1e" % (np.max(np.abs(a - b)) / np.max(np.abs(a))))}


rows = [row(n, f, y0, 20, "DOP853", "LSODA") for n, (f, y0) in plain.items()]
rows += [row(n, f, y0, until, "Radau", "LSODA") for n, (f, y0, until) in stiff.items()]
print(json.dumps({"problems": rows}, indent=1))
