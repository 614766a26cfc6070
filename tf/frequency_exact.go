package tf

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
)

// An exactAxis answers the questions of an axisForm without rounding: signs, numbers of
// roots and coincidences are exact, and values carry digits enough. The letters are the
// same, with unit 1.
type exactAxis struct {
	a      *axisForm
	common exact.Poly // in s or w, the greatest common divisor of N and D, taken out below
	n, d   exactHalves
	nn, dd exact.Poly
	re, im exact.Poly
}

type exactHalves struct{ even, odd exact.Poly }

// digits is the precision, in bits, beyond that of the coefficients.
const digits = 320

func exactPoly(p poly.Poly) exact.Poly { return exact.New(p.Integers()) }

func (a *axisForm) exactly() *exactAxis {
	n, d := exactPoly(a.numerator), exactPoly(a.denominator)
	e := &exactAxis{a: a, common: exact.FromFloats(1)}
	if !n.IsZero() {
		e.common = exact.GCD(n, d)
		if e.common.Degree() > 0 {
			// The quotients are exact up to constants, which a common factor does not matter
			// for only if it is the same: divide both by the same polynomial.
			n, d = divideExactly(n, e.common), divideExactly(d, e.common)
		}
	}
	e.n, e.d = splitExactly(n), splitExactly(d)
	e.nn, e.dd = e.n.square(), e.d.square()
	e.re = e.n.even.Mul(e.d.even).Add(timesX(e.n.odd.Mul(e.d.odd)))
	e.im = e.n.odd.Mul(e.d.even).Sub(e.n.even.Mul(e.d.odd))
	return e
}

// divideExactly returns p/q, which leaves no remainder.
func divideExactly(p, q exact.Poly) exact.Poly {
	if r, ok := p.Divide(q); ok {
		return r
	}
	return p
}

func splitExactly(p exact.Poly) exactHalves {
	c, exponent := p.Integers()
	var even, odd []*big.Int
	for i, x := range c {
		y := new(big.Int).Set(x)
		if i&2 != 0 {
			y.Neg(y)
		}
		if i&1 == 0 {
			even = append(even, y)
		} else {
			odd = append(odd, y)
		}
	}
	return exactHalves{exact.New(even, exponent), exact.New(odd, exponent)}
}

func (h exactHalves) square() exact.Poly {
	return h.even.Mul(h.even).Add(timesX(h.odd.Mul(h.odd)))
}

func timesX(p exact.Poly) exact.Poly { return p.Mul(exact.FromFloats(0, 1)) }

// positiveRoots returns the distinct positive roots of p to many digits.
func positiveRoots(p exact.Poly) []*big.Float {
	if p.Degree() < 1 {
		return nil
	}
	p, _ = p.StripZero()
	p = p.SquareFreePart()
	isolated := p.Isolate(exact.Float(0), exact.Float(math.Inf(1)), exact.Open)
	roots := make([]*big.Float, len(isolated))
	for i, r := range isolated {
		roots[i] = refineExactly(p, r)
	}
	return roots
}

// A bigPoly is a polynomial by power, for evaluation to many digits.
type bigPoly []*big.Float

// inDigits converts p; the precision covers the longest coefficient and the digits beyond.
func inDigits(p exact.Poly) bigPoly {
	c, _ := p.Integers()
	longest := 0
	for _, x := range c {
		longest = max(longest, x.BitLen())
	}
	return inBits(p, uint(2*longest+digits))
}

// inBits converts p to a given precision.
func inBits(p exact.Poly, prec uint) bigPoly {
	c, exponent := p.Integers()
	q := make(bigPoly, len(c))
	for i, x := range c {
		f := new(big.Float).SetPrec(prec).SetInt(x)
		q[i] = f.SetMantExp(f, exponent)
	}
	return q
}

func (p bigPoly) at(x *big.Float) *big.Float {
	if len(p) == 0 {
		return new(big.Float).SetPrec(x.Prec())
	}
	prec := max(p[0].Prec(), x.Prec())
	y := new(big.Float).SetPrec(prec).Set(p[len(p)-1])
	for i := len(p) - 2; i >= 0; i-- {
		y.Mul(y, x)
		y.Add(y, p[i])
	}
	return y
}

func (p bigPoly) derivative() bigPoly {
	if len(p) < 2 {
		return nil
	}
	q := make(bigPoly, len(p)-1)
	for i := range q {
		q[i] = new(big.Float).SetPrec(p[0].Prec()).SetInt64(int64(i + 1))
		q[i].Mul(q[i], p[i+1])
	}
	return q
}

// number returns a finite x with prec bits; x itself may be rounded where it has more.
func number(x exact.Dyadic, prec uint) *big.Float {
	return new(big.Float).SetPrec(prec).SetRat(x.Rat())
}

