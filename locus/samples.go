package locus

import (
	"fmt"
	"math"
	"math/big"
	"math/cmplx"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
)

// OnSamples returns the image of r, a region of the s-plane that is symmetric about the real
// axis, under z = e^(s·period), period in seconds: it holds z if Log(z)/period, in the principal
// strip |Im s| ≤ π/period, lies in r. z = 0 counts as Re s = -∞ on the real axis: it is in the
// images of half-planes, sectors, strips and of what lies beyond a circle. A period that is not
// above 0 and finite is reported by the calls that use the region.
//
// The image of a vertical line is a circle, of a damping ray a logarithmic spiral that ends on
// the negative real axis.
func OnSamples(r Region, period float64) Region { return onSamples{r, period} }

type onSamples struct {
	r      Region
	period float64
}

func (r onSamples) Contains(z complex128) bool {
	if r.r == nil || !(r.period > 0 && finite(r.period)) || !finitePoint(z) {
		return false
	}
	if z == 0 {
		return atMinusInfinity(r.r)
	}
	s := logarithm(z)
	return r.r.Contains(complex(real(s)/r.period, imag(s)/r.period))
}

// logarithm is the principal logarithm, accurate in relation to its modulus near z = 1 too.
func logarithm(z complex128) complex128 {
	x, y := real(z), imag(z)
	if cmplx.Abs(z-1) > 0.5 {
		return cmplx.Log(z)
	}
	// |z|² - 1 = (x-1)(x+1) + y²
	return complex(math.Log1p((x-1)*(x+1)+y*y)/2, math.Atan2(y, x))
}

func atMinusInfinity(r Region) bool {
	switch r := r.(type) {
	case leftOf, damped, slower:
		return true
	case within:
		return r.outside
	case all:
		for _, one := range r {
			if !atMinusInfinity(one) {
				return false
			}
		}
		return true
	case onSamples:
		return false
	}
	return r.Contains(complex(-math.MaxFloat64, 0))
}

func (r onSamples) Boundary() []Curve {
	if _, ok := r.r.(known); !ok && r.r != nil {
		var curves []Curve
		for _, c := range r.r.Boundary() {
			curves = append(curves, c.image(r.period))
		}
		return curves
	}
	list, err := r.constraints("")
	if err != nil {
		return nil
	}
	var curves []Curve
	for _, c := range list {
		curves = append(curves, curvesOf(c)...)
	}
	return curves
}

func (r onSamples) constraints(call string) ([]constraint, error) {
	if !(r.period > 0 && finite(r.period)) {
		return nil, invalidRegion(call, "OnSamples", "period", r.period, "a finite number above 0 is wanted")
	}
	switch inner := r.r.(type) {
	case nil:
		return nil, &poly.ArgumentError{Call: call, Argument: "r", Reason: "locus.OnSamples: no region"}
	case all:
		var list []constraint
		for _, one := range inner {
			more, err := onSamples{one, r.period}.constraints(call)
			if err != nil {
				return nil, err
			}
			list = append(list, more...)
		}
		return list, nil
	case onSamples:
		return nil, &poly.ArgumentError{Call: call, Argument: "r", Reason: "locus.OnSamples of a region that is one of the z-plane already"}
	case known:
		list, err := inner.constraints(call) // for its checks of the arguments
		if err != nil {
			return nil, err
		}
		return []constraint{onSamplesOf(list[0], inner, r.period)}, nil
	}
	return []constraint{userRegion{r}}, nil
}

// sampleBits is the precision of the constants that stand for e^(σT) and the like. What they
// are off is far below what the rounding of the answer to float64 adds.
const sampleBits = 320

