package tf

import (
	"math"
)

const (
	// peakTolerance is the relative width to which the supremum of a magnitude with dead time
	// is enclosed, as far as rounding allows: a peak above about 10³ has fewer digits.
	peakTolerance = 1e-13
	// mostCells bounds the search.
	mostCells = 200000
)

// A delayedSum is 1 + (A/B)·e^(-jτv) on the axis: its least magnitude is looked for. For the
// sensitivity A/B = N/D; for the complementary sensitivity A/B = D/N and τ is negative.
type delayedSum struct {
	aRe, aIm, bRe, bIm []float64 // A(jv) and B(jv) as polynomials in v
	tau                float64
	work               []float64
}

func newDelayedSum(a, b halves, degree int, tau float64) *delayedSum {
	size := 2*max(len(a.even.c), len(a.odd.c), len(b.even.c), len(b.odd.c)) + 1
	f := &delayedSum{tau: tau, work: make([]float64, 4*size)}
	f.aRe, f.aIm = alternate(a)
	f.bRe, f.bIm = alternate(b)
	return f
}

// alternate returns even(v²) and v·odd(v²) as polynomials in v.
func alternate(h halves) (re, im []float64) {
	size := max(2*len(h.even.c)-1, 2*len(h.odd.c), 1)
	re, im = make([]float64, size), make([]float64, size)
	for i, c := range h.even.c {
		re[2*i] = c
	}
	for i, c := range h.odd.c {
		im[2*i+1] = c
	}
	return re, im
}

// taylor writes the Taylor coefficients of p about c to t.
func taylor(t, p []float64, c float64) []float64 {
	t = t[:len(p)]
	copy(t, p)
	for i := range t {
		for k := len(t) - 2; k >= i; k-- {
			t[k] += float64(c * t[k+1])
		}
	}
	return t
}

// bounds returns bounds on |p|, |p′| and |p″| within h of the centre of the Taylor
// coefficients, and the part of the first that comes from powers above 0.
func bounds(re, im []float64, h float64) (p0, p1, p2, rest float64) {
	for k := len(re) - 1; k >= 0; k-- {
		m := math.Hypot(re[k], im[k])
		p2 = float64(p2*h) + 2*p1
		p1 = float64(p1*h) + p0
		p0 = float64(p0*h) + m
	}
	rest = p0 - math.Hypot(re[0], im[0])
	return p0, p1, p2, rest
}

// A cell is an interval of v about a centre.
type cell struct{ centre, half float64 }

// enclose returns f = |1 + (A/B)e^(-jτv)|² at the centre of the cell with its first
// derivative, and a lower bound on f over the cell.
//
// With L = (A/B)e^(-jτv): f″ = 2|L′|² + 2 Re((1+L)·conj L″), and bounds on A, B and their
// derivatives over the cell bound it. Where B may vanish, |L| ≥ |A|/|B| decides.
func (f *delayedSum) enclose(c cell) (value, slope, lower float64) {
	size := len(f.work) / 4
	ar, ai := taylor(f.work[:size], f.aRe, c.centre), taylor(f.work[size:2*size], f.aIm, c.centre)
	br, bi := taylor(f.work[2*size:3*size], f.bRe, c.centre), taylor(f.work[3*size:], f.bIm, c.centre)
	a0, a1, a2, aRest := bounds(ar, ai, c.half)
	b0, b1, b2, bRest := bounds(br, bi, c.half)
	turn := math.Abs(f.tau)

	a, b := complex(ar[0], ai[0]), complex(br[0], bi[0])
	sin, cos := math.Sincos(-f.tau * c.centre)
	l := a / b * complex(cos, sin)
	one := 1 + l
	value = real(one)*real(one) + imag(one)*imag(one)
	if len(ar) > 1 || len(br) > 1 {
		var da, db complex128
		if len(ar) > 1 {
			da = complex(ar[1], ai[1])
		}
		if len(br) > 1 {
			db = complex(br[1], bi[1])
		}
		dl := (da/b)*complex(cos, sin) - l*(db/b) - l*complex(0, f.tau)
		slope = 2 * (real(one)*real(dl) + imag(one)*imag(dl))
	} else {
		dl := -l * complex(0, f.tau)
		slope = 2 * (real(one)*real(dl) + imag(one)*imag(dl))
	}
	if math.IsNaN(value) || math.IsInf(value, 0) {
		value, slope = math.Inf(1), 0
	}

	lower = 0
	if aLow := a0 - 2*aRest; aLow > 0 { // |A| ≥ aLow on the cell
		if r := aLow/b0 - 1; r > 0 {
			lower = r * r
		}
	}
	if bLow := b0 - 2*bRest; bLow > 0 {
		l0 := a0 / bLow
		if l0 < 1 {
			lower = max(lower, (1-l0)*(1-l0))
		}
		// A′ and A″ with the turn of the dead time.
		n1 := a1 + turn*a0
		n2 := a2 + 2*turn*a1 + turn*turn*a0
		q1, q2 := b1/bLow, b2/bLow
		l1 := n1/bLow + l0*q1
		l2 := n2/bLow + 2*n1/bLow*q1 + l0*q2 + 2*l0*q1*q1
		bend := 2 * (l1*l1 + min(1+l0, math.Sqrt(value)+l1*c.half)*l2)
		if s := value - math.Abs(slope)*c.half - bend*c.half*c.half/2; s > lower {
			lower = s
		}
	}
	return value, slope, lower
}

