package tf

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
)

// sampleRoots samples by mapping the roots, one by one. The trapezoidal rule is such a map
// too, s = c·(z-1)/(z+1), z - 1 = 2s/(c-s): each root it maps exactly, and the multiplicity of
// the roots, that of z = -1 included, stays.
func (g Function) sampleRoots(call string, period float64, how Method, s settings) (Function, error) {
	delayed, err := g.inPeriods(call, period)
	if err != nil {
		return invalid(err)
	}
	excess := g.denominator.Degree() - g.numerator.Degree()
	switch {
	case g.numerator.Degree() < 0:
		excess = 0
	case how == MatchedRoots && excess < 0:
		return invalid(badArgument(call, "g", "degree %d over %d is improper: matching its roots would look into the future", g.numerator.Degree(), g.denominator.Degree()))
	case how == MatchedRoots && (s.zerosAtInfinity < 0 || s.zerosAtInfinity > excess):
		return invalid(badArgument(call, "ZerosAtInfinity", "%d of %d zeros at infinity", s.zerosAtInfinity, excess))
	}
	m := rootMap{call: call, period: period, how: how}
	if how == Trapezoidal {
		m.c = trapezoidalFactor(period, s)
	}
	denominator, err := m.product(g.denominator, false)
	if err != nil {
		return invalid(err)
	}
	numerator := mappedProduct{polynomial: one, gain: bigNumber(mapPrecision)} // of a zero numerator
	if g.numerator.Degree() >= 0 {
		if numerator, err = m.product(g.numerator, true); err != nil {
			return invalid(err)
		}
	}
	if denominator.lost > 0 {
		return invalid(badArgument(call, "period", "a pole at 2/period goes to infinity: the sampled function would be improper"))
	}
	excess -= s.zerosAtInfinity
	atMinusOne := poly.New(1, 1)
	if excess >= 0 {
		numerator.polynomial = numerator.polynomial.Mul(atMinusOne.Power(excess))
	} else {
		denominator.polynomial = denominator.polynomial.Mul(atMinusOne.Power(-excess))
	}
	gain := bigNumber(mapPrecision).Quo(numerator.gain, denominator.gain)
	if how == MatchedRoots {
		// Towards s = 0: (1+z)^excess is 2^excess, and a root at 0 is s = δ/period.
		gain.SetMantExp(gain, -excess)
	}
	gain = new(big.Float).SetPrec(offsetBits + 20).Set(gain)
	h := Function{
		numerator:   numerator.polynomial.Mul(polyOf([]*big.Float{gain})),
		denominator: denominator.polynomial,
		period:      period,
		made:        true,
	}
	if how == MatchedRoots && s.matches {
		if h, err = h.matchedAt(call, g, s.matchFrequency); err != nil {
			return invalid(err)
		}
	}
	if delayed > 0 {
		h.denominator = h.denominator.Mul(powerOfVariable(delayed))
	}
	return h, nil
}

// inPeriods returns the dead time in whole periods.
func (g Function) inPeriods(call string, period float64) (int, error) {
	if g.delay.zero() {
		return 0, nil
	}
	n, ok := wholePeriods(g.delay.near, period)
	if !ok {
		return 0, badArgument(call, "period", "the dead time of %v s is not a whole number of periods of %v s (up to %d): sample behind a hold", g.delay.near, period, maxPeriods)
	}
	return n, nil
}

// mapPrecision is that of factors and gains on the way.
const mapPrecision = 2 * offsetBits

// trapezoidalFactor returns c of s = c·(z-1)/(z+1): 2/period, or ω/tan(ω·period/2).
func trapezoidalFactor(period float64, s settings) *big.Float {
	if !s.matches {
		c := bigNumber(mapPrecision).SetInt64(2)
		return c.Quo(c, bigNumber(mapPrecision).SetFloat64(period))
	}
	// tan(x/2) from exp(jx) = 1 + w: sin x/(1 + cos x) = im w/(2 + re w).
	w := preciseRoot{re: bigNumber(mapPrecision), im: bigNumber(mapPrecision).SetFloat64(s.matchFrequency), multiplicity: 1}
	e, _ := w.exponential("", period) // on the unit circle nothing overflows
	c := bigNumber(mapPrecision).Add(e.re, bigNumber(mapPrecision).SetInt64(2))
	c.Mul(c, w.im)
	return c.Quo(c, e.im)
}

type rootMap struct {
	call   string
	period float64
	how    Method
	c      *big.Float // of the trapezoidal rule
}

