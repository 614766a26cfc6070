package locus

import (
	"math"
	"math/cmplx"
	"sort"
)

// at returns where the root of a chain is at a gain of the plane.
func (c *chain) at(p *plane, κ float64) (complex128, bool) {
	if v := c.tail.cell; v != nil && (len(c.knots) == 0 || κ > c.knots[len(c.knots)-1].upto) {
		return c.tail.polished(p, κ, -1)
	}
	if v := c.head.cell; v != nil && (len(c.knots) == 0 || κ < c.knots[0].from) {
		return c.head.polished(p, κ, +1)
	}
	i := sort.Search(len(c.knots), func(i int) bool { return c.knots[i].from > κ }) - 1
	if i < 0 {
		return 0, false
	}
	q := newPencil(p)
	q.set(κ)
	x, ok := c.near(q, i, κ)
	if !ok {
		return 0, false
	}
	k := &c.knots[i]
	return p.polish(x, κ, k.radius-math.Hypot(real(x)-k.x, imag(x)-k.y)), true
}

// vertexAtGain returns the break point, or the multiple root at gain zero, at which the chain
// begins or ends, if its gain rounds to k.
func (c *chain) vertexAtGain(k float64) (complex128, bool) {
	for _, e := range [...]tip{c.head, c.tail} {
		if v := e.cell; v != nil && !v.atInfinity && !v.reciprocal && c.plane.fromK(v.gain) == k {
			return c.plane.fromX(v.centre), true
		}
	}
	return 0, false
}

// near computes the root at a gain that knot i covers, by Newton's method, and makes sure
// that it is in the disc of the knot. The pencil q stands at that gain.
func (c *chain) near(q *pencil, i int, κ float64) (complex128, bool) {
	k := &c.knots[i]
	// Hermite's cubic to the next knot, or the tangent.
	d := κ - k.κ
	x, y := k.zx+k.vx*d, k.zy+k.vy*d
	if i+1 < len(c.knots) && d > 0 {
		n := &c.knots[i+1]
		h := n.κ - k.κ
		x = hermite(k.zx, k.vx, n.zx, n.vx, d/h, h)
		y = hermite(k.zy, k.vy, n.zy, n.vy, d/h, h)
	}
	if c.real {
		y = 0
	}
	if math.Hypot(x-k.x, y-k.y) >= k.radius {
		x, y = k.x, k.y
	}
	for _, try := range [...]struct {
		x, y    float64
		precise bool
	}{{x, y, false}, {k.zx, k.zy, false}, {x, y, true}, {k.zx, k.zy, true}} {
		if x, y, ok := c.converge(q, k, try.x, try.y, try.precise); ok {
			return complex(x, y), true
		}
	}
	// Little by little from the knot.
	defer q.set(κ)
	for steps := 8; steps <= 512; steps *= 8 {
		x, y, ok := k.zx, k.zy, true
		for i := 1; i <= steps && ok; i++ {
			q.set(k.κ + (κ-k.κ)*float64(i)/float64(steps))
			x, y, ok = c.converge(q, k, x, y, true)
		}
		if ok {
			return complex(x, y), true
		}
	}
	return 0, false
}

// converge runs Newton's method within the disc of a knot, in float64 or in twice that, and is
// ok if the result provably approximates the root in the disc: n·|F/F′| about a point holds a
// root, and one that is in the disc is this one. The factor 2 pays for the rounding of F′, whose
// terms are at most n/|x| times those of F.
func (c *chain) converge(q *pencil, k *knot, x, y float64, precise bool) (float64, float64, bool) {
	var v value
	for range 60 {
		q.at(x, y, &v)
		if precise {
			q.plane.precisely(x, y, q.κ, &v)
		}
		dx, dy, ok := v.newton()
		if !ok {
			return x, y, false
		}
		if c.real {
			dy = 0
		}
		for range 20 {
			if math.Hypot(x+dx-k.x, y+dy-k.y) < k.radius {
				break
			}
			dx, dy = dx/2, dy/2
		}
		size := math.Abs(dx) + math.Abs(dy)
		slope := math.Hypot(v.dRe, v.dIm)
		if size <= 2*unitRoundoff*(math.Abs(x)+math.Abs(y)) || size*slope <= v.errF {
			if !precise && slope*modulus(x, y) < 2*q.growth*float64(q.plane.n)*v.modulusMax {
				return x, y, false
			}
			miss := 2 * float64(q.plane.n) * (math.Hypot(v.re, v.im) + v.errF) / slope
			return x + dx, y + dy, math.Hypot(x-k.x, y-k.y)+miss < k.radius
		}
		x, y = x+dx, y+dy
	}
	return x, y, false
}

// hermite returns the cubic with values z, p and derivatives v, q at the ends of an interval
// of length h, at t of it.
func hermite(z, v, p, q, t, h float64) float64 {
	u := 1 - t
	return u*u*(z*(1+2*t)+v*h*t) + t*t*(p*(1+2*u)-q*h*u)
}

// at returns where the root is that a tip describes, to the accuracy of float64 in the
// coordinates of the cell.
func (e tip) at(κ float64) (complex128, bool) {
	c := e.cell
	if c.reciprocal && math.IsInf(κ, 0) || !c.atInfinity && κ == c.gain {
		return c.centre, !c.atInfinity
	}
	h, ok := c.solve(e.sector, c.offset(κ))
	return c.point(h), ok
}

// polished is at with the errors of the cell's coefficients taken out. At infinity the chain is
// only on its side of the exact gain, which may lie beside the float64.
func (e tip) polished(p *plane, κ, side float64) (complex128, bool) {
	if c := e.cell; c.atInfinity && !c.reciprocal && !(c.offset(κ)*side > 0) {
		return 0, false
	}
	x, ok := e.at(κ)
	if !ok || !e.cell.atInfinity && κ == e.cell.gain || math.IsInf(κ, 0) {
		return x, ok
	}
	limit := 0.01 * cmplx.Abs(x-e.cell.centre)
	if e.cell.atInfinity {
		limit = 0.01 * cmplx.Abs(x)
	}
	return p.polish(x, κ, limit), true
}

// polish takes the rounding errors of float64 out of a root: Newton's method with F in twice
// the precision. It keeps a real root real and moves by less than limit.
func (p *plane) polish(x complex128, κ, limit float64) complex128 {
	for range 3 {
		a := precise(p.a, p.tailA, real(x), imag(x))
		b := precise(p.b, p.tailB, real(x), imag(x))
		f := a.plus(b.timesReal(double{κ, 0})).value()
		var d, y complex128
		for i := p.n; i >= 0; i-- {
			d = d*x + y
			y = y*x + complex(p.a[i]+float64(κ*p.b[i]), 0)
		}
		step := f / d
		if !(cmplx.Abs(step) < limit) {
			return x
		}
		if imag(x) == 0 {
			step = complex(real(step), 0)
		}
		x -= step
		if cmplx.Abs(step) <= unitRoundoff*cmplx.Abs(x) {
			break
		}
	}
	return x
}
