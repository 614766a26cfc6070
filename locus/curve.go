package locus

import (
	"math"
	"math/big"
	"math/cmplx"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
)

// A Curve is a piece of a region's boundary: points At(t) of the plane for t in an interval.
// [StraightLine], [Ray], [Segment], [Circle] and [Arc] are treated exactly, as the numbers they were
// made from; [Parametric] makes any other. What is wrong with their arguments is reported by
// the calls that use the curve.
//
// The zero Curve is a point at the origin.
type Curve struct {
	lo, hi float64
	point  func(t float64) complex128
	motion func(lo, hi float64) Disc // holds the derivative of point
	form   form                      // nil if there is none
	extra  bool                      // a circle: its leftmost point, which the form leaves out, belongs to it
	arc    *arc                      // instead of a form
	err    error
}

// Interval returns the range of the parameter; its ends may be infinite.
func (c Curve) Interval() (lo, hi float64) { return c.lo, c.hi }

// At returns the point of the curve at t.
func (c Curve) At(t float64) complex128 {
	if c.point == nil {
		return 0
	}
	return c.point(t)
}

func invalidCurve(constructor, argument, reason string) Curve {
	return Curve{err: &poly.ArgumentError{Call: "locus." + constructor, Argument: argument, Reason: reason}}
}

// StraightLine returns the whole line through a point in a direction, which must not be 0.
func StraightLine(through, direction complex128) Curve {
	return straight("StraightLine", through, direction, math.Inf(-1), math.Inf(1))
}

// Ray returns the half of a line that begins at a point.
func Ray(from, direction complex128) Curve {
	return straight("Ray", from, direction, 0, math.Inf(1))
}

// Segment returns the straight piece between two different points.
func Segment(from, to complex128) Curve {
	if from == to {
		return invalidCurve("Segment", "to", "both ends are the same point")
	}
	return straight("Segment", from, to-from, 0, 1)
}

func straight(constructor string, through, direction complex128, lo, hi float64) Curve {
	if !finitePoint(through) || !finitePoint(direction) {
		return invalidCurve(constructor, "direction", "a point or direction is not finite")
	}
	if direction == 0 {
		return invalidCurve(constructor, "direction", "a direction other than 0 is wanted")
	}
	return Curve{
		lo: lo, hi: hi,
		point:  func(t float64) complex128 { return through + complex(t*real(direction), t*imag(direction)) },
		motion: func(lo, hi float64) Disc { return Disc{Center: direction} },
		form:   straightForm{exactPoint(through), exactPoint(direction), exact.Float(lo), exact.Float(hi)},
	}
}

// Circle returns the circle about a center; the radius is above 0.
func Circle(center complex128, radius float64) Curve {
	c := circular("Circle", center, radius, math.Inf(-1), math.Inf(1))
	c.lo, c.hi, c.extra = -math.Pi, math.Pi, true
	return c
}

// Arc returns the piece of a circle between two angles in [-π, π], in radians counter-clockwise
// from the direction of the positive real axis, from < to.
func Arc(center complex128, radius, from, to float64) Curve {
	if !(from >= -math.Pi && from < to && to <= math.Pi) {
		return invalidCurve("Arc", "from, to", "angles in [-π, π] are wanted, from < to")
	}
	// The parameter of the form is the tangent of half the angle.
	half := func(angle float64) float64 {
		if math.Abs(angle) == math.Pi {
			return math.Inf(int(math.Copysign(1, angle)))
		}
		return math.Tan(angle / 2)
	}
	c := circular("Arc", center, radius, half(from), half(to))
	c.lo, c.hi, c.extra = from, to, math.Abs(from) == math.Pi || to == math.Pi
	return c
}

func circular(constructor string, center complex128, radius, lo, hi float64) Curve {
	if !finitePoint(center) {
		return invalidCurve(constructor, "center", "the center is not finite")
	}
	if !(radius > 0 && finite(radius)) {
		return invalidCurve(constructor, "radius", "a finite number above 0 is wanted")
	}
	return Curve{
		point: func(t float64) complex128 { return center + cmplx.Rect(radius, t) },
		motion: func(lo, hi float64) Disc {
			return Disc{1i * cmplx.Rect(radius, lo/2+hi/2), radius * (hi - lo) / 2 * 1.0001}
		},
		form: circularForm{exactPoint(center), exact.Float(radius), exact.Float(lo), exact.Float(hi)},
	}
}

// A Disc is the set of points within Radius of Center.
type Disc struct {
	Center complex128
	Radius float64
}

