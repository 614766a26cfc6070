package timeresp

import "math"

// wide is the unevaluated sum hi + lo of two float64s, |lo| ≤ ulp(hi)/2: about 106 bits.
// Sums and products follow T. J. Dekker, A floating-point technique for extending the
// available precision, Numer. Math. 18 (1971) 224–242, with the sloppy sum replaced by the
// accurate one; each has a relative error below 2⁻¹⁰².
type wide struct{ hi, lo float64 }

func twoSum(a, b float64) (s, e float64) {
	s = a + b
	t := s - a
	return s, (a - (s - t)) + (b - t)
}

// quickSum needs |a| ≥ |b| or a = 0.
func quickSum(a, b float64) wide {
	s := a + b
	return wide{s, b - (s - a)}
}

func (a wide) add(b wide) wide {
	s, e := twoSum(a.hi, b.hi)
	t, f := twoSum(a.lo, b.lo)
	r := quickSum(s, e+t)
	return quickSum(r.hi, r.lo+f)
}

func (a wide) addFloat(b float64) wide {
	s, e := twoSum(a.hi, b)
	return quickSum(s, e+a.lo)
}

func (a wide) neg() wide { return wide{-a.hi, -a.lo} }

func (a wide) sub(b wide) wide { return a.add(b.neg()) }

func (a wide) mul(b wide) wide {
	p := a.hi * b.hi
	e := math.FMA(a.hi, b.hi, -p)
	e = math.FMA(a.hi, b.lo, e)
	e = math.FMA(a.lo, b.hi, e)
	return quickSum(p, e)
}

func (a wide) mulFloat(b float64) wide {
	p := a.hi * b
	e := math.FMA(a.hi, b, -p)
	return quickSum(p, math.FMA(a.lo, b, e))
}

func (a wide) div(b wide) wide {
	q := a.hi / b.hi
	r := a.sub(b.mulFloat(q))
	q2 := r.hi / b.hi
	r = r.sub(b.mulFloat(q2))
	return quickSum(q, q2).addFloat(r.hi / b.hi)
}

// dotWide returns Σ a[i]·b[i], the roundings gathered apart and added at the end
// (compensated dot product: T. Ogita, S. M. Rump and S. Oishi, Accurate sum and dot product,
// SIAM J. Sci. Comput. 26 (2005) 1955–1988, Algorithm 5.3), with an error of some 2⁻¹⁰⁰·Σ|a·b|.
func dotWide(a, b []wide) wide {
	b = b[:len(a)]
	// Two sums side by side, so that one need not wait for the other.
	var sum, rest, sum2, rest2 float64
	i := 0
	for ; i+2 <= len(a); i += 2 {
		x, y := &a[i], &b[i]
		p := x.hi * y.hi
		e := math.FMA(x.hi, y.lo, math.FMA(x.lo, y.hi, math.FMA(x.hi, y.hi, -p)))
		s := sum + p
		t := s - sum
		rest += e + ((sum - (s - t)) + (p - t))
		sum = s
		x, y = &a[i+1], &b[i+1]
		p = x.hi * y.hi
		e = math.FMA(x.hi, y.lo, math.FMA(x.lo, y.hi, math.FMA(x.hi, y.hi, -p)))
		s = sum2 + p
		t = s - sum2
		rest2 += e + ((sum2 - (s - t)) + (p - t))
		sum2 = s
	}
	if i < len(a) {
		p := a[i].hi * b[i].hi
		e := math.FMA(a[i].hi, b[i].lo, math.FMA(a[i].lo, b[i].hi, math.FMA(a[i].hi, b[i].hi, -p)))
		var lost float64
		sum, lost = twoSum(sum, p)
		rest += e + lost
	}
	s, lost := twoSum(sum, sum2)
	return quickSum(s, rest+rest2+lost)
}

func (a wide) float() float64 { return a.hi + a.lo }

// wideComplex is a complex number of two wide parts.
type wideComplex struct{ re, im wide }

func (a wideComplex) add(b wideComplex) wideComplex {
	return wideComplex{a.re.add(b.re), a.im.add(b.im)}
}

func (a wideComplex) sub(b wideComplex) wideComplex {
	return wideComplex{a.re.sub(b.re), a.im.sub(b.im)}
}

func (a wideComplex) mul(b wideComplex) wideComplex {
	return wideComplex{a.re.mul(b.re).sub(a.im.mul(b.im)), a.re.mul(b.im).add(a.im.mul(b.re))}
}

func (a wideComplex) div(b wideComplex) wideComplex {
	if b.im == (wide{}) {
		return wideComplex{a.re.div(b.re), a.im.div(b.re)}
	}
	d := b.re.mul(b.re).add(b.im.mul(b.im))
	n := a.mul(wideComplex{b.re, b.im.neg()})
	return wideComplex{n.re.div(d), n.im.div(d)}
}

func (a wideComplex) complex() complex128 { return complex(a.re.float(), a.im.float()) }

func (a wideComplex) abs() float64 { return math.Hypot(a.re.hi, a.im.hi) }
