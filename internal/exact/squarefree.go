package exact

// A Factor is a square-free polynomial, the roots of which are roots of multiplicity
// Multiplicity of the polynomial it was taken from.
type Factor struct {
	Poly         Poly // primitive, leading coefficient positive, degree at least 1
	Multiplicity int
}

// SquareFree returns the square-free factors of p in ascending multiplicity: p is a constant
// times the product of the factors, each to the power of its multiplicity, and no two have a
// root in common. Constants and the zero polynomial have none.
//
// Method: D. Y. Y. Yun, On square-free decomposition algorithms, SYMSAC 1976, 26–35.
func (p Poly) SquareFree() []Factor {
	if p.Degree() < 1 {
		return nil
	}
	p = positive(p.Primitive())
	var factors []Factor
	derivative := p.Derivative()
	g := GCD(p, derivative)
	if g.Degree() == 0 {
		return []Factor{{p, 1}}
	}
	b, c := quotient(p, g), quotient(derivative, g)
	for k := 1; b.Degree() > 0; k++ {
		d := c.Sub(b.Derivative())
		if d.IsZero() {
			return append(factors, Factor{b, k})
		}
		a := GCD(b, d)
		if a.Degree() > 0 {
			factors = append(factors, Factor{a, k})
		}
		b, c = quotient(b, a), quotient(d, a)
	}
	return factors
}

// quotient returns p/q, which the caller knows to be a polynomial with integer coefficients.
func quotient(p, q Poly) Poly {
	r, ok := p.Divide(q)
	if !ok {
		panic("exact: a divisor that does not divide")
	}
	return r
}

// SquareFreePart returns the primitive polynomial with the distinct roots of p, each simple,
// and the sign of p's leading coefficient.
func (p Poly) SquareFreePart() Poly {
	if p.Degree() < 1 {
		return p.Primitive()
	}
	p = p.Primitive()
	if g := GCD(p, p.Derivative()); g.Degree() > 0 {
		return quotient(p, g)
	}
	return p
}
