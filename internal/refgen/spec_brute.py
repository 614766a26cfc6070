#!/usr/bin/env python3
"""Random loops, sheets and gains judged by brute force, for spec/testdata/brute.json.

Independent of the Go code: closed-loop poles and residues in 40 digits (numpy's eigenvalues,
then Newton's method in mpmath), the step response as the sum of its modes in extended
precision (64 bits of mantissa), sampled densely, every extremum and crossing bisected;
margins by a dense sweep of frequencies with bisection; stability by the poles.

usage: spec_brute.py SEED CASES GAINS [SECONDS] > brute.json
"""
import json
import math
import random
import sys
import time

import numpy as np
from mpmath import mp, mpf, mpc, pi, sqrt, arg

mp.dps = 40
X, XC = np.longdouble, np.clongdouble


def horner(p, x):
    y = 0 * x
    for c in p:
        y = y * x + c
    return y


def multiply(a, b):
    out = [0.0] * (len(a) + len(b) - 1)
    for i, x in enumerate(a):
        for j, y in enumerate(b):
            out[i + j] += x * y
    return out


def short(x):
    return float("%.4g" % x)


def random_poly(r, order):
    p = [1.0]
    while order > 0:
        w = 10 ** r.uniform(-1, 1)
        if order >= 2 and r.random() < 0.5:
            z = r.choice([0.1, 0.3, 0.7, 1.2]) * r.uniform(0.7, 1.3)
            p = multiply(p, [1.0, 2 * z * w, w * w])
            order -= 2
        else:
            p = multiply(p, [1.0, w])
            order -= 1
    return p


class Closed:
    """Unity feedback around k*C*G, at one gain."""

    def __init__(self, num, den, cn, cd, k):
        m = lambda p: [mpf(x) for x in p]
        conv = lambda a, b: [sum((a[i] * b[n - i] for i in range(len(a)) if 0 <= n - i < len(b)), mpf(0)) for n in range(len(a) + len(b) - 1)]
        num, den, cn, cd = m(num), m(den), m(cn), m(cd)
        self.k = mpf(k)
        self.N, self.D = conv(num, cn), conv(den, cd)
        pad = [mpf(0)] * (len(self.D) - len(self.N)) + [self.k * x for x in self.N]
        self.P = [a + b for a, b in zip(self.D, pad)]
        self.y = [self.k * x for x in self.N]
        self.u = [self.k * x for x in conv(cn, den)]
        while self.P[0] == 0:
            self.P = self.P[1:]
        dP = [c * (len(self.P) - 1 - i) for i, c in enumerate(self.P[:-1])]
        self.poles = []
        for z in np.roots(np.array([float(x) for x in self.P])):
            z = mpc(complex(z))
            for _ in range(7):
                z -= horner(self.P, z) / horner(dP, z)
            if abs(horner(self.P, z)) > mpf(10) ** -30 * sum(abs(c) * abs(z) ** (len(self.P) - 1 - i) for i, c in enumerate(self.P)):
                raise ValueError("root not found")
            self.poles.append(z)
        for i, p in enumerate(self.poles):
            if any(abs(p - q) < mpf(10) ** -5 * abs(p) for q in self.poles[:i]):
                raise ValueError("nearly equal roots")
        self.stable = len(self.P) == len(self.D) and all(p.real < 0 for p in self.poles)

    def modes(self, numerator):
        lead = self.P[0]
        out = []
        for i, p in enumerate(self.poles):
            d = lead * p
            for j, q in enumerate(self.poles):
                if j != i:
                    d *= p - q
            out.append((horner(numerator, p) / d, p))
        final = numerator[-1] / self.P[-1]
        return final, out


def extended(z):
    """An mpmath number in 64 bits."""
    def real(x):
        hi = float(x)
        return X(hi) + X(float(x - mpf(hi)))
    return real(z.real) + XC(1j) * real(z.imag)


