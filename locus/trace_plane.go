package locus

import (
	"math"
	"math/big"
	"math/cmplx"

	"github.com/polewright/polewright/poly"
)

// unitRoundoff is half the distance from 1 to the next float64.
const unitRoundoff = 0x1p-53

// minNormal is the smallest normal float64.
const minNormal = 0x1p-1022

// A plane is a family without common factors in coordinates of its own: s = 2^stretch·x and
// k = 2^lift·κ, so that a(x) + κ·b(x) = 0 has roots and gains of moderate size. Powers of two
// change no digit. The float64 coefficients are within a relative unitRoundoff of the exact
// ones, or within minNormal; tail holds what the rounding cut off, nil if nothing.
//
// Letters in this file and those that work on planes: a the fixed and b the scaled polynomial,
// by power and padded to the same length; n their larger degree; x a root; κ a gain.
type plane struct {
	a, b          []float64
	tailA, tailB  []float64
	n             int
	stretch, lift int
	origin        float64   // κ is counted from here
	major         []float64 // with an origin: |a| + |origin·b|, of which a is off by less than 2⁻¹⁰¹ beyond its tail
	leadA, leadB  int       // degrees of a and b
	dropAt        float64   // κ at which the leading coefficient vanishes; NaN if at none
	dropLow       float64   // the rest of it beyond float64
	dropOrder     int       // how many roots are at infinity there
	dropError     float64   // bound on the error of dropAt + dropLow
	escaping      int       // how many roots are at infinity for κ = ±∞
}

// newPlane scales a coprime pair of which neither is zero and not both are constant.
func newPlane(fixed, scaled poly.Poly) *plane {
	n := max(fixed.Degree(), scaled.Degree())
	p := &plane{n: n, leadA: fixed.Degree(), leadB: scaled.Degree()}
	p.stretch = typicalExponent(fixed, scaled)
	var exponentA, exponentB int
	p.a, p.tailA, exponentA = stretched(fixed, n, p.stretch)
	p.b, p.tailB, exponentB = stretched(scaled, n, p.stretch)
	p.lift = exponentA - exponentB
	p.dropAt = math.NaN()
	switch {
	case p.leadA == p.leadB:
		at := coefficient(p.a, p.tailA, n).over(coefficient(p.b, p.tailB, n)).minus()
		p.dropAt, p.dropLow = at.h, at.l
		p.dropError = 8 * doubleRoundoff * math.Abs(p.dropAt)
		p.dropOrder = leadingDrop(fixed, scaled)
	case p.leadA < p.leadB:
		p.dropAt = 0
		p.dropOrder = p.leadB - p.leadA
	default:
		p.escaping = p.leadA - p.leadB
	}
	return p
}

// leadingDrop returns how many leading coefficients of two polynomials of the same degree
// stand in the ratio of the first ones, exactly.
func leadingDrop(fixed, scaled poly.Poly) int {
	n := fixed.Degree()
	ratio := fixed.Coefficient(n) / scaled.Coefficient(n)
	near := func(i int) bool {
		a, b := fixed.Coefficient(i), ratio*scaled.Coefficient(i)
		return math.Abs(a-b) <= 8*unitRoundoff*(math.Abs(a)+math.Abs(b))
	}
	if !near(n - 1) {
		return 1
	}
	a, _ := fixed.Integers()
	b, _ := scaled.Integers()
	var left, right big.Int
	order := 1
	for i := n - 1; i >= 0; i-- {
		left.Mul(a[n], b[i])
		right.Mul(b[n], a[i])
		if left.Cmp(&right) != 0 {
			break
		}
		order++
	}
	return order
}

// typicalExponent returns the power of two nearest to the geometric mean of the moduli of
// all roots of both polynomials that are not zero.
func typicalExponent(ps ...poly.Poly) int {
	var sum float64
	var count int
	for _, p := range ps {
		n, low := p.Degree(), 0
		for low < n && p.Coefficient(low) == 0 {
			low++
		}
		if low >= n {
			continue
		}
		ratio := math.Log2(math.Abs(p.Coefficient(low))) - math.Log2(math.Abs(p.Coefficient(n)))
		if math.IsNaN(ratio) || math.IsInf(ratio, 0) {
			continue
		}
		sum += ratio
		count += n - low
	}
	if count == 0 {
		return 0
	}
	return int(math.Round(sum / float64(count)))
}

