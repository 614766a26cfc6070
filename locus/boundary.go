package locus

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
)

// A form describes a curve through the plane by points γ(x) with x in [lo, hi], on which every
// polynomial splits into
//
//	p(γ(x)) = c(x)·(re(x) + j·√h(x)·im(x)),   re, im and h polynomials with dyadic coefficients,
//
// with one factor c(x) ≠ 0 for all p of the same formal degree. So the condition for a real gain,
// Im(A·conj B) = 0, is the polynomial im_A·re_B - re_A·im_B = 0 and exact, whatever the curve.
// Those that are symmetric about the real axis are described by their upper half:
//
//	line Re s = σ:     x = ω², h = x, even and odd part of p(σ + jω)
//	circle |s| = r:    x = cos θ, h = 1 - x², Σ cᵢrⁱTᵢ(x) and Σ cᵢrⁱUᵢ₋₁(x)
//	ray at angle φ:    x = |s|, h = 1 - ζ², Σ cᵢTᵢ(-ζ)xⁱ and Σ cᵢUᵢ₋₁(-ζ)xⁱ, cos φ = -ζ
//	line Im s = ω:     x = Re s, h = ω², even and odd part in jω of p(x + jω)
//
// The ray uses sin iφ = sin φ·Uᵢ₋₁(cos φ): no sine is rounded.
type form interface {
	// split returns re and im of two polynomials, for the higher of their degrees.
	split(a, b exact.Poly) (reA, imA, reB, imB exact.Poly)
	// under returns h.
	under() exact.Poly
	// interval returns lo and hi.
	interval() (lo, hi exact.Dyadic)
	// real returns the x at the ends of the interval at which γ(x) is real; there a branch on the
	// real axis meets the curve.
	real() []exact.Dyadic
	// mirrored tells whether the conjugates of the points belong to the curve too.
	mirrored() bool
	// point returns γ(x).
	point(x *big.Float, bits uint) bigComplex
}

// A constraint is one of the sets that a region is the intersection of.
type constraint interface {
	// contacts returns the contacts of the moving roots with its boundary, in no order. whole
	// tells that a piece of the boundary belongs to the locus; then the contacts with that piece
	// are those with extreme gains.
	contacts(call string, r reduced) (list []contact, whole bool, err error)
	// side returns +1 if s lies strictly inside, -1 if outside, 0 if on the boundary or too close
	// to tell.
	side(s bigComplex) int
	// around is side for a root that is known to within its disc.
	around(r poly.Root) int
	// count counts the roots of p, which is not zero.
	count(call string, p exact.Poly) (exact.Count, error)
}

// A halfPlane is Re s < sigma.
type halfPlane struct{ sigma exact.Dyadic }

var (
	zero          exact.Dyadic
	one           = exact.Float(1)
	plusInfinity  = exact.Float(math.Inf(1))
	minusInfinity = exact.Float(math.Inf(-1))
	identity      = exact.FromFloats(0, 1)
)

func (r halfPlane) splitOne(p exact.Poly) (re, im exact.Poly) { return alternate(p.Shift(r.sigma)) }

// alternate splits p(jω) = re(ω²) + jω·im(ω²).
func alternate(p exact.Poly) (re, im exact.Poly) {
	var parts [2][]exact.Dyadic
	for i := 0; i <= p.Degree(); i++ {
		c := p.Coefficient(i)
		if i&2 != 0 {
			c = c.Neg()
		}
		parts[i&1] = append(parts[i&1], c)
	}
	return exact.FromDyadics(parts[0]...), exact.FromDyadics(parts[1]...)
}

func (r halfPlane) under() exact.Poly { return identity }

func (r halfPlane) interval() (lo, hi exact.Dyadic) { return zero, plusInfinity }

func (r halfPlane) real() []exact.Dyadic { return []exact.Dyadic{zero} }

func (r halfPlane) point(x *big.Float, bits uint) bigComplex {
	return bigComplex{round(r.sigma, bits), newFloat(bits).Sqrt(x)}
}

