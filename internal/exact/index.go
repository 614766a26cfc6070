package exact

// CauchyIndex returns the Cauchy index of p/q on the open interval (lo, hi): the number of poles
// where it jumps from -∞ to +∞ less the number where it jumps from +∞ to -∞; q is not zero.
//
// Its definition is followed to the letter, with the signs at the isolated roots of q: their
// coefficients grow far less than those of the chain of remainders that Sturm's theorem takes.
func CauchyIndex(p, q Poly, lo, hi Dyadic) int {
	if p.IsZero() {
		return 0
	}
	if g := GCD(p, q); g.Degree() > 0 {
		p, q = quotient(p, g), quotient(q, g)
	}
	index := 0
	for _, r := range q.RealRoots(lo, hi, Open) {
		if r.Multiplicity%2 == 0 {
			continue
		}
		index += r.signOfCoprime(p) * r.signAbove(q)
	}
	return index
}

// signAbove returns the sign of q between the root and its next one above, for a q whose square-
// free part the root was isolated for.
func (r Isolated) signAbove(q Poly) int {
	if r.Exact() {
		return q.signBeside(r.Lo, +1)
	}
	return q.signBeside(r.Hi, -1)
}

// SignOf returns the sign of p at the root.
func (r Isolated) SignOf(p Poly) int {
	if r.Exact() || p.Degree() < 1 {
		return p.SignAt(r.Lo)
	}
	if g := GCD(p, r.poly); g.Degree() > 0 && g.signBeside(r.Lo, +1) != g.signBeside(r.Hi, -1) {
		return 0
	}
	return r.signOfCoprime(p)
}

// signOfCoprime is SignOf for a p that is not zero at the root.
func (r Isolated) signOfCoprime(p Poly) int {
	for precision := 54; ; precision *= 2 {
		if r.Exact() {
			return p.SignAt(r.Lo)
		}
		if p.Degree() < 1 || signVariations(p.onHalfLine(r.Lo, r.Hi).c) == 0 {
			return p.signBeside(r.Lo, +1)
		}
		r = r.narrow(precision)
	}
}
