package rootkernel

import "math"

// The iteration of Ehrlich and Aberth: each point moves by Newton's correction of
// p(z)/∏(z - zⱼ), the product over all other points (O. Aberth, Iteration methods for finding
// all zeros of a polynomial simultaneously, Math. Comp. 27 (1973) 339–344). It promises
// nothing; Certify does.

// settled says when a correction is so small, beside the point and beside its distance from
// the others, that the cubic convergence of the iteration makes the next one negligible.
const settled = 0x1p-17

// Iterate moves the points until all are settled and reports whether they are, within so
// many sweeps.
func (k *Kernel) Iterate(sweeps int) bool {
	for ; sweeps > 0; sweeps-- {
		if k.sweep() {
			return true
		}
	}
	return false
}

// sweep moves every restless point once, and reports whether none is left.
func (k *Kernel) sweep() bool {
	all := true
	// Backwards, so that what turns from pair into real points or back is met once.
	for i := k.pairCount - 1; i >= 0; i-- {
		if k.pairs()[i].restless {
			all = k.movePair(i) && all
		}
	}
	if k.realCount > 0 {
		all = k.sweepReals() && all
	}
	return all
}

// sweepReals moves neighbours among the restless real points together, from sweep to sweep
// with the one neighbour or the other. If their number is odd, the one moves alone that
// leaves the others closest.
func (k *Kernel) sweepReals() bool {
	count := 0
	for _, q := range k.reals() {
		if q.restless {
			count++
		}
	}
	if count == 0 {
		return true
	}
	all := true
	lone, shifted := -1, k.shift
	k.shift = !k.shift
	if count%2 == 1 {
		lone, shifted = k.loneReal(), false
	}
	waiting, left := -1, count
	for i := 0; i < k.realCount; i++ {
		if !k.reals()[i].restless {
			continue
		}
		left--
		switch {
		case i == lone || shifted && waiting < 0 && (left == count-1 || left == 0):
			all = k.moveReal(i) && all
		case waiting < 0:
			waiting = i
		default:
			removed, still := k.moveReals(waiting, i)
			all = all && still
			if removed {
				i -= 2
				if lone > i {
					lone -= 2
				}
			}
			waiting = -1
		}
	}
	k.sortReals()
	return all
}

// loneReal returns which of an odd number of restless real points leaves the gaps between
// the paired others smallest in sum.
func (k *Kernel) loneReal() int {
	// Moving the lone one two places on replaces one gap by the gap before it.
	best, at := math.Inf(1), -1
	sum, place := 0.0, 0
	var before, last float64
	for i, q := range k.reals() {
		if !q.restless {
			continue
		}
		if place%2 == 0 {
			if place > 0 {
				sum += (last - before) - (q.x - last)
			}
			if sum < best {
				best, at = sum, i
			}
		}
		before, last = last, q.x
		place++
	}
	return at
}

// sortReals restores the order after a sweep; it was nearly sorted before.
func (k *Kernel) sortReals() {
	reals := k.reals()
	for i := 1; i < len(reals); i++ {
		for j := i; j > 0 && reals[j-1].x > reals[j].x; j-- {
			reals[j-1], reals[j] = reals[j], reals[j-1]
		}
	}
}

