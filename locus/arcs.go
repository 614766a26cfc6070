package locus

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
)

// An arc is a smooth piece of curve without an exact form: points γ(t) for t in [lo, hi].
type arc struct {
	lo, hi *big.Float
	bits   uint // working precision; points are known to fewer bits if at gives fewer

	// at returns γ(t).
	at func(t *big.Float) bigComplex
	// velocity returns a disc that holds dγ/dt on all of [lo, hi].
	velocity func(lo, hi *big.Float) (center bigComplex, radius *big.Float)

	float        bool // at rounds t to float64
	mirrored     bool // the conjugates of the points belong to the curve too
	realLo       bool // γ(lo) is real: there the condition for a real gain is always met
	realHi       bool // γ(hi) likewise
	unitAtLo     bool // γ(t) = e^(λt) with λ = unitVelocity, and lo = 0
	unitVelocity bigComplex
}

const (
	arcDepth = 90     // halvings of the interval until a question counts as undecided
	arcBoxes = 50_000 // intervals looked at
)

// contactsAlong returns the contacts of the moving roots with an arc: the zeros in (lo, hi) of
//
//	g(t) = Im(A(γ(t))·conj B(γ(t))),
//
// and its real ends. Each zero is proven to be simple and the only one in an interval: over an
// interval of half-width h about m, γ stays within ρ = h·sup|γ′| of c = γ(m), and the Taylor
// polynomials of A and B about c bound how much g and g′ can differ from their values at m. Where
// g cannot vanish the interval is dropped, where g′ cannot, signs at its ends decide, else it is
// halved.
//
// A = (z - 1)^p·A₁ at the corner γ(0) = 1 of a spiral e^(λt) is divided by t^p first.
func (r reduced) contactsAlong(call string, on *arc) ([]contact, error) {
	if r.degree() < 1 {
		return nil, nil
	}
	s := &arcSearch{arc: on, r: r, call: call, a: r.a.Primitive(), b: r.b.Primitive()}
	for _, end := range []struct {
		real bool
		t    *big.Float
		unit bool
	}{{on.realLo, on.lo, on.unitAtLo}, {on.realHi, on.hi, false}} {
		if !end.real {
			continue
		}
		if end.unit {
			a, b := r.a.At(one), r.b.At(one)
			if b.Sign() == 0 {
				continue
			}
			k := newFloat(128).Quo(round(a, 192), round(b, 192))
			s.list = append(s.list, contact{s: exactly(1), gain: k.Neg(k)})
			continue
		}
		c, err := s.contactAt(end.t)
		if err != nil {
			return nil, err
		}
		if c.gain.Sign() != 0 {
			c.s.im = newFloat(64)
		}
		s.list = append(s.list, c)
	}
	lo := on.lo
	if on.unitAtLo {
		var err error
		if lo, err = s.corner(); err != nil {
			return nil, err
		}
	}
	if err := s.search(lo, on.hi, 0); err != nil {
		return nil, err
	}
	return s.list, nil
}

// An arcSearch is one search for the contacts with an arc.
type arcSearch struct {
	*arc
	r     reduced
	call  string
	a, b  exact.Poly // primitive multiples of A and B
	boxes int
	list  []contact
}

// condition returns g(t), and how many bits of it are certain at least; none if the sign is not.
func (s *arcSearch) condition(t *big.Float) (*big.Float, bool) {
	z := s.at(t)
	a, ea := evaluateComplex(s.a, z, s.bits)
	b, eb := evaluateComplex(s.b, z, s.bits)
	p := times(a, conjugate(b), s.bits)
	// Errors: |A|·err B + |B|·err A and their product.
	guard := exponent(newFloat(64).SetInt64(int64(s.r.degree()+2))) + 4
	ea, eb = ea+guard-int(s.bits), eb+guard-int(s.bits)
	sizeA, sizeB := max(exponent(a.re), exponent(a.im))+1, max(exponent(b.re), exponent(b.im))+1
	bound := max(sizeA+eb, sizeB+ea, ea+eb) + 2
	return p.im, p.im.Sign() != 0 && exponent(p.im)-1 > bound
}

