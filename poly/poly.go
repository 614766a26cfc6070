// Package poly handles real polynomials.
package poly

import (
	"errors"
	"math/big"
)

// Poly is a polynomial with real coefficients (skeleton).
type Poly struct{ c []float64 }

// Option adjusts a call of this package.
type Option func(*settings)

type settings struct{}

// Root is one distinct root (skeleton).
type Root struct {
	Value          complex128
	Radius         float64
	HalfRe, HalfIm float64
	Multiplicity   int
	Distinct       int
}

var errSkeleton = errors.New("poly: skeleton")

func New(coefficients ...float64) Poly {
	for len(coefficients) > 0 && coefficients[0] == 0 {
		coefficients = coefficients[1:]
	}
	p := Poly{c: make([]float64, len(coefficients))}
	for i, c := range coefficients {
		p.c[len(coefficients)-1-i] = c
	}
	return p
}
func FromRoots(lead float64, roots ...complex128) (Poly, error) { return Poly{}, errSkeleton }
func (p Poly) Degree() int                                      { return len(p.c) - 1 }
func (p Poly) Coefficient(power int) float64 {
	if power < 0 || power >= len(p.c) {
		return 0
	}
	return p.c[power]
}

// Integers returns the exact polynomial as 2^exponent · Σ coefficients[i]·s^i, the
// coefficients by power (lowest first). FromIntegers is its inverse.
func (p Poly) Integers() (coefficients []*big.Int, exponent int)       { return nil, 0 }
func FromIntegers(coefficients []*big.Int, exponent int) Poly          { return Poly{} }
func (p Poly) GivenRoots() (roots []complex128, ok bool)               { return nil, false }
func (p Poly) Err() error                                              { return nil }
func (p Poly) At(x float64) float64                                    { return 0 }
func (p Poly) AtComplex(s complex128) complex128                       { return 0 }
func (p Poly) Add(q Poly) Poly                                         { return Poly{} }
func (p Poly) Sub(q Poly) Poly                                         { return Poly{} }
func (p Poly) Mul(q Poly) Poly                                         { return Poly{} }
func (p Poly) Scale(c float64) Poly                                    { return Poly{} }
func (p Poly) Derivative() Poly                                        { return Poly{} }
func (p Poly) Equal(q Poly) bool                                       { return false }
func (p Poly) Roots(opt ...Option) ([]Root, error)                     { return nil, errSkeleton }
func (p Poly) RealRoots(lo, hi float64, opt ...Option) ([]Root, error) { return nil, errSkeleton }