class Step:
    def __init__(self, final, modes):
        self.final = X(float(final)) + X(float(final - mpf(float(final))))
        self.w = np.array([extended(mpc(w)) for w, _ in modes], dtype=XC)
        self.p = np.array([extended(mpc(p)) for _, p in modes], dtype=XC)
        aw, ap, sigma = np.abs(self.w).astype(float), np.abs(self.p).astype(float), -self.p.real.astype(float)
        size = float(aw.sum())
        slow = float(sigma.min())
        self.horizon = math.log(max(size / max(1e-9, abs(float(final))), 1) * 1e7) / slow
        grid, t = [0.0], 0.0
        while t < self.horizon:
            live = aw * np.exp(-sigma * t) > 1e-12 * size
            rate = float(ap[live].max()) if live.any() else slow
            chunk = t + np.arange(1, 65) / (10 * rate)
            grid.extend(chunk.tolist())
            t = grid[-1]
            if len(grid) > 12000:
                raise ValueError("too many samples")
        self.t = np.array(grid, dtype=X)
        # The signs of the slope in 53 bits find the brackets; the figures come from 64.
        self.d = (np.exp(np.outer(self.t.astype(float), self.p.astype(complex))) @ (self.w * self.p).astype(complex)).real

    def modes(self, t):
        return np.exp(np.outer(np.atleast_1d(t), self.p))

    def at(self, t):
        return self.final + (self.modes(t) @ self.w).real

    def slope(self, t):
        return (self.modes(t) @ (self.w * self.p)).real

    @staticmethod
    def bisect(f, a, b):
        """Vectors of brackets with a sign change."""
        a, b = np.atleast_1d(a).astype(X).copy(), np.atleast_1d(b).astype(X).copy()
        up = f(a) > 0
        for _ in range(64):
            m = (a + b) / 2
            same = (f(m) > 0) == up
            a, b = np.where(same, m, a), np.where(same, b, m)
        return (a + b) / 2

    def extrema(self):
        if hasattr(self, "_extrema"):
            return self._extrema
        first = 1 if abs(self.d[0]) < 1e-12 else 0
        idx = np.nonzero(self.d[first:-1] * self.d[first + 1:] < 0)[0] + first
        t = self.bisect(self.slope, self.t[idx], self.t[idx + 1]) if len(idx) else np.array([], dtype=X)
        t = np.concatenate([[X(0)], t])
        self._extrema = (t, self.at(t))
        return self._extrema

    def figures(self, bands):
        s = X(1) if self.final > 0 else X(-1)
        yf = abs(self.final)
        t, v = self.extrema()
        f = {}
        i = int(np.argmax(s * v))
        over = s * v[i] / yf - 1
        f["overshoot_max"] = max(over, X(0)) if over > 1e-9 else X(0)
        f["peak_time_max"] = t[i] if over > 1e-9 else None
        f["undershoot_max"] = max(X(0), -(s * v).min() / yf)
        knots = np.concatenate([t, [self.t[-1]]])
        values = s * np.concatenate([v, self.at(self.t[-1])]) / yf

        def first(level):
            if values[0] >= level:
                return X(0)
            j = int(np.nonzero(values >= level)[0][0])
            return self.bisect(lambda t: s * self.at(t) / yf - level, knots[j - 1], knots[j])[0]

        f["rise_10_90_max"] = first(X(9) / 10) - first(X(1) / 10)
        for name, band in bands.items():
            out = np.nonzero(np.abs(values - 1) > band)[0]
            j = int(out[-1]) if len(out) else -1
            if j < 0:
                f[name] = X(0)
            elif j == len(knots) - 1:
                raise ValueError("horizon")
            else:
                f[name] = self.bisect(lambda t: abs(self.at(t) / self.final - 1) - X(band), knots[j], knots[j + 1])[0]
        return f