// mappedProduct is gain·polynomial, the polynomial monic.
type mappedProduct struct {
	polynomial poly.Poly
	gain       *big.Float
	lost       int // roots that went to infinity
}

// product maps a polynomial, root by root.
func (m rootMap) product(p poly.Poly, numerator bool) (mappedProduct, error) {
	c := bigCoefficients(p, mapPrecision)
	result := mappedProduct{polynomial: one, gain: c[len(c)-1]}
	if p.Degree() == 0 {
		return result, nil
	}
	roots, ok, err := preciseRoots(p, mapPrecision)
	if err != nil {
		return result, err
	}
	if !ok {
		return result, &UnsupportedError{Call: m.call, What: "roots closer together than float64 can part"}
	}
	for _, r := range roots {
		root, factor, finite, err := m.root(r)
		if err != nil {
			return result, err
		}
		for range r.multiplicity {
			result.gain.Mul(result.gain, factor)
		}
		if !finite {
			result.lost += r.multiplicity
			continue
		}
		result.polynomial = result.polynomial.Mul(root.factor())
	}
	return result, nil
}

// root maps one root, or a pair; factor is what remains beside the monic factor of z.
func (m rootMap) root(r preciseRoot) (mapped offsetRoot, factor *big.Float, finite bool, err error) {
	if m.how == Trapezoidal {
		return m.trapezoidalRoot(r)
	}
	if mapped, err = r.exponential(m.call, m.period); err != nil {
		return mapped, nil, true, err
	}
	// s - r at s = 0 against z - root at z = 1: -r/-δ, in magnitude squared for a pair; for a root
	// at 0, s is δ/period.
	factor = bigNumber(mapPrecision)
	switch {
	case r.isZero():
		factor.SetFloat64(m.period)
		factor.Quo(bigNumber(mapPrecision).SetInt64(1), factor)
	case r.isReal():
		factor.Quo(r.re, mapped.re)
	case mapped.im == nil: // it met on the real axis
		factor.Quo(sizeSquared(r.re, r.im), squareOf(mapped.re))
	default:
		factor.Quo(sizeSquared(r.re, r.im), sizeSquared(mapped.re, mapped.im))
	}
	return mapped, factor, true, nil
}

func sizeSquared(re, im *big.Float) *big.Float {
	a := bigNumber(mapPrecision).Mul(re, re)
	return a.Add(a, bigNumber(mapPrecision).Mul(im, im))
}

// trapezoidalRoot: s - r = ((c-r)·(z-1) - 2r)/(z+1).
func (m rootMap) trapezoidalRoot(r preciseRoot) (mapped offsetRoot, factor *big.Float, finite bool, err error) {
	work := uint(mapPrecision)
	away := bigNumber(work).Sub(m.c, r.re) // c - r
	if r.isReal() {
		if away.Sign() == 0 {
			return mapped, bigNumber(work).Mul(r.re, bigNumber(work).SetInt64(-2)), false, nil
		}
		offset := bigNumber(work).Mul(r.re, bigNumber(work).SetInt64(2))
		mapped = offsetRoot{re: offset.Quo(offset, away), multiplicity: r.multiplicity}.rounded()
		return mapped, away, true, nil
	}
	twice := bigComplex{bigNumber(work).Mul(r.re, bigNumber(work).SetInt64(2)), bigNumber(work).Mul(r.im, bigNumber(work).SetInt64(2))}
	offset, _ := twice.over(bigComplex{away, bigNumber(work).Neg(r.im)}, work)
	offset.im.Abs(offset.im)
	mapped = offsetRoot{re: offset.re, im: offset.im, multiplicity: r.multiplicity}.rounded()
	return mapped, sizeSquared(away, r.im), true, nil
}

// matchedAt scales h so that its magnitude at the frequency is that of g.
func (h Function) matchedAt(call string, g Function, frequency float64) (Function, error) {
	sin, cos := math.Sincos(frequency * h.period)
	g.delay = deadTime{}
	ratio := math.Hypot(real(g.At(complex(0, frequency))), imag(g.At(complex(0, frequency)))) /
		math.Hypot(real(h.At(complex(cos, sin))), imag(h.At(complex(cos, sin))))
	if !(ratio > 0) || math.IsInf(ratio, 0) {
		return invalid(badArgument(call, "MatchFrequency", "there is a pole or a zero at %v rad/s", frequency))
	}
	return h.Scale(ratio)
}