// taylorAbout returns the coefficients of p about c, lowest first, and their moduli rounded up.
func taylorAbout(p exact.Poly, c bigComplex, bits uint) (values []bigComplex, sizes []*big.Float) {
	for _, x := range coefficients(p, bits) {
		values = append(values, realPart(x, bits))
	}
	for i := range values {
		for j := len(values) - 2; j >= i; j-- {
			values[j] = plus(values[j], times(values[j+1], c, bits), bits)
		}
	}
	for _, v := range values {
		sizes = append(sizes, modulusUp(v))
	}
	return values, sizes
}

// upward pays for the roundings in the computation of a bound with 64 bits.
var upward = newFloat(64).SetFloat64(1 + 0x1p-40)

// modulusUp returns an upper bound of |z|, which is a little more than the modulus.
func modulusUp(z bigComplex) *big.Float {
	x, y := newFloat(64).Abs(z.re), newFloat(64).Abs(z.im)
	x.Mul(x, x)
	y.Mul(y, y)
	x.Add(x, y)
	x.Sqrt(x)
	return x.Mul(x, upward)
}

// remainder returns a bound on by how much the polynomial with these moduli of Taylor
// coefficients, or its derivative, differs within ρ of the center from its value there:
// Σ |cₖ|·ρᵏ over k ≥ 1, or Σ k·|cₖ|·ρ^(k-1) over k ≥ 2.
func remainder(sizes []*big.Float, rho *big.Float, derivative bool) *big.Float {
	sum, power := newFloat(64), newFloat(64).SetInt64(1)
	first := 1
	if derivative {
		first = 2
	}
	for k := first; k < len(sizes); k++ {
		power.Mul(power, rho)
		t := newFloat(64).Mul(sizes[k], power)
		if derivative {
			t.Mul(t, newFloat(64).SetInt64(int64(k)))
		}
		sum.Add(sum, t)
	}
	return sum.Mul(sum, upward)
}

func sizeAt(sizes []*big.Float, k int) *big.Float {
	if k < len(sizes) {
		return sizes[k]
	}
	return newFloat(64)
}

func valueAt(values []bigComplex, k int, bits uint) bigComplex {
	if k < len(values) {
		return values[k]
	}
	return bigComplex{newFloat(bits), newFloat(bits)}
}

// productSpread returns a bound on |XY - X₀Y₀| for |X - X₀| ≤ dx and |Y - Y₀| ≤ dy.
func productSpread(x, dx, y, dy *big.Float) *big.Float {
	s, t := newFloat(64).Mul(x, dy), newFloat(64).Mul(y, dx)
	s.Add(s, t)
	s.Add(s, t.Mul(dx, dy))
	return s.Mul(s, upward)
}

func productUp(x, y *big.Float) *big.Float {
	p := newFloat(64).Mul(x, y)
	return p.Mul(p, upward)
}

func sumUp(x, y *big.Float) *big.Float {
	p := newFloat(64).Add(x, y)
	return p.Mul(p, upward)
}

func halfway(lo, hi *big.Float) *big.Float {
	m := newFloat(max(lo.Prec(), hi.Prec(), 128)).Add(lo, hi)
	return m.SetMantExp(m, -1)
}

