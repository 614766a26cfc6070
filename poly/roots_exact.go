package poly

import (
	"math/big"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/internal/rootkernel"
)

// The exact stage splits the polynomial into square-free factors, and where a root may lie
// on the imaginary axis, splits off what is symmetric about it. The fast stages go over each
// factor again; what they leave is settled with math/big.

// exactly is the stage that answers whatever the polynomial, which has so many roots at 0.
func (s *Solver) exactly(p Poly, zeros int, call string) ([]Root, error) {
	x, _ := p.integers().StripZero()
	var all []located
	if zeros > 0 {
		all = append(all, located{multiplicity: zeros, distinct: 1})
	}
	for _, f := range x.SquareFree() {
		found, err := s.simple(f.Poly, call)
		if err != nil {
			return nil, err
		}
		for _, l := range found {
			l.multiplicity *= f.Multiplicity
			all = append(all, l)
		}
	}
	return assemble(all), nil
}

// simple finds the roots of a square-free polynomial that is not zero at 0.
func (s *Solver) simple(f exact.Poly, call string) ([]located, error) {
	if symmetric(f) {
		return s.parted(f, true, call)
	}
	discs, failure := s.approachFactor(f, false)
	if failure != rootkernel.None {
		// The real part of some root may be zero. If so, it is a root of the greatest common
		// divisor of f(s) and f(-s), which has all its roots in pairs s, -s.
		if g := exact.GCD(f, mirror(f)); g.Degree() > 0 {
			rest, _ := f.Divide(g)
			found, err := s.parted(g, true, call)
			if err != nil || rest.Degree() == 0 {
				return found, err
			}
			others, err := s.parted(rest, false, call)
			return append(found, others...), err
		}
	}
	return s.finish(f, discs, failure, false, call)
}

// parted finds the roots of a square-free polynomial that has either all roots in pairs s, -s
// (mirrored) or none.
func (s *Solver) parted(f exact.Poly, mirrored bool, call string) ([]located, error) {
	discs, failure := s.approachFactor(f, mirrored)
	return s.finish(f, discs, failure, mirrored, call)
}

// approachFactor runs the fast stages on f.
func (s *Solver) approachFactor(f exact.Poly, mirrored bool) ([]rootkernel.Disc, rootkernel.Failure) {
	k := &s.kernel
	c, lo, exponents, plain := split(f)
	discs := make([]rootkernel.Disc, 0, f.Degree())
	if plain {
		k.Set(c, lo)
		k.Mirrored = mirrored
		return approach(k, discs, false, 0)
	}
	k.SetScaled(c, lo, exponents)
	k.Mirrored = mirrored
	k.Start(0)
	return approachCarefully(k, discs, false)
}

// finish settles with math/big what the fast stages left.
func (s *Solver) finish(f exact.Poly, discs []rootkernel.Disc, failure rootkernel.Failure, mirrored bool, call string) ([]located, error) {
	if failure == rootkernel.OnAxis || failure == rootkernel.Imprecise {
		if more, ok := polish(f, s.kernel.Left, mirrored); ok {
			discs = append(discs, more...)
			rootkernel.Sort(discs)
			if rootkernel.Disjoint(discs) {
				failure = rootkernel.None
			}
		}
	}
	if failure != rootkernel.None {
		return locate(call, f, s.kernel.Points(), mirrored)
	}
	found := make([]located, 0, len(discs))
	for _, d := range discs {
		found = append(found, located{d, 1, 1})
	}
	return found, nil
}

// mirror returns f(-s).
func mirror(f exact.Poly) exact.Poly {
	a, e := f.Integers()
	m := make([]*big.Int, len(a))
	for i, n := range a {
		m[i] = n
		if i%2 == 1 {
			m[i] = new(big.Int).Neg(n)
		}
	}
	return exact.New(m, e)
}

// symmetric reports whether f(-s) = ±f(s).
func symmetric(f exact.Poly) bool {
	a, _ := f.Integers()
	for i := len(a) - 2; i >= 0; i -= 2 {
		if a[i].Sign() != 0 {
			return false
		}
	}
	return true
}

// split returns the coefficients of f, up to a common power of two, as (c + lo)·2^exponent
// with a relative error of 2⁻¹⁰⁶. They are plain if the exponents are all 0.
func split(f exact.Poly) (c, lo []float64, exponents []int, plain bool) {
	a, _ := f.Integers()
	c, lo, exponents = make([]float64, len(a)), make([]float64, len(a)), make([]int, len(a))
	top := a[len(a)-1].BitLen()
	plain = true
	var rest big.Int
	for i, n := range a {
		e := n.BitLen()
		if e == 0 {
			continue
		}
		x := new(big.Float).SetMode(big.ToNearestEven).SetPrec(53).SetInt(n)
		c[i], _ = new(big.Float).SetMantExp(x, -e).Float64()
		x.Int(&rest)
		rest.Sub(n, &rest)
		lo[i], _ = new(big.Float).SetMantExp(new(big.Float).SetInt(&rest), -e).Float64()
		exponents[i] = e - top
		plain = plain && exponents[i] > -800 && exponents[i] < 800
	}
	if plain {
		for i, e := range exponents {
			// Powers of two: exact.
			scale, _ := new(big.Float).SetMantExp(big.NewFloat(1), e).Float64()
			c[i] *= scale
			lo[i] *= scale
		}
		exponents = nil
	}
	return c, lo, exponents, plain
}
