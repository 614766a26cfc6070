package locus

import (
	"math"

	"github.com/polewright/polewright/poly"
)

// Windows of half-planes, sectors and discs in float64: the same steps as in exact arithmetic, each with
// a bound on its error. What is returned is proven; where a bound is not good enough for a proof
// or for the accuracy of an end, the answer is left to exact arithmetic.

const (
	// floatDegree is the highest degree that is tried.
	floatDegree = 24
	// floatSize bounds the binary exponents of coefficients, so that nothing here overflows.
	floatSize = 250
	// endError is the relative error of a window's end that is good enough.
	endError = 2e-13
)

// A floatContact is a gain at which roots cross the boundary, and by how much the number of roots
// inside grows as k does.
type floatContact struct {
	k, e  float64 // the gain is within e of k
	grows int
}

// A floatFamily is the family with float64 coefficients, by power.
type floatFamily struct {
	fixed, scaled poly.Poly
	a, b          []float64
	rounded       float64 // by how much coefficients are rounded at most, relative: 0 or unitRoundoff
	room          []float64
	buf           [8*(floatDegree+1) + 8]float64
}

func (w *floatFamily) take(n int) []float64 {
	s := w.room[:n:n]
	w.room = w.room[n:]
	return s
}

// load copies coefficients; each is within a relative unitRoundoff of the exact one.
func (w *floatFamily) load(p poly.Poly, into []float64) bool {
	for i := range into {
		c := p.Coefficient(i)
		if c != 0 {
			if m := math.Abs(c); !(m > 0x1p-250 && m < 0x1p250) {
				return false
			}
		}
		into[i] = c
	}
	return true
}

// windowsFloat returns the windows of a half-plane, sector or disc, and false if it cannot prove them.
func (f Family) windowsFloat(r Region) ([]Window, bool) {
	n, m := f.fixed.Degree(), f.scaled.Degree()
	if n < 0 || m < 0 || max(n, m) < 1 || max(n, m) > floatDegree {
		return nil, false
	}
	w := floatFamily{fixed: f.fixed, scaled: f.scaled}
	w.room = w.buf[:]
	w.a, w.b = w.take(n+1), w.take(m+1)
	if !w.load(f.fixed, w.a) || !w.load(f.scaled, w.b) {
		return nil, false
	}
	if f.fixed.Rounded() || f.scaled.Rounded() {
		w.rounded = unitRoundoff
	}
	switch r := r.(type) {
	case leftOf:
		return w.leftOf(r.sigma)
	case damped:
		return w.damped(r.zeta)
	case within:
		if !r.outside {
			return w.within(r.radius)
		}
	case onSamples:
		if r.r == (leftOf{0}) {
			return w.within(1)
		}
	}
	return nil, false
}

// shift replaces p(s) by p(s + x) and returns majorants: each coefficient is then within
// (2·degree+1)·unitRoundoff of the exact one in relation to its majorant.
func shift(p, majorant []float64, x float64) {
	for i, c := range p {
		majorant[i] = math.Abs(c)
	}
	if x == 0 {
		return
	}
	n, size := len(p)-1, math.Abs(x)
	for i := 0; i < n; i++ {
		for j := n - 1; j >= i; j-- {
			p[j] += float64(p[j+1] * x)
			majorant[j] += majorant[j+1] * size
		}
	}
}

// leftOf returns the windows of Re s < sigma.
func (w *floatFamily) leftOf(sigma float64) ([]Window, bool) {
	n, m := len(w.a)-1, len(w.b)-1
	if s := math.Abs(sigma); s != 0 && !(s > 0x1p-10 && s < 0x1p10) {
		// Powers of sigma stay in range with moderate degrees otherwise too.
		if e := math.Ilogb(s) * max(n, m); e < -floatSize || e > floatSize {
			return nil, false
		}
	}
	h := floatHalfPlane{
		a: w.take(n + 1), b: w.take(m + 1), majorA: w.take(n + 1), majorB: w.take(m + 1),
		relative: float64(2*max(n, m)+3) * unitRoundoff,
		sigma:    sigma,
	}
	copy(h.a, w.a)
	copy(h.b, w.b)
	shift(h.a, h.majorA, sigma)
	shift(h.b, h.majorB, sigma)
	h.low = [2]float64{h.a[0], h.b[0]}
	if sigma != 0 {
		h.low = [2]float64{w.fixed.At(sigma), w.scaled.At(sigma)}
		h.clearZeros()
	}
	return w.alongLine(&h)
}

