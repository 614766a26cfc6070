package locus

import (
	"math"
	"math/cmplx"
)

// A cell is a neighbourhood of a point where several roots of a family coincide, or where
// roots are at infinity, that explains all of them: with h the coordinate from its centre and
// offset that of the gain,
//
//	offset = -(f[m]/b[0])·hᵐ·(1 + e),  |e| ≤ ½ for |h| ≤ radius.
//
// Guarantee: for |offset| ≤ width exactly m roots have |h| < radius. For offset ≠ 0 they are
// simple, one in each sector |arg h - angle(l)| < π/(3m), l = 0 … m-1; hence they coincide
// at offset 0 only. (Replace e by t·e: while t goes from 1 to 0 no root leaves its sector or,
// by Rouché's theorem, the disc, and at t = 0 there is one in each.)
//
// These are the first terms of the Puiseux expansions of the branches.
type cell struct {
	centre        complex128 // x of the plane, or 1/x if atInfinity
	gain          float64    // κ of the plane; 0 stands for κ = ±∞ if reciprocal
	gainLow       float64    // the rest of gain beyond float64
	order         int
	atInfinity    bool
	reciprocal    bool         // offset is 1/κ instead of κ - gain
	f, b          []complex128 // Taylor coefficients about the centre; f[0] … f[m-1] are 0
	radius, width float64
	lead          complex128 // -b[0]/f[m]
	real          bool       // everything above is real
	bound         float64    // atInfinity: lower bound on |F's leading factor|, see obstacle
	slack         float64    // bound on the error of gain + gainLow
}

// newCell finds the largest cell it can prove. The true coefficients are within errF and errB
// of f and b, and the first m of f are known to vanish. It is nil if there is no such cell.
func newCell(f, b []complex128, errF, errB []float64, m int) *cell {
	size := func(c []complex128, e []float64, i int) float64 { return cmplx.Abs(c[i])*(1+4*unitRoundoff) + e[i] }
	lowF := cmplx.Abs(f[m])*(1-4*unitRoundoff) - errF[m]
	lowB := cmplx.Abs(b[0])*(1-4*unitRoundoff) - errB[0]
	if !(lowF > 0 && lowB > 0) {
		return nil
	}
	slack := errF[m]/lowF + errB[0]/lowB
	// parts returns bounds on the relative size of what follows f[m] and b[0] for |h| ≤ r.
	parts := func(r float64) (q, p float64) {
		for i := len(f) - 1; i > m; i-- {
			q = (q + size(f, errF, i)/lowF) * r
		}
		for i := len(b) - 1; i > 0; i-- {
			p = (p + size(b, errB, i)/lowB) * r
		}
		return q, p
	}
	fits := func(r float64) bool {
		q, p := parts(r)
		return (q+p+slack)*(1+1e-9) <= 0.5*(1-p)
	}
	// A first guess: each term alone within its share.
	r := math.Inf(1)
	for i := m + 1; i < len(f); i++ {
		if v := size(f, errF, i); v > 0 {
			r = min(r, math.Pow(lowF/v, 1/float64(i-m)))
		}
	}
	for i := 1; i < len(b); i++ {
		if v := size(b, errB, i); v > 0 {
			r = min(r, math.Pow(lowB/v, 1/float64(i)))
		}
	}
	if math.IsInf(r, 1) {
		r = 0x1p200 // F = f[m]·hᵐ + κ·b[0]: the cell has no end
	}
	r /= 2
	for tries := 0; !fits(r); tries++ {
		if tries > 40 || !(r > 0) {
			return nil
		}
		r *= 0.75
	}
	for range 8 {
		if fits(1.15 * r) {
			r *= 1.15
		}
	}
	q, p := parts(r)
	c := &cell{order: m, f: f, b: b, radius: r}
	for i := range m {
		f[i] = 0
	}
	c.width = lowF / cmplx.Abs(b[0]) * math.Pow(r, float64(m)) * (1 - q) / (1 + p) * (1 - slack - 1e-6)
	c.lead = -b[0] / f[m]
	c.real = true
	for i := range f {
		c.real = c.real && imag(f[i]) == 0
	}
	for i := range b {
		c.real = c.real && imag(b[i]) == 0
	}
	if c.real {
		c.lead = complex(real(c.lead), 0) // no negative zero: its argument is π, not -π
	}
	c.bound = lowF * (1 - q)
	if !(c.width > 0) || math.IsInf(c.width, 0) && m > 0 {
		c.width = min(c.width, math.MaxFloat64)
	}
	if !(c.width > 0) {
		return nil
	}
	return c
}

