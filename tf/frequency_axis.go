package tf

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
)

// An axisForm is a function g = N/D on the boundary of stability, made ready for questions
// that polynomials answer. Letters, the same in all files on frequency:
//
//	v     the variable of the boundary, v ≥ 0: ω/unit, and in z tan(ω·period/2)/unit
//	x     v², the variable of all polynomials that are tested for positive roots
//	N, D  numerator and denominator as polynomials in jv; N(jv) = Ne(x) + jv·No(x)
//	F     N + D, the characteristic polynomial of unity negative feedback
//
// In z the substitution z = (1+w)/(1-w) maps the unit circle to the axis w = jv and the disc
// to the left half-plane; z = -1, half the sampling frequency, is v = ∞. It is made without
// rounding, since for fast sampling all roots crowd about z = 1.
type axisForm struct {
	numerator, denominator poly.Poly // in s, or in w
	degree                 int       // of the pair: the larger of both; in w it is formal
	deadTime, period       float64
	sampled                [2]poly.Poly // numerator and denominator in z, as given
	delay                  int          // periods, of a function of z
	onBoundary             int          // closed-loop poles on the boundary that N and D had in common and are taken out
	weight                 float64      // of |N|² in the gain curve; 0 means 1
	unit                   float64      // rad/s; of the tangent in z; a power of two

	memory  slab
	precise *preciseAxis // made when needed, by searches on a copy of the form
	ok      bool         // false: coefficients span too much for the float64 stages
	n, d    halves
	f       halves
	whole   intervalPoly // F by power of jv
	nn, dd  intervalPoly // |N|², |D|² in x
	re, im  intervalPoly // N·conj D = re + jv·im
}

// halves are the parts of a polynomial in jv: even(x) + jv·odd(x).
type halves struct{ even, odd intervalPoly }

// newAxisForm takes numerator and denominator of a function in s (period 0) or z.
func newAxisForm(numerator, denominator poly.Poly, deadTime, period float64) *axisForm {
	a := &axisForm{numerator: numerator, denominator: denominator, deadTime: deadTime, period: period}
	a.degree = max(numerator.Degree(), denominator.Degree())
	if period != 0 {
		delay := 0
		if deadTime > 0 {
			delay = int(math.Round(deadTime / period))
		}
		a.deadTime = 0
		a.sampled = [2]poly.Poly{numerator, denominator}
		a.delay = delay
		a.degree = max(numerator.Degree(), denominator.Degree()+delay)
		a.numerator = toAxis(numerator, 0, a.degree)
		a.denominator = toAxis(denominator, delay, a.degree)
	}
	a.dropEnds()
	a.prepare()
	if a.deadTime != 0 {
		a.dropAxisFactor()
	}
	return a
}

// dropEnds takes out what N and D have in common at the two ends of the axis, v = 0 and in w
// also v = ∞. Such a factor does not change g, but is a closed-loop pole on the boundary.
func (a *axisForm) dropEnds() {
	n, d := a.numerator, a.denominator
	if n.Degree() < 0 {
		return
	}
	low := 0
	for n.Coefficient(low) == 0 && d.Coefficient(low) == 0 {
		low++
	}
	if low > 0 {
		a.numerator, a.denominator = withoutPowers(n, low), withoutPowers(d, low)
		a.degree -= low
		a.onBoundary += low
	}
	if top := max(n.Degree(), d.Degree()) - low; top < a.degree {
		a.onBoundary += a.degree - top
		a.degree = top
	}
}

// withoutPowers returns p/s^k, which leaves no remainder.
func withoutPowers(p poly.Poly, k int) poly.Poly {
	c, exponent := p.Integers()
	return poly.FromIntegers(c[k:], exponent)
}

// dropAxisFactor takes out a factor common to N and D with roots on the axis, which the
// searches on functions with dead time could not pass.
func (a *axisForm) dropAxisFactor() {
	if a.ok {
		// A common root would be a root of |N|² - |D|².
		memory := a.memory
		roots, ok := a.looseRoots(a.gainCurve(&memory))
		for _, x := range roots {
			p := a.at(x)
			d := p.dd()
			ok = ok && d.e < 0x1p-20*d.v
		}
		if ok {
			return
		}
	}
	e := a.exactly()
	if !e.commonOnAxis() {
		return
	}
	n := divideExactly(exactPoly(a.numerator), e.common)
	d := divideExactly(exactPoly(a.denominator), e.common)
	a.onBoundary += countBoundary(e.common)
	a.degree -= e.common.Degree()
	a.numerator, a.denominator = poly.FromIntegers(n.Integers()), poly.FromIntegers(d.Integers())
	a.prepare()
}

