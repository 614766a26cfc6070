#!/usr/bin/python3
"""Step responses whose modes nearly cancel, for timeresp/testdata/hard.json.

Each function is gain/prod(s - p) or polynomials, every number a float64 taken exactly. Values are sums of
exponentials in 600-digit arithmetic (repeated poles by divided differences as Taylor coefficients), checked
at some times against a matrix exponential of the companion form.
"""
import json
import sys
from mpmath import mp, mpf, mpc

mp.dps = 700


def F(x):
    return mpf(float(x))


def poly_from_roots(roots):
    c = [mpc(1)]
    for r in roots:
        n = [mpc(0)] * (len(c) + 1)
        for i, a in enumerate(c):
            n[i] += a
            n[i + 1] -= a * r
        c = n
    return c  # highest first


def horner(c, x):
    y = mpc(0)
    for a in c:
        y = y * x + a
    return y


def series_div(a, d, m):
    a = list(a)
    for _ in range(m):
        a[0] = a[0] / d
        for k in range(1, len(a)):
            a[k] = (a[k] - a[k - 1]) / d
    return a


def taylor(c, p, n):
    c = list(c)
    out = []
    for k in range(n):
        if not c:
            out.append(mpc(0))
            continue
        for i in range(1, len(c)):
            c[i] += c[i - 1] * p
        out.append(c.pop())
    return out


def modal(num, poles):
    """num highest first; poles [(p, m)], monic denominator. Returns terms (p, [coefficients of t^k])."""
    terms = []
    for i, (p, m) in enumerate(poles):
        a = taylor(num, p, m)
        for j, (q, n) in enumerate(poles):
            if j != i:
                a = series_div(a, p - q, n)
        a = a[::-1]
        f = mpf(1)
        for k in range(m):
            if k > 1:
                f *= k
            a[k] = a[k] / f
        terms.append((p, a))
    return terms


def value(terms, t):
    y = mpc(0)
    for p, a in terms:
        if mp.re(p) * t < -5000:
            continue
        y += mp.exp(p * t) * horner(a[::-1], t)
    return mp.re(y)


def by_matrix(num, den, t):
    """Impulse response of num/den (den monic, highest first) by scaling, Taylor and squaring."""
    n = len(den) - 1
    A = mp.matrix(n, n)
    for i in range(n - 1):
        A[i, i + 1] = 1
    for j in range(n):
        A[n - 1, j] = -mp.re(den[n - j])
    b = mp.matrix(n, 1)
    b[n - 1] = 1
    scale = max(abs(A[n - 1, j]) for j in range(n)) + 1
    k = int(mp.log(scale * t, 2)) + 10
    M = A * (t / mpf(2) ** k)
    E = mp.eye(n)
    T = mp.eye(n)
    for i in range(1, 120):
        T = T * M / i
        E = E + T
    for _ in range(k):
        E = E * E
    x = E * b
    y = mpf(0)
    m = len(num) - 1
    for i, c in enumerate(num):
        y += mp.re(c) * x[m - i]
    return y


def case(name, times, zeros=(), gain=1.0, poles=None, numerator=None, denominator=None, kind="step", check=1):
    extra = {"step": 1, "impulse": 0, "ramp": 2}[kind]
    out = {"id": name, "input": kind}
    if poles is not None:
        out["gain"] = repr(float(gain))
        out["zeros"] = [[repr(float(complex(z).real)), repr(float(complex(z).imag))] for z in zeros]
        out["poles"] = [[repr(float(complex(p).real)), repr(float(complex(p).imag)), m] for p, m in poles]
        plist = [(mpc(F(complex(p).real), F(complex(p).imag)), m) for p, m in poles]
        num = [F(gain) * c for c in poly_from_roots([mpc(F(complex(z).real), F(complex(z).imag)) for z in zeros])]
    else:
        out["numerator"] = [repr(float(c)) for c in numerator]
        out["denominator"] = [repr(float(c)) for c in denominator]
        lead = F(denominator[0])
        num = [F(c) / lead for c in numerator]
        den = [F(c) / lead for c in denominator]
        roots = mp.polyroots(den, maxsteps=5000, extraprec=6000)
        plist = []
        for r in roots:
            if abs(mp.im(r)) < mpf(10) ** -300 * abs(r):
                r = mpc(mp.re(r), 0)
            plist.append((r, 1))
    full = list(plist)
    if extra:
        at = [i for i, (p, m) in enumerate(full) if p == 0]
        if at:
            full[at[0]] = (full[at[0]][0], full[at[0]][1] + extra)
        else:
            full.append((mpc(0), extra))
    terms = modal(num, full)
    if poles is not None or True:
        den = poly_from_roots([p for p, m in full for _ in range(m)])
    vals = []
    for i, t in enumerate(times):
        v = value(terms, F(t))
        if i < check:
            w = by_matrix(num, den, F(t))
            assert abs(v - w) <= abs(v) * mpf(10) ** -40, (name, t, v, w)
        vals.append(mp.nstr(v, 30))
    out["times"] = [repr(float(t)) for t in times]
    out["values"] = vals
    print(name, file=sys.stderr)
    return out


