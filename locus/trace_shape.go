package locus

import (
	"math"
	"math/cmplx"
	"slices"
)

// A shaper places the points of chains so that the polyline keeps to the curve.
type shaper struct {
	*tracker
	view
	out []point // in the plane
}

// mostPoints ends the refinement of a chain: pictures of very different scales at once cannot
// have all of them fine.
const mostPoints = 4000

// points returns the points of a chain in ascending gain.
func (s *shaper) points(c *chain) []point {
	s.out = make([]point, 0, 2*len(c.knots)+16)
	if s.pencil.plane != c.plane {
		s.pencil = newPencil(c.plane)
	}
	s.head(c)
	for i := range c.knots {
		k := &c.knots[i]
		if i > 0 {
			s.between(c, i-1)
		}
		s.add(k.κ, complex(k.zx, k.zy))
	}
	s.tail(c)
	if c.plane.origin != 0 {
		s.out = s.representable(c, s.out)
	}
	return s.out
}

// representable moves points to gains that are float64 when counted from 0.
func (s *shaper) representable(c *chain, points []point) []point {
	kept := points[:0]
	last := math.Inf(-1)
	for _, p := range points {
		gain := c.plane.fromK(p.gain)
		κ := c.plane.toK(gain)
		if gain == last && !(p.gain == c.upto && c.tail.cell != nil) {
			continue
		}
		if κ != p.gain {
			if e := c.vertexAt(p.gain); e == nil {
				if κ < c.from || κ > c.upto {
					continue
				}
				x, ok := c.at(c.plane, κ)
				if !ok {
					continue
				}
				p = point{κ, x}
			}
		}
		last = gain
		kept = append(kept, p)
	}
	return kept
}

// vertexAt returns the cell at whose centre the chain begins or ends at a gain, nil if none.
func (c *chain) vertexAt(κ float64) *cell {
	for _, e := range []tip{c.head, c.tail} {
		if e.cell != nil && !e.cell.atInfinity && !e.cell.reciprocal && e.cell.gain == κ {
			return e.cell
		}
	}
	return nil
}

func (s *shaper) add(κ float64, x complex128) {
	if n := len(s.out); n > 0 && s.out[n-1].gain == κ {
		s.out[n-1].s = x
		return
	}
	s.out = append(s.out, point{κ, x})
}

// between places points between knots i and i+1.
func (s *shaper) between(c *chain, i int) {
	k, n := &c.knots[i], &c.knots[i+1]
	s.split(c, i, k.κ, n.κ, complex(k.zx, k.zy), complex(n.zx, n.zy), complex(k.vx, k.vy), complex(n.vx, n.vy), 0)
}

// split places points inside the interval of gains, where the curve has the given values and
// derivatives at the ends, if the chord is not good enough: Hermite's cubic leaves its chord by
// at most 4/27 of the sum of the parts of its end slopes that are normal to it.
func (s *shaper) split(c *chain, i int, lo, hi float64, x0, x1, v0, v1 complex128, depth int) {
	chord := x1 - x0
	length := cmplx.Abs(chord)
	normal := func(v complex128) float64 {
		if length == 0 {
			return cmplx.Abs(v)
		}
		return math.Abs(real(v)*imag(chord)-imag(v)*real(chord)) / length
	}
	straight := c.real || (normal(v0)+normal(v1))*(hi-lo)*4/27 <= s.tolerance
	if straight && (length <= s.longest || s.outside(x0, x1)) || depth > 40 || len(s.out) > mostPoints {
		return
	}
	mid := lo + (hi-lo)/2
	if !(mid > lo && mid < hi) {
		return
	}
	j := i
	if mid < c.knots[i+1].κ && mid >= c.knots[i+1].from {
		j = i + 1
	}
	s.pencil.set(mid)
	x, ok := c.near(s.pencil, j, mid)
	if !ok {
		return
	}
	var v value
	s.pencil.at(real(x), imag(x), &v)
	vx, vy := v.velocity()
	s.split(c, i, lo, mid, x0, x, v0, complex(vx, vy), depth+1)
	s.add(mid, x)
	s.split(c, i, mid, hi, x, x1, complex(vx, vy), v1, depth+1)
}

// outside tells whether a piece of line is certainly out of view.
func (s *shaper) outside(x0, x1 complex128) bool {
	return cmplx.Abs(x0) > s.far && cmplx.Abs(x1) > s.far && cmplx.Abs(x1-x0) < cmplx.Abs(x0)
}

// head places the points from the beginning of a chain in a cell to its first knot.
func (s *shaper) head(c *chain) {
	v := c.head.cell
	if v == nil {
		return
	}
	to := c.upto
	if len(c.knots) > 0 {
		to = c.knots[0].κ
	}
	s.inCell(c.head, c.from, to)
}