// search looks for the zeros of g in (lo, hi).
func (s *arcSearch) search(lo, hi *big.Float, depth int) error {
	if s.boxes++; depth > arcDepth || s.boxes > arcBoxes {
		return &UndecidedError{Call: s.call, What: "whether a branch touches a curved piece of the boundary near " + s.where(lo)}
	}
	m := halfway(lo, hi)
	h := newFloat(64).Sub(hi, m)
	h.Mul(h, upward)
	v, radius := s.velocity(lo, hi)
	speed := sumUp(modulusUp(v), radius)
	rho := productUp(speed, h)
	c := s.at(m)
	a, sizeA := taylorAbout(s.a, c, s.bits)
	b, sizeB := taylorAbout(s.b, c, s.bits)
	dA, dB := remainder(sizeA, rho, false), remainder(sizeB, rho, false)
	g := times(valueAt(a, 0, s.bits), conjugate(valueAt(b, 0, s.bits)), s.bits).im
	if _, sure := s.condition(m); sure {
		spread := productSpread(sizeAt(sizeA, 0), dA, sizeAt(sizeB, 0), dB)
		if newFloat(64).Abs(g).Cmp(spread) > 0 {
			return nil
		}
	}
	// g′ = Im(γ′·(A′·conj B - conj A·B′))
	ddA, ddB := remainder(sizeA, rho, true), remainder(sizeB, rho, true)
	x := times(valueAt(a, 1, s.bits), conjugate(valueAt(b, 0, s.bits)), s.bits)
	y := times(conjugate(valueAt(a, 0, s.bits)), valueAt(b, 1, s.bits), s.bits)
	difference := bigComplex{newFloat(s.bits).Sub(x.re, y.re), newFloat(s.bits).Sub(x.im, y.im)}
	spread := sumUp(
		productSpread(sizeAt(sizeA, 1), ddA, sizeAt(sizeB, 0), dB),
		productSpread(sizeAt(sizeA, 0), dA, sizeAt(sizeB, 1), ddB))
	// What rounding adds is far below the spread of the smallest interval that is looked at.
	spread = productSpread(modulusUp(v), radius, modulusUp(difference), spread)
	slope := times(v, difference, s.bits).im
	if newFloat(64).Abs(slope).Cmp(spread) > 0 {
		return s.monotone(lo, hi, slope.Sign())
	}
	cut := s.cut(lo, hi, m)
	if err := s.search(lo, cut, depth+1); err != nil {
		return err
	}
	return s.search(cut, hi, depth+1)
}

// cut returns a point about halfway between lo and hi where g is not zero, if there is one to be
// found.
func (s *arcSearch) cut(lo, hi, m *big.Float) *big.Float {
	for _, share := range [...]float64{0.5, 0.4375, 0.59375, 0.34375} {
		t := newFloat(m.Prec()).Sub(hi, lo)
		t.Mul(t, newFloat(53).SetFloat64(share))
		t.Add(lo, t)
		if _, sure := s.sign(t); sure {
			return t
		}
	}
	return m
}

func (s *arcSearch) where(t *big.Float) string { return "s or z = " + formatPoint(number(s.at(t))) }

// monotone looks for the one zero that g can have in (lo, hi), where its slope has a sign.
func (s *arcSearch) monotone(lo, hi *big.Float, slope int) error {
	if lo.Cmp(s.lo) == 0 && s.realLo || hi.Cmp(s.hi) == 0 && s.realHi {
		return nil // g is zero at this end
	}
	signLo, ok := s.sign(lo)
	if !ok {
		return s.undecidedEnd(lo)
	}
	signHi, ok := s.sign(hi)
	if !ok {
		return s.undecidedEnd(hi)
	}
	if signLo == signHi {
		return nil
	}
	t, err := s.zero(lo, hi, slope)
	if err != nil {
		return err
	}
	c, err := s.contactAt(t)
	if err != nil {
		return err
	}
	c.pair = s.mirrored
	s.list = append(s.list, c)
	return nil
}

func (s *arcSearch) undecidedEnd(t *big.Float) error {
	return &UndecidedError{Call: s.call, What: "whether the locus meets a curved piece of the boundary at " + s.where(t)}
}

func (s *arcSearch) sign(t *big.Float) (int, bool) {
	g, sure := s.condition(t)
	return g.Sign(), sure
}

// zero returns the zero between lo and hi, by the secant through bracketing points (the Illinois
// variant of the rule of false position) until the bracket or the step is below the precision.
func (s *arcSearch) zero(lo, hi *big.Float, slope int) (*big.Float, error) {
	gl, _ := s.condition(lo)
	gh, _ := s.condition(hi)
	if gl.Sign() == gh.Sign() {
		return nil, s.undecidedEnd(lo)
	}
	side := 0
	prec := max(s.bits, 64)
	for i := range 4 * int(s.bits) {
		width := newFloat(prec).Sub(hi, lo)
		size := max(exponent(lo), exponent(hi))
		if exponent(width) < size-int(s.bits)+24 || s.float && math.Nextafter(toFloat(lo), toFloat(hi)) == toFloat(hi) {
			break
		}
		// lo + width·gl/(gl - gh), every third time the middle.
		d := newFloat(prec).Sub(gl, gh)
		share := newFloat(prec).Quo(gl, d)
		if i%4 == 3 {
			share.SetFloat64(0.5)
		}
		t := newFloat(prec).Add(lo, share.Mul(share, width))
		if t.Cmp(lo) <= 0 || t.Cmp(hi) >= 0 {
			t = halfway(lo, hi)
		}
		g, sure := s.condition(t)
		if !sure {
			return t, nil
		}
		if g.Sign() == gl.Sign() {
			lo, gl = t, g
			if side == -1 {
				gh = newFloat(prec).SetMantExp(gh, -1)
			}
			side = -1
		} else {
			hi, gh = t, g
			if side == 1 {
				gl = newFloat(prec).SetMantExp(gl, -1)
			}
			side = 1
		}
	}
	return halfway(lo, hi), nil
}

