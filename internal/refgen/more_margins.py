#!/usr/bin/python3
"""Crossovers, margins, peaks and stability of hard loops, for tf/testdata/more_margins.json.

Light resonances, fast sampling and dead time, where double precision has few digits. Every number is a float64
taken exactly. Gain crossovers: roots of |N|^2 - |D|^2 by Durand-Kerner in 120 digits. Phase crossovers and the
sensitivity peak: the change of sign of Im L, or of the slope of |1+L|, on a dense grid that crowds about every
root, then bisection in 60 digits; that grid sees two crossings between neighbours as none, which no loop
here has. Stability: roots of N + D; with dead time the winding of 1 + L along the axis, on the same grid.

    /usr/bin/python3 internal/refgen/more_margins.py > tf/testdata/more_margins.json
"""
import json
import random
from mpmath import mp, mpf, mpc, polyroots, sqrt, exp, atan2, pi, log, findroot, fabs, arg, nstr, tan

mp.dps = 60


def polymul(a, b):
    c = [mpf(0)] * (len(a) + len(b) - 1)
    for i, x in enumerate(a):
        for j, y in enumerate(b):
            c[i + j] += x * y
    return c


def horner(c, s):
    y = mpc(0)
    for a in c:
        y = y * s + a
    return y


def factors(rng, degree, light, scale):
    out = [mpf(1)]
    while degree > 0:
        w = scale * 10 ** rng.uniform(-1, 1)
        if degree >= 2 and rng.random() < 0.6:
            zeta = 10 ** rng.uniform(-light, 0)
            out = polymul(out, [mpf(1), mpf(2 * zeta * w), mpf(w) * mpf(w)])
            degree -= 2
        else:
            out = polymul(out, [mpf(1), mpf(w if rng.random() < 0.9 else -w)])
            degree -= 1
    return out