// vertexCell returns the cell about a break point of the given order near x, which is within
// errX of it; nil if it cannot be proved. For a real break point of order 2 errX is found here,
// if it is given as negative: it is a simple root of a′b - ab′, and the gain at a real point is
// real.
func (p *plane) vertexCell(x complex128, order int, errX float64) *cell {
	if c := p.vertexCellBy(x, order, errX, false); c != nil {
		return c
	}
	return p.vertexCellBy(x, order, errX, true)
}

// vertexCellBy is vertexCell in float64 or in twice its precision.
func (p *plane) vertexCellBy(x complex128, order int, errX float64, precise bool) *cell {
	n := p.n
	f := make([]complex128, n+1)
	b := make([]complex128, n+1)
	room := make([]float64, 4*(n+1))
	errF, errB, wideF, wideB := room[:n+1], room[n+1:2*n+2], room[2*n+2:3*n+3], room[3*n+3:]
	var κ double
	expand := func() {
		κ = p.preciseGain(real(x), imag(x))
		if precise {
			p.preciseTaylor(x, κ, f, b)
			return
		}
		for i := range f {
			f[i] = complex(p.a[i]+float64(κ.h*p.b[i]), 0)
			b[i] = complex(p.b[i], 0)
		}
		taylor(f, x)
		taylor(b, x)
	}
	expand()
	for i := 0; precise && errX < 0 && i < 4; i++ {
		// Newton's method for the double root, now that its digits can be seen.
		step := -real(f[1]) / (2 * real(f[2]))
		next := real(x) + step
		if !(math.Abs(step) < math.Inf(1)) || next == real(x) {
			break
		}
		x = complex(next, 0)
		expand()
	}
	// The rounding of the shift is that of Horner's rule with majorants, whose own shift is by
	// |x|; each coefficient takes up to 2n products and sums, and three roundings before.
	u := (6.6*float64(n) + 10) * 1.05 * unitRoundoff
	κlow := math.Abs(κ.l)
	if precise {
		u, κlow = 20*float64(n+1)*doubleRoundoff, 0
	}
	r := cmplx.Abs(x) * (1 + 4*unitRoundoff)
	share := 0x1p-48 // as in pencil.set
	if precise {
		share = 1
	}
	terms := 0.0
	for i := range f {
		errF[i] = math.Abs(p.a[i]) + math.Abs(κ.h*p.b[i])
		errB[i] = math.Abs(p.b[i])
		whole := errF[i]
		if p.major != nil {
			whole += p.major[i]
			errF[i] += share * p.major[i]
		}
		terms += whole * math.Pow(r, float64(i))
	}
	taylorReal(errF, r)
	taylorReal(errB, r)
	for i := range f {
		errF[i] = u*errF[i] + 2*unitRoundoff*cmplx.Abs(f[i]) + minNormal
		errB[i] = u*errB[i] + 2*unitRoundoff*cmplx.Abs(b[i]) + minNormal
	}
	if errX < 0 {
		// a′b - ab′ = f₁b₀ + 2f₂b₀·h + …, as f₀ = 0: its root is at about -f₁/(2f₂).
		low := cmplx.Abs(f[2]) - errF[2]
		if !(low > 0) {
			return nil
		}
		errX = 1.01*(cmplx.Abs(f[1])+errF[1])/low + 4*unitRoundoff*cmplx.Abs(x)
	}
	for i := range f {
		wideF[i] = cmplx.Abs(f[i]) + errF[i]
		wideB[i] = cmplx.Abs(b[i]) + errB[i]
	}
	taylorReal(wideF, errX)
	taylorReal(wideB, errX)
	// The gain at x is that of the vertex but for f[m]·errXᵐ/b[0].
	slack := 0.0
	if low := cmplx.Abs(b[0]) - errB[0]; low > 0 {
		slack = (2*wideF[order]*math.Pow(errX, float64(order)) + 20*float64(n)*doubleRoundoff*terms) / low
	}
	for i := range f {
		errB[i] = (wideB[i] - cmplx.Abs(b[i])) * (1 + 1e-9)
		errF[i] = (wideF[i]-cmplx.Abs(f[i]))*(1+1e-9) + (slack+κlow)*wideB[i]
	}
	c := newCell(f, b, errF, errB, order)
	if c == nil || errX > 1e-3*c.radius || slack > 1e-2*c.width {
		return nil
	}
	c.centre, c.gain, c.gainLow, c.slack = x, κ.h, κ.l, slack
	c.shift()
	c.width *= 0.97 // the true gain is elsewhere by slack
	return c
}

