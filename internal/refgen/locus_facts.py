#!/usr/bin/python3
"""Reference values for locus/testdata/facts.json, computed with mpmath at 120 digits.

Windows: all gains at which a root lies on the boundary, from the roots of the condition for a
real gain as a polynomial in t (line s = sigma + jt, ray s = t*u, circle as a Laurent polynomial
in z), then the roots themselves at one gain in each interval. Break points: all roots of
A'B - AB', those kept whose gain is real to 1e-60. Nothing here shares code or method of
isolation with the library. Usage: locus_facts.py > ../../locus/testdata/facts.json
"""
import json
import random

from mpmath import mp, mpc, mpf, polyroots, nstr, acos, sqrt, exp, cos, sin, pi

mp.dps = 120
TINY = mpf(10) ** -50


def trim(p):
    p = list(p)
    while p and p[-1] == 0:
        p.pop()
    return p


def roots(p):
    """All roots of a polynomial given by power."""
    p = trim(p)
    zeros = 0
    while p and p[0] == 0:
        p, zeros = p[1:], zeros + 1
    if len(p) < 2:
        return [mpc(0)] * zeros
    n = len(p) - 1
    # Scale to roots of moderate size.
    r = (abs(p[0]) / abs(p[-1])) ** (mpf(1) / n)
    q = [c * r ** i for i, c in enumerate(p)]
    for extra in (200, 600, 2000):
        try:
            found = polyroots(list(reversed(q)), maxsteps=500, extraprec=extra)
            return [mpc(z) * r for z in found] + [mpc(0)] * zeros
        except mp.NoConvergence:
            pass
    raise RuntimeError("no convergence")


def value(p, s):
    y = mpc(0)
    for c in reversed(p):
        y = y * s + c
    return y


def mul(p, q):
    r = [mpf(0)] * (len(p) + len(q) - 1)
    for i, x in enumerate(p):
        for j, y in enumerate(q):
            r[i + j] += x * y
    return r


def sub(p, q):
    n = max(len(p), len(q))
    return [(p[i] if i < len(p) else 0) - (q[i] if i < len(q) else 0) for i in range(n)]


def derivative(p):
    return [i * c for i, c in enumerate(p)][1:] or [mpf(0)]


def conj(p):
    return [mpc(c).conjugate() for c in p]


def along(p, c, u):
    """p(c + t*u) by power of t."""
    r = [mpc(0)]
    for a in reversed(p):
        r = [x for x in mul(r, [c, u])]
        r[0] += a
    return r[: len(p)]


def critical(a, b, region):
    gains = []
    n, m = len(a) - 1, len(b) - 1
    if m > n:
        gains.append(mpf(0))
    elif m == n:
        gains.append(-a[-1] / b[-1])
    points = []
    kind, x = region
    if kind in ("half_plane", "sector"):
        if kind == "half_plane":
            c, u = mpc(x), mpc(0, 1)
        else:
            c, u = mpc(0), mpc(-x, sqrt(1 - x * x))
        fa, fb = along(a, c, u), along(b, c, u)
        g = mul(fa, conj(fb))
        g = [mpc(z).imag for z in g]
        size = max(abs(z) for z in g) if g else 0
        g = [z if abs(z) > size * mpf(10) ** -100 else mpf(0) for z in g]
        for t in roots(g):
            if abs(t.imag) <= TINY * (abs(t) + mpf(10) ** -30) and (kind == "half_plane" or t.real > -TINY):
                points.append(c + t.real * u)
        points.append(c)
    else:
        # |s| = x: A(s)*B(x^2/s) - A(x^2/s)*B(s) = 0, times s^max
        sa = [z * x ** i for i, z in enumerate(a)]
        sb = [z * x ** i for i, z in enumerate(b)]
        top = max(n, m)
        ra = list(reversed(sa + [mpf(0)] * (top - n)))
        rb = list(reversed(sb + [mpf(0)] * (top - m)))
        g = sub(mul(sa, rb), mul(sb, ra))
        size = max(abs(z) for z in g)
        g = [z if abs(z) > size * mpf(10) ** -100 else mpf(0) for z in g]
        for z in roots(g):
            if abs(abs(z) - 1) < TINY:
                points.append(x * z / abs(z))
        points += [mpc(x), mpc(-x)]
    for s in points:
        va, vb = value(a, s), value(b, s)
        if abs(vb) <= TINY * sum(abs(c) * abs(s) ** i for i, c in enumerate(b)):
            continue
        if abs(va) <= TINY * sum(abs(c) * abs(s) ** i for i, c in enumerate(a)):
            gains.append(mpf(0))
        else:
            gains.append((-va / vb).real)
    gains.sort()
    merged = []
    for k in gains:
        if not merged or abs(k - merged[-1]) > mpf(10) ** -40 * (abs(k) + mpf(10) ** -40):
            merged.append(k)
    return merged


def inside(s, region):
    kind, x = region
    if kind == "half_plane":
        return s.real < x
    if kind == "sector":
        return -s.real > x * abs(s)
    return abs(s) < x


def windows(a, b, region):
    gains = critical(a, b, region)
    found = []
    for i in range(len(gains) + 1):
        lo = gains[i - 1] if i > 0 else None
        hi = gains[i] if i < len(gains) else None
        if lo is None and hi is None:
            k = mpf(1)
        elif lo is None:
            k = hi - 1 - abs(hi)
        elif hi is None:
            k = lo + 1 + abs(lo)
        else:
            k = (lo + hi) / 2
        n = max(len(a), len(b))
        f = [(a[j] if j < len(a) else 0) + k * (b[j] if j < len(b) else 0) for j in range(n)]
        if all(inside(s, region) for s in roots(f)):
            found.append([text(lo, "-inf"), text(hi, "inf")])
    return found