// movePair moves a conjugate pair z, z̄ by the correction w of z and reports whether it
// settled. To first order in w the quadratic (s - z)(s - z̄) changes by the real linear
// function that is (z - z̄)·w at z; the new centre is x - Re w and the new discriminant
// |w|² - (y - Im w)².
//
// With f = p/∏(s - zⱼ), the product over all points but this pair, w is not Newton's
// correction of f/(s - z̄) but Bairstow's of f, which takes both roots of a quadratic f home
// at once, be they real or not: f/(f′ - r) with the slope r = Im f/y of the line through
// f(z) and f(z̄) (L. Bairstow 1920; see Stoer, Bulirsch, Introduction to Numerical Analysis,
// section 5.4). Only the phase of f matters.
func (k *Kernel) movePair(i int) bool {
	q := &k.pairs()[i]
	x, y := q.x, q.y
	unit := 1.0 // all below happens in a frame of this size
	tiny := 0.0
	var pr, pi, dr, di, sr, si, gr, gi float64
	if k.careful {
		r := modulus(x, y)
		if !k.enter(r) {
			return false
		}
		unit, tiny = k.frame.unit, rounding*rounding
		x, y = x/unit, y/unit
		pr, pi, dr, di, _, _, _ = k.frame.values(k.n, x, y, r/unit)
		sr, si, gr, gi = k.othersScaled(x, y, i)
	} else {
		pr, pi, dr, di = k.quadratic(x, y)
		sr, si, gr, gi = k.othersComplex(x, y, i)
	}
	if pr == 0 && pi == 0 {
		q.restless = false
		return true
	}
	// With g = 1/∏: w = p/(d - p·s - (Im f/y)/g) = y·f/(y·g·(d - p·s) - Im f).
	ar, ai := dr-(float64(pr*sr)-float64(pi*si)), di-(float64(pr*si)+float64(pi*sr))
	fr, fi := float64(pr*gr)-float64(pi*gi), float64(pr*gi)+float64(pi*gr)
	br := float64(y*(float64(gr*ar)-float64(gi*ai))) - fi
	bi := float64(y * (float64(gr*ai) + float64(gi*ar)))
	t := y / (float64(br*br) + float64(bi*bi))
	wr, wi := float64((float64(fr*br)+float64(fi*bi))*t), float64((float64(fi*br)-float64(fr*bi))*t)
	if wr-wr != 0 || wi-wi != 0 || fr == 0 && fi == 0 {
		// g is out of range: Newton's term 1/(z - z̄) instead.
		cr, ci := ar-float64(pi*(0.5/y)), ai+float64(pr*(0.5/y))
		t = 1 / (float64(cr*cr) + float64(ci*ci))
		wr, wi = float64((float64(pr*cr)+float64(pi*ci))*t), float64((float64(pi*cr)-float64(pr*ci))*t)
	}
	size := float64(wr*wr) + float64(wi*wi)
	rest := y - wi
	if size < 0x1p-10*y*y {
		still := size*(float64(sr*sr)+float64(si*si)) < settled*settled && size < settled*settled*(y*y) ||
			size < tiny*(float64(x*x)+float64(y*y))
		rest *= unit
		*q = pair{(x - wr) * unit, rest, rest * rest, !still}
		return still
	}
	switch discriminant := size - float64(rest*rest); {
	case discriminant < 0:
		h := float64(math.Sqrt(-discriminant) * unit)
		*q = pair{(x - wr) * unit, h, h * h, true}
	case discriminant >= 0:
		h := math.Sqrt(discriminant)
		k.removePair(i)
		k.addReal((x - wr - h) * unit)
		k.addReal((x - wr + h) * unit)
	}
	return false // also if it is NaN: stay, and fail in the end
}