class Loop:
    def __init__(self, num, den, delay, period):
        self.num = [float(x) for x in num]
        self.den = [float(x) for x in den]
        self.delay, self.period = float(delay), float(period)
        self.n = [mpf(x) for x in self.num]
        self.d = [mpf(x) for x in self.den]

    def at(self, w):
        if self.period:
            s = exp(mpc(0, w * mpf(self.period)))
        else:
            s = mpc(0, w)
        y = horner(self.n, s) / horner(self.d, s)
        if self.delay:
            y *= exp(-s * mpf(self.delay))
        return y

    def roots(self, c):
        old = mp.dps
        mp.dps = 120
        try:
            return polyroots([mpf(x) for x in c], maxsteps=2000, extraprec=2000) if len(c) > 1 else []
        finally:
            mp.dps = old

    def grid(self, hi):
        marks = []
        for r in self.roots(self.num) + self.roots(self.den):
            if self.period:
                if r == 0:
                    continue
                r = log(r) / mpf(self.period)
            if fabs(r) > 0:
                marks.append((fabs(r), fabs(r.real) / fabs(r)))
        last = pi / mpf(self.period) if self.period else None
        lo = min(m for m, _ in marks) / 1000
        if hi is None:
            hi = last if last else max(m for m, _ in marks) * 1000
        out = set()
        steps = 1500
        for i in range(steps + 1):
            out.add(lo * (hi / lo) ** (mpf(i) / steps))
        for m, zeta in marks:
            k = max(zeta, mpf(10) ** -9) / 20
            while k < 0.5:
                out.add(m * (1 + k))
                out.add(m * (1 - k))
                k *= mpf(1.3)
            out.add(m)
        if self.delay:
            step = mpf(0.15) / mpf(self.delay)
            i = 1
            while i * step < hi and i < 6000:
                out.add(i * step)
                i += 1
        return sorted(w for w in out if 0 < w < hi)

    def gain_crossovers(self):
        n, d = self.n, self.d
        if self.period:
            # z = (1+w)/(1-w)
            k = max(len(n), len(d)) - 1

            def bilinear(c):
                c = [mpf(0)] * (k + 1 - len(c)) + list(c)
                total = [mpf(0)] * (k + 1)
                for i, a in enumerate(c):
                    term = [a]
                    for _ in range(k - i):
                        term = polymul(term, [mpf(1), mpf(1)])
                    for _ in range(i):
                        term = polymul(term, [mpf(-1), mpf(1)])
                    total = [x + y for x, y in zip(total, term)]
                return total
            old = mp.dps
            mp.dps = 400
            n, d = bilinear(n), bilinear(d)
            mp.dps = old

        def square(c):
            c = c[::-1]
            even = [x * (-1) ** i for i, x in enumerate(c[0::2])]
            odd = [x * (-1) ** i for i, x in enumerate(c[1::2])]

            def mul(a, b):
                out = [mpf(0)] * (len(a) + len(b) - 1)
                for i, x in enumerate(a):
                    for j, y in enumerate(b):
                        out[i + j] += x * y
                return out
            e = mul(even, even)
            o = [mpf(0)] + (mul(odd, odd) if odd else [])
            m = max(len(e), len(o))
            return [(e[i] if i < len(e) else 0) + (o[i] if i < len(o) else 0) for i in range(m)]
        old = mp.dps
        mp.dps = 400
        a, b = square(n), square(d)
        m = max(len(a), len(b))
        g = [(a[i] if i < len(a) else mpf(0)) - (b[i] if i < len(b) else mpf(0)) for i in range(m)][::-1]
        while g and g[0] == 0:
            g.pop(0)
        mp.dps = old
        out = []
        for x in self.roots(g):
            if x.real > 0 and fabs(x.imag) < fabs(x) * mpf(10) ** -50:
                v = sqrt(x.real)
                out.append(2 * mp.atan(v) / mpf(self.period) if self.period else v)
        return sorted(out)

    def bisect(self, f, a, b):
        fa = f(a)
        for _ in range(190):
            m = (a + b) / 2
            fm = f(m)
            if (fm > 0) == (fa > 0):
                a = m
            else:
                b = m
        return (a + b) / 2

    def solve(self):
        gain = self.gain_crossovers()
        hi = None
        listed = None
        if self.delay:
            # the last frequency with |L| = 0.02
            scaled = Loop([x * 50 for x in self.num], self.den, 0, 0)
            scaled.n = [x * 50 for x in self.n]
            listed = max(scaled.gain_crossovers())
            hi = max(listed, *(fabs(r) * 3 for r in self.roots(self.den) + self.roots(self.num)))
            hi = max(hi, mpf(8) / mpf(self.delay))
        grid = self.grid(hi)
        values = [self.at(w) for w in grid]
        phase = []
        for (a, x), (b, y) in zip(zip(grid, values), zip(grid[1:], values[1:])):
            if x.imag * y.imag < 0 and fabs(arg(y / x)) < 2 and (x.real < 0 or y.real < 0):
                w = self.bisect(lambda w: self.at(w).imag, a, b)
                v = self.at(w)
                if v.real < 0 and fabs(v.imag) < fabs(v) * mpf(10) ** -30 and (listed is None or w <= listed):
                    phase.append((w, -1 / v.real))
        if self.period and values[-1].real < 0:
            z = mpf(-1)
            v = horner(self.n, z) / horner(self.d, z)
            if v.real < 0:
                phase.append((pi / mpf(self.period), -1 / v.real))
        size = [1 / fabs(1 + v) for v in values]
        best = max(range(len(size)), key=lambda i: size[i])
        at, peak = None, None
        if 0 < best < len(size) - 1:
            a, b = grid[best - 1], grid[best + 1]
            golden = (sqrt(mpf(5)) - 1) / 2
            f = lambda w: -fabs(1 + self.at(w))
            x, y = b - golden * (b - a), a + golden * (b - a)
            fx, fy = f(x), f(y)
            for _ in range(150):
                if fx > fy:
                    b, y, fy = y, x, fx
                    x = b - golden * (b - a)
                    fx = f(x)
                else:
                    a, x, fx = x, y, fy
                    y = a + golden * (b - a)
                    fy = f(y)
            at = (a + b) / 2
            peak = 1 / fabs(1 + self.at(at))
        if self.delay:
            total = mpf(0)
            last = 1 + values[0]
            start = 1 + self.at(grid[0] / 10 ** 6)
            total += arg(last / start)
            for v in values[1:]:
                total += arg((1 + v) / last)
                last = 1 + v
            # 1 + L goes to 1 at infinity; D has these roots to the right
            total += arg(1 / last)
            right = sum(1 for r in self.roots(self.den) if r.real > 0)
            # from w = 0 to infinity the argument of D + N e^(-sT) turns by (n - 2 Z) pi/2, that of D by (n - 2 P) pi/2
            z = mpf(right) - total / pi
            stable = int(round(float(z))) == 0
            if abs(float(z) - round(float(z))) > 1e-2:
                return None
        else:
            k = max(len(self.n), len(self.d))
            f = [x + y for x, y in zip([mpf(0)] * (k - len(self.n)) + self.n, [mpf(0)] * (k - len(self.d)) + self.d)]
            rs = self.roots(f)
            stable = all((fabs(r) < 1) if self.period else (r.real < 0) for r in rs)
        return dict(
            numerator=[repr(x) for x in self.num], denominator=[repr(x) for x in self.den],
            delay=repr(self.delay), period=repr(self.period), stable=bool(stable),
            listed_up_to=nstr(listed, 25) if listed is not None else None,
            gain=[dict(frequency=nstr(w, 25), margin=nstr(arg(-self.at(w)), 25)) for w in gain],
            phase=[dict(frequency=nstr(w, 25), margin=nstr(m, 25)) for w, m in phase],
            peak=nstr(peak, 25) if peak is not None else None, peak_at=nstr(at, 20) if at is not None else None)