// leastSquare returns the minimum of f over [0, end] or the given start if that is less, and
// where it is. ok tells that it is enclosed to peakTolerance.
//
// Method: branch and bound. A cell is dropped when the lower bound over it is no less than the
// best value found; otherwise it is halved.
func (f *delayedSum) leastSquare(end float64, best, bestAt float64) (least, at float64, ok bool) {
	cells := []cell{{end / 2, end / 2}}
	for count := 0; len(cells) > 0; count++ {
		if count > mostCells {
			return best, bestAt, false
		}
		c := cells[len(cells)-1]
		cells = cells[:len(cells)-1]
		value, slope, lower := f.enclose(c)
		if value < best*(1-4*unitRoundoff) {
			best, bestAt = value, c.centre
		}
		// Rounding of 1 + L is about a unit of 1 where this nearly vanishes.
		if lower >= best*(1-peakTolerance-32*unitRoundoff/math.Sqrt(best)) {
			continue
		}
		if c.half <= 4*unitRoundoff*c.centre {
			continue
		}
		h := c.half / 2
		left, right := cell{c.centre - h, h}, cell{c.centre + h, h}
		// Downhill first, so that good values are found early.
		if slope > 0 {
			cells = append(cells, right, left)
		} else {
			cells = append(cells, left, right)
		}
	}
	return best, bestAt, true
}

// polish moves v to the zero of the slope of f next to it.
func (f *delayedSum) polish(v float64) float64 {
	slope := func(v float64) float64 {
		_, s, _ := f.enclose(cell{v, 0})
		return s
	}
	// Secant steps from a small distance; each must shorten the last.
	h := 1e-6 * v
	x0, x1 := v, v+h
	s0, s1 := slope(x0), slope(x1)
	for range 60 {
		if s1 == s0 {
			return x1
		}
		x2 := x1 - s1*(x1-x0)/(s1-s0)
		if !(math.Abs(x2-v) <= 1e-4*v) {
			return v
		}
		if math.Abs(x2-x1) <= unitRoundoff*x1 {
			return x2
		}
		x0, s0 = x1, s1
		x1, s1 = x2, slope(x2)
	}
	return x1
}