// A floatHalfPlane is the question which gains have all roots of a + k·b in Re s < 0: for a shifted
// half-plane, or for a disc that is mapped to it.
type floatHalfPlane struct {
	a, b, majorA, majorB []float64 // each coefficient is within relative·major of the exact one
	relative             float64
	low                  [2]float64 // the values of the two at the real point ω = 0, with full accuracy; 0 if exactly 0
	sigma                float64    // of the half-plane
	radius               float64    // of the disc; 0 for a half-plane
	high                 [2]float64 // as low, where ω is infinite, which is a point of the circle
}

// clearZeros makes exact the zeros that are known to be so.
func (h *floatHalfPlane) clearZeros() {
	if h.low[0] == 0 {
		h.a[0], h.majorA[0] = 0, 0
	}
	if h.low[1] == 0 {
		h.b[0], h.majorB[0] = 0, 0
	}
}

// realContact adds the contact at a real point of the boundary, where A and B have the given values.
func realContact(list []floatContact, values [2]float64, grows int) ([]floatContact, bool) {
	switch a, b := values[0], values[1]; {
	case b == 0:
		return list, a != 0 // otherwise a common root
	case a == 0:
		return append(list, floatContact{grows: grows}), true
	default:
		k := -a / b
		return append(list, floatContact{k, 0x1p-47 * math.Abs(k), grows}), true
	}
}

// point returns the point of the boundary for ω > 0.
func (h *floatHalfPlane) point(omega float64) floatPoint {
	if h.radius == 0 {
		return floatPoint{re: double{h: h.sigma}, im: double{h: omega}, dIm: 1}
	}
	// r·(1 + jω)/(1 - jω) = r·(1 - ω² + 2jω)/(1 + ω²)
	square := productOf(omega, omega)
	below := square.plusFloat(1)
	radius := double{h: h.radius}
	re := square.minus().plusFloat(1).over(below).times(radius)
	im := double{h: 2 * omega}.over(below).times(radius)
	speed := 2 / below.h
	return floatPoint{re, im, -im.h * speed, re.h * speed, 1.01 * math.Sqrt(below.h) / h.radius}
}

