#!/usr/bin/python3
"""Responses of loops with dead time, for timeresp/testdata/delayed.json.

The loop is r -> C -> P e^(-s T) -> y with a sensor H; every number a float64 taken exactly. The closed loop is
expanded as sum((-1)^n L^n e^(-n s T)): at a given time a finite sum of rational functions with poles of high
multiplicity, inverted as sums of exponentials times polynomials in 400-digit arithmetic.
"""
import json
import sys
from mpmath import mp, mpf, mpc
from math import comb

mp.dps = 400


def F(x):
    return mpf(float(x))


def mul(a, b):
    c = [mpf(0)] * (len(a) + len(b) - 1)
    for i, x in enumerate(a):
        for j, y in enumerate(b):
            c[i + j] += x * y
    return c


def add(a, b):
    n = max(len(a), len(b))
    a = [mpf(0)] * (n - len(a)) + list(a)
    b = [mpf(0)] * (n - len(b)) + list(b)
    return [x + y for x, y in zip(a, b)]


def horner(c, x):
    y = mpc(0)
    for a in c:
        y = y * x + a
    return y


def series_mul(a, b, n):
    c = [mpc(0)] * n
    for i, x in enumerate(a[:n]):
        for j, y in enumerate(b[:n - i]):
            c[i + j] += x * y
    return c


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


def inverse(num, poles, lead):
    """Terms (p, coefficients of t^k) of num/(lead prod (s-p)^m)."""
    terms = []
    for i, (p, m) in enumerate(poles):
        a = taylor(num, p, m)
        for j, (q, n) in enumerate(poles):
            if j == i:
                continue
            d = p - q
            # (d + x)^-n
            s = [mpf(-1) ** k * comb(n + k - 1, k) * d ** (-n - k) for k in range(m)]
            a = series_mul(a, s, m)
        a = [x / lead for x in a[::-1]]
        f = mpf(1)
        for k in range(m):
            if k > 1:
                f *= k
            a[k] = a[k] / f
        terms.append((p, a))
    return terms


def evaluate(terms, t):
    y = mpc(0)
    for p, a in terms:
        y += mp.exp(p * t) * horner(a[::-1], t)
    return mp.re(y)


def case(name, C, P, delays, times, H=([1.0], [1.0]), F0=([1.0], [1.0]), signal="output", source="reference", final=None):
    nc, dc = [F(x) for x in C[0]], [F(x) for x in C[1]]
    np_, dp = [F(x) for x in P[0]], [F(x) for x in P[1]]
    nh, dh = [F(x) for x in H[0]], [F(x) for x in H[1]]
    nf, df = [F(x) for x in F0[0]], [F(x) for x in F0[1]]
    tc, tp, th = [F(x) for x in delays]
    a = mul(mul(dc, dp), dh)
    b = mul(mul(nc, np_), nh)
    T = tc + tp + th
    if source == "reference":
        outer = df
        forward, d = {"output": (mul(mul(nc, np_), dh), tc + tp), "error": (mul(mul(dc, dp), dh), mpf(0)), "effort": (mul(mul(nc, dp), dh), tc)}[signal]
        forward = mul(forward, nf)
    else:
        outer = [mpf(1)]
        forward, d = {"output": (mul(mul(np_, dc), dh), tp), "effort": ([-x for x in mul(mul(nc, np_), nh)], T)}[signal]
    rootsets = []
    for pol in (outer, a, [mpf(1), mpf(0)]):
        if len(pol) > 1:
            rootsets.append((pol[0], [mpc(r) for r in mp.polyroots(pol, maxsteps=2000, extraprec=3000)]))
        else:
            rootsets.append((pol[0], []))
    vals = []
    cache = {}
    for t in times:
        t = F(t)
        y = mpf(0)
        n = 0
        while t - d - n * T >= 0:
            if n not in cache:
                poles = {}
                lead = mpf(1)
                for (l, rs), m in zip(rootsets, (1, n + 1, 1)):
                    lead *= l ** m
                    for r in rs:
                        key = None
                        for k in poles:
                            if abs(k - r) < mpf(10) ** -100 * (1 + abs(r)):
                                key = k
                        if key is None:
                            key = r
                        poles[key] = poles.get(key, 0) + m
                num = list(forward)
                for _ in range(n):
                    num = mul(num, [-x for x in b])
                cache[n] = inverse(num, list(poles.items()), lead)
            y += evaluate(cache[n], t - d - n * T)
            n += 1
        vals.append(mp.nstr(y, 30))
    print(name, file=sys.stderr)
    s = lambda p: [[repr(float(x)) for x in q] for q in p]
    return {"id": name, "controller": s(C), "plant": s(P), "sensor": s(H), "prefilter": s(F0), "delays": [repr(float(x)) for x in delays],
            "from": source, "signal": signal, "times": [repr(float(t)) for t in times], "values": vals}


def grid(a, b, n):
    return [float("%.4g" % (a + (b - a) * i / (n - 1))) for i in range(n)]


one = ([1.0], [1.0])
pi = ([0.8, 0.4], [1.0, 0.0])
lag2 = ([1.0], [1.0, 1.5, 1.0])
cases = [
    case("pi-on-second-order", pi, lag2, (0, 0.5, 0), grid(0, 14, 40)),
    case("delays-spread-over-the-loop", pi, lag2, (0.125, 0.25, 0.375), grid(0, 14, 40), H=([1.0], [0.125, 1.0])),
    case("effort", pi, lag2, (0.125, 0.25, 0.375), grid(0, 10, 30), H=([1.0], [0.125, 1.0]), signal="effort"),
    case("error-with-prefilter", pi, lag2, (0, 0.5, 0), grid(0, 10, 30), F0=([1.0], [0.5, 1.0]), signal="error"),
    case("load-disturbance", pi, lag2, (0, 0.5, 0), grid(0, 12, 30), source="load", signal="output"),
    case("direct-part-in-the-loop", ([0.5, 1.0], [1.0]), ([1.0], [1.0, 1.0]), (0, 1.0, 0), grid(0, 20, 41)),
    case("proportional-around-pure-dead-time", ([0.5], [1.0]), ([1.0], [1.0]), (0, 1.0, 0), grid(0, 12, 25)),
    case("integrator-near-its-limit", ([1.5], [1.0]), ([1.0], [1.0, 0.0]), (0, 1.0, 0), grid(0, 40, 41)),
    case("unstable-loop", ([2.0], [1.0]), ([1.0], [1.0, 0.0]), (0, 1.0, 0), grid(0, 30, 31)),
    case("nanoseconds", ([4e8], [1.0]), ([1e9], [1.0, 1.3e9, 0.0]), (0, 5e-10, 0), grid(0, 2e-8, 41)),
    case("days", ([0.4, 2e-6], [1.0, 0.0]), ([1.0], [80000.0, 1.0]), (0, 20000.0, 0), grid(0, 700000, 36)),
    case("short-dead-time-beside-slow-lag", ([20.0], [1.0]), ([1.0], [100.0, 1.0]), (0, 0.75, 0), grid(0, 30, 41)),
    case("unstable-plant", ([2.0], [1.0]), ([1.0], [1.0, -1.0]), (0, 0.25, 0), grid(0, 12, 33)),
    case("oscillating-plant", ([0.3], [1.0, 0.0]), ([1.0], [1.0, 0.2, 1.0]), (0, 0.5, 0), grid(0, 20, 33)),
]
print(json.dumps({"about": __doc__, "cases": cases}, indent=1))
