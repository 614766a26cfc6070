package tf

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/quotient"
	"github.com/polewright/polewright/poly"
)

// Sampling behind a hold, in the ring of polynomials modulo the denominator (package
// internal/quotient): with N/D the function of s, T the period and q = 1 or 2 poles at 0 that
// the hold brings in, the samples of the response to one hold pulse are
//
//	y(k) = Σ residues of N·exp(s(k+m)T)/(s^q·D) = lead of (N·M·Eᵏ mod s^q·D),
//
// E = exp(sT) and M = exp(s·m·T) being elements of the ring and m the fraction of a period by
// which the dead time misses whole ones (the parameter of the modified z-transform: E. I. Jury,
// Theory and Application of the z-Transform Method, Wiley 1964). Their transform is
// lead of N·M·(z-E)⁻¹, whose denominator is the characteristic polynomial of E. All of it in
// δ = z-1, with W = E-1: then short periods cancel nothing.

// sampledDenominator returns the monic ∏(z - exp(p·period)) over the poles p.
func (g Function) sampledDenominator(call string, period float64) (poly.Poly, error) {
	if g.denominator.Degree() == 0 {
		return one, nil
	}
	roots, ok, err := preciseRoots(g.denominator, offsetBits+64)
	if err != nil {
		return poly.Poly{}, err
	}
	if ok {
		result := one
		for _, r := range roots {
			offset, err := r.exponential(call, period)
			if err != nil {
				return poly.Poly{}, err
			}
			result = result.Mul(offset.factor())
		}
		return result, nil
	}
	c, err := agree(call, func(precision uint) ([]*big.Float, int) {
		ring, scale := g.ring(precision, 0)
		return ring.Characteristic(ring.ExpMinusOne(scaledPeriod(period, scale, precision))), scalePeriod(period, scale)
	}, offsetBits+48*g.denominator.Degree())
	if err != nil {
		return poly.Poly{}, err
	}
	return c, nil
}

// offsetBits is how many bits of a root's offset from z = 1 are kept.
const offsetBits = 80

// ring returns the ring modulo x^q·D(2^scale·x), made monic; roots are inside the unit disc.
func (g Function) ring(precision uint, q int) (ring quotient.Ring, scale int) {
	scale = rootExponent(g.denominator)
	c := scaledCoefficients(g.denominator, scale, precision)
	lead := c[len(c)-1]
	modulus := make([]*big.Float, 0, len(c)+q)
	for range q {
		modulus = append(modulus, bigNumber(precision))
	}
	for _, x := range c[:len(c)-1] {
		modulus = append(modulus, bigNumber(precision).Quo(x, lead))
	}
	return quotient.New(precision, modulus), scale
}

// scaledCoefficients returns those of p(2^scale·x), by power.
func scaledCoefficients(p poly.Poly, scale int, precision uint) []*big.Float {
	c := bigCoefficients(p, precision)
	for i, x := range c {
		x.SetMantExp(x, scale*i)
	}
	return c
}

func scaledPeriod(period float64, scale int, precision uint) *big.Float {
	x := bigNumber(precision).SetFloat64(period)
	return x.SetMantExp(x, scale)
}

// scalePeriod returns the exponent of the scaled period, at most 0.
func scalePeriod(period float64, scale int) int {
	_, e := math.Frexp(period)
	return min(e+scale, 0)
}

// sampledNumerator returns the numerator over the monic sampled denominator (times z for a
// first-order hold), and how often z divides it.
func (g Function) sampledNumerator(call string, period float64, fraction *big.Rat, how Method) (poly.Poly, int, error) {
	compute := func(precision uint) ([]*big.Float, int) {
		return g.heldSampler(period, fraction, how, precision).numerator(g.numerator)
	}
	p, err := agree(call, compute, offsetBits+48*g.denominator.Degree())
	if err != nil {
		return poly.Poly{}, 0, err
	}
	c, _ := p.Integers()
	common := 0
	for common < len(c) && c[common].Sign() == 0 {
		common++
	}
	return p, common, nil
}

// heldSampler is what the numerators over one denominator share.
type heldSampler struct {
	ring           quotient.Ring
	w              quotient.Element
	characteristic []*big.Float     // of w, by power
	fraction       quotient.Element // exp(s·m·T) - 1; nil without a fraction of a period
	t              *big.Float       // scaled period
	divisor        *big.Float       // of numerators
	period         float64
	scale          int
	how            Method
	precision      uint
}

