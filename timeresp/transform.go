package timeresp

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
)

// A factor is the transform of an input in real time: num(s)/(s^zeros·(s² + ω²)), num by
// power, the last factor left out if ω = 0.
type factor struct {
	num   []float64
	zeros int
	omega float64
}

// scaled returns wide coefficients of p in z = s/2^scale, by power, all times 2^-shift.
func scaledCoefficients(p poly.Poly, scale int) []wide {
	n := p.Degree() + 1
	out := make([]wide, n)
	var buffer [24]float64
	near := buffer[:0]
	for i := n - 1; i >= 0; i-- {
		c := p.Coefficient(i)
		near = append(near, c)
		out[i].hi = math.Ldexp(c, scale*i)
	}
	if poly.New(near...).Equal(p) { // no coefficient is rounded
		return out
	}
	integers, exponent := p.Integers()
	for i, n := range integers {
		out[i] = wideFromInteger(n, exponent+scale*i)
	}
	return out
}

// wideFromInteger returns n·2^exponent to 106 bits.
func wideFromInteger(n *big.Int, exponent int) wide {
	if n.Sign() == 0 {
		return wide{}
	}
	var f, rest big.Float
	f.SetPrec(uint(max(n.BitLen(), 64))).SetInt(n)
	f.SetMantExp(&f, exponent)
	hi, _ := f.Float64()
	if math.IsInf(hi, 0) {
		return wide{hi, 0}
	}
	rest.SetPrec(f.Prec()).SetFloat64(hi)
	rest.Sub(&f, &rest)
	lo, _ := rest.Float64()
	return wide{hi, lo}
}

// newTransform returns the transform of (numerator/denominator) driven by the factor, and
// the constant part of the quotient where the product is biproper: the weight of a Dirac
// impulse.
func newTransform(call string, numerator, denominator poly.Poly, roots []poly.Root, in factor, fastest float64) (f *transform, dirac float64, err error) {
	largest := fastest
	for i := range roots {
		s := roots[i].Value
		largest = max(largest, math.Hypot(real(s), imag(s)))
	}
	f = &transform{numerator: numerator, denominator: denominator, in: in}
	if largest > 0 {
		_, f.scale = math.Frexp(largest)
	}
	w := math.Ldexp(1, f.scale)

	// Both are divided by the leading coefficient of the denominator; the power of w common
	// to its coefficients leaves with it.
	f.den = scaledCoefficients(denominator, f.scale)
	f.num = scaledCoefficients(numerator, f.scale)
	lead := f.den[len(f.den)-1]
	if lead.hi == 0 || math.IsInf(lead.hi, 0) {
		return nil, 0, &poly.RangeError{Call: call, Reason: "the coefficients of the denominator, with time in units of the fastest mode, leave the range of float64"}
	}
	inverse := wide{1, 0}.div(lead)
	for i := range f.den {
		f.den[i] = f.den[i].mul(inverse)
	}
	f.den[len(f.den)-1] = wide{1, 0}
	for i := range f.num {
		f.num[i] = f.num[i].mul(inverse)
	}
	for i := range f.num {
		if math.IsNaN(f.num[i].hi - f.num[i].hi) {
			return nil, 0, &poly.RangeError{Call: call, Reason: "the coefficients of the numerator, with time in units of the fastest mode, leave the range of float64"}
		}
	}

	f.poles = make([]pole, 0, len(roots)+2)
	for i := range roots {
		r := &roots[i]
		if imag(r.Value) < 0 {
			continue
		}
		// Poles closer than float64 can part (Distinct > 1) count as one multiple pole at their
		// mean: an error of the order (distance·τ)².
		p := pole{multiplicity: r.Multiplicity}
		p.at.re.hi = math.Ldexp(real(r.Value), -f.scale)
		p.at.im.hi = math.Ldexp(imag(r.Value), -f.scale)
		if r.Radius == 0 {
			p.exact = p.at
		} else {
			p.exact.re.hi = math.NaN()
		}
		f.poles = append(f.poles, p)
	}
	for i, j := 0, 0; i < len(roots); i++ {
		if imag(roots[i].Value) < 0 {
			continue
		}
		if roots[i].Radius > 0 {
			f.refine(j)
		}
		j++
	}

	f.apply(in)
	if len(f.num) == len(f.den) {
		// f.num = dirac·f.den + the rest
		top := f.num[len(f.num)-1]
		f.num = f.num[:len(f.num)-1]
		for i := range f.num {
			f.num[i] = f.num[i].sub(top.mul(f.den[i]))
		}
		dirac = top.float() / w
	}
	for len(f.num) > 0 && f.num[len(f.num)-1].hi == 0 {
		f.num = f.num[:len(f.num)-1]
	}
	return f, dirac, nil
}

