package spec

import (
	"math"
	"slices"

	"github.com/polewright/polewright/poly"
)

// Windows of requirements on the frequency response. Each forbids a set of pairs of a
// frequency and a gain that, for one frequency, is an interval of gains. A connected piece
// of the set therefore forbids exactly one interval of gains, from the smallest to the
// largest it holds, and the windows are what is left. The pieces start and end at real
// roots of polynomials in x = ω²; no frequency is sampled to find them.
//
// Letters: L = kN/D; n2 = |N|², d2 = |D|², D·conj N = r + jω·i, all real polynomials in x.
type spectrum struct {
	n2, d2, r, i poly.Poly
	num, den     poly.Poly
}

// parts returns e and o with p(jω) = e(x) + jω·o(x).
func parts(p poly.Poly) (e, o poly.Poly) {
	n := p.Degree()
	ce, co := make([]float64, n/2+1), make([]float64, n/2+1)
	if n < 0 {
		return poly.Poly{}, poly.Poly{}
	}
	for i := 0; i <= n; i++ {
		c := p.Coefficient(i)
		if i/2%2 == 1 {
			c = -c
		}
		if i%2 == 0 {
			ce[len(ce)-1-i/2] = c
		} else {
			co[len(co)-1-i/2] = c
		}
	}
	return poly.New(ce...), poly.New(co...)
}

func newSpectrum(num, den poly.Poly) *spectrum {
	ne, no := parts(num)
	de, do := parts(den)
	x := poly.New(1, 0)
	return &spectrum{
		n2: ne.Mul(ne).Add(x.Mul(no).Mul(no)), d2: de.Mul(de).Add(x.Mul(do).Mul(do)),
		r: de.Mul(ne).Add(x.Mul(do).Mul(no)), i: do.Mul(ne).Sub(de.Mul(no)),
		num: num, den: den,
	}
}

// positiveRoots returns the positive real roots, ascending, without multiplicity.
func positiveRoots(p poly.Poly) ([]float64, error) {
	if p.Degree() < 1 {
		return nil, nil
	}
	roots, err := p.RealRoots(0, inf)
	if err != nil {
		return nil, err
	}
	var out []float64
	for _, r := range roots {
		if x := real(r.Value); x > 0 {
			out = append(out, x)
		}
	}
	return out, nil
}

// inside returns a point of the open interval (a, b), 0 ≤ a < b ≤ +Inf.
func inside(a, b float64) float64 {
	switch {
	case a == 0 && math.IsInf(b, 1):
		return 1
	case a == 0:
		return b / 2
	case math.IsInf(b, 1):
		return 2 * a
	}
	if m := math.Sqrt(a) * math.Sqrt(b); m > a && m < b {
		return m
	}
	return a + (b-a)/2
}

// gainAt returns |D/N| at x; x may be 0 or +Inf.
func (s *spectrum) gainAt(x float64) float64 {
	if math.IsInf(x, 1) {
		switch d, n := s.d2.Degree(), s.n2.Degree(); {
		case d > n:
			return inf
		case d < n:
			return 0
		default:
			return math.Sqrt(s.d2.Coefficient(d) / s.n2.Coefficient(n))
		}
	}
	n, d := s.n2.At(x), s.d2.At(x)
	if n <= 0 {
		return inf
	}
	return math.Sqrt(math.Max(d, 0)) / math.Sqrt(n)
}

// phaseHoles returns the gains forbidden by |arg(-L)| ≥ phi at every gain crossover.
func (s *spectrum) phaseHoles(phi float64, cause Cause) ([]GainWindow, error) {
	if phi == 0 || s.n2.Degree() < 0 {
		return nil, nil // every stable loop meets it
	}
	c := math.Cos(phi)
	boundary, err := positiveRoots(s.r.Mul(s.r).Sub(s.n2.Mul(s.d2).Scale(c * c)))
	if err != nil {
		return nil, err
	}
	forbidden := func(x float64) bool {
		// |arg(-L)| < phi, by the angle itself, which keeps its digits at every phi.
		return math.Abs(math.Atan2(math.Sqrt(x)*s.i.At(x), -s.r.At(x))) < phi
	}
	return s.crossoverHoles(boundary, forbidden, cause)
}

