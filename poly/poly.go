package poly

import (
	"fmt"
	"math"
	"math/big"
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
	exact *scaled      // nil where c is exact
	given []complex128 // the roots, if they were given; nil if not
	err   error        // what is wrong with an invalid polynomial
}

// scaled is the polynomial 2^exponent · Σ integers[i]·sⁱ. Nothing changes it.
type scaled struct {
	integers []*big.Int
	exponent int
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
	x := p.scaled()
	coefficients = make([]*big.Int, len(x.integers))
	for i, n := range x.integers {
		coefficients[i] = new(big.Int).Set(n)
	}
	return coefficients, x.exponent
}

// FromIntegers returns the polynomial 2^exponent · Σ coefficients[i]·sⁱ, exactly; the
// coefficients stand by power, lowest first. It is the inverse of [Poly.Integers].
func FromIntegers(coefficients []*big.Int, exponent int) Poly {
	own := make([]*big.Int, len(coefficients))
	for i, n := range coefficients {
		own[i] = new(big.Int).Set(n)
	}
	return fromScaled(scaled{own, exponent})
}

// scaled returns the exact polynomial. The integers may be shared: nobody changes them.
func (p Poly) scaled() scaled {
	if p.err != nil {
		return scaled{}
	}
	if p.exact != nil {
		return *p.exact
	}
	// The smallest exponent of a last bit becomes the common one.
	common := math.MaxInt
	for _, c := range p.c {
		if c != 0 {
			common = min(common, lastBit(c))
		}
	}
	x := scaled{make([]*big.Int, len(p.c)), common}
	if len(p.c) == 0 {
		x.exponent = 0
	}
	for i, c := range p.c {
		m, e := integer(c)
		n := big.NewInt(m)
		if c != 0 {
			if e >= common {
				n.Lsh(n, uint(e-common))
			} else {
				n.Rsh(n, uint(common-e)) // trailing zeros of m
			}
		}
		x.integers[i] = n
	}
	return x
}

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

// fromScaled makes a polynomial of x, which it keeps.
func fromScaled(x scaled) Poly {
	for len(x.integers) > 0 && x.integers[len(x.integers)-1].Sign() == 0 {
		x.integers = x.integers[:len(x.integers)-1]
	}
	if len(x.integers) == 0 {
		return Poly{}
	}
	p := Poly{c: make([]float64, len(x.integers))}
	exact := true
	for i, n := range x.integers {
		var ok bool
		p.c[i], ok = nearest(n, x.exponent)
		exact = exact && ok
	}
	if !exact {
		p.exact = &x
	}
	return p
}

// low returns what c lacks to the exact coefficients, rounded to nearest. It is not ok where
// that loses digits to underflow: the stages that scale their terms up would miss them.
func (x scaled) low(c []float64) (lo []float64, ok bool) {
	lo = make([]float64, len(c))
	for i, n := range x.integers {
		if math.IsInf(c[i], 0) {
			continue // of no use, and found out later
		}
		f := new(big.Float).SetInt(n)
		f.SetMantExp(f, x.exponent)
		rest := new(big.Float).SetPrec(f.Prec() + 2200).SetFloat64(c[i])
		rest.Sub(f, rest)
		lo[i], _ = rest.Float64()
		if rest.Sign() != 0 && math.Abs(lo[i]) < minNormal {
			return nil, false
		}
	}
	return lo, true
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
	if p.err != nil || q.err != nil || len(p.c) != len(q.c) || (p.exact == nil) != (q.exact == nil) {
		return false
	}
	if p.exact == nil {
		for i, c := range p.c {
			if c != q.c[i] {
				return false
			}
		}
		return true
	}
	return p.Sub(q).Degree() < 0
}