// alongLine returns the windows.
func (w *floatFamily) alongLine(h *floatHalfPlane) ([]Window, bool) {
	n, m := len(h.a)-1, len(h.b)-1
	// w(u) = im_A·re_B - re_A·im_B, u = ω²; aᵢ and bⱼ go with (jω)^(i+j), i odd and j even or the
	// other way round.
	var room [2 * (floatRoots + 1)]float64
	top := (n + m - 1) / 2
	c, e := room[:top+1], room[floatRoots+1:floatRoots+top+2]
	for i, x := range h.a {
		for j := 1 - i&1; j <= m; j += 2 {
			// (jω)^i·conj (jω)^j = j^(i-j)·ω^(i+j); its imaginary part has the sign of
			// sin((i-j)·π/2).
			k := (i + j) >> 1
			if p := float64(x * h.b[j]); (i-j)&3 == 1 {
				c[k] += p
			} else {
				c[k] -= p
			}
			e[k] += h.majorA[i] * h.majorB[j]
		}
	}
	factor := (2*h.relative + float64(max(n, m)+4)*unitRoundoff) * (1 + 0x1p-30)
	for k := range e {
		e[k] *= factor
	}
	// Exact zeros at both ends: roots at ω = 0 and the degree.
	for len(c) > 0 && e[len(c)-1] == 0 {
		c, e = c[:len(c)-1], e[:len(e)-1]
	}
	for len(c) > 0 && e[0] == 0 {
		c, e = c[1:], e[1:]
	}
	if len(c) == 0 || signOf(c[0], e[0]) == 0 || signOf(c[len(c)-1], e[len(c)-1]) == 0 {
		return nil, false
	}
	s := isolator{c: c, e: e}
	if !s.positive(typical(c)) {
		return nil, false
	}
	var contactRoom [floatRoots + 4]floatContact
	lowest, highest := signOf(c[0], 0), signOf(c[len(c)-1], 0)
	list, ok := realContact(contactRoom[:0], h.low, lowest)
	if !ok {
		return nil, false
	}
	for _, r := range s.found[:s.count] {
		omega := math.Sqrt(r.x)
		d := 0.51*r.d/omega + 2*unitRoundoff*omega
		k, err, ok := w.gain(h.point(omega), d)
		if !ok {
			return nil, false
		}
		list = append(list, floatContact{k, err, pairOf(r.rising)})
	}
	if h.radius == 0 {
		list, ok = w.degreeDrop(list, highest)
	} else {
		// A root passes through infinity outside the disc.
		list, ok = realContact(list, h.high, -highest)
	}
	if !ok {
		return nil, false
	}
	return w.assemble(list, func(k float64) (bool, bool) {
		f, ef := w.combine(h.a, h.majorA, h.b, h.majorB, k, h.relative)
		return leftByRouth(f, ef)
	})
}

// within returns the windows of |s| < radius: with s = radius·(1 + w)/(1 - w) the disc becomes
// Re w < 0, and p(s)·(1 - w)ⁿ a polynomial of the common degree n.
func (w *floatFamily) within(radius float64) ([]Window, bool) {
	n := max(len(w.a), len(w.b)) - 1
	if !(radius > 0x1p-10 && radius < 0x1p10) {
		if e := math.Ilogb(radius) * n; e < -floatSize || e > floatSize {
			return nil, false
		}
	}
	h := floatHalfPlane{
		a: w.take(n + 1), b: w.take(n + 1), majorA: w.take(n + 1), majorB: w.take(n + 1),
		// At most 3n+6 roundings on the way of each term.
		relative: float64(3*n+10) * unitRoundoff,
		radius:   radius,
		low:      [2]float64{w.fixed.At(radius), w.scaled.At(radius)},
		high:     [2]float64{w.fixed.At(-radius), w.scaled.At(-radius)},
	}
	ontoHalfPlane(w.a, radius, h.a, h.majorA)
	ontoHalfPlane(w.b, radius, h.b, h.majorB)
	h.clearZeros()
	// A multiple pole at the real point, of a double integrator, is a multiple zero at w = 0.
	for _, p := range [...]struct {
		p        poly.Poly
		c, major []float64
	}{{w.fixed, h.a, h.majorA}, {w.scaled, h.b, h.majorB}} {
		for i := 1; i <= n && p.c[i-1] == 0 && p.major[i-1] == 0; i++ {
			p.p = p.p.Derivative()
			if p.p.At(radius) != 0 {
				break
			}
			p.c[i], p.major[i] = 0, 0
		}
	}
	if h.high[0] == 0 {
		h.a[n], h.majorA[n] = 0, 0
	}
	if h.high[1] == 0 {
		h.b[n], h.majorB[n] = 0, 0
	}
	return w.alongLine(&h)
}