// moveReals moves two real points by their corrections w₁, w₂, as movePair. To first order
// the quadratic changes by the linear function that takes (x₁ - x₂)·w₁ at x₁ and
// (x₂ - x₁)·w₂ at x₂; the new centre is that of the moved points, the new discriminant that
// of the moved points plus w₁·w₂.
func (k *Kernel) moveReals(i, j int) (removed, still bool) {
	a, b := &k.reals()[i], &k.reals()[j]
	x1, x2 := a.x, b.x
	gap := x1 - x2
	if gap == 0 {
		x1 += float64(0x1p-20 * x1)
		gap = x1 - x2
	}
	var p1, d1, p2, d2, s1, s2, ratio float64
	unit, tiny := 1.0, 0.0
	if k.careful {
		r1, r2 := math.Abs(x1), math.Abs(x2)
		if !k.enter(max(r1, r2)) {
			return false, false
		}
		if min(r1, r2) < 0x1p-20*max(r1, r2) {
			// No common frame: each for itself.
			still1, still2 := k.moveReal(i), k.moveReal(j)
			return false, still1 && still2
		}
		unit, tiny = k.frame.unit, rounding
		ratio = k.ratio(x1, x2, i, j)
		x1, x2, gap = x1/unit, x2/unit, gap/unit
		p1, d1, _, _, _ = k.frame.valuesReal(k.n, x1, r1/unit)
		p2, d2, _, _, _ = k.frame.valuesReal(k.n, x2, r2/unit)
		s1, s2 = k.othersRealScaled(x1, i, j), k.othersRealScaled(x2, i, j)
	} else {
		p1, d1, p2, d2 = k.horner2(x1, x2)
		s1, s2, ratio = k.othersReal2(x1, x2, i, j)
	}
	// With f = p·g and the ratio g₂/g₁ both corrections need only the slope of f divided by g₁:
	// w₁ = p₁/(d₁ - p₁·s₁ - slope), and w₂ likewise, times g₂/g₁ above and below.
	moved := float64(p2 * ratio) // f₂/g₁
	slope := (p1 - moved) / gap
	w1 := p1 / (d1 - float64(p1*s1) - slope)
	w2 := moved / (float64((d2-float64(p2*s2))*ratio) - slope)
	if w1-w1 != 0 || w2-w2 != 0 {
		// The ratio is out of range: Newton's terms instead.
		w1, w2 = 0, 0
		if p1 != 0 {
			w1 = p1 / (d1 - float64(p1*(s1+1/gap)))
		}
		if p2 != 0 {
			w2 = p2 / (d2 - float64(p2*(s2-1/gap)))
		}
	}
	half := (gap - w1 + w2) / 2
	cross := float64(w1 * w2)
	if math.Abs(cross) < 0x1p-10*half*half {
		a.x, b.x = float64((x1-w1)*unit), float64((x2-w2)*unit)
		a.restless = !settledReal(min(math.Abs(gap), math.Abs(x1)), w1, s1, tiny*math.Abs(x1))
		b.restless = !settledReal(min(math.Abs(gap), math.Abs(x2)), w2, s2, tiny*math.Abs(x2))
		return false, !a.restless && !b.restless
	}
	centre := (x1 - w1 + x2 - w2) / 2
	discriminant := float64(half*half) + cross
	if discriminant < 0 {
		k.removeReals(i, j)
		k.addPair(centre*unit, math.Sqrt(-discriminant)*unit)
		return true, false
	}
	if discriminant >= 0 {
		h := math.Sqrt(discriminant)
		a.x, b.x = float64((centre-h)*unit), float64((centre+h)*unit)
	}
	return false, false
}

// moveReal moves a real point by itself.
func (k *Kernel) moveReal(i int) bool {
	q := &k.reals()[i]
	x := q.x
	unit, tiny := 1.0, 0.0
	var p, d, s float64
	if k.careful {
		if !k.enter(math.Abs(x)) {
			return false
		}
		unit, tiny = k.frame.unit, rounding
		x /= unit
		p, d, _, _, _ = k.frame.valuesReal(k.n, x, math.Abs(x))
		s = k.othersRealScaled(x, i, i)
	} else {
		p, d = k.horner(x)
		s = k.othersReal(x, i)
	}
	if p == 0 {
		q.restless = false
		return true
	}
	w := p / (d - float64(p*s))
	q.x = float64((x - w) * unit)
	q.restless = !settledReal(math.Abs(x), w, s, tiny*math.Abs(x))
	return !q.restless
}

// settledReal tells whether the correction w of a real point is negligible beside its scale, its
// distance from the others (about 1/s), or what rounding alone would explain.
func settledReal(scale, w, s, tiny float64) bool {
	w = math.Abs(w)
	return w*math.Abs(s) < settled && w < settled*scale || w < tiny
}

// rounding is a correction, relative to the point, that its own rounding would explain.
const rounding = 0x1p-51

// horner returns p(x) and p′(x).
func (k *Kernel) horner(x float64) (p, d float64) {
	c := k.c
	for i := len(c) - 1; i >= 0; i-- {
		d = float64(d*x) + p
		p = float64(p*x) + c[i]
	}
	return p, d
}

// horner2 does two at once: the processor waits for neither.
func (k *Kernel) horner2(x1, x2 float64) (p1, d1, p2, d2 float64) {
	c := k.c
	for i := len(c) - 1; i >= 0; i-- {
		d1 = float64(d1*x1) + p1
		d2 = float64(d2*x2) + p2
		p1 = float64(p1*x1) + c[i]
		p2 = float64(p2*x2) + c[i]
	}
	return p1, d1, p2, d2
}