def margins(c):
    """Gain margin (increase), smallest |arg(-L)|, sensitivity peak, by sweep and refinement."""
    N, D, k = c.N, c.D, c.k
    n64 = np.array([float(x) for x in N]); d64 = np.array([float(x) for x in D])
    w = np.exp(np.linspace(math.log(1e-3), math.log(1e3), 6001))
    s = 1j * w
    L = float(k) * horner(n64, s) / horner(d64, s)
    at = lambda x: k * horner(N, mpc(0, x)) / horner(D, mpc(0, x))
    f = {}
    gm = None
    im = L.imag
    for i in np.nonzero((im[:-1] * im[1:] < 0) & (L.real[:-1] < 0))[0]:
        x = refine(lambda x: at(x).imag, w[i], w[i + 1])
        g = -1 / at(x).real
        if g > 1 and (gm is None or g < gm):
            gm = g
    pm = None
    mag = np.abs(L) - 1
    for i in np.nonzero(mag[:-1] * mag[1:] < 0)[0]:
        x = refine(lambda x: abs(at(x)) - 1, w[i], w[i + 1])
        a = abs(arg(-at(x)))
        if pm is None or a < pm:
            pm = a
    S = np.abs(1 / (1 + L))
    best = mpf(1)
    for i in range(1, len(w) - 1):
        if S[i] >= S[i - 1] and S[i] >= S[i + 1] and S[i] > 0.98 * S.max():
            a, b = mpf(w[i - 1]), mpf(w[i + 1])
            g = (sqrt(mpf(5)) - 1) / 2
            h = lambda x: abs(1 / (1 + at(x)))
            x, y = b - g * (b - a), a + g * (b - a)
            hx, hy = h(x), h(y)
            for _ in range(70):
                if hx > hy:
                    b, y, hy = y, x, hx
                    x = b - g * (b - a); hx = h(x)
                else:
                    a, x, hx = x, y, hy
                    y = a + g * (b - a); hy = h(y)
            best = max(best, hx, hy)
    best = max(best, abs(1 / (1 + at(mpf("1e-30")))) if D[-1] != 0 else mpf(0))
    f["gain_margin_min_db"] = gm
    f["phase_margin_min_deg"] = pm
    f["sensitivity_peak_max"] = best
    return f


def refine(f, a, b):
    a, b = mpf(float(a)), mpf(float(b))
    fa = f(a)
    for _ in range(90):
        m = (a + b) / 2
        if (f(m) > 0) == (fa > 0):
            a = m
        else:
            b = m
    return (a + b) / 2


BANDS = {"settling_2_percent_max": 0.02, "settling_5_percent_max": 0.05}


def evaluate(case, k):
    """Stable, and every figure."""
    c = Closed(case["num"], case["den"], case["cn"], case["cd"], k)
    if not c.stable:
        return None
    final, modes = c.modes(c.y)
    f = {}
    if final != 0:
        f.update(Step(final, modes).figures(BANDS))
    f["step_error_max"] = abs(1 - final)
    if "effort_max" in case["want"]:
        fu, mu = c.modes(c.u)
        st = Step(fu, mu)
        f["effort_max"] = max(abs(st.extrema()[1]).max(), abs(st.final))
    if case["want"] & {"gain_margin_min_db", "phase_margin_min_deg", "sensitivity_peak_max"}:
        f.update(margins(c))
    return f


def met(sheet, f):
    """True, False, or None if a figure is within 1e-7 of its limit."""
    verdict = True
    for name, text in sheet.items():
        limit = mpf(float(text))
        if name == "gain_margin_min_db":
            limit = mpf(10) ** (limit / 20)
        if name == "phase_margin_min_deg":
            limit = limit * pi / 180
        x = f.get(name)
        if name in ("gain_margin_min_db", "phase_margin_min_deg"):
            if x is None:
                continue
            slack = x - limit
        else:
            if x is None:
                verdict = False
                continue
            slack = limit - (x if isinstance(x, mpf) else mpf(float(x)) + mpf(float(x - type(x)(float(x)))))
        if abs(slack) < mpf(10) ** -7 * max(abs(limit), mpf(10) ** -3):
            return None
        if slack < 0:
            verdict = False
    return verdict