// ontoHalfPlane sets c to the coefficients of Σ p[i]·rⁱ·(1 + w)ⁱ·(1 - w)^(n-i), by Horner's rule,
// and major to those with all terms positive: Σ|p[i]|·rⁱ times the binomials.
func ontoHalfPlane(p []float64, r float64, c, major []float64) {
	n := len(c) - 1
	var terms [floatDegree + 1]float64
	power, sum := 1.0, 0.0
	for i, x := range p {
		terms[i] = x * power
		sum += math.Abs(terms[i])
		power *= r
	}
	var minus [floatDegree + 1]float64 // (1 - w)^(n-i)
	minus[0] = 1
	clear(c)
	for i := n; i >= 0; i-- {
		for j := n - i; j > 0; j-- {
			c[j] += c[j-1]
		}
		for j := 0; j <= n-i; j++ {
			c[j] += float64(terms[i] * minus[j])
		}
		for j := n - i + 1; j > 0 && i > 0; j-- {
			minus[j] -= minus[j-1]
		}
	}
	binomial := 1.0
	for i := range major {
		major[i] = sum * binomial * (1 + 0x1p-40)
		binomial = binomial * float64(n-i) / float64(i+1)
	}
}

func pairOf(rising bool) int {
	if rising {
		return +2
	}
	return -2
}

// typical returns a power of two about as large as the geometric mean of the roots' moduli.
func typical(c []float64) float64 {
	n := len(c) - 1
	if n < 1 {
		return 1
	}
	return math.Ldexp(1, (math.Ilogb(c[0])-math.Ilogb(c[n]))/n)
}

// damped returns the windows of |arg(-s)| < acos zeta.
func (w *floatFamily) damped(zeta float64) ([]Window, bool) {
	n, m := len(w.a)-1, len(w.b)-1
	// Sines and cosines of multiples of the angle of the ray, of cosine -ζ.
	var u, t chebyshev
	u.sines(-zeta, max(n, m))
	var room [2 * (floatRoots + 1)]float64
	c, e := room[:n+m+1], room[floatRoots+1:floatRoots+n+m+2]
	// Both coefficients, their product, its product with v and at most degree+1 sums are rounded.
	factor := float64(max(n, m)+6) * unitRoundoff * (1 + 0x1p-30)
	for i, x := range w.a {
		if x == 0 {
			continue
		}
		for j, y := range w.b {
			p := float64(x * y)
			var v, ev float64
			if d := i - j; d >= 0 {
				v, ev = u.v[d], u.e[d]
			} else {
				v, ev = -u.v[-d], u.e[-d]
			}
			q := float64(p * v)
			c[i+j] += q
			e[i+j] += factor*math.Abs(q) + math.Abs(p)*ev
		}
	}
	for len(c) > 0 && e[len(c)-1] == 0 {
		c, e = c[:len(c)-1], e[:len(e)-1]
	}
	for len(c) > 0 && e[0] == 0 {
		c, e = c[1:], e[1:]
	}
	if len(c) == 0 || signOf(c[0], e[0]) == 0 || signOf(c[len(c)-1], e[len(c)-1]) == 0 {
		return nil, false
	}
	s := isolator{c: c, e: e}
	if !s.positive(typical(c)) {
		return nil, false
	}
	var contactRoom [floatRoots + 4]floatContact
	list := contactRoom[:0]
	switch {
	case w.b[0] == 0:
		if w.a[0] == 0 {
			return nil, false
		}
	case w.a[0] == 0:
		list = append(list, floatContact{grows: signOf(c[0], 0)})
	default:
		k := -w.a[0] / w.b[0]
		list = append(list, floatContact{k, 4 * unitRoundoff * math.Abs(k), signOf(c[0], 0)})
	}
	// √(1 - ζ²) to twice the precision, by one Newton step.
	square := productOf(-zeta, zeta).plusFloat(1)
	root := double{h: math.Sqrt(square.h)}
	root.l = square.plus(productOf(-root.h, root.h)).float() / (2 * root.h)
	for _, r := range s.found[:s.count] {
		at := floatPoint{re: productOf(-zeta, r.x), im: root.times(double{h: r.x}), dRe: -zeta, dIm: root.h}
		k, err, ok := w.gain(at, r.d)
		if !ok {
			return nil, false
		}
		list = append(list, floatContact{k, err, pairOf(r.rising)})
	}
	list, ok := w.degreeDrop(list, signOf(c[len(c)-1], 0))
	if !ok {
		return nil, false
	}
	t.cosines(-zeta, max(n, m))
	majorA, majorB := w.take(n+1), w.take(m+1)
	for i, x := range w.a {
		majorA[i] = math.Abs(x)
	}
	for i, x := range w.b {
		majorB[i] = math.Abs(x)
	}
	return w.assemble(list, func(k float64) (bool, bool) {
		p, ep := w.combine(w.a, majorA, w.b, majorB, k, unitRoundoff)
		d := len(p) - 1
		var room [4 * (floatDegree + 1)]float64
		f, ef := room[:d+1], room[d+1:2*d+2]
		g, eg := room[2*d+2:3*d+2], room[3*d+2:4*d+2]
		for i, x := range p {
			f[i] = float64(x * t.v[d-i])
			ef[i] = (ep[i]*(math.Abs(t.v[d-i])+t.e[d-i]) + math.Abs(x)*t.e[d-i] + unitRoundoff*math.Abs(f[i])) * (1 + 0x1p-40)
			if i < d {
				g[i] = float64(x * u.v[d-i])
				eg[i] = (ep[i]*(math.Abs(u.v[d-i])+u.e[d-i]) + math.Abs(x)*u.e[d-i] + unitRoundoff*math.Abs(g[i])) * (1 + 0x1p-40)
			}
		}
		return leftOfRay(f, ef, g, eg)
	})
}