// toAxis returns (1-w)^degree · z^delay·p(z) at z = (1+w)/(1-w), exactly.
func toAxis(p poly.Poly, delay, degree int) poly.Poly {
	given, exponent := p.Integers()
	if len(given) == 0 {
		return poly.Poly{}
	}
	c := make([]*big.Int, degree+1)
	for i := range c {
		c[i] = new(big.Int)
	}
	copy(c[delay:], given)
	// With u = 1 - w, z = -1 + 2/u. First z = -1 + y, then y = 2/u, then u = 1 - w.
	for i := 0; i < degree; i++ {
		for k := degree - 1; k >= i; k-- {
			c[k].Sub(c[k], c[k+1])
		}
	}
	for k, x := range c {
		x.Lsh(x, uint(k))
	}
	for i, k := 0, degree; i < k; i, k = i+1, k-1 {
		c[i], c[k] = c[k], c[i]
	}
	for i := 0; i < degree; i++ {
		for k := degree - 1; k >= i; k-- {
			c[k].Add(c[k], c[k+1])
		}
	}
	for k := 1; k <= degree; k += 2 {
		c[k].Neg(c[k])
	}
	return poly.FromIntegers(c, exponent)
}

// maxAxisDegree is the largest degree that is evaluated in float64; the isolation of roots stops
// at maxFastDegree.
const maxAxisDegree = 127

// prepare chooses the unit of frequency and fills the polynomials in x.
func (a *axisForm) prepare() {
	shift := unitExponent(a.numerator, a.denominator)
	a.unit = math.Ldexp(1, shift)
	if a.degree > maxAxisDegree {
		return
	}
	size := a.degree + 1
	a.memory.free = make([]float64, 96*size)
	n, topN, spanN, okN := a.scaledCoefficients(a.numerator, shift)
	d, topD, spanD, okD := a.scaledCoefficients(a.denominator, shift)
	// Squares of squares must stay in range.
	low := min(spanN, spanD) - max(topN, topD)
	if !okN || !okD || low < -220 {
		return
	}
	common := max(topN, topD)
	n.shift(topN - common)
	d.shift(topD - common)
	a.ok = true
	a.n, a.d = a.split(n), a.split(d)
	f := a.memory.take(size)
	f.add(1, n)
	f.add(1, d)
	a.f = a.split(f)
	a.whole = f
	a.nn, a.dd, a.re, a.im = a.memory.take(size), a.memory.take(size), a.memory.take(size), a.memory.take(size)
	a.n.addSquare(a.nn)
	a.d.addSquare(a.dd)
	a.re.addProduct(1, a.n.even, a.d.even, 0)
	a.re.addProduct(1, a.n.odd, a.d.odd, 1)
	a.im.addProduct(1, a.n.odd, a.d.even, 0)
	a.im.addProduct(-1, a.n.even, a.d.odd, 0)
}

// unitExponent returns the power of two next to the middle of the magnitudes of all roots.
func unitExponent(n, d poly.Poly) int {
	sum, weight := 0.0, 0
	var low, high [2]float64
	for i, p := range [...]poly.Poly{n, d} {
		deg := p.Degree()
		if deg < 0 {
			continue
		}
		k := 0
		for p.Coefficient(k) == 0 && k < deg {
			k++
		}
		low[i], high[i] = logarithm(p.Coefficient(k)), logarithm(p.Coefficient(deg))
		if k < deg {
			sum += low[i] - high[i]
			weight += deg - k
		}
	}
	if weight == 0 {
		weight = d.Degree() - n.Degree()
		if n.Degree() < 0 || weight == 0 {
			return 0
		}
		sum = high[0] - high[1]
	}
	e := sum / float64(weight)
	if math.IsNaN(e) || math.Abs(e) > 1000 {
		return 0
	}
	return int(math.Round(e))
}

// logarithm returns log2|x| to about one unit.
func logarithm(x float64) float64 {
	if x == 0 || math.IsInf(x, 0) {
		return math.NaN()
	}
	_, e := math.Frexp(x)
	return float64(e)
}

// scaledCoefficients returns the coefficients of p in the variable jv, by power, without
// the alternating signs of j, with the exponents of the largest and the smallest that is not
// zero; they are divided by 2^top. It is not ok if one is out of range.
func (a *axisForm) scaledCoefficients(p poly.Poly, shift int) (q intervalPoly, top, bottom int, ok bool) {
	deg := p.Degree()
	q = a.memory.take(deg + 1)
	top, bottom = math.MinInt32, math.MaxInt32
	var array [maxAxisDegree + 1]float64
	descending := array[:deg+1]
	for k := 0; k <= deg; k++ {
		c := p.Coefficient(k)
		descending[deg-k] = c
		if c == 0 {
			continue
		}
		if math.IsInf(c, 0) || math.IsNaN(c) || math.Abs(c) < minNormal {
			return q, 0, 0, false
		}
		m, e := math.Frexp(c)
		e += k * shift
		top, bottom = max(top, e), min(bottom, e)
		q.c[k] = m
		q.e[k] = float64(e) // for the moment
	}
	exact := p.Equal(poly.New(descending...))
	if deg < 0 {
		return q, -1 << 20, 1 << 20, true
	}
	if top-bottom > 400 {
		return q, 0, 0, false
	}
	for k := range q.c {
		if q.c[k] != 0 {
			q.c[k] = math.Ldexp(q.c[k], int(q.e[k])-top)
		}
		if exact {
			q.e[k] = 0
		} else {
			// Also for a coefficient that rounds to zero.
			q.e[k] = unitRoundoff*math.Abs(q.c[k])*(1+4*unitRoundoff) + minNormal
		}
	}
	return q, top, bottom, true
}