// delayedPeak returns the supremum of |D/F| or |N/F| with dead time. Beyond phase.tail the rational
// part is monotone in magnitude, and a crossing of the negative real axis stands there: no
// later value is larger than that at the crossing or the one approached at infinity.
func (a *axisForm) delayedPeak(c curve, phase delayedPhase) (Peak, error) {
	top, bottom, tau := a.n, a.d, a.deadTime*a.unit
	n, d := a.numerator, a.denominator
	if c == complementaryCurve {
		top, bottom, tau = bottom, top, -tau
		n, d = d, n
	}
	// The limits: at zero the dead time does nothing; at infinity the phase turns for ever.
	ends := c.ends(a)
	best := Peak{ends[0], 0}
	if math.IsNaN(best.Magnitude) {
		p, err := a.exactly().peak(c) // F(0) may be 0
		if err != nil {
			return Peak{}, err
		}
		if p.Frequency == 0 && math.IsInf(p.Magnitude, 1) {
			return p, nil
		}
		best = Peak{0, 0}
	}
	k := max(n.Degree(), d.Degree())
	q := math.Abs(n.Coefficient(k) / d.Coefficient(k))
	switch {
	case q == 1:
		return Peak{math.Inf(1), math.Inf(1)}, nil
	default:
		best.better(Peak{1 / math.Abs(1-q), math.Inf(1)})
	}
	if math.IsInf(best.Magnitude, 1) {
		return best, nil
	}
	// At a phase crossover 1 + L is real. One that comes up to a value approached at infinity
	// attains it.
	for _, list := range [...][]Crossover{phase.crossovers, phase.beyond} {
		for _, x := range list {
			y := 1 / math.Abs(1-1/x.Margin)
			if c == complementaryCurve {
				y /= x.Margin
			}
			if y > best.Magnitude || y >= best.Magnitude*(1-8*unitRoundoff) && math.IsInf(best.Frequency, 1) {
				best = Peak{y, x.Frequency}
			}
		}
	}
	f := newDelayedSum(top, bottom, a.degree, tau)
	start := math.Inf(1)
	if best.Magnitude > 0 {
		start = 1 / (best.Magnitude * best.Magnitude)
	}
	least, at, ok := f.leastSquare(phase.tail*(1+1e-12), start, -1)
	if !ok {
		return Peak{}, &UnsupportedError{Call: "tf: peak", What: "a loop with dead time whose peak is not enclosed within the bounded work"}
	}
	if at < 0 {
		return best, nil
	}
	at = f.polish(at)
	if v, _, _ := f.enclose(cell{at, 0}); v < least {
		least = v
	}
	return Peak{1 / math.Sqrt(least), at * a.unit}, nil
}

// peakBySearch encloses the supremum of |D/F| or |N/F| of a rational g on [0, 1] in v and, with
// reversed polynomials, on [0, 1] in 1/v. It is not ok beside a pole on the axis.
func (a *axisForm) peakBySearch(c curve) (Peak, bool) {
	if !a.ok || c == resonanceCurve {
		return Peak{}, false
	}
	top, bottom := a.n, a.d
	if c == complementaryCurve {
		top, bottom = bottom, top
	}
	ends := c.ends(a)
	if math.IsNaN(ends[0]) || math.IsNaN(ends[1]) {
		return Peak{}, false
	}
	best := Peak{ends[0], 0}
	best.better(Peak{ends[1], a.lastFrequency()})
	direct := newDelayedSum(top, bottom, a.degree, 0)
	for _, inverted := range [...]bool{false, true} {
		f := direct
		if inverted {
			f = direct.inverted(a.degree)
		}
		least, at, ok := f.leastSquare(1, 1/(best.Magnitude*best.Magnitude), -1)
		if !ok || !(least > 1e-12) {
			return Peak{}, false
		}
		if at < 0 {
			continue
		}
		if p := f.polish(at); p > 0 {
			if v, _, _ := f.enclose(cell{p, 0}); v <= least*(1+1e-12) {
				least, at = v, p
			}
		}
		if inverted {
			at = 1 / at
		}
		best = Peak{1 / math.Sqrt(least), a.frequencyAt(at * a.unit)}
	}
	return best, true
}

// inverted returns the sum as a function of 1/v. |A/B| and its phase do not change when both
// polynomials of this degree are multiplied by v^-degree.
func (f *delayedSum) inverted(degree int) *delayedSum {
	reverse := func(p []float64) []float64 {
		q := make([]float64, degree+1)
		for i, c := range p {
			if i <= degree {
				q[degree-i] = c
			}
		}
		return q
	}
	return &delayedSum{reverse(f.aRe), reverse(f.aIm), reverse(f.bRe), reverse(f.bIm), 0, make([]float64, 4*(degree+1))}
}