// combine returns fixed + k·scaled with bounds, each coefficient of the two being within a
// relative error of its majorant.
func (w *floatFamily) combine(a, majorA, b, majorB []float64, k, relative float64) (f, e []float64) {
	n := max(len(a), len(b))
	f, e = w.take(n), w.take(n)
	size := math.Abs(k)
	copy(f, a)
	for i, x := range majorA {
		e[i] = relative * x
	}
	for i, x := range b {
		p := float64(k * x)
		f[i] += p
		e[i] += (relative+unitRoundoff)*size*majorB[i] + unitRoundoff*math.Abs(f[i])
	}
	for i := range e {
		e[i] *= 1 + 0x1p-40
	}
	return f, e
}

// A float point is a point of the boundary: s = re + j·im with the direction ds/dx of the curve
// there.
type floatPoint struct {
	re, im   double
	dRe, dIm float64
	bend     float64 // |d²s/dx²|/|ds/dx|² nearby, at most; 0 on a straight line
}

// gain returns the gain -A/B at the point of the locus that is on the boundary within d of x, where
// p is the point at x, with a bound on its error; it is not ok if that is too large.
//
// With f = A/B on the boundary, Im f vanishes at x + δ, so that to first order
// k = -Re f + Re f′·Im f/Im f′. The values are computed in twice the precision, so that their
// cancellation does not matter, the derivatives in float64; what is left is of order d².
func (w *floatFamily) gain(p floatPoint, d float64) (k, err float64, ok bool) {
	re, im := p.re.h, p.im.h
	r := math.Sqrt(float64(re*re)+float64(im*im)) * (1 + 8*unitRoundoff)
	a, sizes := w.evaluate(w.a, p, re, im, r)
	b, sizesB := w.evaluate(w.b, p, re, im, r)
	var extraA, extraB float64 // relative errors of the values beyond those of double precision
	if w.rounded != 0 {
		// The exact polynomials at the point rounded to float64.
		va, vb := w.fixed.AtComplex(complex(re, im)), w.scaled.AtComplex(complex(re, im))
		a.re, a.im, b.re, b.im = real(va), imag(va), real(vb), imag(vb)
		a.exactRe, a.exactIm, b.exactRe, b.exactIm = double{h: a.re}, double{h: a.im}, double{h: b.re}, double{h: b.im}
		off := (math.Abs(p.re.l) + math.Abs(p.im.l)) * 1.01
		extraA = 0x1p-50 + off*sizes.first/math.Sqrt(float64(a.re*a.re)+float64(a.im*a.im))
		extraB = 0x1p-50 + off*sizesB.first/math.Sqrt(float64(b.re*b.re)+float64(b.im*b.im))
	}
	squareB := float64(b.re*b.re) + float64(b.im*b.im)
	modB := math.Sqrt(squareB)
	// f = A/B in twice the precision: only the small imaginary part needs it.
	numRe := a.exactRe.times(b.exactRe).plus(a.exactIm.times(b.exactIm))
	numIm := a.exactIm.times(b.exactRe).plus(a.exactRe.times(b.exactIm).minus())
	fRe, fIm := numRe.float()/squareB, numIm.float()/squareB
	size := math.Abs(fRe) + math.Abs(fIm)
	// f′ = (A′ - f·B′)/B·ds/dx
	uRe, uIm := a.dRe-float64(fRe*b.dRe)+float64(fIm*b.dIm), a.dIm-float64(fRe*b.dIm)-float64(fIm*b.dRe)
	uRe, uIm = (float64(uRe*b.re)+float64(uIm*b.im))/squareB, (float64(uIm*b.re)-float64(uRe*b.im))/squareB
	gRe, gIm := float64(uRe*p.dRe)-float64(uIm*p.dIm), float64(uRe*p.dIm)+float64(uIm*p.dRe)

	speed := math.Sqrt(float64(p.dRe*p.dRe)+float64(p.dIm*p.dIm)) * (1 + 8*unitRoundoff)
	reach := d * speed * (1 + 8*unitRoundoff) // in the plane
	n := float64(max(len(w.a), len(w.b)))
	// Relative errors of A and B at p.
	x, y := n*0x1p-98*sizes.value/math.Abs(size*modB)+1.01*extraA, n*0x1p-98*sizesB.value/modB+1.01*extraB
	if !(x < 1e-6 && y < 1e-6) || !(reach*sizesB.first < 0x1p-12*modB) {
		return 0, 0, false
	}
	// |f″| within reach: |B| ≥ modB - reach·sizesB.first there.
	q1, q2 := sizesB.first/modB, sizesB.second/modB
	p1, p2 := sizes.first/modB, sizes.second/modB
	curvature := (p2 + 2*p1*q1 + (size+reach*p1)*(q2+2*q1*q1) + p.bend*(p1+size*q1)) * 1.01
	// Errors of the float64 derivative, with the first order of everything in it.
	rough := 16 * n * unitRoundoff * (p1 + size*q1 + (sizes.value/modB+size*sizesB.value/modB)*q1)
	slant := math.Abs(gRe / gIm)
	if !(slant < 1e12) || !(math.Abs(gIm) > 2*rough*speed) {
		return 0, 0, false
	}
	k = -fRe + gRe*(fIm/gIm)
	err = ((1+slant)*(0.5*curvature*reach*reach+rough*reach) + // Taylor
		size*(x+y)*(1+slant)*1.01 + // values
		8*unitRoundoff*math.Abs(fRe) + 8*unitRoundoff*math.Abs(gRe*(fIm/gIm))) * 1.05
	if !(err < endError*math.Abs(k)) || math.IsInf(k, 0) {
		return 0, 0, false
	}
	return k, err, true
}

