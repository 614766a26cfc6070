package tf

import (
	"fmt"
	"math"
	"math/big"
	"math/cmplx"

	"github.com/polewright/polewright/poly"
)

// Continuous returns the function of s that [Function.Sample] takes to g by this method and
// these options. Powers of z in the denominator become dead time where the method needs it.
// Coefficients are rounded to float64, so that a function that was sampled comes back as it was.
//
// Poles lie in the principal strip |Im s| ≤ π/period: what was faster has folded over, and does
// not come back. The error is a [*poly.ArgumentError] where no such function exists: a function
// of s, a pole (of matched roots also a zero) at 0 or negative real, whose logarithm is not real, a
// pole at -1 of the trapezoidal rule; or a numerator that no whole number of periods explains.
func (g Function) Continuous(how Method, opt ...Option) (Function, error) {
	const call = "tf.Function.Continuous"
	var s settings
	for _, o := range opt {
		o(&s)
	}
	switch {
	case g.err != nil:
		return g, g.err
	case how < ZeroOrderHold || how > MatchedRoots:
		return invalid(badArgument(call, "how", "%d is no method", int(how)))
	case g.period == 0:
		return invalid(badArgument(call, "g", "is no function of z"))
	case s.matches && how != Trapezoidal && how != MatchedRoots:
		return invalid(badArgument(call, "MatchFrequency", "the %v has no frequency to choose", how))
	case s.matches && !(s.matchFrequency > 0 && s.matchFrequency < math.Pi/g.period):
		return invalid(badArgument(call, "MatchFrequency", "%v rad/s is not between 0 and π/period = %v", s.matchFrequency, math.Pi/g.period))
	}
	periods := g.periods
	g.periods = 0
	if g.numerator.Degree() <= 0 && g.denominator.Degree() == 0 && periods == 0 { // a number
		g.period = 0
		return g, nil
	}
	if how != Trapezoidal {
		n := lowestPower(g.denominator)
		g.denominator = dividedByPower(g.denominator, n)
		periods += n
	}
	if how == FirstOrderHold {
		if periods == 0 {
			return invalid(badArgument(call, "g", "has no pole at 0, which a first-order hold brings in"))
		}
		periods--
	}
	var h Function
	var err error
	switch how {
	case Trapezoidal:
		h = g.withoutTrapezoidal(s)
		if g.isProper() && !h.isProper() {
			err = badArgument(call, "g", "a pole at -1 goes to infinity: the function would be improper")
		}
	case MatchedRoots:
		h, err = g.withoutMatching(call, s)
	default:
		h, err = g.withoutHold(call, how)
	}
	if err != nil {
		return invalid(err)
	}
	h = h.monic(2 * mapPrecision)
	if h, err = h.Rounded(); err != nil {
		return invalid(err)
	}
	h.delay = deadTimeOf(new(big.Rat).Mul(ratOf(g.period), new(big.Rat).SetInt64(int64(periods))))
	h.period = 0
	return h, nil
}

// dividedByPower returns p/zⁿ, which it has for a factor, with given roots kept.
func dividedByPower(p poly.Poly, n int) poly.Poly {
	if n == 0 {
		return p
	}
	d, err := p.Divide(powerOfVariable(n))
	if err != nil || !d.Exact {
		return dropPowers(p, n)
	}
	return d.Quotient
}

// logarithmBits is the precision of poles in s on the way back.
const logarithmBits = offsetBits + 64

// logarithm returns the root in s whose exponential the root in z is, by Newton's method on
// exp(x) - 1 = offset with x = s·period.
func (m rootMap) logarithm(r preciseRoot) (preciseRoot, error) {
	x0, _ := r.re.Float64()
	y0 := 0.0
	if r.im != nil {
		y0, _ = r.im.Float64()
	}
	if r.isReal() && x0 <= 0 {
		return r, badArgument(m.call, "g", "a root at %v has no real logarithm", x0)
	}
	start := ContinuousPole(complex(x0, y0), 1)
	if cmplx.IsInf(start) || cmplx.IsNaN(start) {
		return r, badArgument(m.call, "g", "a root at %v has no logarithm in the range of float64", complex(x0, y0))
	}
	work := uint(logarithmBits + 64 + int(math.Abs(real(start))*1.5)) // 1 + offset cancels near 0
	z := bigComplex{r.re, bigNumber(work)}
	if r.im != nil {
		z.im = r.im
	}
	offset := bigComplex{bigNumber(work).Sub(z.re, big.NewFloat(1)), z.im}
	if re, _ := offset.re.Float64(); math.Abs(re) < 0.5 {
		im, _ := offset.im.Float64()
		start = ContinuousPoleFromOffset(complex(re, im), 1)
	}
	x := preciseRoot{re: bigNumber(work).SetFloat64(real(start)), multiplicity: r.multiplicity}
	if r.im != nil {
		x.im = bigNumber(work).SetFloat64(imag(start))
	}
	for range 6 { // from 50 bits to all of them takes 2
		w := x.expMinusOne(1, work)
		miss := bigComplex{bigNumber(work).Sub(w.re, offset.re), bigNumber(work).Sub(w.im, offset.im)}
		step, ok := miss.over(bigComplex{bigNumber(work).Add(w.re, big.NewFloat(1)), w.im}, work)
		if !ok {
			break
		}
		x.re = bigNumber(work).Sub(x.re, step.re)
		if x.im != nil {
			x.im = bigNumber(work).Sub(x.im, step.im)
		}
	}
	period := bigNumber(work).SetFloat64(m.period)
	x.re.Quo(x.re, period)
	if x.im != nil {
		x.im.Quo(x.im, period)
	}
	return x, nil
}