// crossoverHoles returns, for each piece of forbidden frequencies between the given
// boundaries, the gains that put a crossover into it.
func (s *spectrum) crossoverHoles(boundary []float64, forbidden func(x float64) bool, cause Cause) ([]GainWindow, error) {
	turns, err := positiveRoots(s.d2.Derivative().Mul(s.n2).Sub(s.d2.Mul(s.n2.Derivative())))
	if err != nil {
		return nil, err
	}
	knots := append(append([]float64{0}, boundary...), inf)
	var holes []GainWindow
	crossing, jump := cause, cause
	crossing.Kind, jump.Kind = Crossing, Jump
	var last float64 // where the piece before ended, if it was forbidden
	open := false
	for j := 0; j+1 < len(knots); j++ {
		a, b := knots[j], knots[j+1]
		if !forbidden(inside(a, b)) {
			open = false
			continue
		}
		lo, hi := End{Gain: inf}, End{Gain: 0}
		consider := func(x float64, by Cause, closed bool) {
			k := s.gainAt(x)
			if k < lo.Gain {
				lo = End{Gain: k, Closed: closed, By: []Cause{by}}
			}
			if k > hi.Gain {
				hi = End{Gain: k, Closed: closed, By: []Cause{by}}
			}
		}
		atEnd := func(x float64) Cause {
			if x == 0 || math.IsInf(x, 1) {
				return jump
			}
			return crossing
		}
		consider(a, atEnd(a), true)
		consider(b, atEnd(b), true)
		for _, x := range turns {
			if x > a && x < b {
				consider(x, jump, false)
			}
		}
		if open && last == a && len(holes) > 0 { // a boundary that is only touched
			h := &holes[len(holes)-1]
			if h.Lo.Gain < lo.Gain {
				lo = h.Lo
			}
			if h.Hi.Gain > hi.Gain {
				hi = h.Hi
			}
			holes = holes[:len(holes)-1]
		}
		holes = append(holes, GainWindow{Lo: lo, Hi: hi})
		open, last = true, b
	}
	return holes, nil
}

// angle returns arg(-L) in (0, 2π] at frequency ω.
func (s *spectrum) angle(w float64) float64 {
	x := w * w
	a := math.Atan2(w*s.i.At(x), -s.r.At(x))
	if a <= 0 {
		a += 2 * math.Pi
	}
	return a
}

// delayHoles returns the gains forbidden by a delay margin of at least tau.
func (s *spectrum) delayHoles(tau float64, cause Cause) ([]GainWindow, error) {
	if tau == 0 || s.n2.Degree() < 0 {
		return nil, nil
	}
	// The angle is continuous between the roots of i, where it may pass 2π; beyond 2π/tau
	// everything is forbidden.
	last := 2 * math.Pi / tau
	wraps, err := positiveRoots(s.i)
	if err != nil {
		return nil, err
	}
	turns, err := positiveRoots(s.d2.Mul(s.n2))
	if err != nil {
		return nil, err
	}
	var knots []float64
	for _, x := range append(wraps, turns...) {
		if w := math.Sqrt(x); w < last {
			knots = append(knots, w)
		}
	}
	// Between knots, samples close enough for the smooth angle of a rational function: each
	// root of N or D turns it within a few of its own distances from the axis.
	for _, p := range []poly.Poly{s.num, s.den} {
		roots, err := p.Roots()
		if p.Degree() < 1 {
			continue
		}
		if err != nil {
			return nil, err
		}
		for _, r := range roots {
			re, im := math.Abs(real(r.Value)), math.Abs(imag(r.Value))
			for q := -6.0; q <= 6; q += 0.5 {
				for _, w := range []float64{im + re*math.Sinh(q), im * math.Exp(q/2), re * math.Exp(q/2)} {
					if w > 0 && w < last {
						knots = append(knots, w)
					}
				}
			}
		}
	}
	for q := 0.0; q < 40; q++ {
		knots = append(knots, last*math.Exp(-q/3))
	}
	slices.Sort(knots)
	knots = slices.Compact(knots)
	h := func(w float64) float64 { return s.angle(w) - tau*w }
	boundary := slices.Clone(wraps)
	for j := 0; j+1 < len(knots); j++ {
		// A hair inside, since the angle may jump at the knots themselves.
		a, b := knots[j]*(1+1e-14), knots[j+1]*(1-1e-14)
		if !(a < b) {
			continue
		}
		ha, hb := h(a), h(b)
		if ha*hb >= 0 {
			continue
		}
		for range 200 {
			m := a + (b-a)/2
			if m <= a || m >= b {
				break
			}
			if hm := h(m); hm*ha > 0 {
				a = m
			} else {
				b = m
			}
		}
		boundary = append(boundary, a*a)
	}
	slices.Sort(boundary)
	boundary = slices.Compact(boundary)
	holes, err := s.crossoverHoles(boundary, func(x float64) bool { w := math.Sqrt(x); return h(w) < 0 }, cause)
	if err != nil || s.num.Degree() < s.den.Degree() {
		return holes, err
	}
	// Where |L(j∞)| ≥ 1 the smallest delay destabilises.
	lo := End{}
	if s.num.Degree() == s.den.Degree() {
		cause.Kind = Jump
		n := s.num.Degree()
		lo = End{Gain: math.Abs(s.den.Coefficient(n) / s.num.Coefficient(n)), Closed: true, By: []Cause{cause}}
	}
	for i := range holes {
		if holes[i].Hi.Gain >= lo.Gain*(1-1e-14) { // neighbours share the gain between them
			holes[i].Hi = End{Gain: inf}
			return holes, nil
		}
	}
	return append(holes, GainWindow{Lo: lo, Hi: End{Gain: inf}}), nil
}