def main():
    rng = random.Random(20)
    cases = []

    def add(kind, loop):
        r = loop.solve()
        if r is not None:
            r["kind"] = kind
            cases.append(r)

    def strictly_proper(light, scale, order):
        den = factors(rng, order, light, scale)
        num = factors(rng, rng.randrange(0, order), light, scale)
        k = mpf(10 ** rng.uniform(-0.7, 1)) * den[-1] / num[-1]
        return [x * k for x in num], den

    for i in range(10):
        n, d = strictly_proper([2, 4, 7][i % 3], 10.0 ** rng.choice([0, 0, -6, 7]), rng.randrange(2, 9))
        add("continuous", Loop(n, d, 0, 0))
    for i in range(8):
        scale = 10.0 ** rng.choice([0, 0, -5, 6])
        n, d = strictly_proper([2, 4][i % 2], scale, rng.randrange(1, 6))
        add("dead time", Loop(n, d, float(mpf(10 ** rng.uniform(-1.5, 0.5)) / scale), 0))
    for i in range(8):
        # matched roots, from slow to very fast sampling
        order = rng.randrange(1, 6)
        period = 10.0 ** rng.uniform(-5, 0)
        roots = []
        while len(roots) < order:
            w = 10 ** rng.uniform(-1, 0.4)
            if order - len(roots) >= 2 and rng.random() < 0.6:
                zeta = 10 ** rng.uniform(-3, 0)
                roots += [mpc(-zeta * w, w * sqrt(1 - mpf(zeta) ** 2)), mpc(-zeta * w, -w * sqrt(1 - mpf(zeta) ** 2))]
            else:
                roots.append(mpc(-w, 0))
        den = [mpc(1)]
        for r in roots:
            den = [a + b for a, b in zip(den + [mpc(0)], [mpc(0)] + [-exp(r * mpf(period)) * c for c in den])]
        den = [x.real for x in den]
        at = mpf(10 ** rng.uniform(-0.5, 0.3))
        k = fabs(horner(den, exp(mpc(0, at * mpf(period)))))
        add("sampled", Loop([k], den, 0, period))
    print(json.dumps(dict(about=" ".join(__doc__.split()), cases=cases), indent=1))


main()