// stretched returns the coefficients of p(2^stretch·x)·2^-exponent, the largest of modulus
// near 1, padded with zeros to degree n.
func stretched(p poly.Poly, n, stretch int) (c, tail []float64, exponent int) {
	c = make([]float64, n+1)
	plain := true
	exponent = math.MinInt
	for i := range c {
		v := p.Coefficient(i)
		c[i] = v
		switch {
		case v == 0:
		case math.IsInf(v, 0) || math.Abs(v) < minNormal:
			plain = false
		default:
			_, e := math.Frexp(v)
			exponent = max(exponent, e+i*stretch)
		}
	}
	if plain {
		plain = byPower(c[:p.Degree()+1]).Equal(p)
	}
	if plain {
		for i, v := range c {
			c[i] = math.Ldexp(v, i*stretch-exponent)
		}
		return c, nil, exponent
	}
	// Through the exact coefficients: their range and their digits may exceed float64.
	integers, common := p.Integers()
	exponent = math.MinInt
	for i, m := range integers {
		if m.Sign() != 0 {
			exponent = max(exponent, m.BitLen()+common+i*stretch)
		}
	}
	tail = make([]float64, n+1)
	for i, m := range integers {
		if m.Sign() == 0 {
			c[i] = 0
			continue
		}
		v := new(big.Float).SetInt(m)
		v.SetMantExp(v, common+i*stretch-exponent)
		c[i], _ = v.Float64()
		v.Sub(v, new(big.Float).SetFloat64(c[i]))
		tail[i], _ = v.Float64()
	}
	return c, tail, exponent
}

// byPower returns the polynomial with the given coefficients, lowest power first.
func byPower(c []float64) poly.Poly {
	high := make([]float64, len(c))
	for i, v := range c {
		high[len(c)-1-i] = v
	}
	return poly.New(high...)
}

// coprime tells whether the polynomials of a family are seen to have no common factor, from the
// roots of the fixed one. If not, exact arithmetic must decide.
func coprime(f Family, poles []poly.Root) bool {
	n := f.scaled.Degree()
	if n < 0 || f.fixed.Degree() < 0 {
		return false
	}
	if n == 0 || f.fixed.Degree() == 0 {
		return true
	}
	for _, pole := range poles {
		// |scaled| over the disc of the pole is at least the value at its centre, less what
		// the slopes of the majorant allow, less rounding.
		var y complex128
		var m, d float64
		r := (cmplx.Abs(pole.Value) + pole.Radius) * (1 + 4*unitRoundoff)
		for i := n; i >= 0; i-- {
			c := f.scaled.Coefficient(i)
			y = y*pole.Value + complex(c, 0)
			d = d*r + m
			m = m*r + math.Abs(c)
		}
		if !(cmplx.Abs(y) > (4*float64(n)+10)*unitRoundoff*m+d*pole.Radius+minNormal) {
			return false
		}
	}
	return true
}

// toX and fromX, toK and fromK pass between the caller's coordinates and those of the plane.
func (p *plane) toX(s complex128) complex128 {
	return complex(math.Ldexp(real(s), -p.stretch), math.Ldexp(imag(s), -p.stretch))
}

func (p *plane) fromX(x complex128) complex128 {
	return complex(math.Ldexp(real(x), p.stretch), math.Ldexp(imag(x), p.stretch))
}

func (p *plane) toK(k float64) float64 { return math.Ldexp(k, -p.lift) - p.origin }

func (p *plane) fromK(κ float64) float64 { return math.Ldexp(κ+p.origin, p.lift) }

// from returns the plane with gains counted from κ, for the small steps that float64 cannot
// make from there otherwise. It is made of one without origin.
func (p *plane) from(κ float64) *plane {
	q := *p
	q.origin = κ
	q.a, q.tailA, q.major = make([]float64, len(p.a)), make([]float64, len(p.a)), make([]float64, len(p.a))
	for i := range q.a {
		q.major[i] = math.Abs(p.a[i]) + math.Abs(κ*p.b[i])
		c := coefficient(p.a, p.tailA, i).plus(coefficient(p.b, p.tailB, i).timesFloat(κ))
		q.a[i], q.tailA[i] = c.h, c.l
	}
	drop := double{p.dropAt, p.dropLow}.plusFloat(-κ)
	q.dropAt, q.dropLow = drop.h, drop.l
	return &q
}