// quadratic returns p(z) and p′(z) from the remainders of division by the real quadratic
// s² - 2x·s + |z|². Digits are lost near the real axis; the proof does not rest on it.
func (k *Kernel) quadratic(x, y float64) (pr, pi, dr, di float64) {
	u, v := float64(2*x), -(float64(x*x) + float64(y*y))
	c := k.c
	// b: quotient and remainder of p; e: those of the quotient.
	b1 := c[len(c)-1]
	b0 := c[len(c)-2] + float64(u*b1)
	var e1, e0 float64
	e0 = b1
	for i := len(c) - 3; i >= 1; i-- {
		b0, b1 = (c[i]+float64(v*b1))+float64(u*b0), b0
		e0, e1 = (b1+float64(v*e1))+float64(u*e0), e0
	}
	b0, b1 = (c[0]+float64(v*b1))+float64(u*b0), b0
	pr, pi = b0-float64(x*b1), float64(y*b1)
	qr, qi := e0-float64(x*e1), float64(y*e1)
	return pr, pi, b1 - float64(2*y*qi), float64(2 * y * qr)
}

// othersComplex returns Σ 1/(z - zⱼ) and ∏ 1/(z - zⱼ) over the real points and all pairs
// but one.
func (k *Kernel) othersComplex(x, y float64, skip int) (sr, si, gr, gi float64) {
	gr = 1
	y2 := float64(y * y)
	pairs := k.pairs()
	for j := range pairs {
		if j == skip {
			continue
		}
		q := &pairs[j]
		t := x - q.x
		qr := float64(t*t) + (q.yy - y2)
		qi := float64(2 * y * t)
		inverse := 1 / (float64(qr*qr) + float64(qi*qi))
		vr, vi := float64(qr*inverse), float64(qi*inverse)
		sr += float64(2 * (float64(t*vr) + float64(y*vi)))
		si += float64(2 * (float64(y*vr) - float64(t*vi)))
		gr, gi = float64(gr*vr)+float64(gi*vi), float64(gi*vr)-float64(gr*vi)
	}
	for _, q := range k.reals() {
		t := x - q.x
		inverse := 1 / (float64(t*t) + y2)
		vr, vi := float64(t*inverse), float64(y*inverse)
		sr += vr
		si -= vi
		gr, gi = float64(gr*vr)+float64(gi*vi), float64(gi*vr)-float64(gr*vi)
	}
	return sr, si, gr, gi
}

// othersReal returns Σ 1/(x - zⱼ) over the pairs and all real points but one.
func (k *Kernel) othersReal(x float64, skip int) (s float64) {
	for _, q := range k.pairs() {
		t := x - q.x
		s += 2 * t / (float64(t*t) + q.yy)
	}
	for j, q := range k.reals() {
		if j != skip {
			s += 1 / (x - q.x)
		}
	}
	return s
}

// othersReal2 does two at once, and skips both. ratio is ∏(x₁ - zⱼ)/∏(x₂ - zⱼ).
func (k *Kernel) othersReal2(x1, x2 float64, skip1, skip2 int) (s1, s2, ratio float64) {
	ratio = 1
	for _, q := range k.pairs() {
		t1, t2 := x1-q.x, x2-q.x
		q1, q2 := float64(t1*t1)+q.yy, float64(t2*t2)+q.yy
		inverse := 1 / (q1 * q2)
		v2 := float64(q1 * inverse)
		s1 += float64(2 * t1 * (q2 * inverse))
		s2 += float64(2 * t2 * v2)
		ratio *= float64(q1 * v2)
	}
	for j, q := range k.reals() {
		if j != skip1 && j != skip2 {
			t1, t2 := x1-q.x, x2-q.x
			inverse := 1 / (t1 * t2)
			v2 := float64(t1 * inverse)
			s1 += float64(t2 * inverse)
			s2 += v2
			ratio *= float64(t1 * v2)
		}
	}
	return s1, s2, ratio
}