// A floatValue is a polynomial's value and derivative at a point.
type floatValue struct {
	exactRe, exactIm double
	re, im, dRe, dIm float64
}

// floatSizes are majorants: Σ |cᵢ|·rⁱ and those of the first two derivatives.
type floatSizes struct{ value, first, second float64 }

func (w *floatFamily) evaluate(c []float64, p floatPoint, re, im, r float64) (v floatValue, s floatSizes) {
	var half float64
	if re == 0 {
		v.exactRe, v.exactIm = hornerImaginary(c, im)
	} else {
		v.exactRe, v.exactIm = horner(c, p.re, p.im)
	}
	var xr, xi float64
	for i := len(c) - 1; i >= 0; i-- {
		v.dRe, v.dIm = float64(v.dRe*re)-float64(v.dIm*im)+xr, float64(v.dRe*im)+float64(v.dIm*re)+xi
		xr, xi = float64(xr*re)-float64(xi*im)+c[i], float64(xr*im)+float64(xi*re)
		half = half*r + s.first
		s.first = s.first*r + s.value
		s.value = s.value*r + math.Abs(c[i])
	}
	v.re, v.im = v.exactRe.float(), v.exactIm.float()
	const slack = 1 + 0x1p-40
	return v, floatSizes{s.value * slack, s.first * slack, 2 * half * slack}
}