// Parametric returns the curve of the points at(t), lo ≤ t ≤ hi, both finite. velocity returns a
// disc that contains the derivative of at over all of [lo, hi] within the curve's own interval;
// the narrower the interval, the smaller the disc must become. What is proven with the curve
// is as certain as these discs. at is taken to be exact.
func Parametric(lo, hi float64, at func(t float64) complex128, velocity func(lo, hi float64) Disc) Curve {
	switch {
	case !finite(lo) || !finite(hi) || !(lo < hi):
		return invalidCurve("Parametric", "lo, hi", "finite numbers are wanted, lo < hi")
	case at == nil || velocity == nil:
		return invalidCurve("Parametric", "at, velocity", "no function")
	}
	const bits = 128
	isReal := func(t float64) bool {
		s := at(t)
		return math.Abs(imag(s)) <= 0x1p-48*math.Abs(real(s))
	}
	return Curve{lo: lo, hi: hi, point: at, motion: velocity, arc: &arc{
		lo: newFloat(bits).SetFloat64(lo), hi: newFloat(bits).SetFloat64(hi), bits: bits,
		float: true, realLo: isReal(lo), realHi: isReal(hi),
		at: func(t *big.Float) bigComplex {
			s := at(toFloat(t))
			return bigComplex{newFloat(bits).SetFloat64(real(s)), newFloat(bits).SetFloat64(imag(s))}
		},
		velocity: func(lo, hi *big.Float) (bigComplex, *big.Float) {
			d := velocity(toFloat(lo), toFloat(hi))
			return bigComplex{newFloat(bits).SetFloat64(real(d.Center)), newFloat(bits).SetFloat64(imag(d.Center))},
				newFloat(64).SetFloat64(d.Radius)
		},
	}}
}

// contacts returns the contacts of the moving roots with the curve alone, not with its mirror
// image.
func (c Curve) contacts(call string, r reduced) (list []contact, whole bool, err error) {
	switch {
	case c.err != nil:
		return nil, false, c.err
	case r.degree() < 1:
		return nil, false, nil
	case c.arc != nil:
		list, err = r.contactsAlong(call, c.arc)
		return list, false, err
	case c.form == nil:
		return nil, false, nil
	}
	list, whole, err = r.contactsWith(call, c.form)
	if err == nil && c.extra && !whole {
		circle := c.form.(circularForm)
		at := complexDyadic{circle.center.re.Sub(circle.radius), circle.center.im}
		a, b := at.value(r.a), at.value(r.b)
		// Im(A·conj B) = 0, without rounding
		switch turn := a.im.Mul(b.re).Sub(a.re.Mul(b.im)); {
		case turn.Sign() != 0 || b.re.Sign() == 0 && b.im.Sign() == 0:
		case a.re.Sign() == 0 && a.im.Sign() == 0:
			list = append(list, contact{gain: newFloat(64)})
		default:
			k := newFloat(128).Quo(round(a.re.Mul(b.re).Add(a.im.Mul(b.im)), 192), round(b.re.Mul(b.re).Add(b.im.Mul(b.im)), 192))
			list = append(list, contact{
				s: bigComplex{round(at.re, 192), round(at.im, 192)}, gain: k.Neg(k),
				even: circle.touchesAtLeft(r),
			})
		}
	}
	return list, whole, err
}

// A complexDyadic is a point with dyadic parts.
type complexDyadic struct{ re, im exact.Dyadic }

func exactPoint(s complex128) complexDyadic {
	return complexDyadic{exact.Float(real(s)), exact.Float(imag(s))}
}

// value returns p at the point, exactly.
func (s complexDyadic) value(p exact.Poly) complexDyadic {
	var y complexDyadic
	for i := p.Degree(); i >= 0; i-- {
		y = complexDyadic{
			y.re.Mul(s.re).Sub(y.im.Mul(s.im)).Add(p.Coefficient(i)),
			y.re.Mul(s.im).Add(y.im.Mul(s.re)),
		}
	}
	return y
}

// A straightForm is through + x·direction.
type straightForm struct {
	through, direction complexDyadic
	lo, hi             exact.Dyadic
}

func (r straightForm) splitOne(p exact.Poly) (re, im exact.Poly) {
	sr, si := exact.FromDyadics(r.through.re, r.direction.re), exact.FromDyadics(r.through.im, r.direction.im)
	for i := p.Degree(); i >= 0; i-- {
		re, im = re.Mul(sr).Sub(im.Mul(si)).Add(exact.FromDyadics(p.Coefficient(i))), re.Mul(si).Add(im.Mul(sr))
	}
	return re, im
}

func (r straightForm) split(a, b exact.Poly) (reA, imA, reB, imB exact.Poly) {
	reA, imA = r.splitOne(a)
	reB, imB = r.splitOne(b)
	return
}

func (r straightForm) under() exact.Poly               { return exact.FromFloats(1) }
func (r straightForm) interval() (lo, hi exact.Dyadic) { return r.lo, r.hi }
func (r straightForm) real() []exact.Dyadic            { return nil }
func (r straightForm) mirrored() bool                  { return false }

func (r straightForm) point(x *big.Float, bits uint) bigComplex {
	part := func(c, d exact.Dyadic) *big.Float {
		y := newFloat(2*bits).Mul(x, round(d, 64))
		y.Add(y, round(c, 64))
		return newFloat(bits).Set(y)
	}
	return bigComplex{part(r.through.re, r.direction.re), part(r.through.im, r.direction.im)}
}

// A circularForm is center + radius·(1 + jx)/(1 - jx), x the tangent of half the angle; the
// common factor is (1 - jx)^-n.
type circularForm struct {
	center complexDyadic
	radius exact.Dyadic
	lo, hi exact.Dyadic
}