// refineExactly narrows an isolating interval of a simple root down to the digits asked for:
// bisection, with a Newton step from the middle as soon as that stays inside, each step
// checked by a change of sign.
func refineExactly(p exact.Poly, r exact.Isolated) *big.Float {
	q := inDigits(p)
	prec := q[0].Prec()
	lo, hi := number(r.Lo, prec), number(r.Hi, prec)
	if r.Exact() {
		return lo
	}
	dq := q.derivative()
	// The sign just above lo; lo itself may be another root.
	below := -signAboveRoot(p, r)
	x := new(big.Float).SetPrec(prec)
	half := new(big.Float).SetPrec(prec).SetFloat64(0.5)
	width := new(big.Float).SetPrec(prec)
	for range 4 * int(prec) {
		width.Sub(hi, lo)
		if width.Sign() <= 0 || width.MantExp(nil) < lo.MantExp(nil)-digits/2 {
			break
		}
		x.Add(lo, hi)
		x.Mul(x, half)
		y := q.at(x)
		switch y.Sign() {
		case 0:
			return x
		case below:
			lo.Set(x)
		default:
			hi.Set(x)
		}
		// Newton from the middle, with a margin of the square of the relative step on either
		// side.
		slope := dq.at(x)
		if slope.Sign() == 0 {
			continue
		}
		step := new(big.Float).SetPrec(prec).Quo(y, slope)
		next := new(big.Float).SetPrec(prec).Sub(x, step)
		if next.Cmp(lo) <= 0 || next.Cmp(hi) >= 0 {
			continue
		}
		for _, side := range [...]int{-1, +1} {
			spread := new(big.Float).SetPrec(prec).Abs(step)
			// |step|·2^-k where k is about the number of bits that step is smaller than x.
			k := max(2, (x.MantExp(nil)-spread.MantExp(nil))-3)
			spread.SetMantExp(spread, -k)
			if side < 0 {
				spread.Neg(spread)
			}
			end := new(big.Float).SetPrec(prec).Add(next, spread)
			if end.Cmp(lo) <= 0 || end.Cmp(hi) >= 0 {
				continue
			}
			switch q.at(end).Sign() {
			case 0:
				return end
			case below:
				lo.Set(end)
			default:
				hi.Set(end)
			}
		}
	}
	x.Add(lo, hi)
	return x.Mul(x, half)
}

// signAboveRoot returns the sign of p between an isolated root and Hi.
func signAboveRoot(p exact.Poly, r exact.Isolated) int {
	if s := p.SignAt(r.Hi); s != 0 {
		return s
	}
	// Hi is another root, a simple one: the sign below it is opposite to that of the slope.
	return -p.Derivative().SignAt(r.Hi)
}

// An exactPoint holds N and D at jv.
type exactPoint struct {
	v              *big.Float
	ne, no, de, do *big.Float
}

func (e *exactAxis) at(x *big.Float) exactPoint {
	v := new(big.Float).SetPrec(x.Prec()).Sqrt(x)
	return exactPoint{v, inDigits(e.n.even).at(x), inDigits(e.n.odd).at(x), inDigits(e.d.even).at(x), inDigits(e.d.odd).at(x)}
}

func float(x *big.Float) float64 {
	f, _ := x.Float64()
	return f
}

// minusProduct returns the real and the imaginary part of -N·conj D divided by a power of
// two that keeps them in range.
func (p exactPoint) minusProduct() (re, im float64) {
	mul := func(a, b *big.Float) *big.Float {
		return new(big.Float).SetPrec(max(a.Prec(), b.Prec())).Mul(a, b)
	}
	no, do := mul(p.no, p.v), mul(p.do, p.v)
	r := mul(p.ne, p.de)
	r.Add(r, mul(no, do)).Neg(r)
	i := mul(p.ne, do)
	i.Sub(i, mul(no, p.de))
	// What only the digits beyond the last make is zero.
	scale := max(magnitude(mul(p.ne, p.de)), magnitude(mul(no, do)), magnitude(mul(p.ne, do)), magnitude(mul(no, p.de)))
	clean := func(x *big.Float) float64 {
		if magnitude(x) < scale-digits/3 {
			return 0
		}
		return float(new(big.Float).SetMantExp(x, -scale))
	}
	return clean(r), clean(i)
}

// magnitude returns the binary exponent of x, far below all others for 0.
func magnitude(x *big.Float) int {
	if x.Sign() == 0 {
		return math.MinInt32
	}
	return x.MantExp(nil)
}