// contactAt returns the contact at the parameter t.
func (s *arcSearch) contactAt(t *big.Float) (contact, error) {
	z := s.at(t)
	if s.float && exponent(z.im) < exponent(z.re)-48 {
		z.im = newFloat(s.bits) // a branch on the real axis meets the curve here
	}
	a, ea := evaluateComplex(s.r.a, z, s.bits)
	b, eb := evaluateComplex(s.r.b, z, s.bits)
	if a.re.Sign() == 0 && a.im.Sign() == 0 {
		return contact{gain: newFloat(64)}, nil
	}
	n := s.r.degree()
	known := func(v bigComplex, e int) bool {
		larger := v.re
		if exponent(v.im) > exponent(v.re) {
			larger = v.im
		}
		return relativeBits(larger, e, n, s.bits) > 46
	}
	if !known(b, eb) || !known(a, ea) {
		return contact{}, &UndecidedError{Call: s.call, What: "the gain at a pole or zero on a curved piece of the boundary"}
	}
	k := quotientBig(a, b, s.bits)
	return contact{s: z, gain: k.re.Neg(k.re)}, nil
}

// corner returns a t > 0 such that g has no zero in (0, t], for a spiral that begins at 1.
func (s *arcSearch) corner() (*big.Float, error) {
	factor := exact.FromFloats(-1, 1)
	a, b, p, q := s.a, s.b, 0, 0
	for {
		if d, ok := a.Divide(factor); ok && !a.IsZero() {
			a, p = d, p+1
			continue
		}
		if d, ok := b.Divide(factor); ok && !b.IsZero() {
			b, q = d, q+1
			continue
		}
		break
	}
	if p == 0 && q == 0 {
		return s.lo, nil // g′(0) ≠ 0 unless 1 is a break point
	}
	// (e^w - 1)/w is within |w|·(e - 2) of 1 for |w| ≤ 1, so its power within (1+|w|)^p - 1.
	// With λ = unitVelocity, |λ| = 1, g/t^(p+q) = Im(λ^p·A₁·conj(λ^q·B₁)·(1 + …)).
	direction := bigComplex{newFloat(s.bits).SetInt64(1), newFloat(s.bits)}
	for range p {
		direction = times(direction, s.unitVelocity, s.bits)
	}
	for range q {
		direction = times(direction, conjugate(s.unitVelocity), s.bits)
	}
	_, sizeA := taylorAbout(a, exactly(1), s.bits)
	_, sizeB := taylorAbout(b, exactly(1), s.bits)
	sine := newFloat(64).Abs(direction.im)
	for t := newFloat(64).SetFloat64(0.25); exponent(t) > -200; t.SetMantExp(t, -2) {
		rho := productUp(t, upward) // |e^(λt) - 1| ≤ t, since Re λ < 0
		dA, dB := remainder(sizeA, rho, false), remainder(sizeB, rho, false)
		spread := productSpread(sizeAt(sizeA, 0), dA, sizeAt(sizeB, 0), dB)
		size := productUp(sizeAt(sizeA, 0), sizeAt(sizeB, 0))
		tf := toFloat(t)
		grow := newFloat(64).SetFloat64(math.Expm1(float64(p+q)*math.Log1p(tf)) * 1.0001)
		spread = sumUp(spread, productUp(grow, sumUp(size, spread)))
		if productUp(size, sine).Cmp(productUp(spread, newFloat(64).SetFloat64(1.001))) > 0 {
			return newFloat(s.bits).Set(t), nil
		}
	}
	return nil, &UndecidedError{Call: s.call, What: "on which side of a spiral branches leave z = 1"}
}
