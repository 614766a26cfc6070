package poly

import (
	"math/big"

	"github.com/polewright/polewright/internal/exact"
)

// The last stage works on integers and math/big. It splits the polynomial into square-free
// factors, moves points towards the roots of each by the Ehrlich–Aberth iteration, proves
// discs about them, and doubles the precision until every root is known well enough for its
// nearest float64 or belongs to a cluster that float64 cannot part.

// A location is a disc in extended precision that holds as many distinct roots as it says.
type location struct {
	re, im       *big.Float
	radius       *big.Float
	distinct     int
	multiplicity int // of each of the distinct roots
	real         bool
	imaginary    bool
}

// rootsExact is the stage that answers whatever the polynomial.
func (p Poly) rootsExact(call string) ([]Root, error) {
	x := p.scaled()
	zeros := 0
	for x.integers[zeros].Sign() == 0 {
		zeros++
	}
	var roots []Root
	if zeros > 0 {
		roots = append(roots, Root{Multiplicity: zeros, Distinct: 1})
	}
	if zeros == p.Degree() {
		return roots, nil
	}
	var found []location
	for _, f := range exact.New(x.integers[zeros:], 0).SquareFree() {
		for _, part := range splitImaginary(f.Poly) {
			ls, err := locate(call, part, f.Multiplicity)
			if err != nil {
				return nil, err
			}
			found = append(found, ls...)
		}
	}
	return assemble(call, roots, found)
}

// splitImaginary splits a square-free polynomial, not zero at 0, into gcd(p(s), p(-s)) and
// the rest. The roots of the first are symmetric about the imaginary axis, and all roots on
// that axis are among them.
func splitImaginary(p exact.Poly) [][]*big.Int {
	a, _ := p.Integers()
	mirror := make([]*big.Int, len(a))
	for i, n := range a {
		mirror[i] = n
		if i%2 == 1 {
			mirror[i] = new(big.Int).Neg(n)
		}
	}
	g := exact.GCD(p, exact.New(mirror, 0))
	if g.Degree() == 0 || g.Degree() == p.Degree() {
		return [][]*big.Int{a}
	}
	rest, _ := p.Divide(g)
	b, _ := g.Integers()
	c, _ := rest.Integers()
	return [][]*big.Int{b, c}
}

// symmetric reports whether p(-s) = ±p(s).
func symmetric(a []*big.Int) bool {
	for i := len(a) - 2; i >= 0; i -= 2 {
		if a[i].Sign() != 0 {
			return false
		}
	}
	return true
}
