package exact

import (
	"math"
	"math/big"
	"math/bits"
)

// bounded is a float64 with a bound on its error: the number meant lies in [v - e, v + e]. An e
// that is NaN or infinite claims nothing.
type bounded struct{ v, e float64 }

const (
	unitRoundoff = 0x1p-53   // half the distance from 1 to the next float64
	minNormal    = 0x1p-1022 // the smallest normal float64
)

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

// sqrt claims nothing if a may be below zero.
func (a bounded) sqrt() bounded {
	if !(a.v > a.e) {
		return bounded{0, math.Inf(1)}
	}
	v := math.Sqrt(a.v)
	return settled(v, grow*a.e/v) // √ falls off by less than e/√a from a to a - e
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

// boundedOf returns x as a bounded, for a finite x within the range of float64.
func boundedOf(x Dyadic) bounded {
	v := x.Float64()
	if Float(v).Cmp(x) == 0 {
		return bounded{v, 0}
	}
	return bounded{v, grow*unitRoundoff*math.Abs(v) + tiny}
}

// times2 returns x·2^k, and a bound for what underflows.
func (a bounded) times2(k int) bounded {
	v := math.Ldexp(a.v, k)
	e := math.Ldexp(a.e, k)
	if math.Abs(v) < minNormal && a.v != 0 || a.e != 0 {
		e = grow*e + tiny
	}
	return bounded{v, e}
}

// filterDegree is the highest degree for which stages in float64 are tried.
const filterDegree = 60

// A filtered polynomial is p(2^k·s) times some power of two, its coefficients in float64: the
// first and the last about equal, none large. The signs of its coefficients are those of p.
type filtered struct {
	c    []bounded // by power
	k    int
	room [filterDegree + 1]bounded
}

// fromFloats takes coefficients by power; rounded tells that each may be wrong by half a place. It
// is not ok where one is infinite, the last is zero, or the degree too high.
func (f *filtered) fromFloats(c []float64, rounded bool) bool {
	if len(c) < 2 || len(c) > len(f.room) {
		return false
	}
	var exponents [filterDegree + 1]int
	f.c = f.room[:len(c)]
	for i, x := range c {
		if math.IsInf(x, 0) || math.IsNaN(x) || x == 0 && i == len(c)-1 {
			return false
		}
		m, e := math.Frexp(x)
		f.c[i], exponents[i] = bounded{m, 0}, e
		if rounded && math.Abs(x) < minNormal {
			return false
		}
		if rounded {
			f.c[i].e = unitRoundoff
		}
	}
	f.balance(exponents[:len(c)])
	return true
}

// fromPoly takes an exact polynomial, without the limits of float64's range.
func (f *filtered) fromPoly(p Poly) bool {
	if len(p.c) < 2 || len(p.c) > len(f.room) {
		return false
	}
	var exponents [filterDegree + 1]int
	f.c = f.room[:len(p.c)]
	for i, x := range p.c {
		f.c[i], exponents[i] = leading(x)
	}
	f.balance(exponents[:len(p.c)])
	return true
}

// leading returns x = m·2^e with 1/2 ≤ |m| ≤ 1, or 0.
func leading(x *big.Int) (m bounded, e int) {
	words := x.Bits()
	n := len(words)
	if n == 0 {
		return bounded{}, 0
	}
	// The highest 64 bits; the others are worth less than one of their last.
	var top uint64
	lost := false
	e = x.BitLen()
	if bits.UintSize == 64 {
		shift := uint(bits.LeadingZeros64(uint64(words[n-1])))
		top = uint64(words[n-1]) << shift
		if n > 1 {
			top |= uint64(words[n-2]) >> (64 - shift)
			lost = true
		}
	} else {
		t := new(big.Int).Abs(x)
		if e > 64 {
			t.Rsh(t, uint(e-64))
			lost = true
		} else {
			t.Lsh(t, uint(64-e))
		}
		top = t.Uint64()
	}
	v := float64(top) // to nearest, so that the error is at most 2⁻⁵³ after scaling
	m = bounded{v * 0x1p-64, 0}
	if lost || top&(1<<11-1) != 0 {
		m.e = 0x1p-53 + 0x1p-63
	}
	if x.Sign() < 0 {
		m.v = -m.v
	}
	return m, e
}

// balance scales the coefficients c[i]·2^exponents[i].
func (f *filtered) balance(exponents []int) {
	n := len(f.c) - 1
	low := 0
	for f.c[low].v == 0 {
		low++
	}
	f.k = 0
	if n > low {
		f.k = (exponents[low] - exponents[n]) / (n - low)
	}
	top := math.MinInt
	for i := range f.c {
		if f.c[i].v != 0 {
			top = max(top, exponents[i]+f.k*i)
		}
	}
	for i := range f.c {
		if f.c[i].v != 0 {
			f.c[i] = f.c[i].times2(exponents[i] + f.k*i - top)
		}
	}
}

// stripZeros divides by the highest power of s that divides, and returns it.
func (f *filtered) stripZeros() int {
	n := 0
	for f.c[n] == (bounded{}) {
		n++
	}
	f.c = f.c[n:]
	return n
}