// A quadratic forbids, at x, the gains with a·k² + b·k + c > 0.
type quadratic struct{ a, b, c poly.Poly }

// span returns the positive gains forbidden at x, an interval.
func (q quadratic) span(x float64) (lo, hi float64, ok bool) {
	a, b, c := q.a.At(x), q.b.At(x), q.c.At(x)
	disc := b*b - 4*a*c
	switch {
	case a > 0:
		if disc < 0 {
			return 0, inf, true
		}
		// c ≤ 0 in all uses: one root is positive.
		root := math.Sqrt(disc)
		if b >= 0 {
			if b+root == 0 {
				return 0, inf, true
			}
			return math.Max(0, -2*c/(b+root)), inf, true
		}
		return (root - b) / (2 * a), inf, true
	case a == 0:
		switch {
		case b > 0:
			return math.Max(0, -c/b), inf, true
		case c > 0 && b < 0:
			return 0, -c / b, true
		case c > 0:
			return 0, inf, true
		}
		return 0, 0, false
	}
	if disc <= 0 {
		return 0, 0, false
	}
	root := math.Sqrt(disc)
	// a < 0: between the roots.
	if b >= 0 {
		q := -(b + root)
		lo, hi = 2*c/q, q/(2*a)
	} else {
		q := root - b
		lo, hi = q/(2*a), 2*c/q
	}
	if lo > hi {
		lo, hi = hi, lo
	}
	if !(hi > 0) {
		return 0, 0, false
	}
	return math.Max(lo, 0), hi, true
}

// holes returns the forbidden gains. Over a piece, the ends of span are extreme where
// F = ak² + bk + c and its derivative by x vanish together: at a root of their resultant by k,
// or at the ends of the piece.
func (q quadratic) holes(cause Cause) ([]GainWindow, error) {
	var knots []float64
	for _, p := range []poly.Poly{q.b.Mul(q.b).Sub(q.a.Mul(q.c).Scale(4)), q.a, q.b} {
		roots, err := positiveRoots(p)
		if err != nil {
			return nil, err
		}
		knots = append(knots, roots...)
	}
	da, db, dc := q.a.Derivative(), q.b.Derivative(), q.c.Derivative()
	ac := q.a.Mul(dc).Sub(q.c.Mul(da))
	ab := q.a.Mul(db).Sub(q.b.Mul(da))
	bc := q.b.Mul(dc).Sub(q.c.Mul(db))
	turns, err := positiveRoots(ac.Mul(ac).Sub(ab.Mul(bc)))
	if err != nil {
		return nil, err
	}
	slices.Sort(knots)
	knots = append(append([]float64{0}, knots...), inf)
	knots = slices.Compact(knots)
	cause.Kind = Crossing
	var holes []GainWindow
	joined := false
	for j := 0; j+1 < len(knots); j++ {
		a, b := knots[j], knots[j+1]
		if _, _, ok := q.span(inside(a, b)); !ok {
			joined = false
			continue
		}
		lo, hi := inf, 0.0
		consider := func(l, h float64) { lo, hi = math.Min(lo, l), math.Max(hi, h) }
		for _, x := range turns {
			if x > a && x < b {
				if l, h, ok := q.span(x); ok {
					consider(l, h)
				}
			}
		}
		for _, x := range [2]float64{a, b} {
			switch {
			case x == 0:
				consider(q.limit(true))
			case math.IsInf(x, 1):
				consider(q.limit(false))
			default:
				// At the end of a piece both roots of F meet, or a or b changes its sign.
				if l, h, ok := q.span(x); ok {
					consider(l, h)
				} else if l, h, ok := q.span(x + (inside(a, b)-x)*0x1p-50); ok {
					consider(l, h)
				} else if k := -q.b.At(x) / (2 * q.a.At(x)); k > 0 {
					consider(k, k)
				}
			}
		}
		if joined {
			// The same piece goes on where only a or b changed its sign.
			h := &holes[len(holes)-1]
			h.Lo.Gain, h.Hi.Gain = math.Min(h.Lo.Gain, lo), math.Max(h.Hi.Gain, hi)
		} else {
			holes = append(holes, GainWindow{Lo: End{Gain: lo, Closed: true, By: []Cause{cause}}, Hi: End{Gain: hi, Closed: true, By: []Cause{cause}}})
		}
		_, _, joined = q.span(b)
	}
	return holes, nil
}

