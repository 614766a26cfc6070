package rootkernel

import "math"

// The careful mode settles what the fast one cannot: polynomials whose coefficients or
// roots spread over much of the range of float64, and ill-conditioned roots. It looks at
// each point z in a frame of its own, t = z/2^e with |t| about 1 and coefficients scaled to
// match, the largest term about 1: nothing can overflow there, and what underflows does not
// matter. The polynomial and its derivative are both evaluated in twice the working
// precision.

// frameRange bounds e: beyond it a root is left to math/big.
const frameRange = 900

// frame holds the polynomial as seen from points of modulus about 2^e.
type frame struct {
	e      int
	unit   float64   // 2^e
	shift  int       // the true value is 2^shift times the scaled one
	c, lo  []float64 // Σ (c + lo)·tⁱ
	scaled bool      // the fields above are valid
}

// SetScaled takes the polynomial Σ (c[i] + lo[i])·2^exponents[i]·sⁱ for the careful mode
// only; c[i] is 0 or has modulus in [½, 1], the first and the last are not 0.
func (k *Kernel) SetScaled(c, lo []float64, exponents []int) {
	k.Set(c, lo)
	k.exponents = exponents
	k.setCareful()
}

// Careful goes on in careful mode, from the points as they are.
func (k *Kernel) Careful() {
	k.setCareful()
	pairs, reals := k.pairs(), k.reals()
	for i := range pairs {
		pairs[i].restless = true
	}
	for i := range reals {
		reals[i].restless = true
	}
}

func (k *Kernel) setCareful() {
	k.careful = true
	if len(k.frame.c) < k.n+1 {
		k.frame.c = make([]float64, k.n+1)
		k.frame.lo = make([]float64, k.n+1)
	}
	k.frame.scaled = false
}

// enter sets the frame for points of modulus r and reports whether there is one.
func (k *Kernel) enter(r float64) bool {
	if !(r > 0x1p-1000 && r < 0x1p1000) {
		return false
	}
	e := int(math.Float64bits(r)>>52) - 1023
	if e < -frameRange || e > frameRange {
		return false
	}
	f := &k.frame
	if f.scaled && f.e == e {
		return true
	}
	f.e, f.unit, f.scaled = e, math.Ldexp(1, e), true
	f.shift = math.MinInt
	for i, c := range k.c {
		if c != 0 {
			_, q := math.Frexp(c)
			f.shift = max(f.shift, q+k.exponent(i)+e*i)
		}
	}
	for i, c := range k.c {
		f.c[i], f.lo[i] = 0, 0
		if q := k.exponent(i) + e*i - f.shift; c != 0 && q > -2200 {
			// Below 2⁻⁹⁰⁰ of the largest term, the loss is less than floor pays for.
			f.c[i] = math.Ldexp(c, q)
			if k.lo != nil {
				f.lo[i] = math.Ldexp(k.lo[i], q)
			}
		}
	}
	return true
}

func (k *Kernel) exponent(i int) int {
	if k.exponents == nil {
		return 0
	}
	return k.exponents[i]
}