// dropCell returns the cell of the roots that are at infinity for the gain dropAt.
func (p *plane) dropCell() *cell {
	n := p.n
	f := make([]complex128, n+1)
	b := make([]complex128, n+1)
	errF := make([]float64, n+1)
	errB := make([]float64, n+1)
	for i := range f {
		x, y := p.a[n-i], p.b[n-i]
		f[i] = complex(x+float64(p.dropAt*y), 0)
		b[i] = complex(y, 0)
		errF[i] = 4*unitRoundoff*(math.Abs(x)+math.Abs(p.dropAt*y)) + minNormal
		errB[i] = unitRoundoff*math.Abs(y) + minNormal
	}
	c := newCell(f, b, errF, errB, p.dropOrder)
	if c == nil {
		return nil
	}
	// A smaller disc, so that the other roots, all with |1/x| ≥ radius before and so after,
	// are far outside: the product of 1 + radius·|x| over them is less than 1.3. Then F's
	// leading factor L in F = L·∏(1 - x/xₑ)·∏(x - xᵢ), e over the roots inside, is at least
	// |Φ|/((2·radius)ᵐ·1.3) with Φ the reversed polynomial on the circle.
	shrink := 1 / (4 * float64(n))
	c.radius *= shrink
	c.width *= math.Pow(shrink, float64(c.order)) / 4
	c.bound *= 0.7 / 1.3 / math.Pow(2, float64(c.order))
	c.gain, c.gainLow, c.atInfinity = p.dropAt, p.dropLow, true
	if c.slack = p.dropError; c.slack > 1e-2*c.width {
		return nil
	}
	c.width *= 0.97
	return c
}

// endCell returns the cell of the roots that tend to a zero of b of multiplicity m at x, which
// is within errX, as κ → ±∞.
func (p *plane) endCell(x complex128, m int, errX float64) *cell {
	swapped := &plane{a: p.b, b: p.a, tailA: p.tailB, tailB: p.tailA, n: p.n}
	c := swapped.multipleCell(x, 0, m, errX)
	if c != nil {
		c.reciprocal = true
	}
	return c
}

// multipleCell returns the cell of a root at x, within errX, of multiplicity m at exactly the
// gain κ; nil if it cannot be proved.
func (p *plane) multipleCell(x complex128, κ float64, m int, errX float64) *cell {
	if c := p.multipleCellBy(x, κ, m, errX, false); c != nil {
		return c
	}
	return p.multipleCellBy(x, κ, m, errX, true)
}

