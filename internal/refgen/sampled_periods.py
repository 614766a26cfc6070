#!/usr/bin/python3
"""Sampling behind a zero-order hold at periods far from the time constants.

Writes tf/testdata/sampled_periods.json. Needs mpmath. Each function is given by float64 roots,
taken exactly. The sampled one comes from the exponential of the block matrix [[A, B], [0, 0]]
of the controllable canonical form and from the algorithm of Faddeev and Leverrier, all with
many hundred digits; nothing is shared with the library's way, which knows no matrices.
"""
import json
import random

from mpmath import mp, mpf, mpc, matrix, expm1, polyroots, nstr, fprod


def poly_from_roots(roots):
    """Monic coefficients, highest power first."""
    c = [mpc(1)]
    for r in roots:
        c = [a - r * b for a, b in zip(c + [mpc(0)], [mpc(0)] + c)]
    return [x.real for x in c]


def exponential(m, n):
    """exp(m) for an n by n matrix by scaling, Taylor and squaring."""
    size = max(sum(abs(m[i, j]) for j in range(n)) for i in range(n))
    k = max(0, int(mp.ceil(mp.log(size, 2))) + 4) if size else 0
    a = m / mpf(2) ** k
    total, term, j = mp.eye(n), mp.eye(n), 0
    while True:
        j += 1
        term = term * a / j
        total = total + term
        if mp.mnorm(term, 1) < mpf(10) ** (-mp.dps - 10):
            break
    for _ in range(k):
        total = total * total
    return total


def sampled(gain, zeros, poles, period):
    n = len(poles)
    sigma = max([abs(p) for p in poles] + [mpf(0)]) or mpf(1)
    ps = [p / sigma for p in poles]
    zs = [z / sigma for z in zeros]
    t = period * sigma
    g = gain * sigma ** (len(zeros) - n)
    den = poly_from_roots(ps)                     # scaled variable
    num = [g * x for x in poly_from_roots(zs)]
    num = [mpf(0)] * (n + 1 - len(num)) + num
    direct = num[0]
    rest = [a - direct * b for a, b in zip(num, den)][1:]
    m = matrix(n + 1, n + 1)
    for i in range(n - 1):
        m[i, i + 1] = t
    for i in range(n):
        m[n - 1, i] = -den[n - i] * t
    m[n - 1, n] = t
    e = exponential(m, n + 1)
    w = matrix(n, n)
    gamma = matrix(n, 1)
    for i in range(n):
        gamma[i] = e[i, n]
        for j in range(n):
            w[i, j] = e[i, j] - (1 if i == j else 0)
    row = matrix(1, n)
    for i in range(n):
        row[i] = rest[n - 1 - i]
    # Faddeev and Leverrier: adj(dI - w) = sum of B_k d^(n-1-k)
    b = mp.eye(n)
    d_delta, n_delta = [mpf(1)], []
    for k in range(1, n + 1):
        n_delta.append((row * b * gamma)[0])
        wb = w * b
        c = -sum(wb[i, i] for i in range(n)) / k
        d_delta.append(c)
        b = wb + c * mp.eye(n)
    numerator = [direct * d_delta[0]] + [direct * d + x for d, x in zip(d_delta[1:], n_delta)]
    return numerator, d_delta


def strings(values):
    return [[nstr(mp.re(v), 30), nstr(mp.im(v), 30)] for v in values]


def main():
    random.seed(20)
    cases = []

    def one_case(title, gain, zeros, poles, period, digits=400):
        mp.dps = digits
        zq = [mpc(z) for z in zeros]
        pq = [mpc(p) for p in poles]
        numerator, denominator = sampled(mpf(gain), zq, pq, mpf(period))
        scale = max(abs(x) for x in numerator)
        while abs(numerator[0]) < scale * mpf(10) ** (-digits * 3 // 4):
            numerator = numerator[1:]
        # roots of the numerator, the variable scaled so that they are moderate
        tau = min(mpf(1), mpf(period) * max([abs(p) for p in pq] + [mpf(0)]) or mpf(1))
        k = len(numerator) - 1
        roots = []
        if k > 0:
            c = [x * tau ** (k - i) / numerator[0] for i, x in enumerate(numerator)]
            roots = [r * tau for r in polyroots(c, maxsteps=3000, extraprec=2 * mp.prec)]
        roots = [r if abs(1 + r) > mpf(2) ** -1022 else mpf(-1) for r in roots]
        offsets = [expm1(p * mpf(period)) for p in pq]
        cases.append({
            "title": title, "gain": repr(float(gain)), "zeros": [[repr(z.real), repr(z.imag)] for z in map(complex, zeros)],
            "poles": [[repr(p.real), repr(p.imag)] for p in map(complex, poles)], "period": repr(float(period)),
            "pole_offsets": strings(offsets), "zero_offsets": strings(roots),
            "static_gain": None if any(p == 0 for p in pq) else nstr(mpf(gain) * (fprod(-z for z in zq) / fprod(-p for p in pq)).real, 30),
        })

    for period in (1e-9, 1e-4, 0.1, 3.0, 1e3):
        one_case("lag^4", 1, [], [-1.0] * 4, period)
        one_case("triple integrator with lead", 2, [-0.5], [0.0] * 3, period)
        one_case("two lags far apart", 1000, [], [-1.0, -1000.0], period)
        one_case("oscillator and antiresonance", 3, [-0.01 + 2j, -0.01 - 2j], [-0.02 + 3j, -0.02 - 3j, 0.0, -10.0], period)
        one_case("biproper", 2, [-0.5, 3.0], [-1.0, -2.0], period)
    for period in (1e-9, 1e-3, 1.0):
        one_case("order 12, spread", 5, [-0.3, -20.0], [-0.01 * 2.0 ** i for i in range(12)], period, 700)
        one_case("order 12, six pairs", 1, [-1.5], [complex(-0.1 * (i + 1), s * (i + 1)) for i in range(6) for s in (1, -1)], period, 700)
        one_case("lag^12", 1, [], [-1.0] * 12, period, 900)
        one_case("nearly triple", 1, [-0.9], [-1.0, -1.0 - 1e-9, -1.0 + 1e-9, -0.3 + 0.4j, -0.3 - 0.4j], period, 700)
        one_case("day scale", 0.5, [-1e-6], [-1.0 / 600, -1.0 / 7200, -1.0 / 86400], period * 3600, 500)
        one_case("unstable", 1, [2.0], [0.5, -3.0, 0.1 + 1j, 0.1 - 1j], period, 500)
    with open("tf/testdata/sampled_periods.json", "w") as f:
        json.dump({"cases": cases}, f, indent=1)
        f.write("\n")


main()