func (r circularForm) split(a, b exact.Poly) (reA, imA, reB, imB exact.Poly) {
	n := max(a.Degree(), b.Degree())
	// s·(1 - jx) = c + r + jx(r - c)
	sr := exact.FromDyadics(r.center.re.Add(r.radius), r.center.im)
	si := exact.FromDyadics(r.center.im, r.radius.Sub(r.center.re))
	dr, di := exact.FromFloats(1), exact.FromFloats(0, -1)
	one := func(p exact.Poly) (re, im exact.Poly) {
		wr, wi := exact.FromFloats(1), exact.Poly{} // (1 - jx)^(n-i)
		for i := n; i >= 0; i-- {
			c := p.Coefficient(i)
			re, im = re.Mul(sr).Sub(im.Mul(si)).Add(wr.Scale(c)), re.Mul(si).Add(im.Mul(sr)).Add(wi.Scale(c))
			wr, wi = wr.Mul(dr).Sub(wi.Mul(di)), wr.Mul(di).Add(wi.Mul(dr))
		}
		return re, im
	}
	reA, imA = one(a)
	reB, imB = one(b)
	return
}

func (r circularForm) under() exact.Poly               { return exact.FromFloats(1) }
func (r circularForm) interval() (lo, hi exact.Dyadic) { return r.lo, r.hi }
func (r circularForm) real() []exact.Dyadic            { return nil }
func (r circularForm) mirrored() bool                  { return false }

func (r circularForm) point(x *big.Float, bits uint) bigComplex {
	// (1 - x² + 2jx)/(1 + x²)
	work := 2 * bits
	square := newFloat(work).Mul(x, x)
	below := newFloat(work).Add(square, newFloat(work).SetInt64(1))
	radius := round(r.radius, work)
	re := newFloat(work).Sub(newFloat(work).SetInt64(1), square)
	re.Quo(re.Mul(re, radius), below)
	im := newFloat(work).Add(x, x)
	im.Quo(im.Mul(im, radius), below)
	re.Add(re, round(r.center.re, work))
	im.Add(im, round(r.center.im, work))
	return bigComplex{newFloat(bits).Set(re), newFloat(bits).Set(im)}
}

// touchesAtLeft tells whether the condition for a real gain keeps its sign at the leftmost
// point, where x is infinite: whether the polynomial lacks an even number of leading terms.
func (r circularForm) touchesAtLeft(f reduced) bool {
	reA, imA, reB, imB := r.split(f.a, f.b)
	w := imA.Mul(reB).Sub(reA.Mul(imB))
	return (2*f.degree()-w.Degree())%2 == 0
}

// A userRegion is a region of the caller's own: its boundary consists of its curves, and its
// sides are what it says of points.
type userRegion struct{ Region }

func (r userRegion) contacts(call string, f reduced) (list []contact, whole bool, err error) {
	for _, c := range r.Boundary() {
		more, on, err := c.contacts(call, f)
		if err != nil {
			return nil, false, err
		}
		list, whole = append(list, more...), whole || on
	}
	return snapReal(list), whole, nil
}

// snapReal makes real the points that float64 cannot tell from real ones: there the branch on the
// real axis meets the curve.
func snapReal(list []contact) []contact {
	for i := range list {
		if s := &list[i].s; s.im != nil && exponent(s.im) < exponent(s.re)-50 {
			s.im = newFloat(64)
		}
	}
	return list
}

func (r userRegion) side(s bigComplex) int { return r.around(poly.Root{Value: number(s)}) }

// around asks the region about a point and its neighbours; they must agree.
func (r userRegion) around(root poly.Root) int {
	s := root.Value
	h := 4*root.Radius + 0x1p-40*cmplx.Abs(s)
	in := r.Contains(s)
	for _, d := range [...]complex128{complex(h, 0), complex(-h, 0), complex(0, h), complex(0, -h)} {
		if r.Contains(s+d) != in {
			return 0
		}
	}
	return sign(in)
}

func (r userRegion) count(call string, p exact.Poly) (exact.Count, error) {
	return countRoots(call, p, r.around)
}

// curvesOf returns the boundary of an image under sampling.
func curvesOf(c constraint) []Curve {
	switch c := c.(type) {
	case disc:
		return []Curve{Circle(0, c.radius.Float64())}
	case userRegion:
		return c.Boundary()
	case sampled:
		if c.ray != nil {
			s := number(c.ray.point(newFloat(64).SetInt64(1), 64))
			return []Curve{Ray(0, s), Ray(0, cmplx.Conj(s))}
		}
		var curves []Curve
		for _, a := range c.arcs {
			for _, mirrored := range [...]bool{false, true} {
				curves = append(curves, Curve{
					lo: toFloat(a.lo), hi: toFloat(a.hi), arc: a,
					point: func(t float64) complex128 {
						s := number(a.at(newFloat(a.bits).SetFloat64(t)))
						if mirrored {
							s = cmplx.Conj(s)
						}
						return s
					},
				})
			}
		}
		return curves
	}
	return nil
}