func (g Function) heldSampler(period float64, fraction *big.Rat, how Method, precision uint) heldSampler {
	q := 1
	if how != ZeroOrderHold {
		q = 2
	}
	h := heldSampler{period: period, how: how, precision: precision}
	h.ring, h.scale = g.ring(precision, q)
	h.t = scaledPeriod(period, h.scale, precision)
	h.w = h.ring.ExpMinusOne(h.t)
	// The characteristic polynomial of W, with δ^q for the poles of the hold.
	for range q {
		h.characteristic = append(h.characteristic, bigNumber(precision))
	}
	if g.denominator.Degree() > 0 {
		own, _ := g.ring(precision, 0)
		h.characteristic = append(h.characteristic, own.Characteristic(own.Reduce(h.w))...)
	} else {
		h.characteristic = append(h.characteristic, bigNumber(precision).SetInt64(1))
	}
	// N is divided by what made D monic and, for q = 2, by the scaled period.
	d := scaledCoefficients(g.denominator, h.scale, precision)
	h.divisor = bigNumber(precision).Set(d[len(d)-1])
	if q == 2 {
		h.divisor.Mul(h.divisor, h.t)
	}
	if fraction.Sign() != 0 {
		h.fraction = h.ring.ExpMinusOne(bigNumber(precision).Mul(h.t, bigRat(precision, fraction)))
	}
	return h
}

// numerator returns the coefficients of the sampled numerator in δ, by power, and the exponent
// of the period, see agree.
func (h heldSampler) numerator(p poly.Poly) ([]*big.Float, int) {
	n := scaledCoefficients(p, h.scale, h.precision)
	for _, x := range n {
		x.Quo(x, h.divisor)
	}
	if h.how == FirstOrderHold { // times 1 + T·s
		n = append(n, bigNumber(h.precision))
		for i := len(n) - 1; i > 0; i-- {
			n[i].Add(n[i], bigNumber(h.precision).Mul(n[i-1], h.t))
		}
	}
	u := h.ring.Reduce(n)
	if h.fraction != nil {
		u = h.ring.Add(u, h.ring.Mul(u, h.fraction))
	}
	result := make([]*big.Float, h.ring.Degree())
	y := u
	for j := h.ring.Degree() - 1; ; j-- {
		result[j] = h.ring.Lead(y)
		if j == 0 {
			return result, scalePeriod(h.period, h.scale)
		}
		y = h.ring.Add(h.ring.Mul(y, h.w), h.ring.Scale(u, h.characteristic[j]))
	}
}

// agree computes coefficients of a polynomial in δ = z-1, by power, with more and more bits
// until two computations agree, in powers of δ and of z, to the bits wanted. It returns the
// polynomial in z, rounded to about that many. The computation also returns e so that the
// coefficient of δʲ is of the order of 2^(-e·j) times that of 1, at most.
func agree(call string, compute func(precision uint) ([]*big.Float, int), bits int) (poly.Poly, error) {
	precision := uint(bits) + 320
	before, _ := compute(precision)
	for precision < 1<<16 {
		precision += precision / 2
		offsets, e := compute(precision)
		powers, powersBefore := shiftByOne(offsets, false, precision), shiftByOne(before, false, precision)
		last, ok := agreement(offsets, before, e, bits)
		lastPower, okPower := agreement(powers, powersBefore, 0, bits)
		if ok && okPower {
			last = min(last, lastPower) - len(offsets)
			rounded := make([]*big.Float, len(powers))
			for i, x := range powers {
				rounded[i] = roundAt(x, last)
			}
			return polyOf(rounded), nil
		}
		before = offsets
	}
	return poly.Poly{}, &UnsupportedError{Call: call, What: "a function whose roots are so far apart"}
}

// negligible is the ratio, as a power of two, below which a coefficient counts as 0: what a
// float64 beside 1 cannot show either.
const negligible = -1022

// agreement compares two computations of the same coefficients; those that are negligible
// it sets to 0. last is the exponent of the last bit that is wanted of any.
func agreement(list, before []*big.Float, e, bits int) (last int, ok bool) {
	top := math.MinInt
	for j, x := range list {
		if x.Sign() != 0 {
			top = max(top, leadExponent(x)+e*j)
		}
	}
	last = math.MaxInt
	for j, x := range list {
		miss := new(big.Float).Sub(x, before[j])
		small := x.Sign() == 0 || leadExponent(x)+e*j < top+negligible
		switch {
		case small && (miss.Sign() == 0 || leadExponent(miss)+e*j < top+negligible):
			list[j] = new(big.Float).SetPrec(x.Prec())
		case small, miss.Sign() != 0 && leadExponent(miss) > leadExponent(x)-bits:
			return 0, false
		default:
			last = min(last, leadExponent(x)-bits)
		}
	}
	return last, true
}