def text(x, infinite=None):
    if x is None:
        return infinite
    return nstr(x, 30, strip_zeros=True) if x != 0 else "0"


def breakpoints(a, b):
    d = sub(mul(derivative(a), b), mul(a, derivative(b)))
    size = max(abs(c) for c in d)
    d = [c if abs(c) > size * mpf(10) ** -100 else mpf(0) for c in d]
    if len(trim(d)) < 2:
        return []
    found = []
    for s in roots(d):
        va, vb = value(a, s), value(b, s)
        big = sum(abs(c) * abs(s) ** i for i, c in enumerate(a))
        if abs(vb) < mpf(10) ** -25 * sum(abs(c) * abs(s) ** i for i, c in enumerate(b)) or abs(va) <= mpf(10) ** -25 * big:
            continue
        k = -va / vb
        if abs(k.imag) > mpf(10) ** -60 * abs(k) and abs(s.imag) > TINY * abs(s):
            continue
        im = s.imag if abs(s.imag) > TINY * abs(s) else mpf(0)
        re = s.real if abs(s.real) > TINY * abs(s) else mpf(0)
        found.append({"re": text(re), "im": text(im), "k": text(k.real)})
    return found


def product(factors):
    p = [mpf(1)]
    for f in factors:
        p = mul(p, [mpf(c) for c in reversed(f)])
    return [float(c) for c in reversed(p)]


def main():
    rng = random.Random(20)
    cases = []

    def add(name, fixed, scaled, regions):
        cases.append((name, [float(x) for x in fixed], [float(x) for x in scaled], regions))

    lines = [("half_plane", 0.0), ("half_plane", -0.1), ("sector", 0.5), ("sector", 0.7071067811865476), ("sector", 0.3)]
    add("flexible pair with a dipole 1e-6 apart", product([[1, 0], [1, 5], [1, 0.02, 4], [1, 0.2, 100]]),
        product([[1, 0.02, 4.000001], [1, 2]]), lines)
    add("real dipole 1e-6 apart", product([[1, 0.1], [1, 1], [1, 3], [1, 0]]), product([[1, 0.100001]]), lines)
    add("triple integrator", product([[1, 0, 0, 0], [1, 20]]), product([[1, 1], [1, 1.5]]), lines)
    add("mixed time scales", product([[1, 1e-3], [1, 1], [1, 1e3], [1, 1e6]]), product([[1, 0.02]]), lines)
    add("time constants of nanoseconds", product([[1e-9, 1], [2e-9, 1], [5e-10, 1], [1, 0]]), [3.0], lines)
    add("biproper", product([[1, 0.4, 4], [1, 3]]), product([[1, 1, 2], [1, -1]]), lines)
    add("more zeros than poles", product([[1, 2], [1, 0.5]]), product([[1, 0.2, 1], [1, 3]]), lines)
    add("negative leading coefficient", product([[1, 1], [1, 2], [1, 0.5, 3]]), product([[-1, 0.5]]), lines)
    add("unstable pair", product([[1, -0.5, 4], [1, 8], [1, 9]]), product([[1, 1], [1, 1.2, 2]]), lines)
    for i in range(8):
        n = [4, 6, 8, 12][i % 4]
        m = rng.randrange(n)
        f = []
        while sum(len(x) - 1 for x in f) < n:
            w = exp(rng.uniform(-2, 2))
            f.append([1, w] if rng.random() < 0.5 or sum(len(x) - 1 for x in f) + 2 > n else [1, 2 * rng.uniform(0.02, 1) * w, w * w])
        g = [[1, exp(rng.uniform(-2, 2)) * rng.choice([1, 1, 1, -1])] for _ in range(m)]
        add("random plant %d of degree %d" % (i, n), product(f), product(g), lines)
    discs = [("disc", 1.0), ("disc", 0.9), ("disc", 1.25), ("half_plane", 0.5)]
    add("sampled double integrator", [1, -2, 1], [0.005, 0.005], discs)
    add("sampled servo with a delay of two", [1, -1.8, 0.8, 0, 0], [0.01, 0.009], discs)
    add("fast sampling", product([[1, -1], [1, -0.999], [1, -0.99]]), product([[1, -0.9995], [1, 0.9]]), discs)
    for i in range(4):
        n = 3 + i
        f = [[1, -rng.uniform(-0.9, 1)] for _ in range(n)]
        g = [[1, -rng.uniform(-1.2, 1.2)] for _ in range(rng.randrange(n))]
        add("random sampled plant %d" % i, product(f), product(g), discs)

    out = []
    for name, fixed, scaled, regions in cases:
        a = [mpf(c) for c in reversed(fixed)]
        b = [mpf(c) for c in reversed(scaled)]
        out.append({
            "name": name,
            "numerator": [repr(c) for c in scaled],
            "denominator": [repr(c) for c in fixed],
            "breakpoints": breakpoints(a, b),
            "windows": [{"kind": r[0], "limit": repr(r[1]), "k": windows(a, b, (r[0], mpf(r[1])))} for r in regions],
        })
    print(json.dumps(out, indent=1))


main()