// ratio returns |D|/|N|.
func (p exactPoint) ratio() float64 {
	square := func(even, odd *big.Float) *big.Float {
		y := new(big.Float).SetPrec(even.Prec()).Mul(odd, p.v)
		y.Mul(y, y)
		z := new(big.Float).SetPrec(even.Prec()).Mul(even, even)
		return y.Add(y, z)
	}
	n, d := square(p.ne, p.no), square(p.de, p.do)
	if n.Sign() == 0 {
		return math.Inf(1)
	}
	return float(d.Quo(d, n).Sqrt(d))
}

// frequencyOf returns ω at v, the unit being 1.
func (a *axisForm) frequencyOf(v *big.Float) float64 { return a.frequencyAt(float(v)) }

// turnBack returns arg(-g) in (-π, π], dead time included.
func (a *axisForm) turnBack(p exactPoint) float64 {
	re, im := p.minusProduct()
	m := math.Atan2(im, re)
	if a.deadTime > 0 {
		turn := new(big.Float).SetPrec(p.v.Prec()).SetFloat64(a.deadTime)
		m = wrap(m - reduceTurn(turn.Mul(turn, p.v)))
	}
	if m <= -math.Pi {
		m = math.Pi
	}
	return m
}

func (e *exactAxis) gainCrossovers() ([]Crossover, error) {
	g := e.nn.Scale(exact.Float(max(e.a.weight, 1))).Sub(e.dd)
	if g.IsZero() {
		return nil, &DegenerateError{Call: "tf: gain crossovers", What: "the magnitude of the open loop is 1 at every frequency"}
	}
	var found []Crossover
	for _, x := range positiveRoots(g) {
		p := e.at(x)
		found = append(found, Crossover{e.a.frequencyOf(p.v), e.a.turnBack(p)})
	}
	if e.a.period != 0 && g.Degree() < e.degree() {
		// |g| = 1 at z = -1, where g is real.
		m := math.Pi
		if e.a.marginAtInfinity() > 0 {
			m = 0
		}
		found = append(found, Crossover{math.Pi / e.a.period, m})
	}
	return found, nil
}

// degree of |N|² and |D|² in x, formally.
func (e *exactAxis) degree() int { return max(e.nn.Degree(), e.dd.Degree()) }

// reduceTurn returns x - 2πk in [-π, π], rounded once.
func reduceTurn(x *big.Float) float64 {
	period := new(big.Float).SetPrec(x.Prec()).Set(twoPi)
	k := new(big.Float).SetPrec(x.Prec()).Quo(x, period)
	k.Add(k, new(big.Float).SetFloat64(0.5))
	n, _ := k.Int(nil)
	t := new(big.Float).SetPrec(x.Prec()).SetInt(n)
	return float(t.Sub(x, t.Mul(t, period)))
}

// twoPi is 2π to 100 decimals (A000796 of the On-Line Encyclopedia of Integer Sequences).
var twoPi = func() *big.Float {
	p, _, err := big.ParseFloat("3.1415926535897932384626433832795028841971693993751058209749445923078164062862089986280348253421170679", 10, 400, big.ToNearestEven)
	if err != nil {
		panic(err)
	}
	return p.Mul(p, big.NewFloat(2))
}()

func (e *exactAxis) phaseCrossovers() ([]Crossover, error) {
	if e.im.IsZero() {
		if e.negativeSomewhere() {
			return nil, &DegenerateError{Call: "tf: phase crossovers", What: "the open loop is real and negative over a whole range of frequencies"}
		}
		return nil, nil
	}
	// Where both parts vanish there is a pole or a zero on the axis, no crossing.
	im := e.im
	for {
		h := exact.GCD(im, e.re)
		if e.re.IsZero() || h.Degree() < 1 {
			break
		}
		im = divideExactly(im, h)
	}
	var found []Crossover
	for _, x := range positiveRoots(im) {
		p := e.at(x)
		if re, _ := p.minusProduct(); re > 0 {
			found = append(found, Crossover{e.a.frequencyOf(p.v), p.ratio()})
		}
	}
	if e.a.period != 0 {
		if m := e.a.marginAtInfinity(); m > 0 {
			found = append(found, Crossover{math.Pi / e.a.period, m})
		}
	}
	return found, nil
}

// negativeSomewhere tells whether N·conj D, real everywhere, is negative on some interval.
func (e *exactAxis) negativeSomewhere() bool {
	if e.re.IsZero() {
		return false
	}
	if e.re.LeadSign() < 0 {
		return true
	}
	// Below each root the sign is to be seen just beside it: a change of sign makes an
	// interval where it is negative.
	for _, f := range e.re.SquareFree() {
		if f.Multiplicity&1 == 1 && len(positiveRoots(f.Poly)) > 0 {
			return true
		}
	}
	return false
}