// factor returns ∏(s - root) over the root, its conjugate and its multiplicity.
func (r preciseRoot) factor() poly.Poly {
	round := func(x *big.Float) *big.Float { return new(big.Float).SetPrec(logarithmBits).Set(x) }
	linear := polyOf([]*big.Float{round(new(big.Float).Neg(r.re)), big.NewFloat(1)})
	if r.im == nil {
		return linear.Power(r.multiplicity)
	}
	imaginary := polyOf([]*big.Float{round(r.im)})
	return linear.Mul(linear).Add(imaginary.Mul(imaginary)).Power(r.multiplicity)
}

// rootsOf returns the roots of p to logarithmBits.
func rootsOf(call string, p poly.Poly) ([]preciseRoot, error) {
	if p.Degree() == 0 {
		return nil, nil
	}
	roots, ok, err := preciseRoots(p, logarithmBits+64)
	if err == nil && !ok {
		err = &UnsupportedError{Call: call, What: "roots closer together than float64 can part"}
	}
	return roots, err
}

// withoutMatching undoes [MatchedRoots]: zeros at -1 go to infinity.
func (g Function) withoutMatching(call string, s settings) (Function, error) {
	m := rootMap{call: call, period: g.period, how: MatchedRoots}
	h := Function{denominator: one, numerator: one, made: true}
	gain := bigNumber(mapPrecision).SetInt64(1)
	excess := 0
	for _, side := range []struct {
		from, to *poly.Poly
		up       bool
	}{{&g.numerator, &h.numerator, true}, {&g.denominator, &h.denominator, false}} {
		if side.from.Degree() < 0 {
			h.numerator = poly.Poly{}
			continue
		}
		roots, err := rootsOf(call, *side.from)
		if err != nil {
			return h, err
		}
		c := bigCoefficients(*side.from, mapPrecision)
		part := c[len(c)-1]
		for _, r := range roots {
			if x, _ := r.re.Float64(); side.up && r.isReal() && x == -1 {
				excess += r.multiplicity
				continue
			}
			x, err := m.logarithm(r)
			if err != nil {
				return h, err
			}
			_, factor, _, err := m.root(x)
			if err != nil {
				return h, err
			}
			for range r.multiplicity {
				part.Quo(part, factor)
			}
			*side.to = side.to.Mul(x.factor())
		}
		if side.up {
			gain.Mul(gain, part)
		} else {
			gain.Quo(gain, part)
		}
	}
	gain.SetMantExp(gain, excess)
	h.numerator = h.numerator.Mul(polyOf([]*big.Float{gain}))
	if s.matches {
		w := complex(0, s.matchFrequency)
		sin, cos := math.Sincos(s.matchFrequency * g.period)
		ratio := cmplx.Abs(g.At(complex(cos, sin))) / cmplx.Abs(h.At(w))
		if !(ratio > 0) || math.IsInf(ratio, 0) {
			return h, badArgument(call, "MatchFrequency", "there is a pole or a zero at %v rad/s", s.matchFrequency)
		}
		return h.Scale(ratio)
	}
	return h, nil
}

// withoutTrapezoidal puts z = (c+s)/(c-s) into both polynomials, exactly.
func (g Function) withoutTrapezoidal(s settings) Function {
	up, down := poly.New(g.period, 2), poly.New(-g.period, 2) // c = 2/period, times the period
	if s.matches {
		c := polyOf([]*big.Float{trapezoidalFactor(g.period, s)})
		up, down = c.Add(poly.New(1, 0)), c.Sub(poly.New(1, 0))
	}
	n := max(g.numerator.Degree(), g.denominator.Degree())
	substitute := func(p poly.Poly) poly.Poly {
		sum := poly.Poly{}
		coefficients, e := p.Integers()
		for i, a := range coefficients {
			sum = sum.Add(productOf(poly.FromIntegers([]*big.Int{a}, e), up.Power(i), down.Power(n-i)))
		}
		return sum
	}
	return Function{numerator: substitute(g.numerator), denominator: substitute(g.denominator), made: true}
}

// monic divides both polynomials by the leading coefficient of the denominator.
func (g Function) monic(precision uint) Function {
	c := bigCoefficients(g.denominator, precision)
	lead := c[len(c)-1]
	divide := func(p poly.Poly) poly.Poly {
		list := bigCoefficients(p, precision)
		for _, x := range list {
			x.Quo(x, lead)
		}
		return polyOf(list)
	}
	g.numerator, g.denominator = divide(g.numerator), divide(g.denominator)
	return g
}