// limit returns the limits of span for x towards infinity, or towards 0 with low: those of
// the dominant terms of the three polynomials. Where these forbid nothing at finite gains and
// the piece reaches so far all the same, the gains it forbids grow without bound.
func (q quadratic) limit(low bool) (lo, hi float64) {
	power := -1
	for _, p := range [3]poly.Poly{q.a, q.b, q.c} {
		n := p.Degree()
		if low {
			for i := 0; i <= n; i++ {
				if p.Coefficient(i) != 0 {
					n = i
					break
				}
			}
		}
		if n >= 0 && (power < 0 || low && n < power || !low && n > power) {
			power = n
		}
	}
	term := func(p poly.Poly) poly.Poly { return poly.New(p.Coefficient(power)) }
	t := quadratic{term(q.a), term(q.b), term(q.c)}
	if lo, hi, ok := t.span(1); ok {
		return lo, hi
	}
	if a := t.a.At(0); a != 0 { // both roots meet
		k := math.Max(0, -t.b.At(0)/(2*a))
		return k, k
	}
	if t.b.At(0) < 0 {
		// What is forbidden shrinks to gains near zero, where c > 0, and beyond bounds, where a > 0.
		lo, hi = inf, 0
		if signAt(q.c, low) > 0 {
			lo = 0
		}
		if signAt(q.a, low) > 0 {
			hi = inf
			lo = math.Min(lo, hi)
		}
		return lo, hi
	}
	return inf, inf
}

// signAt returns the sign of p(x) for x near infinity, or near 0 with low.
func signAt(p poly.Poly, low bool) float64 {
	n := p.Degree()
	for i := range n + 1 {
		power := n - i
		if low {
			power = i
		}
		if c := p.Coefficient(power); c != 0 {
			return math.Copysign(1, c)
		}
	}
	return 0
}

// sensitivityHoles: |1/(1+L)| > peak, that is d2 > peak²·|D + kN|².
func (s *spectrum) sensitivityHoles(peak float64, cause Cause) ([]GainWindow, error) {
	p2 := peak * peak
	return quadratic{a: s.n2.Scale(-p2), b: s.r.Scale(-2 * p2), c: s.d2.Scale(1 - p2)}.holes(cause)
}

// complementaryHoles: |L/(1+L)| > peak.
func (s *spectrum) complementaryHoles(peak float64, cause Cause) ([]GainWindow, error) {
	p2 := peak * peak
	return quadratic{a: s.n2.Scale(1 - p2), b: s.r.Scale(-2 * p2), c: s.d2.Scale(-p2)}.holes(cause)
}

// noiseHoles: |kQ/(D + kN)| > peak, Q being the numerator from noise to effort.
func (s *spectrum) noiseHoles(q poly.Poly, peak float64, cause Cause) ([]GainWindow, error) {
	p2 := peak * peak
	e, o := parts(q)
	q2 := e.Mul(e).Add(poly.New(1, 0).Mul(o).Mul(o))
	return quadratic{a: q2.Sub(s.n2.Scale(p2)), b: s.r.Scale(-2 * p2), c: s.d2.Scale(-p2)}.holes(cause)
}