// values returns p(t), p′(t), |p″(t)|/2, m = Σ|cᵢ||t|ⁱ and a bound on the error of p(t), in the
// frame, for r = |t|: the first two by compensated Horner schemes, as explained above
// discRadius.
//
// The bound runs along (Higham, Accuracy and Stability of Numerical Algorithms, 2nd ed.,
// section 5.1). A step of the scheme for the errors is e ← e·t + ε, with ε summed from
// parts. On the real axis it rounds by at most 2u·|e||t| + 3u·Σ|parts|. Off it, each part of
// e·t + ε rounds by at most three times u of the products and four times u of its parts, which
// makes 3√2·u·(|Re e| + |Im e|)·|t| + 4u·Σ|parts| in all. 3.1 and 4.4 pay for rounding
// the bound itself; coefficients known to twice the working precision add 2u²·m.
//
// The scheme of the derivative sums errors of both kinds, twice as many, each gathered over
// one power more: an a-priori bound of 2⁻⁹⁸(n+2)³·m/|t| covers it.
func (f *frame) values(n int, x, y, r float64) (pr, pi, dr, di, p2, m, miss float64) {
	var epr, epi, edr, edi, qr, qi float64
	c, lo := f.c[:n+1], f.lo[:n+1]
	pr, epr = c[n], lo[n]
	m = math.Abs(pr) + floor
	for i := n - 1; i >= 0; i-- {
		m = float64(m*r) + math.Abs(c[i]) + floor

		qr, qi = float64(qr*x)-float64(qi*y)+dr, float64(qr*y)+float64(qi*x)+di // half the second derivative

		// d ← d·z + p
		p1, p2 := float64(dr*x), float64(di*y)
		p3, p4 := float64(dr*y), float64(di*x)
		e1, e2 := math.FMA(dr, x, -p1), math.FMA(di, y, -p2)
		e3, e4 := math.FMA(dr, y, -p3), math.FMA(di, x, -p4)
		s, f1 := twoSum(p1, -p2)
		w, f3 := twoSum(p3, p4)
		var f2, f4 float64
		dr, f2 = twoSum(s, pr)
		di, f4 = twoSum(w, pi)
		edr, edi = float64(edr*x)-float64(edi*y)+((e1-e2)+(f1+f2)+epr), float64(edr*y)+float64(edi*x)+((e3+e4)+(f3+f4)+epi)

		// p ← p·z + c
		p1, p2 = float64(pr*x), float64(pi*y)
		p3, p4 = float64(pr*y), float64(pi*x)
		e1, e2 = math.FMA(pr, x, -p1), math.FMA(pi, y, -p2)
		e3, e4 = math.FMA(pr, y, -p3), math.FMA(pi, x, -p4)
		s, f1 = twoSum(p1, -p2)
		pr, f2 = twoSum(s, c[i])
		pi, f3 = twoSum(p3, p4)
		parts := math.Abs(e1) + math.Abs(e2) + math.Abs(f1) + math.Abs(f2) + math.Abs(lo[i]) + math.Abs(e3) + math.Abs(e4) + math.Abs(f3)
		miss = float64(miss*r) + (float64((math.Abs(epr)+math.Abs(epi))*r) + parts)
		epr, epi = float64(epr*x)-float64(epi*y)+((e1-e2)+(f1+f2)+lo[i]), float64(epr*y)+float64(epi*x)+((e3+e4)+f3)
	}
	return pr + epr, pi + epi, dr + edr, di + edi, math.Abs(qr) + math.Abs(qi), m, float64(4.4*u*miss) + float64(0x1p-104*m)
}

// valuesReal does the same on the real axis.
func (f *frame) valuesReal(n int, x, r float64) (p, d, p2, m, miss float64) {
	var ep, ed, q2 float64
	c, lo := f.c[:n+1], f.lo[:n+1]
	p, ep = c[n], lo[n]
	m = math.Abs(p) + floor
	for i := n - 1; i >= 0; i-- {
		m = float64(m*r) + math.Abs(c[i]) + floor
		q2 = float64(q2*x) + d
		q := float64(d * x)
		e1 := math.FMA(d, x, -q)
		var f1 float64
		d, f1 = twoSum(q, p)
		ed = float64(ed*x) + (e1 + f1 + ep)
		q = float64(p * x)
		e1 = math.FMA(p, x, -q)
		p, f1 = twoSum(q, c[i])
		miss = float64(miss*r) + (float64(math.Abs(ep)*r) + math.Abs(e1) + math.Abs(f1) + math.Abs(lo[i]))
		ep = float64(ep*x) + (e1 + f1 + lo[i])
	}
	return p + ep, d + ed, math.Abs(q2), m, float64(3.1*u*miss) + float64(0x1p-104*m)
}