// tail places the points from the last knot to the end of a chain in a cell.
func (s *shaper) tail(c *chain) {
	v := c.tail.cell
	if v == nil {
		return
	}
	from := c.from
	if len(c.knots) > 0 {
		from = c.knots[len(c.knots)-1].κ
	}
	s.inCell(c.tail, from, c.upto)
}

// inCell places points in a cell between two gains, one of which is nearest to its centre.
func (s *shaper) inCell(e tip, from, to float64) {
	c := e.cell
	m := float64(c.order)
	// u is the m-th root of the modulus of the offset: nearly proportional to |h|.
	u := func(κ float64) float64 {
		if c.reciprocal && math.IsInf(κ, 0) {
			return 0
		}
		return math.Pow(math.Abs(c.offset(κ)), 1/m)
	}
	gain := func(u, sign float64) float64 {
		offset := math.Copysign(math.Pow(u, m), sign)
		if c.reciprocal {
			return 1 / offset
		}
		return c.gain + offset
	}
	inner, outer := to, from
	if u(from) < u(to) {
		inner, outer = from, to
	}
	sign := c.offset(outer)
	u0, u1 := u(inner), u(outer)
	if c.atInfinity {
		// From the outside of the cell, which is the inside of the picture, away.
		var points []point
		for limit, v := s.far, u1; v > max(u0, 0) && len(points) < 200; v /= 1.25 {
			κ := gain(v, sign)
			if v == u1 {
				κ = outer
			}
			x, ok := e.at(κ)
			if !ok {
				break
			}
			points = append(points, point{κ, x})
			if cmplx.Abs(x) > limit {
				break
			}
		}
		if u0 > 0 && len(points) > 0 && cmplx.Abs(points[len(points)-1].s) <= s.far {
			if x, ok := e.at(inner); ok {
				points = append(points, point{inner, x})
			}
		}
		if inner == from {
			slices.Reverse(points)
		}
		for _, p := range points {
			s.add(p.gain, p.s)
		}
		return
	}
	x0, ok0 := e.at(inner)
	x1, ok1 := e.at(outer)
	if !ok0 || !ok1 {
		return
	}
	points := []point{{inner, x0}}
	var refine func(u0, u1 float64, x0, x1 complex128, depth int)
	refine = func(u0, u1 float64, x0, x1 complex128, depth int) {
		mid := (u0 + u1) / 2
		κ := gain(mid, sign)
		x, ok := e.at(κ)
		if !ok || depth > 12 || len(points) > mostPoints {
			return
		}
		chord := x1 - x0
		off := cmplx.Abs(x - (x0+x1)/2)
		if length := cmplx.Abs(chord); length > 0 {
			d := x - x0
			off = math.Abs(real(d)*imag(chord)-imag(d)*real(chord)) / length
		}
		if off <= s.tolerance && depth > 0 && (cmplx.Abs(chord) <= s.longest || s.outside(x0, x1)) {
			return
		}
		refine(u0, mid, x0, x, depth+1)
		points = append(points, point{κ, x})
		refine(mid, u1, x, x1, depth+1)
	}
	refine(u0, u1, x0, x1, 0)
	points = append(points, point{outer, x1})
	if inner == to {
		slices.Reverse(points)
	}
	for _, p := range points {
		s.add(p.gain, p.s)
	}
}

// branch puts the points of its chains together.
func (t *tracker) branch(b threads, points [][]point) Branch {
	n := 0
	for _, p := range b.parts {
		n += len(points[p.chain])
	}
	out := Branch{points: make([]point, 0, n), plane: t.plane, period: t.family.period, parts: make([]stretch, 0, len(b.parts))}
	for i, p := range b.parts {
		c := &t.chains[p.chain]
		out.parts = append(out.parts, stretch{c, p.mirror})
		for j, q := range points[p.chain] {
			x, gain := c.plane.fromX(q.s), c.plane.fromK(q.gain)
			if p.mirror {
				x = complex(real(x), -imag(x))
			}
			if i > 0 && j == 0 && len(out.points) > 0 && out.points[len(out.points)-1].gain == gain {
				continue // the vertex where two chains join
			}
			out.points = append(out.points, point{gain, x})
		}
	}
	return out
}

// continuous returns point i as a pole of continuous time.
func (b Branch) continuous(i int) complex128 {
	s := b.points[i].s
	if b.period == 0 {
		return s
	}
	z := cmplx.Log(s)
	return complex(real(z)/b.period, imag(z)/b.period)
}
