package tf

import (
	"math"
	"math/big"
	"math/cmplx"
)

// deadTime is an exact number of seconds ≥ 0. Sums of dead times round nothing, so that
// what several blocks delay is added once, whatever the order.
type deadTime struct {
	near  float64  // rounded to nearest
	exact *big.Rat // nil where near is exact
}

func delayOf(x float64) deadTime { return deadTime{near: x} }

func (d deadTime) rat() *big.Rat {
	if d.exact != nil {
		return d.exact
	}
	return new(big.Rat).SetFloat64(d.near)
}

func deadTimeOf(r *big.Rat) deadTime {
	near, exact := r.Float64()
	if exact {
		return deadTime{near: near}
	}
	return deadTime{near: near, exact: r}
}

func (d deadTime) zero() bool { return d.near == 0 && d.exact == nil }

func (d deadTime) plus(e deadTime) deadTime {
	switch {
	case d.zero():
		return e
	case e.zero():
		return d
	}
	return deadTimeOf(new(big.Rat).Add(d.rat(), e.rat()))
}

func (d deadTime) equal(e deadTime) bool {
	return d.near == e.near && (d.exact == nil && e.exact == nil || d.rat().Cmp(e.rat()) == 0)
}

// rest returns what rounding took from near.
func (d deadTime) rest() float64 {
	if d.exact == nil {
		return 0
	}
	r := new(big.Rat).SetFloat64(d.near)
	x, _ := r.Sub(d.exact, r).Float64()
	return x
}

// factor returns exp(-s·d). The rounding of the products is carried into the exponent, so
// that the phase keeps its digits at high frequency.
func (d deadTime) factor(s complex128) complex128 {
	if d.zero() {
		return 1
	}
	re, reLost := twoProduct(real(s), d.near)
	im, imLost := twoProduct(imag(s), d.near)
	rest := d.rest()
	reLost += float64(rest * real(s))
	imLost += float64(rest * imag(s))
	y := cmplx.Exp(complex(-re, -im))
	if c := complex(-reLost, -imLost); cmplx.Abs(c) < 1 { // never true of NaN, after an overflow
		y *= 1 + c + c*c/2
	}
	return y
}

// twoProduct returns a·b rounded and what the rounding lost.
func twoProduct(a, b float64) (rounded, lost float64) {
	rounded = a * b
	return rounded, math.FMA(a, b, -rounded)
}
