package tf

import (
	"math"
	"math/big"
)

// A preciseAxis evaluates with many digits what float64 cannot: the second stage of a root
// that the first has isolated but not refined well enough. Its variable x is that of the
// axisForm, its unit is 1 rad/s scaled back.
type preciseAxis struct {
	a              *axisForm
	ne, no, de, do bigPoly
}

// preciseBits is the precision of the second stage. Light resonances lose twice the digits of
// their damping ratio: 1e-9 costs 60 bits.
const preciseBits = 256

func (a *axisForm) precisely() *preciseAxis {
	n, d := splitExactly(exactPoly(a.numerator)), splitExactly(exactPoly(a.denominator))
	return &preciseAxis{a: a, ne: inBits(n.even, preciseBits), no: inBits(n.odd, preciseBits), de: inBits(d.even, preciseBits), do: inBits(d.odd, preciseBits)}
}

// withSlope returns p(x) and p′(x).
func (p bigPoly) withSlope(x *big.Float) (y, dy *big.Float) {
	y, dy = new(big.Float).SetPrec(preciseBits), new(big.Float).SetPrec(preciseBits)
	for i := len(p) - 1; i >= 0; i-- {
		dy.Mul(dy, x)
		dy.Add(dy, y)
		y.Mul(y, x)
		y.Add(y, p[i])
	}
	return y, dy
}

// A precisePoint holds the halves of N and D at x = v², with their derivatives.
type precisePoint struct {
	p                  *preciseAxis
	x                  *big.Float
	ne, no, de, do     *big.Float
	dne, dno, dde, ddo *big.Float
}

func (p *preciseAxis) at(x *big.Float) (q precisePoint) {
	q.p, q.x = p, x
	q.ne, q.dne = p.ne.withSlope(x)
	q.no, q.dno = p.no.withSlope(x)
	q.de, q.dde = p.de.withSlope(x)
	q.do, q.ddo = p.do.withSlope(x)
	return q
}

// sum returns Σ of products: each term is a coefficient and factors.
func sum(terms ...[]*big.Float) *big.Float {
	s := new(big.Float).SetPrec(preciseBits)
	t := new(big.Float).SetPrec(preciseBits)
	for _, factors := range terms {
		t.Set(factors[0])
		for _, f := range factors[1:] {
			t.Mul(t, f)
		}
		s.Add(s, t)
	}
	return s
}

var bigTwo, bigMinus = big.NewFloat(2), big.NewFloat(-1)

func (q precisePoint) nn() *big.Float {
	return sum([]*big.Float{q.ne, q.ne}, []*big.Float{q.x, q.no, q.no})
}

func (q precisePoint) dd() *big.Float {
	return sum([]*big.Float{q.de, q.de}, []*big.Float{q.x, q.do, q.do})
}

func (q precisePoint) re() *big.Float {
	return sum([]*big.Float{q.ne, q.de}, []*big.Float{q.x, q.no, q.do})
}

func (q precisePoint) im() *big.Float {
	return sum([]*big.Float{q.no, q.de}, []*big.Float{bigMinus, q.ne, q.do})
}

// value returns the curve at q.
func (q precisePoint) value(c curve) *big.Float {
	switch c {
	case gainCurve:
		return sum([]*big.Float{big.NewFloat(max(q.p.a.weight, 1)), q.nn()}, []*big.Float{bigMinus, q.dd()})
	case phaseCurve:
		return q.im()
	}
	m, d := q.nn(), q.dd()
	dm := sum([]*big.Float{bigTwo, q.ne, q.dne}, []*big.Float{q.no, q.no}, []*big.Float{bigTwo, q.x, q.no, q.dno})
	dd := sum([]*big.Float{bigTwo, q.de, q.dde}, []*big.Float{q.do, q.do}, []*big.Float{bigTwo, q.x, q.do, q.ddo})
	if c != resonanceCurve {
		if c == complementaryCurve {
			m, d = d, m
			dm, dd = dd, dm
		}
		m = sum([]*big.Float{m}, []*big.Float{bigTwo, q.re()})
		dr := sum([]*big.Float{q.dne, q.de}, []*big.Float{q.ne, q.dde}, []*big.Float{q.no, q.do},
			[]*big.Float{q.x, q.dno, q.do}, []*big.Float{q.x, q.no, q.ddo})
		dm = sum([]*big.Float{dm}, []*big.Float{bigTwo, dr})
	}
	return sum([]*big.Float{dm, d}, []*big.Float{bigMinus, m, dd})
}

