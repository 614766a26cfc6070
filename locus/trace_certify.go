package locus

import "math"

// A row is one root, or one conjugate pair of roots, at the gain of a step: real, or in the
// upper half-plane with its mirror image implied.
type row struct {
	x, y   float64 // the approximation, y ≥ 0; y == 0 means real
	v      value   // F there
	zx, zy float64 // the approximation after one more Newton correction
	vx, vy float64 // dx/dκ

	inverse        float64 // 1/∏ distance to all others, over |leading coefficient|
	near           float64 // distance to the nearest other, at most
	speed, residue float64 // |b|/…, |F|/…: what moves the Weierstrass corrections, and what is left of them
	radius         float64 // the proven disc
	step           float64 // how far in gain this row alone would allow it to hold
	chain          int     // the chain of points that it continues
}

// An obstacle is a set of roots that are known to stay in a disc over a whole interval of
// gains, wherever they are in it: the members of a cell.
type obstacle struct {
	x, y, radius float64 // y ≥ 0; with y > 0 there is a mirror image
	order        int
	outside      bool    // the disc is |x| > 1/radius instead
	lead         float64 // outside: a lower bound on the modulus of F's leading factor
}

// certify proves discs about the rows of one step that hold the roots over an interval of
// gains, and returns its half-width, 0 if nothing could be proved. Then for every gain within
// reach of κ each open disc |x - row| < radius holds exactly one root, the discs do not meet
// each other or their mirror images or the obstacles, and all other roots are in the obstacles.
//
// Proof. Let cᵢ be the rows with their mirror images and, in their place, the exact roots in
// the obstacles; ℓ the leading coefficient of F. By Lagrange's interpolation
//
//	F(x)/(ℓ·∏(x - cᵢ)) = 1 + Σ Wᵢ/(x - cᵢ),   Wᵢ = F(cᵢ)/(ℓ·∏(cᵢ - cⱼ), j ≠ i),
//
// Weierstrass's corrections; those of exact roots are zero. Where Σ|Wᵢ|/|x - cᵢ| < 1 on the
// circle |x - cⱼ| = r and all other c lie outside it, F has as many roots inside as the
// product: one (Rouché). With r = ρ·dⱼ, dⱼ the distance to the nearest other, the sum is at most
//
//	|Wⱼ|/(ρ·dⱼ) + Σ |Wᵢ|/(|cⱼ - cᵢ|·(1 - ρ)),   i ≠ j,
//
// and F(cᵢ) = F₀(cᵢ) + Δκ·b(cᵢ) bounds all of it linearly in |Δκ|. With ρ ≤ ½ discs do not
// meet. The slack of 1e-9 pays for the rounding of these sums and products of positive
// numbers (up to degree 10⁵), and the terms of F carry their own bounds.
//
// Source: O. Aberth, B. T. Smith and others; the form with one circle a root is W. Börsch-Supan,
// Residuenabschätzung für Polynom-Nullstellen mittels Lagrange-Interpolation, Numer. Math. 14
// (1970) 287–296.
func (t *tracker) certify(rows []row, obstacles []obstacle) (reach float64) {
	p, n := t.plane, len(rows)
	lead := math.Abs(t.pencil.f[p.n]) - 4*unitRoundoff*t.pencil.majorF[p.n]
	slope := math.Abs(p.b[p.n]) / lead
	if !(lead > 0) {
		lead, slope = 0, math.Inf(1)
	}
	count := 0
	for i := range rows {
		a := &rows[i]
		a.inverse, a.near = 1, math.Inf(1)
		count++
		if a.y > 0 {
			count++
			a.near = 2 * a.y
			a.inverse = 1 / a.near
		}
	}
	for _, o := range obstacles {
		if o.outside {
			lead, slope = o.lead, 0
		}
	}
	for i := range rows {
		for _, o := range obstacles {
			if !rows[i].clear(o) {
				return 0
			}
		}
	}
	if cap(t.pairs) < n*n {
		t.pairs = make([]float64, n*n)
	}
	pairs := t.pairs[:n*n]
	for i := range rows {
		a := &rows[i]
		nearest := 1 / a.near
		inverse := a.inverse
		for j := range i {
			b := &rows[j]
			dx, dy := a.x-b.x, a.y-b.y
			q := 1 / math.Sqrt(float64(dx*dx)+float64(dy*dy))
			nearest = max(nearest, q)
			b.near = min(b.near, 1/q)
			switch {
			case a.y > 0 && b.y > 0:
				dy = a.y + b.y
				far := 1 / math.Sqrt(float64(dx*dx)+float64(dy*dy))
				inverse *= q * far
				b.inverse *= q * far
				q += far
				pairs[i*n+j], pairs[j*n+i] = q, q
			case a.y > 0: // one real root sees two, each of which sees one
				inverse *= q
				b.inverse *= q * q
				pairs[i*n+j], pairs[j*n+i] = q, 2*q
			case b.y > 0:
				inverse *= q * q
				b.inverse *= q
				pairs[i*n+j], pairs[j*n+i] = 2*q, q
			default:
				inverse *= q
				b.inverse *= q
				pairs[i*n+j], pairs[j*n+i] = q, q
			}
		}
		a.inverse = inverse
		a.near = min(a.near, 1/nearest)
	}
	var worst float64 // of residue/near
	for i := range rows {
		a := &rows[i]
		a.inverse /= lead
		if !(a.inverse > minNormal && a.inverse < math.MaxFloat64 && a.near > minNormal) {
			return 0
		}
		a.speed = a.v.modulusB * a.inverse
		a.residue = (modulus(a.v.re, a.v.im)*(1+4*unitRoundoff) + a.v.errF) * a.inverse
		worst = max(worst, a.residue/a.near)
	}
	t.worst = worst
	others := float64(count - 1)
	if !(worst <= 0.02 && worst*others <= 0.1) {
		return 0
	}
	reach = math.Inf(1)
	t.limiting = -1
	for i := range rows {
		a := &rows[i]
		var sum float64
		for j := range i {
			sum += pairs[i*n+j] * rows[j].speed
		}
		for j := i + 1; j < n; j++ {
			sum += pairs[i*n+j] * rows[j].speed
		}
		if a.y > 0 {
			sum += a.speed / (2 * a.y)
		}
		own := a.speed / a.near
		ρ := 0.5
		if own < sum {
			// the minimum of own/ρ + sum/(1 - ρ)
			ρ = 1 / (1 + math.Sqrt(sum/own))
			ρ = max(ρ, 0.125)
		}
		left := worst * (1/ρ + others/(1-ρ))
		step := (1 - 1e-9 - left) / (own/ρ + sum/(1-ρ) + slope)
		a.radius = ρ * a.near * (1 - 1e-9)
		if !(step > 0) {
			return 0
		}
		a.step = step
		if step < reach {
			reach, t.limiting = step, i
		}
	}
	return reach * (1 - 1e-9)
}

// clear takes the members of an obstacle into account; it is false if the row is among them.
func (a *row) clear(o obstacle) bool {
	if o.outside {
		r := math.Hypot(a.x, a.y) * o.radius
		gap := (1 - r) / o.radius
		if !(gap > 0) {
			return false
		}
		a.near = min(a.near, gap)
		for range o.order {
			a.inverse /= 1 - r
		}
		return true
	}
	gap := math.Hypot(a.x-o.x, a.y-o.y)*(1-4*unitRoundoff) - o.radius
	mirror := math.Hypot(a.x-o.x, a.y+o.y)*(1-4*unitRoundoff) - o.radius
	if !(gap > 0) {
		return false
	}
	a.near = min(a.near, gap)
	for range o.order {
		a.inverse /= gap
		if o.y > 0 {
			a.inverse /= mirror
		}
	}
	return true
}

// settled returns a radius about the row in which its root lies at the gain of the step
// itself: twice the residue, by the criterion of certify with Δκ = 0.
func (a *row) settled() float64 { return 2 * a.residue * (1 + 1e-9) }
