package exact

// An Isolated root is the only root of its polynomial in the open interval (Lo, Hi), or is the
// point Lo = Hi itself. Ends are finite, and 0 is not between them.
type Isolated struct {
	Lo, Hi Dyadic
	poly   Poly
	below  int // the sign of poly between the root and Hi
}

// Exact tells whether the root is the point Lo = Hi.
func (r Isolated) Exact() bool { return r.Lo.Cmp(r.Hi) == 0 }

// An Ends tells which ends of an interval belong to it.
type Ends int8

const (
	Open       Ends = iota
	ClosedOpen      // lo belongs to it
	OpenClosed      // hi belongs to it
	Closed
)

// Isolate returns the distinct real roots of p between lo and hi in ascending order, both of
// which may be infinite, in intervals that have no inner point in common. It is meant for a
// square-free p; otherwise the square-free part is taken first. The zero polynomial has none.
//
// Method: Descartes' rule of signs on intervals that are halved until it is sharp (Vincent;
// G. E. Collins and A. G. Akritas, Polynomial real root isolation using Descartes' rule of
// signs, SYMSAC 1976, 272–275). Intervals whose ends differ much in size are parted at a power
// of two between them, so that roots of all scales take equally long.
func (p Poly) Isolate(lo, hi Dyadic, ends Ends) []Isolated {
	if p.Degree() < 1 {
		return nil
	}
	return p.SquareFreePart().isolate(lo, hi, ends)
}

// isolate is Isolate for a square-free p.
func (p Poly) isolate(lo, hi Dyadic, ends Ends) []Isolated {
	if lo.Cmp(hi) > 0 {
		return nil
	}
	var roots []Isolated
	point := func(x Dyadic) {
		if x.inf == 0 && p.SignAt(x) == 0 {
			roots = append(roots, Isolated{Lo: x, Hi: x, poly: p})
		}
	}
	withLo := ends == Closed || ends == ClosedOpen
	withHi := ends == Closed || ends == OpenClosed
	if lo.Cmp(hi) == 0 {
		if withLo && withHi {
			point(lo)
		}
		return roots
	}
	if withLo {
		point(lo)
	}
	zero := Dyadic{}
	if lo.Sign() < 0 {
		mirrored := p.Stretch(Int(minusOne, 0))
		from := hi.Neg()
		if hi.Sign() > 0 {
			from = zero
		}
		found := mirrored.isolatePositive(from, lo.Neg())
		for i := len(found) - 1; i >= 0; i-- {
			r := found[i]
			// The sign next to the upper end is the opposite of the one next to the lower.
			roots = append(roots, Isolated{r.Hi.Neg(), r.Lo.Neg(), p, -r.below})
		}
		if hi.Sign() > 0 {
			point(zero)
		}
	}
	if hi.Sign() > 0 {
		from := lo
		if lo.Sign() < 0 {
			from = zero
		}
		roots = append(roots, p.isolatePositive(from, hi)...)
	}
	if withHi {
		point(hi)
	}
	return roots
}

// isolatePositive isolates the roots of a square-free p in (lo, hi), 0 ≤ lo < hi.
func (p Poly) isolatePositive(lo, hi Dyadic) []Isolated {
	if signVariations(p.c) == 0 {
		return nil
	}
	p, _ = p.StripZero()
	upper := PowerOfTwo(p.boundExponent())
	if hi.Cmp(upper) > 0 {
		hi = upper
	}
	lower := PowerOfTwo(-p.Reverse().boundExponent())
	if lo.Cmp(lower) < 0 {
		lo = lower
	}
	if lo.Cmp(hi) >= 0 {
		return nil
	}
	return p.descend(lo, hi, nil)
}

// descend appends the roots in (lo, hi), both positive, to roots.
func (p Poly) descend(lo, hi Dyadic, roots []Isolated) []Isolated {
	t := p.onHalfLine(lo, hi)
	switch signVariations(t.c) {
	case 0:
		return roots
	case 1:
		// The sign next to hi is that of the leading coefficient: there, t's variable is
		// large.
		return append(roots, Isolated{lo, hi, p, t.LeadSign()})
	}
	var middle Dyadic
	if a, b := lo.magnitude(), hi.magnitude(); b-a > 2 {
		middle = PowerOfTwo((a + b) >> 1)
	} else {
		middle = Midpoint(lo, hi)
	}
	roots = p.descend(lo, middle, roots)
	if p.SignAt(middle) == 0 {
		roots = append(roots, Isolated{Lo: middle, Hi: middle, poly: p})
	}
	return p.descend(middle, hi, roots)
}

// onHalfLine returns (1+x)ⁿ·p((lo + hi·x)/(1+x)), whose positive roots are the roots of p in
// (lo, hi).
func (p Poly) onHalfLine(lo, hi Dyadic) Poly {
	n := p.Degree()
	q := p.Affine(hi.Sub(lo), lo) // roots in (0, 1)
	// Reversal without dropping zeros: x to 1/x, then x to 1 + x, sends (0, 1) to (0, ∞) with
	// hi at 0; the reversal at the end puts lo there.
	c := make([]*bigInt, n+1)
	for i := range c {
		c[n-i] = new(bigInt)
		if i < len(q.c) {
			c[n-i].Set(q.c[i])
		}
	}
	shiftInteger(c, bigOne)
	for i, j := 0, n; i < j; i, j = i+1, j-1 {
		c[i], c[j] = c[j], c[i]
	}
	return New(c, q.e)
}

// signVariations counts the changes of sign in c, zeros left out.
func signVariations(c []*bigInt) int {
	count, last := 0, 0
	for _, x := range c {
		s := x.Sign()
		if s*last < 0 {
			count++
		}
		if s != 0 {
			last = s
		}
	}
	return count
}

// boundExponent returns an exponent k such that every positive root of p is below 2^k, by
// Kioustelidis's bound 2·max (-c_i/c_n)^(1/(n-i)) over the coefficients of the sign opposite to
// the leading one, of which at least one exists if there is a positive root.
//
// Source: J. B. Kioustelidis, Bounds for positive roots of polynomials, J. Comput. Appl. Math.
// 16 (1986) 241–244.
func (p Poly) boundExponent() int {
	n := len(p.c) - 1
	lead := p.c[n]
	k := 0
	found := false
	for i, x := range p.c[:n] {
		if x.Sign()*lead.Sign() >= 0 {
			continue
		}
		// |x/lead| < 2^b, and its root is at most 2^ceil(b/(n-i)).
		b := x.BitLen() - lead.BitLen() + 1
		if e := ceilDivide(b, n-i) + 1; !found || e > k {
			k, found = e, true
		}
	}
	return k
}

func ceilDivide(a, b int) int {
	q := a / b
	if a%b > 0 {
		q++
	}
	return q
}