// twoSum returns a + b rounded and what the rounding lost (Knuth, The Art of Computer
// Programming, vol. 2, 3rd ed., 4.2.2, Theorem B).
func twoSum(a, b float64) (sum, lost float64) {
	sum = a + b
	t := sum - a
	return sum, (a - (sum - t)) + (b - t)
}

// modulus returns √(x²+y²) within 4u of itself; unlike math.Hypot, with the same bits on every
// processor.
func modulus(x, y float64) float64 {
	x, y = math.Abs(x), math.Abs(y)
	if x < y {
		x, y = y, x
	}
	if y == 0 {
		return x
	}
	t := y / x
	return float64(x * math.Sqrt(1+float64(t*t)))
}

// negligible says when a point beside which another stands that much farther away does not
// feel it.
const negligible = 0x1p300

// othersScaled is othersComplex in the frame.
func (k *Kernel) othersScaled(x, y float64, skip int) (sr, si, gr, gi float64) {
	gr = 1
	scale := 1 / k.frame.unit
	pairs := k.pairs()
	for j := range pairs {
		if j == skip {
			continue
		}
		q := &pairs[j]
		qx, qy := float64(q.x*scale), float64(q.y*scale)
		if math.Abs(qx)+qy > negligible {
			continue
		}
		t := x - qx
		qr := float64(t*t) + float64((qy-y)*(qy+y))
		qi := float64(2 * y * t)
		inverse := 1 / (float64(qr*qr) + float64(qi*qi))
		vr, vi := float64(qr*inverse), float64(qi*inverse)
		sr += float64(2 * (float64(t*vr) + float64(y*vi)))
		si += float64(2 * (float64(y*vr) - float64(t*vi)))
		gr, gi = direction(float64(gr*vr)+float64(gi*vi), float64(gi*vr)-float64(gr*vi))
	}
	for _, q := range k.reals() {
		t := x - float64(q.x*scale)
		if math.Abs(t) > negligible {
			continue
		}
		inverse := 1 / (float64(t*t) + float64(y*y))
		vr, vi := float64(t*inverse), float64(y*inverse)
		sr += vr
		si -= vi
		gr, gi = direction(float64(gr*vr)+float64(gi*vi), float64(gi*vr)-float64(gr*vi))
	}
	return sr, si, gr, gi
}

// direction keeps the phase of a number and brings its modulus near 1.
func direction(x, y float64) (float64, float64) {
	s := 1 / (math.Abs(x) + math.Abs(y))
	return float64(x * s), float64(y * s)
}

// othersRealScaled returns Σ 1/(x - zⱼ) in the frame over all but two.
func (k *Kernel) othersRealScaled(x float64, skip1, skip2 int) (s float64) {
	scale := 1 / k.frame.unit
	for _, q := range k.pairs() {
		t, y := x-float64(q.x*scale), float64(q.y*scale)
		if math.Abs(t)+y < negligible {
			s += 2 * t / (float64(t*t) + float64(y*y))
		}
	}
	for j, q := range k.reals() {
		if t := x - float64(q.x*scale); j != skip1 && j != skip2 && math.Abs(t) < negligible {
			s += 1 / t
		}
	}
	return s
}

// ratio returns ∏(x₁ - zⱼ)/∏(x₂ - zⱼ) over all but two, for unscaled points; NaN where
// that is out of range.
func (k *Kernel) ratio(x1, x2 float64, skip1, skip2 int) float64 {
	ratio := 1.0
	for _, q := range k.pairs() {
		a, b := modulus(x1-q.x, q.y), modulus(x2-q.x, q.y)
		ratio *= float64((a / b) * (a / b))
	}
	for j, q := range k.reals() {
		if j != skip1 && j != skip2 {
			ratio *= (x1 - q.x) / (x2 - q.x)
		}
	}
	return ratio
}