// multipleCellBy is multipleCell in float64 or in twice its precision.
func (p *plane) multipleCellBy(x complex128, κ float64, m int, errX float64, precise bool) *cell {
	n := p.n
	f := make([]complex128, n+1)
	b := make([]complex128, n+1)
	room := make([]float64, 4*(n+1))
	errF, errB, wideF, wideB := room[:n+1], room[n+1:2*n+2], room[2*n+2:3*n+3], room[3*n+3:]
	for i := range f {
		f[i], b[i] = complex(p.a[i]+float64(κ*p.b[i]), 0), complex(p.b[i], 0)
		errF[i], errB[i] = math.Abs(p.a[i])+math.Abs(κ*p.b[i]), math.Abs(p.b[i])
	}
	u := (6.6*float64(n) + 10) * 1.05 * unitRoundoff
	if precise {
		p.preciseTaylor(x, double{κ, 0}, f, b)
		u = 20 * float64(n+1) * doubleRoundoff
	} else {
		taylor(f, x)
		taylor(b, x)
	}
	r := cmplx.Abs(x) * (1 + 4*unitRoundoff)
	taylorReal(errF, r)
	taylorReal(errB, r)
	for i := range f {
		wideF[i] = cmplx.Abs(f[i])*(1+2*unitRoundoff) + u*errF[i] + minNormal
		wideB[i] = cmplx.Abs(b[i])*(1+2*unitRoundoff) + u*errB[i] + minNormal
	}
	taylorReal(wideF, errX)
	taylorReal(wideB, errX)
	for i := range f {
		errF[i] = (wideF[i] - cmplx.Abs(f[i])) * (1 + 1e-9)
		errB[i] = (wideB[i] - cmplx.Abs(b[i])) * (1 + 1e-9)
	}
	c := newCell(f, b, errF, errB, m)
	if c == nil || errX > 1e-3*c.radius {
		return nil
	}
	c.centre, c.gain = x, κ
	c.shift()
	return c
}

// shift makes a cell that is proved about the true centre one about a point within a thousandth
// of its radius: between 0.997 and 0.999 of it there must be no root.
func (c *cell) shift() {
	c.radius *= 0.998
	c.width *= math.Pow(0.996, float64(c.order))
}

// escapeCell returns the cell of the roots that tend to infinity as κ → ±∞.
func (p *plane) escapeCell() *cell {
	n := p.n
	f := make([]complex128, n+1)
	b := make([]complex128, n+1)
	errF := make([]float64, n+1)
	errB := make([]float64, n+1)
	for i := range f {
		f[i], b[i] = complex(p.b[n-i], 0), complex(p.a[n-i], 0)
		errF[i] = unitRoundoff*math.Abs(p.b[n-i]) + minNormal
		errB[i] = unitRoundoff*math.Abs(p.a[n-i]) + minNormal
	}
	c := newCell(f, b, errF, errB, p.escaping)
	if c != nil {
		c.atInfinity, c.reciprocal = true, true
	}
	return c
}

// taylor replaces the coefficients of a polynomial by those about x: Horner's rule, repeated.
func taylor(c []complex128, x complex128) {
	n := len(c) - 1
	if imag(x) == 0 { // stays real
		r := real(x)
		for i := range n {
			for j := n - 1; j >= i; j-- {
				c[j] += complex(r*real(c[j+1]), 0)
			}
		}
		return
	}
	for i := range n {
		for j := n - 1; j >= i; j-- {
			c[j] += x * c[j+1]
		}
	}
}

// taylorReal is taylor for a real polynomial at a real point.
func taylorReal(c []float64, x float64) {
	n := len(c) - 1
	for i := range n {
		for j := n - 1; j >= i; j-- {
			c[j] += float64(x * c[j+1])
		}
	}
}

// before tells whether the gain of the cell is below that of another.
func (c *cell) before(d *cell) bool { return (c.gain-d.gain)+(c.gainLow-d.gainLow) < 0 }

