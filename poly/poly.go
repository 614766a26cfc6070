package poly

import (
	"fmt"
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
)

// Poly is a polynomial with real coefficients, highest power first: New(1, 6, 11, 6) is
// s³ + 6s² + 11s + 6. A coefficient is exactly the binary fraction its float64 holds, and
// arithmetic on polynomials rounds nothing.
//
// The zero value is the zero polynomial. A Poly never changes; goroutines may share one.
// A Poly made from a NaN or an infinity is invalid: it keeps what it was given, [Poly.Err]
// and every call that can return an error report it, and what is computed from it is
// invalid too.
type Poly struct {
	c     []float64    // by power, c[i] of sⁱ, rounded to nearest; the last stands for a coefficient that is not zero
	rest  []float64    // what c lacks: one number for each coefficient, or two that add up to it; or
	exact *exact.Poly  // the polynomial itself, where that is not enough; both nil where c is exact
	lo    []float64    // what c lacks, to nearest: the first numbers of rest, or computed from exact
	given []complex128 // the roots, if they were given; nil if not
	err   error        // what is wrong with an invalid polynomial
}

// New returns the polynomial with the given coefficients, highest power first. Leading
// zeros are dropped; New() is the zero polynomial. A coefficient that is NaN or infinite
// makes the polynomial invalid, see [Poly.Err].
func New(coefficients ...float64) Poly {
	for len(coefficients) > 0 && coefficients[0] == 0 {
		coefficients = coefficients[1:]
	}
	if len(coefficients) == 0 {
		return Poly{}
	}
	p := Poly{c: make([]float64, len(coefficients))}
	for i, c := range coefficients {
		p.c[len(coefficients)-1-i] = c
		if math.IsNaN(c) || math.IsInf(c, 0) {
			p.err = &ArgumentError{Call: "poly.New", Argument: fmt.Sprintf("coefficients[%d]", i), Reason: fmt.Sprintf("%v is not a finite number", c)}
		}
	}
	return p
}

// invalid returns a polynomial that reports err wherever it is used.
func invalid(err error) Poly { return Poly{c: []float64{math.NaN()}, err: err} }

// Err returns the reason why the polynomial is invalid, a [*ArgumentError]; nil if it is not.
func (p Poly) Err() error { return p.err }

// Degree returns the degree of the exact polynomial; -1 for the zero polynomial.
func (p Poly) Degree() int { return len(p.c) - 1 }

// Coefficient returns the coefficient of a power, rounded to nearest where the exact one is
// no float64: ±Inf beyond the range of float64, zero below half its smallest number. It is 0
// for a power that the polynomial does not have.
func (p Poly) Coefficient(power int) float64 {
	if power < 0 || power >= len(p.c) {
		return 0
	}
	return p.c[power]
}

// Integers returns the exact polynomial as 2^exponent · Σ coefficients[i]·sⁱ, the
// coefficients by power (lowest first), the last not zero. The caller owns the result. The
// zero polynomial and an invalid one give no coefficients.
func (p Poly) Integers() (coefficients []*big.Int, exponent int) {
	shared, exponent := p.integers().Integers()
	coefficients = make([]*big.Int, len(shared))
	for i, n := range shared {
		coefficients[i] = new(big.Int).Set(n)
	}
	return coefficients, exponent
}

// FromIntegers returns the polynomial 2^exponent · Σ coefficients[i]·sⁱ, exactly; the
// coefficients stand by power, lowest first. It is the inverse of [Poly.Integers].
func FromIntegers(coefficients []*big.Int, exponent int) Poly {
	own := make([]*big.Int, len(coefficients))
	for i, n := range coefficients {
		own[i] = new(big.Int).Set(n)
	}
	return fromInteger(exact.New(own, exponent))
}

// integers returns the exact polynomial; the zero polynomial for an invalid one.
func (p Poly) integers() exact.Poly {
	switch {
	case p.err != nil:
		return exact.Poly{}
	case p.exact != nil:
		return *p.exact
	}
	// The smallest exponent of a last bit becomes the common one.
	common := math.MaxInt
	for _, part := range [...][]float64{p.c, p.rest} {
		for _, x := range part {
			if x != 0 {
				common = min(common, lastBit(x))
			}
		}
	}
	integers := make([]*big.Int, len(p.c))
	for i, x := range p.c {
		integers[i] = whole(x, common)
	}
	for i, x := range p.rest {
		if x != 0 {
			n := integers[i%len(p.c)]
			n.Add(n, whole(x, common))
		}
	}
	if len(integers) == 0 {
		common = 0
	}
	return exact.New(integers, common)
}

// inexact tells whether c is not the whole truth.
func (p Poly) inexact() bool { return p.rest != nil || p.exact != nil }

// integer splits a finite x into m·2^e with integer m.
func integer(x float64) (m int64, e int) {
	b := math.Float64bits(x)
	m = int64(b & (1<<52 - 1))
	e = int(b >> 52 & 0x7ff)
	if e == 0 {
		e = 1
	} else {
		m |= 1 << 52
	}
	if b>>63 != 0 {
		m = -m
	}
	return m, e - 1075
}

// lastBit returns the exponent of the last bit of x that is set, for finite x ≠ 0.
func lastBit(x float64) int {
	m, e := integer(x)
	for m&1 == 0 {
		m >>= 1
		e++
	}
	return e
}

// fromInteger makes a polynomial of x.
func fromInteger(x exact.Poly) Poly {
	integers, exponent := x.Integers()
	if len(integers) == 0 {
		return Poly{}
	}
	p := Poly{c: make([]float64, len(integers))}
	whole := true
	for i, n := range integers {
		var ok bool
		p.c[i], ok = nearest(n, exponent)
		whole = whole && ok
	}
	if !whole {
		p.exact, p.lo = &x, low(p.c, x)
	}
	return p
}

// low returns what c lacks to an exact polynomial, rounded to nearest; nil where that loses
// digits to underflow (the stages that scale their terms up would miss them) or overflow.
func low(c []float64, p exact.Poly) []float64 {
	integers, exponent := p.Integers()
	lo := make([]float64, len(c))
	for i, n := range integers {
		if math.IsInf(c[i], 0) {
			return nil
		}
		f := new(big.Float).SetInt(n)
		f.SetMantExp(f, exponent)
		rest := new(big.Float).SetPrec(f.Prec() + 2200).SetFloat64(c[i])
		rest.Sub(f, rest)
		lo[i], _ = rest.Float64()
		if rest.Sign() != 0 && math.Abs(lo[i]) < minNormal {
			return nil
		}
	}
	return lo
}

// nearest returns the float64 nearest to n·2^e and whether it is exactly that.
func nearest(n *big.Int, e int) (float64, bool) {
	if n.Sign() == 0 {
		return 0, true
	}
	f := new(big.Float).SetInt(n)
	// Far outside the range the exponent must not wrap.
	if top := int64(e) + int64(n.BitLen()); top > 1100 {
		return math.Inf(n.Sign()), false
	} else if top < -1200 {
		return math.Copysign(0, float64(n.Sign())), false
	}
	x, accuracy := f.SetMantExp(f, e).Float64()
	return x, accuracy == big.Exact
}

// Equal reports whether both are the same polynomial, by their exact coefficients. An invalid
// polynomial equals none. Whether roots were given makes no difference.
func (p Poly) Equal(q Poly) bool {
	if p.err != nil || q.err != nil || len(p.c) != len(q.c) || p.inexact() != q.inexact() {
		return false
	}
	for i, c := range p.c {
		if c != q.c[i] {
			return false
		}
	}
	return !p.inexact() || p.Sub(q).Degree() < 0
}