// exponents returns e with num(s)/(s^zeros·(s²+ω²)) = Σ num[k]·2^e[k]·z^k/(z^zeros·(z²+ω²/w²)),
// times the w that the change to scaled time brings.
func (in *factor) exponent(k, scale int) int {
	e := (k + 1 - in.zeros) * scale
	if in.omega != 0 {
		e -= 2 * scale
	}
	return e
}

// apply multiplies the transform by that of the input.
func (f *transform) apply(in factor) {
	old := f.num
	f.num = make([]wide, max(0, len(old)+len(in.num)-1))
	for k, c := range in.num {
		if c == 0 {
			continue
		}
		c = math.Ldexp(c, in.exponent(k, f.scale))
		for i := range old {
			f.num[i+k] = f.num[i+k].add(old[i].mulFloat(c))
		}
	}
	if in.zeros > 0 {
		f.den = append(make([]wide, in.zeros, in.zeros+len(f.den)+2), f.den...)
		f.addPole(pole{multiplicity: in.zeros})
	}
	if in.omega != 0 {
		o := math.Ldexp(in.omega, -f.scale)
		square := wide{o, 0}.mulFloat(o)
		f.den = append(f.den, wide{}, wide{})
		for i := len(f.den) - 1; i >= 0; i-- {
			c := f.den[i].mul(square)
			if i >= 2 {
				c = c.add(f.den[i-2])
			}
			f.den[i] = c
		}
		p := pole{multiplicity: 1}
		p.at.im.hi = o
		p.exact = p.at
		f.addPole(p)
	}
}

// addPole adds a pole that is known exactly.
func (f *transform) addPole(p pole) {
	for i := range f.poles {
		if f.poles[i].at == p.at {
			f.poles[i].multiplicity += p.multiplicity
			return
		}
	}
	f.poles = append(f.poles, p)
}

// refine improves pole j, known to about 2⁻⁵⁰, by Newton's method on the derivative of den
// of which it is a simple root: one step of a value in wide arithmetic over a slope in
// float64, and more as long as they are not small.
func (f *transform) refine(j int) {
	p := &f.poles[j]
	den := f.den
	if m := p.multiplicity; m > 1 {
		den = append([]wide(nil), den...)
		for ; m > 1; m-- {
			for i := 1; i < len(den); i++ {
				den[i-1] = den[i].mulFloat(float64(i))
			}
			den = den[:len(den)-1]
		}
	}
	for range 4 {
		at := p.at.complex()
		var slope complex128
		for i := len(den) - 1; i > 0; i-- {
			slope = slope*at + complex(float64(i)*den[i].hi, 0)
		}
		if slope == 0 {
			return
		}
		var y wideComplex
		if p.at.im.hi == 0 {
			for i := len(den) - 1; i >= 0; i-- {
				y.re = y.re.mul(p.at.re).add(den[i])
			}
		} else {
			for i := len(den) - 1; i >= 0; i-- {
				y = y.mul(p.at)
				y.re = y.re.add(den[i])
			}
		}
		step := y.complex() / slope
		p.at.re = p.at.re.addFloat(-real(step))
		p.at.im = p.at.im.addFloat(-imag(step))
		if abs(step) <= 0x1p-49*p.at.abs() {
			return
		}
	}
}

// cancel takes out of a function what its numerator and denominator have in common: hidden
// modes have no share in the response, whether they die away or not. Only what is proven in
// exact arithmetic to agree is taken out.
func cancel(numerator, denominator poly.Poly, roots []poly.Root) (poly.Poly, poly.Poly, []poly.Root, error) {
	suspect := false
	for i := range roots {
		s := roots[i].Value
		if imag(s) < 0 {
			continue
		}
		var y complex128
		size, r := 0.0, abs(s)
		for k := numerator.Degree(); k >= 0; k-- {
			c := numerator.Coefficient(k)
			y = y*s + complex(c, 0)
			size = size*r + math.Abs(c)
		}
		if !(abs(y) > 1e-10*size) {
			suspect = true
			break
		}
	}
	if !suspect || numerator.Degree() < 0 {
		return numerator, denominator, roots, nil
	}
	common, err := numerator.CommonFactor(denominator, 0)
	if err != nil || common.Degree() < 1 {
		return numerator, denominator, roots, err
	}
	// Pseudo-division stays with integers: m·p = common·quotient.
	n, m := without(numerator, common)
	d, l := without(denominator, common)
	n, d = scaleBy(n, l), scaleBy(d, m)
	roots, err = d.Roots()
	return n, d, roots, err
}

// without returns quotient and multiplier with multiplier·p = factor·quotient.
func without(p, factor poly.Poly) (quotient poly.Poly, multiplier *big.Int) {
	q, _, multiplier := exact.New(p.Integers()).PseudoDivide(exact.New(factor.Integers()))
	return poly.FromIntegers(q.Integers()), multiplier
}

func scaleBy(p poly.Poly, factor *big.Int) poly.Poly {
	return p.Mul(poly.FromIntegers([]*big.Int{factor}, 0))
}