// offsetRoot is a root 1 + δ in the z plane, one of each pair.
type offsetRoot struct {
	re, im       *big.Float // of δ; im is nil of a real root
	multiplicity int
}

// exponential returns exp(r·period) - 1.
func (r preciseRoot) exponential(call string, period float64) (offsetRoot, error) {
	re, _ := r.re.Float64()
	grown := re * period
	if grown > 709 {
		return offsetRoot{}, &poly.RangeError{Call: call, Reason: "exp(pole·period) is beyond the range of float64"}
	}
	precision := uint(offsetBits + 96)
	if grown < 0 { // 1 + δ cancels: up to where it is 0 anyway
		precision += uint(math.Min(-grown, 800) * 1.5)
	}
	w := r.expMinusOne(period, precision)
	root := offsetRoot{re: w.re, multiplicity: r.multiplicity}
	if !r.isReal() {
		root.im = w.im
	}
	return root.rounded(), nil
}

// expMinusOne returns exp(r·period) - 1, in the ring modulo s - r or, of a pair, (s-r)(s-r̄).
func (r preciseRoot) expMinusOne(period float64, precision uint) bigComplex {
	x := bigNumber(precision).Set(r.re)
	if r.isReal() {
		e := 0
		if x.Sign() != 0 {
			e = leadExponent(x)
		}
		ring := quotient.New(precision, []*big.Float{x.Neg(x).SetMantExp(x, -e)})
		return bigComplex{ring.ExpMinusOne(scaledPeriod(period, e, precision))[0], bigNumber(precision)}
	}
	y := bigNumber(precision).Set(r.im)
	e := bigComplex{x, y}.exponent() + 1
	x.SetMantExp(x, -e)
	y.SetMantExp(y, -e)
	size := bigNumber(precision).Add(bigNumber(precision).Mul(x, x), bigNumber(precision).Mul(y, y))
	ring := quotient.New(precision, []*big.Float{size, bigNumber(precision).Mul(x, bigNumber(precision).SetInt64(-2))})
	w := ring.ExpMinusOne(scaledPeriod(period, e, precision))
	re := bigNumber(precision).Mul(w[1], x)
	return bigComplex{re.Add(re, w[0]), bigNumber(precision).Mul(w[1], y)}
}

// rounded keeps as many bits as are of use: of δ near z = 1, of z elsewhere.
func (r offsetRoot) rounded() offsetRoot {
	unit := big.NewFloat(1)
	z := new(big.Float).SetPrec(r.re.Prec()).Add(r.re, unit)
	round := func(x *big.Float) *big.Float { return new(big.Float).SetPrec(offsetBits).Set(x) }
	tiny := func(x *big.Float) bool { return x == nil || x.Sign() == 0 || leadExponent(x) <= negligible }
	switch {
	case tiny(z) && tiny(r.im):
		return offsetRoot{re: big.NewFloat(-1), multiplicity: r.multiplicity * r.count()}
	case leadExponent(r.re) > -1 && r.re.Sign() != 0: // 1 + rounded z is exact again
		r.re = new(big.Float).SetPrec(2*offsetBits+1100).Sub(round(z), unit)
	default:
		r.re = round(r.re)
	}
	if r.im != nil {
		r.im = round(r.im)
		if r.im.Sign() == 0 { // the pair met on the real axis
			return offsetRoot{re: r.re, multiplicity: 2 * r.multiplicity}
		}
	}
	return r
}

func (r offsetRoot) count() int {
	if r.im == nil {
		return 1
	}
	return 2
}

// factor returns ∏(z - root) over the root, its conjugate and its multiplicity, exactly.
func (r offsetRoot) factor() poly.Poly {
	z := new(big.Float).SetPrec(2*offsetBits+1200).Add(r.re, big.NewFloat(1))
	linear := polyOf([]*big.Float{new(big.Float).Neg(z), big.NewFloat(1)})
	if r.im == nil {
		return linear.Power(r.multiplicity)
	}
	imaginary := polyOf([]*big.Float{r.im})
	return linear.Mul(linear).Add(imaginary.Mul(imaginary)).Power(r.multiplicity)
}