// onSamplesOf returns the image of one side of a line, ray or circle.
func onSamplesOf(c constraint, r Region, period float64) constraint {
	t := round(exact.Float(period), sampleBits)
	inside := sampled{region: onSamples{r, period}}
	switch c := c.(type) {
	case halfPlane:
		w := newFloat(sampleBits).Mul(t, round(c.sigma, sampleBits))
		radius := exponential(realPart(w, sampleBits), sampleBits)
		return disc{radius: dyadic(newFloat(sampleBits).Set(radius.re))}
	case sector:
		inside.arcs = []*arc{spiral(c.zeta)}
		inside.margin = func(s complex128) float64 {
			zeta := c.zeta.Float64()
			root := math.Sqrt((1 - zeta) * (1 + zeta))
			return -real(s)*root - math.Abs(imag(s))*zeta
		}
	case disc:
		a := newFloat(sampleBits).Mul(t, round(c.radius, sampleBits))
		inside.arcs = circleImages(a)
		radius := toFloat(a)
		inside.margin = func(s complex128) float64 {
			if c.outside {
				return cmplx.Abs(s) - radius
			}
			return radius - cmplx.Abs(s)
		}
	case strip:
		angle := newFloat(sampleBits).Mul(t, round(c.omega, sampleBits))
		if angle.Cmp(pi(sampleBits)) < 0 {
			turn := exponential(bigComplex{newFloat(sampleBits), angle}, sampleBits)
			inside.ray = &sector{dyadic(newFloat(sampleBits).Neg(turn.re))}
		}
		limit := toFloat(angle)
		inside.margin = func(s complex128) float64 { return limit - math.Abs(imag(s)) }
	}
	return inside
}

// sampled is a set of z whose boundary has no exact form.
type sampled struct {
	region onSamples
	arcs   []*arc
	ray    *sector                    // instead of arcs: the ray from z = 0 at the angle of this sector's
	margin func(s complex128) float64 // distance of s·T = Log z from the boundary, negative outside
}

func (c sampled) contacts(call string, r reduced) (list []contact, whole bool, err error) {
	if c.ray != nil {
		return r.contactsWith(call, c.ray)
	}
	for _, a := range c.arcs {
		more, err := r.contactsAlong(call, a)
		if err != nil {
			return nil, false, err
		}
		list = append(list, more...)
	}
	return list, false, nil
}

func (c sampled) side(z bigComplex) int {
	at := number(z)
	if at == 0 {
		return sign(c.region.Contains(0))
	}
	s := logarithm(at)
	m := c.margin(s)
	// Both at and its logarithm are rounded.
	if math.Abs(m) <= 0x1p-48*(1+cmplx.Abs(s)) {
		return 0
	}
	return sign(m > 0)
}

func sign(holds bool) int {
	if holds {
		return +1
	}
	return -1
}

func (c sampled) around(r poly.Root) int {
	if r.Value == 0 && r.Radius == 0 {
		return sign(c.region.Contains(0))
	}
	size := cmplx.Abs(r.Value)
	if r.Radius > size/4 {
		return 0
	}
	s := logarithm(r.Value)
	m := c.margin(s)
	if math.Abs(m) <= 1.5*r.Radius/size+0x1p-49*cmplx.Abs(s) {
		return 0
	}
	return sign(m > 0)
}

func (c sampled) count(call string, p exact.Poly) (exact.Count, error) {
	return countRoots(call, p, c.around)
}

// countRoots counts by the roots themselves: side tells on which side a root's disc lies, 0 if
// it cannot.
func countRoots(call string, p exact.Poly, side func(poly.Root) int) (exact.Count, error) {
	if p.Degree() < 1 {
		return exact.Count{}, nil
	}
	roots, err := poly.FromIntegers(p.Integers()).Roots()
	if err != nil {
		return exact.Count{}, err
	}
	var c exact.Count
	for _, r := range roots {
		switch side(r) {
		case +1:
			c.Inside += r.Multiplicity
		case -1:
			c.Outside += r.Multiplicity
		default:
			return c, &UndecidedError{Call: call, What: fmt.Sprintf("on which side of the boundary the root %s lies", formatPoint(r.Value))}
		}
	}
	return c, nil
}

// spiral returns the image of the upper damping ray: e^(λt), λ = -ζ + j√(1-ζ²), up to the
// negative real axis. It does not depend on the period.
func spiral(zeta exact.Dyadic) *arc {
	root := round(one.Sub(zeta.Mul(zeta)), sampleBits)
	root.Sqrt(root)
	lambda := bigComplex{round(zeta.Neg(), sampleBits), root}
	a := &arc{
		lo: newFloat(sampleBits), hi: newFloat(sampleBits).Quo(pi(sampleBits), root), bits: sampleBits,
		mirrored: true, realLo: true, realHi: true, unitAtLo: true, unitVelocity: lambda,
	}
	a.at = func(t *big.Float) bigComplex {
		return exponential(times(lambda, realPart(t, sampleBits), sampleBits), sampleBits)
	}
	decay := toFloat(lambda.re)
	a.velocity = func(lo, hi *big.Float) (bigComplex, *big.Float) {
		m := halfway(lo, hi)
		// |γ″| = |λ|²·e^(-ζt) ≤ e^(-ζ·lo)
		h := newFloat(64).Sub(hi, m)
		return times(lambda, a.at(m), sampleBits), productUp(h, newFloat(64).SetFloat64(1.0001*math.Exp(decay*toFloat(lo))))
	}
	return a
}