// withoutHold undoes a hold: the poles are logarithms, and sampling is linear in the numerator.
func (g Function) withoutHold(call string, how Method) (Function, error) {
	m := rootMap{call: call, period: g.period, how: how}
	h := Function{numerator: g.numerator, denominator: one, made: true}
	roots, err := rootsOf(call, g.denominator)
	if err != nil {
		return h, err
	}
	for _, r := range roots {
		x, err := m.logarithm(r)
		if err != nil {
			return h, err
		}
		h.denominator = h.denominator.Mul(x.factor())
	}
	n := h.denominator.Degree()
	if n > maxHeld {
		return h, &UnsupportedError{Call: call, What: fmt.Sprintf("a hold before a function of order %d; at most %d", n, maxHeld)}
	}
	most := n
	if how == FirstOrderHold {
		most++
	}
	if g.numerator.Degree() < 0 {
		return h, nil
	}
	if g.numerator.Degree() > most {
		return h, badArgument(call, "g", "degree %d over %d: dead time of no whole number of periods, or none that a hold leaves", g.numerator.Degree(), n)
	}
	// Columns: what becomes of sʲ, scaled, over the monic denominator; the numerator of g is their sum.
	precision := uint(512 + 128*n)
	c := bigCoefficients(g.monic(precision).numerator, precision)
	system := make([][]*big.Float, most+1)
	for i := range system {
		system[i] = make([]*big.Float, n+2)
		for j := range system[i] {
			system[i][j] = bigNumber(precision)
		}
		if i < len(c) {
			system[i][n+1].Set(c[i])
		}
	}
	sampler := h.heldSampler(g.period, new(big.Rat), how, precision)
	for j := 0; j <= n; j++ {
		column, _ := sampler.numerator(powerOfVariable(j))
		column = shiftByOne(column, false, precision)
		for i := range system {
			if i < len(column) {
				system[i][j].SetMantExp(column[i], -sampler.scale*j) // of (s/2^scale)ʲ
			}
		}
	}
	solution, ok := solve(system, precision)
	if !ok {
		return h, badArgument(call, "g", "no function of s gives this numerator behind a %v", how)
	}
	// The solution is of the scaled variable, where roots are about 1 at most: leading
	// coefficients far below what float64 shows are rounding, and so is a static gain that g
	// does not have.
	top := math.MinInt
	for _, x := range solution {
		if x.Sign() != 0 {
			top = max(top, leadExponent(x))
		}
	}
	for j := n; j >= 0 && (solution[j].Sign() == 0 || leadExponent(solution[j]) < top-60); j-- {
		solution[j].SetInt64(0)
	}
	if g.numerator.At(1) == 0 && h.denominator.Coefficient(0) != 0 {
		solution[0].SetInt64(0)
	}
	for j, x := range solution {
		x.SetMantExp(x, -sampler.scale*j)
	}
	h.numerator = polyOf(solution)
	return h, nil
}

// solve solves a linear system by elimination, its right side being the last column. Rows
// beyond the number of unknowns must agree, as far as float64 shows.
func solve(rows [][]*big.Float, precision uint) ([]*big.Float, bool) {
	n := len(rows[0]) - 1
	t := bigNumber(precision)
	size := make([]*big.Float, len(rows)) // of what comes together in the right side
	for i := range rows {
		size[i] = bigNumber(precision).Abs(rows[i][n])
	}
	for k := range n {
		best := -1
		for i := k; i < len(rows); i++ {
			if rows[i][k].Sign() != 0 && (best < 0 || t.Abs(rows[i][k]).Cmp(new(big.Float).Abs(rows[best][k])) > 0) {
				best = i
			}
		}
		if best < 0 {
			return nil, false
		}
		rows[k], rows[best] = rows[best], rows[k]
		size[k], size[best] = size[best], size[k]
		for i := k + 1; i < len(rows); i++ {
			if rows[i][k].Sign() == 0 {
				continue
			}
			factor := bigNumber(precision).Quo(rows[i][k], rows[k][k])
			for j := k; j <= n; j++ {
				rows[i][j].Sub(rows[i][j], t.Mul(factor, rows[k][j]))
			}
			if t.Abs(t); t.Cmp(size[i]) > 0 {
				size[i].Set(t)
			}
		}
	}
	for i := n; i < len(rows); i++ {
		if r := rows[i][n]; r.Sign() != 0 && leadExponent(r) > leadExponent(size[i])-50 {
			return nil, false
		}
	}
	x := make([]*big.Float, n)
	for k := n - 1; k >= 0; k-- {
		s := bigNumber(precision).Set(rows[k][n])
		for j := k + 1; j < n; j++ {
			s.Sub(s, t.Mul(rows[k][j], x[j]))
		}
		x[k] = s.Quo(s, rows[k][k])
	}
	return x, true
}