// refine finds the simple root in the bracket by the secant method from an approximation,
// and is ok if a change of sign within 2⁻⁸⁰ of it proves it.
func (p *preciseAxis) refine(b bracket, near float64, c curve) (precisePoint, bool) {
	scale := new(big.Float).SetPrec(preciseBits).SetFloat64(p.a.unit)
	scale.Mul(scale, scale)
	at := func(x *big.Float) (precisePoint, *big.Float) {
		q := p.at(x)
		return q, q.value(c)
	}
	x0 := new(big.Float).SetPrec(preciseBits).SetFloat64(near)
	x0.Mul(x0, scale)
	step := new(big.Float).SetPrec(preciseBits).Set(x0)
	step.SetMantExp(step, -40)
	x1 := new(big.Float).SetPrec(preciseBits).Add(x0, step)
	_, y0 := at(x0)
	_, y1 := at(x1)
	for range 24 {
		slope := new(big.Float).SetPrec(preciseBits).Sub(y1, y0)
		if slope.Sign() == 0 {
			break
		}
		step = new(big.Float).SetPrec(preciseBits).Sub(x1, x0)
		step.Mul(step, y1)
		step.Quo(step, slope)
		x0, y0 = x1, y1
		x1 = new(big.Float).SetPrec(preciseBits).Sub(x1, step)
		if x1.Sign() <= 0 {
			return precisePoint{}, false
		}
		_, y1 = at(x1)
		if magnitude(step) < magnitude(x1)-100 {
			break
		}
	}
	// The root lies in the bracket, and is there.
	back := new(big.Float).SetPrec(preciseBits).Quo(x1, scale)
	x := float(back)
	if !(b.lo <= x && x <= b.hi) {
		return precisePoint{}, false
	}
	var signs [2]int
	for i, e := range [...]float64{-1, 1} {
		d := new(big.Float).SetPrec(preciseBits).SetMantExp(x1, -80)
		d.Mul(d, big.NewFloat(e))
		d.Add(x1, d)
		_, y := at(d)
		signs[i] = y.Sign()
	}
	if signs[0]*signs[1] >= 0 {
		return precisePoint{}, false
	}
	return p.at(x1), true
}

// point returns q as an [exactPoint].
func (q precisePoint) point() exactPoint {
	return exactPoint{new(big.Float).SetPrec(preciseBits).Sqrt(q.x), q.ne, q.no, q.de, q.do}
}

// nn0 and dd0 return the size of |N|² and |D|² if nothing cancelled.
func (q precisePoint) nn0() *big.Float { return q.size(q.p.ne, q.p.no) }
func (q precisePoint) dd0() *big.Float { return q.size(q.p.de, q.p.do) }

func (q precisePoint) size(even, odd bigPoly) *big.Float {
	absolute := func(p bigPoly) *big.Float {
		y := new(big.Float).SetPrec(preciseBits)
		t := new(big.Float).SetPrec(preciseBits)
		for i := len(p) - 1; i >= 0; i-- {
			y.Mul(y, q.x)
			y.Add(y, t.Abs(p[i]))
		}
		return y
	}
	e, o := absolute(even), absolute(odd)
	return sum([]*big.Float{e, e}, []*big.Float{q.x, o, o})
}

// magnitudeRatio returns the magnitude that the curve c is about.
func (q precisePoint) magnitudeRatio(c curve) float64 {
	n, d := q.nn(), q.dd()
	if c != resonanceCurve {
		if c == sensitivityCurve {
			n, d = d, n
		}
		// |F|² from the halves of F, which may nearly cancel.
		fe, fo := sum([]*big.Float{q.ne}, []*big.Float{q.de}), sum([]*big.Float{q.no}, []*big.Float{q.do})
		d = sum([]*big.Float{fe, fe}, []*big.Float{q.x, fo, fo})
	}
	if d.Sign() == 0 {
		return math.Inf(1)
	}
	n.Quo(n, d)
	return float(n.Sqrt(n))
}