// halfTurns returns by how many half turns, counter-clockwise, the argument of re + j·im grows
// from x = -∞ to +∞, common real roots left out.
func halfTurns(re, im exact.Poly) int {
	switch {
	case im.IsZero() || re.IsZero():
		return 0
	case re.Degree() >= im.Degree():
		// The tangent of the argument is finite at infinity; where it passes from +∞ to -∞,
		// the argument grows through an odd multiple of π/2.
		return -exact.CauchyIndex(im, re, minusInfinity, plusInfinity)
	}
	return exact.CauchyIndex(re, im, minusInfinity, plusInfinity)
}

// A sector is |arg(-s)| < acos zeta.
type sector struct{ zeta exact.Dyadic }

func (r sector) splitOne(p exact.Poly) (re, im exact.Poly) {
	c := r.zeta.Neg()
	n := p.Degree()
	res, ims := make([]exact.Dyadic, n+1), make([]exact.Dyadic, n+1)
	// T and U by their common recurrence; U is one index behind.
	t0, t1 := one, c
	u0, u1 := zero, one
	for i := 0; i <= n; i++ {
		res[i], ims[i] = p.Coefficient(i).Mul(t0), p.Coefficient(i).Mul(u0)
		t0, t1 = t1, c.Mul(t1).Mul(exact.PowerOfTwo(1)).Sub(t0)
		u0, u1 = u1, c.Mul(u1).Mul(exact.PowerOfTwo(1)).Sub(u0)
	}
	return exact.FromDyadics(res...), exact.FromDyadics(ims...)
}

func (r sector) under() exact.Poly {
	return exact.FromDyadics(one.Sub(r.zeta.Mul(r.zeta)))
}

func (r sector) interval() (lo, hi exact.Dyadic) { return zero, plusInfinity }

func (r sector) real() []exact.Dyadic { return []exact.Dyadic{zero} }

func (r sector) point(x *big.Float, bits uint) bigComplex {
	sine := round(one.Sub(r.zeta.Mul(r.zeta)), bits)
	sine.Sqrt(sine)
	return bigComplex{newFloat(bits).Mul(x, round(r.zeta.Neg(), bits)), sine.Mul(sine, x)}
}

// A disc is |s| < radius, or its exterior |s| > radius.
type disc struct {
	radius  exact.Dyadic
	outside bool
}

func (r disc) splitOne(p exact.Poly) (re, im exact.Poly) {
	p = p.Stretch(r.radius)
	// Σ cᵢTᵢ and Σ cᵢUᵢ₋₁ with both kinds by their recurrence.
	t0, t1 := exact.FromFloats(1), identity
	u0, u1 := exact.Poly{}, exact.FromFloats(1)
	twice := exact.FromFloats(0, 2)
	for i := 0; i <= p.Degree(); i++ {
		c := p.Coefficient(i)
		re, im = re.Add(t0.Scale(c)), im.Add(u0.Scale(c))
		t0, t1 = t1, twice.Mul(t1).Sub(t0)
		u0, u1 = u1, twice.Mul(u1).Sub(u0)
	}
	return re, im
}

func (r disc) under() exact.Poly { return exact.FromFloats(1, 0, -1) }

func (r disc) interval() (lo, hi exact.Dyadic) { return one.Neg(), one }

func (r disc) real() []exact.Dyadic { return []exact.Dyadic{one.Neg(), one} }

func (r disc) point(x *big.Float, bits uint) bigComplex {
	radius := round(r.radius, bits)
	sine := newFloat(2*bits).Mul(x, x)
	sine.Sub(newFloat(2*bits).SetInt64(1), sine)
	if sine.Sign() < 0 {
		sine.SetInt64(0)
	}
	sine.Sqrt(sine)
	return bigComplex{newFloat(bits).Mul(radius, x), newFloat(bits).Mul(radius, sine)}
}

// A strip is |Im s| < omega.
type strip struct{ omega exact.Dyadic }