def main():
    seed, cases, gains = (int(x) for x in sys.argv[1:4])
    r = random.Random(seed)
    until = time.time() + (float(sys.argv[4]) if len(sys.argv) > 4 else 1e9)
    out = []
    while len(out) < cases and time.time() < until:
        order = r.choice([2, 3, 3, 4, 4, 5, 6, 7, 8])
        controller = r.random() < 0.4 and order > 2
        cn, cd = [1.0], [1.0]
        if controller:
            order -= 1
            z, p = 10 ** r.uniform(-0.7, 0.7), 10 ** r.uniform(-0.2, 1.2)
            cn, cd = ([1.0, short(z)], [1.0, short(p)]) if r.random() < 0.6 else ([1.0, short(z)], [1.0, 0.0])
        if r.random() < 0.5:
            den = multiply([1.0, 0.0], random_poly(r, order - 1))
        else:
            den = random_poly(r, order)
        num = [1.0]
        if order > 2 and r.random() < 0.3:
            num = [r.choice([-0.3, 0.5]) * 10 ** r.uniform(-0.5, 0.5), 1.0]
        scale = den[-1] if den[-1] != 0 else den[-2]
        num, den = [short(x * scale) for x in num], [short(x) for x in den]
        pool = ["overshoot_max", "undershoot_max", "rise_10_90_max", "peak_time_max", "settling_2_percent_max", "settling_5_percent_max",
                "step_error_max", "effort_max", "gain_margin_min_db", "phase_margin_min_deg", "sensitivity_peak_max"]
        names = r.sample(pool, r.choice([1, 2, 2, 3, 4]))
        case = {"num": num, "den": den, "cn": cn, "cd": cd, "want": set(names)}
        # limits near what a stable gain reaches, so that they matter
        f = None
        for _ in range(30):
            k0 = 10 ** r.uniform(-1.5, 1.5)
            try:
                f = evaluate(case, short(k0))
            except Exception:
                f = None
            if f:
                break
        if not f:
            continue
        sheet = {}
        for n in names:
            x = f.get(n)
            if x is None or float(x) < 1e-6:
                x = {"gain_margin_min_db": mpf(2), "phase_margin_min_deg": mpf("0.7")}.get(n, mpf("0.1"))
            x = float(x)
            if n == "gain_margin_min_db":
                x = max(0.5, 20 * math.log10(max(x, 1.01)) * r.uniform(0.6, 1.1))
            elif n == "phase_margin_min_deg":
                x = min(90, math.degrees(x) * r.uniform(0.6, 1.1))
            elif n == "sensitivity_peak_max":
                x = max(1.01, x * r.uniform(0.95, 1.4))
            else:
                x *= r.uniform(0.8, 1.6)
            sheet[n] = "%.4g" % x
        entries = []
        tries = 0
        while len(entries) < gains and tries < 3 * gains:
            tries += 1
            k = short(k0 * 10 ** r.uniform(-1, 1)) if r.random() < 0.7 else short(k0 * r.uniform(0.7, 1.4))
            try:
                f = evaluate(case, k)
                verdict = False if f is None else met(sheet, f)
            except Exception:
                continue
            if verdict is None:
                continue
            entries.append({"k": repr(k), "met": bool(verdict)})
        if entries:
            out.append({"numerator": [repr(x) for x in num], "denominator": [repr(x) for x in den], "controller_numerator": [repr(x) for x in cn],
                        "controller_denominator": [repr(x) for x in cd], "sheet": sheet, "gains": entries})
    json.dump({"origin": "internal/refgen/spec_brute.py %d %d %d" % (seed, cases, gains), "cases": out}, sys.stdout, indent=0)


main()
