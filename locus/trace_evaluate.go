package locus

import "math"

// A value gathers what the tracker needs of F = a + κ·b at one point: F with a bound on its
// error, dF/dx, and b with a bound on its modulus.
type value struct {
	re, im     float64 // F
	errF       float64 // |F - (re + j·im)| at most
	dRe, dIm   float64 // dF/dx, without a bound
	bRe, bIm   float64 // b, without a bound
	modulusB   float64 // |b| at most
	modulusMax float64 // Σ|fᵢ||x|ⁱ, the scale of F
}

// pencil is F at one gain: its coefficients, and majorants of what their terms are made of.
type pencil struct {
	f, majorF []float64 // F = a + κ·b, rounded; |a| + |κ·b|
	b, majorB []float64
	plane     *plane
	κ         float64
	growth    float64 // bound on the relative error of Horner's rule with these coefficients
}

// newPencil returns the pencil of p with room for its coefficients.
func newPencil(p *plane) *pencil {
	room := make([]float64, 3*(p.n+1))
	q := &pencil{
		plane:  p,
		f:      room[: p.n+1 : p.n+1],
		majorF: room[p.n+1 : 2*(p.n+1) : 2*(p.n+1)],
		majorB: room[2*(p.n+1):],
		b:      p.b,
		// One step of Horner's rule multiplies two complex numbers (relative error at most √5·u;
		// R. Brent, C. Percival, P. Zimmermann, Error bounds on complex floating-point
		// multiplication, Math. Comp. 76 (2007) 1469–1481) and adds a real one (u): less than
		// 3.3·u with the terms of second order. The coefficients themselves are rounded three
		// times. Fused multiply-adds round less.
		growth: (3.3*float64(p.n) + 8) * 1.05 * unitRoundoff,
	}
	for i, v := range p.b {
		q.majorB[i] = math.Abs(v)
	}
	return q
}

// set moves the pencil to a gain.
func (q *pencil) set(κ float64) {
	p := q.plane
	q.κ = κ
	size := math.Abs(κ)
	for i, v := range p.a {
		q.f[i] = v + float64(κ*p.b[i])
		q.majorF[i] = math.Abs(v) + float64(size*q.majorB[i])
	}
	for i, v := range p.major { // growth takes ten units of roundoff of this and more
		q.majorF[i] += 0x1p-48 * v
	}
}

// at evaluates all that [value] holds at x = (re, im).
func (q *pencil) at(re, im float64, v *value) {
	n := len(q.f) - 1
	f, b, mf, mb := q.f[:n+1], q.b[:n+1], q.majorF[:n+1], q.majorB[:n+1]
	if im == 0 {
		r := math.Abs(re)
		var y, d, z, m, w float64
		for i := n; i >= 0; i-- {
			d = float64(d*re) + y
			y = float64(y*re) + f[i]
			z = float64(z*re) + b[i]
			m = float64(m*r) + mf[i]
			w = float64(w*r) + mb[i]
		}
		v.re, v.im, v.dRe, v.dIm, v.bRe, v.bIm = y, 0, d, 0, z, 0
		v.errF = q.growth*m + minNormal
		v.modulusB = math.Abs(z) + q.growth*w + minNormal
		v.modulusMax = m
		return
	}
	r := math.Sqrt(float64(re*re)+float64(im*im)) * (1 + 4*unitRoundoff)
	var yr, yi, dr, di, zr, zi, m, w float64
	for i := n; i >= 0; i-- {
		dr, di = float64(dr*re)-float64(di*im)+yr, float64(dr*im)+float64(di*re)+yi
		yr, yi = float64(yr*re)-float64(yi*im)+f[i], float64(yr*im)+float64(yi*re)
		zr, zi = float64(zr*re)-float64(zi*im)+b[i], float64(zr*im)+float64(zi*re)
		m = float64(m*r) + mf[i]
		w = float64(w*r) + mb[i]
	}
	v.re, v.im, v.dRe, v.dIm, v.bRe, v.bIm = yr, yi, dr, di, zr, zi
	v.errF = q.growth*m + minNormal
	v.modulusB = modulus(zr, zi)*(1+4*unitRoundoff) + q.growth*w + minNormal
	v.modulusMax = m
}

// newton returns the correction -F/F′ of a value; ok is false where F′ is zero or not finite.
func (v *value) newton() (re, im float64, ok bool) {
	if v.im == 0 && v.dIm == 0 {
		re = -v.re / v.dRe
		return re, 0, !math.IsNaN(re) && !math.IsInf(re, 0)
	}
	re, im = quotientOfParts(-v.re, -v.im, v.dRe, v.dIm)
	return re, im, !math.IsNaN(re+im) && !math.IsInf(re, 0) && !math.IsInf(im, 0)
}

// quotientOfParts returns (a + jb)/(c + jd).
func quotientOfParts(a, b, c, d float64) (re, im float64) {
	norm := float64(c*c) + float64(d*d)
	if norm > 0x1p-900 && norm < 0x1p900 {
		q := 1 / norm
		return (float64(a*c) + float64(b*d)) * q, (float64(b*c) - float64(a*d)) * q
	}
	q := complex(a, b) / complex(c, d) // scales
	return real(q), imag(q)
}

// modulus returns |a + jb|, to four roundings.
func modulus(a, b float64) float64 {
	if norm := float64(a*a) + float64(b*b); norm > 0x1p-900 && norm < 0x1p900 {
		return math.Sqrt(norm)
	}
	return math.Hypot(a, b)
}

// velocity returns dx/dκ = -b/F′.
func (v *value) velocity() (re, im float64) {
	if v.bIm == 0 && v.dIm == 0 {
		return -v.bRe / v.dRe, 0
	}
	return quotientOfParts(-v.bRe, -v.bIm, v.dRe, v.dIm)
}