func (r strip) splitOne(p exact.Poly) (re, im exact.Poly) {
	// Taylor: p(x + jω) = Σ (jω)ⁱ/i!·p⁽ⁱ⁾(x); coefficients of p⁽ⁱ⁾/i! are binomial multiples.
	power := one
	for i := 0; i <= p.Degree(); i++ {
		d := dividedDerivative(p, i)
		switch i & 3 {
		case 0:
			re = re.Add(d.Scale(power))
		case 1:
			im = im.Add(d.Scale(power))
			power = power.Mul(r.omega).Mul(r.omega)
		case 2:
			re = re.Sub(d.Scale(power))
		case 3:
			im = im.Sub(d.Scale(power))
			power = power.Mul(r.omega).Mul(r.omega)
		}
	}
	return re, im
}

// dividedDerivative returns the i-th derivative of p, divided by i!.
func dividedDerivative(p exact.Poly, i int) exact.Poly {
	c, e := p.Integers()
	if i >= len(c) {
		return exact.Poly{}
	}
	r := make([]*big.Int, len(c)-i)
	for j := range r {
		r[j] = new(big.Int).Binomial(int64(i+j), int64(i))
		r[j].Mul(r[j], c[i+j])
	}
	return exact.New(r, e)
}

func (r strip) under() exact.Poly { return exact.FromDyadics(r.omega.Mul(r.omega)) }

func (r strip) interval() (lo, hi exact.Dyadic) { return minusInfinity, plusInfinity }

func (r strip) real() []exact.Dyadic { return nil }

func (r strip) point(x *big.Float, bits uint) bigComplex {
	return bigComplex{newFloat(bits).Set(x), round(r.omega, bits)}
}

func (r halfPlane) split(a, b exact.Poly) (reA, imA, reB, imB exact.Poly) {
	reA, imA = r.splitOne(a)
	reB, imB = r.splitOne(b)
	return
}

func (r sector) split(a, b exact.Poly) (reA, imA, reB, imB exact.Poly) {
	reA, imA = r.splitOne(a)
	reB, imB = r.splitOne(b)
	return
}

func (r disc) split(a, b exact.Poly) (reA, imA, reB, imB exact.Poly) {
	reA, imA = r.splitOne(a)
	reB, imB = r.splitOne(b)
	return
}

func (r strip) split(a, b exact.Poly) (reA, imA, reB, imB exact.Poly) {
	reA, imA = r.splitOne(a)
	reB, imB = r.splitOne(b)
	return
}

func (r halfPlane) mirrored() bool { return true }
func (r sector) mirrored() bool    { return true }
func (r disc) mirrored() bool      { return true }
func (r strip) mirrored() bool     { return true }

func (r halfPlane) contacts(call string, f reduced) ([]contact, bool, error) {
	return f.contactsWith(call, r)
}

func (r sector) contacts(call string, f reduced) ([]contact, bool, error) {
	return f.contactsWith(call, r)
}

func (r disc) contacts(call string, f reduced) ([]contact, bool, error) {
	return f.contactsWith(call, r)
}

func (r strip) contacts(call string, f reduced) ([]contact, bool, error) {
	return f.contactsWith(call, r)
}

func (r halfPlane) count(_ string, p exact.Poly) (exact.Count, error) {
	return exact.LeftOf(p, r.sigma), nil
}

func (r sector) count(_ string, p exact.Poly) (exact.Count, error) {
	return exact.InSector(p, r.zeta), nil
}

func (r disc) count(_ string, p exact.Poly) (exact.Count, error) {
	c := exact.InDisc(p, r.radius)
	if r.outside {
		c.Inside, c.Outside = c.Outside, c.Inside
	}
	return c, nil
}

// count counts the roots above the upper line, as many as are below the lower one.
func (r strip) count(_ string, p exact.Poly) (exact.Count, error) {
	n := p.Degree()
	if n < 1 {
		return exact.Count{}, nil
	}
	re, im := r.splitOne(p)
	_, on := exact.GCD(re, im).CountReal(minusInfinity, plusInfinity, exact.Open)
	above := (n - on + halfTurns(re, im)) / 2
	return exact.Count{Inside: n - 2*on - 2*above, Boundary: 2 * on, Outside: 2 * above}, nil
}