// shift multiplies by 2^e.
func (p intervalPoly) shift(e int) {
	for i := range p.c {
		p.c[i] = math.Ldexp(p.c[i], e)
		p.e[i] = math.Ldexp(p.e[i], e)
	}
}

// split parts a polynomial in jv into real polynomials in x.
func (a *axisForm) split(p intervalPoly) halves {
	even := a.memory.take((len(p.c) + 1) / 2)
	odd := a.memory.take(len(p.c) / 2)
	for i, c := range p.c {
		if i&2 != 0 {
			c = -c
		}
		if i&1 == 0 {
			even.c[i/2], even.e[i/2] = c, p.e[i]
		} else {
			odd.c[i/2], odd.e[i/2] = c, p.e[i]
		}
	}
	return halves{even, odd}
}

// addSquare adds even² + x·odd² to p.
func (h halves) addSquare(p intervalPoly) {
	p.addProduct(1, h.even, h.even, 0)
	p.addProduct(1, h.odd, h.odd, 1)
}

// frequency returns ω in rad/s at x.
func (a *axisForm) frequency(x float64) float64 { return a.frequencyAt(math.Sqrt(x) * a.unit) }

// frequencyAt returns ω at v·unit.
func (a *axisForm) frequencyAt(v float64) float64 {
	if a.period == 0 {
		return v
	}
	return 2 * math.Atan(v) / a.period
}

// variable returns v at ω.
func (a *axisForm) variable(frequency float64) float64 {
	if a.period != 0 {
		half := frequency * a.period / 2
		if half >= math.Pi/2 {
			return math.Inf(1)
		}
		frequency = math.Tan(half)
	}
	return frequency / a.unit
}

// A valueBound is a number with a bound on its error.
type valueBound struct{ v, e float64 }

// A halfValue is a half of a polynomial at x with its derivative.
type halfValue struct {
	valueBound
	slope float64
}

// evaluate returns p(x), x ≥ 0, bounded as by at, and the derivative.
func (p intervalPoly) evaluate(x float64) halfValue {
	var y, dy, m, e float64
	for i := len(p.c) - 1; i >= 0; i-- {
		dy = float64(dy*x) + y
		y = float64(y*x) + p.c[i]
		m = float64(m*x) + math.Abs(y)
		e = float64(e*x) + p.e[i]
	}
	return halfValue{valueBound{y, (e+3*unitRoundoff*m)*(1+float64(4*len(p.c))*unitRoundoff) + minNormal}, dy}
}

// An axisPoint holds N and D at one x.
type axisPoint struct {
	a              *axisForm
	x              float64
	ne, no, de, do halfValue
}

func (a *axisForm) at(x float64) axisPoint {
	return axisPoint{
		a: a, x: x,
		ne: a.n.even.evaluate(x), no: a.n.odd.evaluate(x),
		de: a.d.even.evaluate(x), do: a.d.odd.evaluate(x),
	}
}

// square returns even² + x·odd² with its derivative.
func square(even, odd halfValue, x float64) halfValue {
	y := even.v*even.v + x*odd.v*odd.v
	e := even.e*(2*math.Abs(even.v)+even.e) + x*odd.e*(2*math.Abs(odd.v)+odd.e) + 4*unitRoundoff*y
	return halfValue{valueBound{y, e * (1 + 8*unitRoundoff)}, 2*even.v*even.slope + odd.v*odd.v + 2*x*odd.v*odd.slope}
}

// product returns a·b + f·c·d with its derivative but for that of f.
func product(a, b, c, d halfValue, f float64) halfValue {
	y := a.v*b.v + f*c.v*d.v
	g := math.Abs(f)
	e := a.e*(math.Abs(b.v)+b.e) + math.Abs(a.v)*b.e + g*(c.e*(math.Abs(d.v)+d.e)+math.Abs(c.v)*d.e) +
		4*unitRoundoff*(math.Abs(a.v*b.v)+g*math.Abs(c.v*d.v))
	return halfValue{valueBound{y, e * (1 + 8*unitRoundoff)}, a.slope*b.v + a.v*b.slope + f*(c.slope*d.v+c.v*d.slope)}
}

func (p *axisPoint) nn() halfValue { return square(p.ne, p.no, p.x) } // |N|²
func (p *axisPoint) dd() halfValue { return square(p.de, p.do, p.x) } // |D|²
func (p *axisPoint) ff() halfValue { // |F|²
	return square(p.a.f.even.evaluate(p.x), p.a.f.odd.evaluate(p.x), p.x)
}

// re returns Re N·conj D, im the part of Im N·conj D that is multiplied by v.
func (p *axisPoint) re() halfValue {
	r := product(p.ne, p.de, p.no, p.do, p.x)
	r.slope += p.no.v * p.do.v
	return r
}
func (p *axisPoint) im() halfValue { return product(p.no, p.de, p.ne, p.do, -1) }