// circleImages returns the image of the upper half of |s| = a/T, where it lies in the principal
// strip: exp(a·e^(jt)), 0 ≤ t ≤ π, a·sin t ≤ π.
func circleImages(a *big.Float) []*arc {
	limit := pi(sampleBits)
	piece := func(lo, hi *big.Float) *arc {
		c := &arc{lo: lo, hi: hi, bits: sampleBits, mirrored: true, realLo: true, realHi: true}
		exponent := func(t *big.Float) (turn, w bigComplex) {
			turn = exponential(bigComplex{newFloat(sampleBits), newFloat(sampleBits).Set(t)}, sampleBits)
			return turn, times(realPart(a, sampleBits), turn, sampleBits)
		}
		c.at = func(t *big.Float) bigComplex {
			_, w := exponent(t)
			return exponential(w, sampleBits)
		}
		size := toFloat(a)
		c.velocity = func(lo, hi *big.Float) (bigComplex, *big.Float) {
			m := halfway(lo, hi)
			_, w := exponent(m)
			v := times(w, exponential(w, sampleBits), sampleBits)
			v = bigComplex{newFloat(sampleBits).Neg(v.im), v.re}
			// |γ″| = |a²·e^(2jt) + a·e^(jt)|·e^(a·cos t), and the cosine falls.
			h := newFloat(64).Sub(hi, m)
			return v, productUp(h, newFloat(64).SetFloat64(1.0001*(size*size+size)*math.Exp(size*math.Cos(toFloat(lo)))))
		}
		return c
	}
	zero := newFloat(sampleBits)
	if a.Cmp(limit) <= 0 {
		return []*arc{piece(zero, limit)}
	}
	// asin(π/a) by Newton's method on the sine.
	start := math.Asin(toFloat(newFloat(64).Quo(limit, a)))
	t := newFloat(sampleBits).SetFloat64(start)
	target := newFloat(sampleBits).Quo(limit, a)
	for range 12 {
		e := exponential(bigComplex{newFloat(sampleBits), t}, sampleBits)
		d := newFloat(sampleBits).Sub(e.im, target)
		if e.re.Sign() == 0 {
			break
		}
		t = newFloat(sampleBits).Sub(t, d.Quo(d, e.re))
	}
	return []*arc{piece(zero, t), piece(newFloat(sampleBits).Sub(limit, t), limit)}
}

// image returns the curve under z = e^(s·period), as far as it can lie in the principal strip
// and z in the range of float64.
func (c Curve) image(period float64) Curve {
	if c.err != nil || c.point == nil {
		return c
	}
	if c.motion == nil {
		return invalidCurve("OnSamples", "r", "a curve of the z-plane has no image under sampling")
	}
	lo, hi := c.lo, c.hi
	if line, ok := c.form.(straightForm); ok {
		// Clip to |Im s| ≤ π/T and, where that is no limit, to where e^(sT) is a float64.
		start, step := complex(line.through.re.Float64(), line.through.im.Float64()), complex(line.direction.re.Float64(), line.direction.im.Float64())
		clip := func(at, speed, least, most float64) {
			if speed == 0 {
				return
			}
			a, b := (least-at)/speed, (most-at)/speed
			lo, hi = max(lo, min(a, b)), min(hi, max(a, b))
		}
		clip(imag(start), imag(step), -math.Pi/period, math.Pi/period)
		clip(real(start), real(step), -700/period, 700/period)
		if !(lo < hi) {
			return Curve{}
		}
	}
	return Parametric(lo, hi,
		func(t float64) complex128 { return cmplx.Exp(complex(period, 0) * c.point(t)) },
		func(lo, hi float64) Disc {
			v := c.motion(lo, hi)
			speed := cmplx.Abs(v.Center)
			z := cmplx.Exp(complex(period, 0) * c.point(lo/2+hi/2))
			size := cmplx.Abs(z)
			spread := size * math.Expm1(period*(speed+v.Radius)*(hi-lo)/2*1.0001) * 1.0001
			return Disc{complex(period, 0) * v.Center * z, period * (speed*spread + size*v.Radius + v.Radius*spread) * 1.0001}
		})
}
