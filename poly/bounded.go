package poly

import "math"

// bounded is a float64 with a bound on its error: the number meant lies in [v - e, v + e]. An e
// that is NaN or infinite claims nothing.
type bounded struct{ v, e float64 }

// grow pays for the roundings in the computation of a bound, of which each operation has fewer
// than ten; tiny pays for what underflows there and in the value.
const (
	grow = 1 + 0x1p-49
	tiny = 4 * math.SmallestNonzeroFloat64
)

// settled wraps a value computed by one operation in float64, which rounded by at most half a
// place; inherited bounds the error that it has from its operands.
func settled(v, inherited float64) bounded {
	return bounded{v, grow*(inherited+unitRoundoff*math.Abs(v)) + tiny}
}

func (a bounded) add(b bounded) bounded { return settled(a.v+b.v, a.e+b.e) }

func (a bounded) sub(b bounded) bounded { return settled(a.v-b.v, a.e+b.e) }

// mul keeps the product apart from whatever is added later, so that no processor fuses them.
func (a bounded) mul(b bounded) bounded {
	return settled(float64(a.v*b.v), math.Abs(a.v)*b.e+math.Abs(b.v)*a.e+a.e*b.e)
}

// div claims nothing if b may be zero.
func (a bounded) div(b bounded) bounded {
	// |A/B - a/b| ≤ (ea + |a/b|·eb)/(|b| - eb)
	q := a.v / b.v
	least := math.Abs(b.v) - b.e
	if !(least > 0) {
		return bounded{0, math.Inf(1)}
	}
	return settled(q, (a.e+grow*math.Abs(q)*b.e+tiny)/(least*(1-0x1p-50)))
}

// scaled multiplies by a power of two.
func (a bounded) scaled(x float64) bounded { return bounded{a.v * x, a.e*x + tiny} }

// sign returns the sign of the number meant, 0 if it is not certain.
func (a bounded) sign() int {
	switch {
	case a.v > a.e:
		return +1
	case -a.v > a.e:
		return -1
	}
	return 0
}

// boundedCoefficients returns the coefficients of p(2^k·s)·2^j by power, with k and j such that
// the first and the last are about equal and none is large. It is not ok where the exact ones
// are beyond float64.
func (p Poly) boundedCoefficients(c []bounded) (k int, ok bool) {
	n := len(p.c) - 1
	// The slope of the Newton polygon from end to end.
	low := 0
	for p.c[low] == 0 {
		if low++; low > n {
			return 0, false
		}
	}
	if p.c[n] == 0 || math.IsInf(p.c[n], 0) || math.IsInf(p.c[low], 0) {
		return 0, false
	}
	first, last := math.Ilogb(p.c[low]), math.Ilogb(p.c[n])
	if n > low {
		k = (first - last) / (n - low)
	}
	top := math.MinInt32
	for i, x := range p.c {
		if math.IsInf(x, 0) {
			return 0, false
		}
		if x != 0 {
			top = max(top, math.Ilogb(x)+k*i)
		}
	}
	for i, x := range p.c {
		v := math.Ldexp(x, k*i-top)
		c[i] = bounded{v, 0}
		if p.exact != nil && p.exact.integers[i].Sign() != 0 {
			// Rounded to nearest, perhaps to zero.
			c[i].e = math.Ldexp(math.SmallestNonzeroFloat64, k*i-top) + grow*unitRoundoff*math.Abs(v) + tiny
		} else if math.Abs(v) < minNormal && x != 0 {
			c[i].e = tiny
		}
	}
	return k, true
}