// degreeDrop adds the gain at which a root passes through infinity. highest is the sign of the
// condition for a real gain far out on the boundary.
func (w *floatFamily) degreeDrop(list []floatContact, highest int) ([]floatContact, bool) {
	n, m := len(w.a)-1, len(w.b)-1
	switch {
	case m > n:
		if len(list) > 0 && list[0].k == 0 {
			return nil, false // both at k = 0
		}
		return append(list, floatContact{grows: -highest}), true
	case m == n:
		k := -w.a[n] / w.b[m]
		return append(list, floatContact{k, 4 * unitRoundoff * math.Abs(k), -highest}), true
	}
	return list, true
}

// assemble sorts the contacts and returns the intervals between them in which all roots are
// inside: those with the highest count, if one sample, which holds tells, has all inside.
func (w *floatFamily) assemble(list []floatContact, holds func(k float64) (all, ok bool)) ([]Window, bool) {
	for i := 1; i < len(list); i++ {
		for j := i; j > 0 && list[j].k < list[j-1].k; j-- {
			list[j], list[j-1] = list[j-1], list[j]
		}
	}
	count, best, wide := 0, 0, 0.0
	for i, c := range list {
		if i > 0 && !(list[i-1].k+list[i-1].e < c.k-c.e) {
			return nil, false
		}
		if count += c.grows; count > best {
			best = count
		}
	}
	// The sample is taken from the interval that is widest in relation to its ends.
	sample, number := 0.0, 0
	count = 0
	for i := 0; i <= len(list); i++ {
		if i > 0 {
			count += list[i-1].grows
		}
		if count < best {
			continue
		}
		number++
		k, width := middle(list, i)
		if number == 1 || width > wide {
			sample, wide = k, width
		}
	}
	all, ok := holds(sample)
	if !ok {
		return nil, false
	}
	if !all {
		return nil, true
	}
	windows := make([]Window, 0, number)
	count = 0
	for i := 0; i <= len(list); i++ {
		if i > 0 {
			count += list[i-1].grows
		}
		if count < best {
			continue
		}
		window := everything
		if i > 0 {
			window.Lo = list[i-1].k + 0
		}
		if i < len(list) {
			window.Hi = list[i].k + 0
		}
		windows = append(windows, window)
	}
	return windows, true
}

// middle returns a gain inside interval i of those that the contacts part, and how wide the
// interval is in relation to its ends, at most 2; more if an end is infinite.
func middle(list []floatContact, i int) (k, width float64) {
	switch {
	case len(list) == 0:
		return 1, 4
	case i == 0:
		if k := list[0].k; k > 0 {
			return 0, 3
		} else if k == 0 {
			return -1, 3
		} else {
			return 2 * k, 3
		}
	case i == len(list):
		if k := list[i-1].k; k < 0 {
			return 0, 3
		} else if k == 0 {
			return 1, 3
		} else {
			return 2 * k, 3
		}
	}
	lo, hi := list[i-1].k, list[i].k
	return lo/2 + hi/2, (hi - lo) / max(math.Abs(lo), math.Abs(hi))
}