// ahead tells whether the gain of the cell is above κ.
func (c *cell) ahead(κ float64) bool { return (c.gain-κ)+c.gainLow > 0 }

// offset returns the gain in the coordinate of the cell.
func (c *cell) offset(κ float64) float64 {
	if c.reciprocal {
		return 1 / κ
	}
	return (κ - c.gain) - c.gainLow
}

// angle returns the direction of sector l for the sign of the offset, in the coordinate h.
func (c *cell) angle(l int, offset float64) float64 {
	lead := cmplx.Phase(c.lead)
	if offset < 0 {
		lead += math.Pi
	}
	return (lead + 2*math.Pi*float64(l)) / float64(c.order)
}

// sector returns the sector that holds h, and false if h is not clearly within one.
func (c *cell) sector(h complex128, offset float64) (int, bool) {
	m := float64(c.order)
	t := (cmplx.Phase(h) - c.angle(0, offset)) * m / (2 * math.Pi)
	l := math.Round(t)
	i := int(l) % c.order
	if i < 0 {
		i += c.order
	}
	return i, math.Abs(t-l) < 0.25
}

// nearestSector returns the sector whose direction is nearest to an angle.
func (c *cell) nearestSector(angle, offset float64) int {
	l := int(math.Round((angle - c.angle(0, offset)) * float64(c.order) / (2 * math.Pi)))
	l %= c.order
	if l < 0 {
		l += c.order
	}
	return l
}

// realSector tells whether the direction of sector l of a real cell is along the real axis:
// then so is the branch.
func (c *cell) realSector(l int, offset float64) bool {
	if !c.real {
		return false
	}
	half := 2 * l // the direction in units of π/m, as angle counts it
	if real(c.lead) < 0 {
		half++
	}
	if offset < 0 {
		half++
	}
	return half%c.order == 0
}

// upper tells whether sector l is in the upper half of the plane, for a real cell and a sector
// off the axis. The inversion 1/h turns it over.
func (c *cell) upper(l int, offset float64) bool {
	return (math.Sin(c.angle(l, offset)) < 0) == c.atInfinity
}

// solve returns the root of the cell in sector l, as h: Newton's method from the first term.
func (c *cell) solve(l int, offset float64) (complex128, bool) {
	if offset == 0 {
		return 0, true
	}
	r := math.Pow(cmplx.Abs(c.lead)*math.Abs(offset), 1/float64(c.order))
	sin, cos := math.Sincos(c.angle(l, offset))
	onAxis := c.realSector(l, offset)
	if onAxis {
		sin, cos = 0, math.Copysign(1, cos)
	}
	first := complex(r*cos, r*sin)
	h := first
	k := complex(offset, 0)
	for range 60 {
		var y, d complex128
		for i := len(c.f) - 1; i >= 0; i-- {
			d = d*h + y
			y = y*h + (c.f[i] + k*c.b[i])
		}
		if y == 0 {
			return h, true
		}
		step := y / d
		if cmplx.IsNaN(step) {
			return h, false
		}
		// Half the distance to the neighbouring sector is the longest step that makes sense.
		if limit := 0.5 * cmplx.Abs(h); cmplx.Abs(step) > limit {
			step *= complex(limit/cmplx.Abs(step), 0)
		}
		next := h - step
		if onAxis {
			next = complex(real(next), 0)
		}
		if next == h || cmplx.Abs(step) <= 2*unitRoundoff*cmplx.Abs(h) {
			h = next
			break
		}
		h = next
	}
	got, ok := c.sector(h, offset)
	return h, ok && got == l
}

// point returns the place of h in the plane.
func (c *cell) point(h complex128) complex128 {
	if c.atInfinity {
		return 1 / h
	}
	return c.centre + h
}

// local is the inverse of point.
func (c *cell) local(x complex128) complex128 {
	if c.atInfinity {
		return 1 / x
	}
	return x - c.centre
}