def grid(lo, hi, n):
    return [float("%.4g" % (lo * (hi / lo) ** (i / (n - 1)))) for i in range(n)]


cases = []
# Twenty states, time constants from 1e-6 to 1e3 s.
lags = [-float("%.6g" % (10 ** (6 - 9 * i / 19))) for i in range(20)]
g = 1.0
for p in lags:
    g *= -p
cases.append(case("twenty-lags-nine-decades", grid(1e-8, 2e4, 60), gain=g, poles=[(p, 1) for p in lags]))
cases.append(case("twenty-states-zeros-between", grid(1e-8, 2e4, 60), zeros=[p * 1.5 for p in lags[1:19]], gain=1e9, poles=[(p, 1) for p in lags]))
cases.append(case("twenty-states-ramp", grid(1e-8, 2e4, 40), gain=g, poles=[(p, 1) for p in lags], kind="ramp"))
stiffpairs = []
for i in range(10):
    w = 10 ** (6 - i)
    stiffpairs += [(complex(-0.3 * w, w), 1), (complex(-0.3 * w, -w), 1)]
cases.append(case("ten-pairs-nine-decades", grid(1e-8, 2e4, 60), gain=1e30, poles=stiffpairs))
# Eight poles that nearly coincide.
for e in (1e-3, 1e-6, 1e-9, 1e-13):
    cases.append(case("eight-near-minus-one-%g" % e, grid(1e-2, 60, 40), gain=1.0, poles=[(-1 - k * e, 1) for k in range(8)]))
cases.append(case("eight-near-and-fast", grid(1e-6, 60, 50), gain=1e12, poles=[(-1 - k * 1e-5, 1) for k in range(8)] + [(-1e4, 3)]))
cases.append(case("eight-equal-and-fast", grid(1e-6, 60, 50), gain=1e12, poles=[(-1, 8), (-1e4, 3)]))
# Light modes that nearly coincide, alone and beside a fast lag.
a, b = complex(-1e-3, 1), complex(-1e-3, 1 + 1e-6)
cases.append(case("light-pairs-near", grid(1e-2, 2e4, 60), gain=1.0, poles=[(a, 1), (a.conjugate(), 1), (b, 1), (b.conjugate(), 1)]))
cases.append(case("light-pairs-near-and-fast", grid(1e-4, 2e4, 60), gain=1e9, poles=[(a, 1), (a.conjugate(), 1), (b, 1), (b.conjugate(), 1), (-1e3, 3)]))
c, d = complex(0, 1), complex(0, 1 + 2 ** -30)
cases.append(case("undamped-pairs-near", grid(1e-2, 1e6, 60), gain=1.0, poles=[(c, 1), (c.conjugate(), 1), (d, 1), (d.conjugate(), 1)]))
# Poles near the pole of the input, integrators, an unstable pole, scales of days and nanoseconds.
cases.append(case("slow-lag-near-origin", grid(1e-3, 1e12, 60), gain=1.0, poles=[(-1, 2), (-1e-9, 1)]))
cases.append(case("slow-lags-near-origin", grid(1e-3, 1e10, 60), gain=1.0, poles=[(-1, 2), (-1e-7, 1), (-1.5e-7, 1), (-2e-8, 1)]))
cases.append(case("double-integrator-with-lags", grid(1e-3, 1e4, 50), gain=5.0, poles=[(0, 2), (-1, 3), (-30, 2)]))
cases.append(case("integrator-ramp-stiff", grid(1e-7, 1e5, 50), gain=1e6, poles=[(0, 1), (-1e6, 3), (-1e-2, 2)], kind="ramp"))
cases.append(case("unstable-among-near", grid(1e-3, 200, 50), gain=1.0, poles=[(0.1, 1), (-1, 3), (-1.0001, 2)]))
cases.append(case("days", grid(1.0, 3e6, 50), gain=1e-25, poles=[(-1e-5, 2), (-1.1e-5, 1), (complex(-1e-5, 3e-5), 1), (complex(-1e-5, -3e-5), 1)]))
cases.append(case("nanoseconds", grid(1e-12, 1e-6, 50), gain=1e45, poles=[(-1e9, 2), (-1.1e9, 1), (complex(-1e7, 3e9), 1), (complex(-1e7, -3e9), 1)]))
cases.append(case("impulse-of-eight-near", grid(1e-2, 60, 40), gain=1.0, poles=[(-1 - k * 1e-7, 1) for k in range(8)], kind="impulse"))
# A polynomial in float64 coefficients whose eight poles scatter about -1.
import math
n8 = [1.0]
for k in range(8):
    n8 = [x + 1.1 * y for x, y in zip(n8 + [0.0], [0.0] + n8)]
cases.append(case("scattered-eight", grid(1e-2, 60, 40), numerator=[1.0], denominator=n8))
print(json.dumps({"about": __doc__, "cases": cases}, indent=1))
