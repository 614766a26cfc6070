package exact

import (
	"math"
	"math/big"
)

// A Dyadic is the number m·2^e, or an infinity. The zero value is 0.
type Dyadic struct {
	m   *big.Int // nil means 0
	e   int
	inf int8 // +1 and -1 for the infinities, and then m is nil
}

// Float returns x exactly. It panics if x is not a number; infinities are kept.
func Float(x float64) Dyadic {
	switch {
	case math.IsNaN(x):
		panic("exact: Float of NaN")
	case math.IsInf(x, 0):
		return Dyadic{inf: int8(sign(x))}
	case x == 0:
		return Dyadic{}
	}
	m, e := split(x)
	return Dyadic{m: big.NewInt(m), e: e}
}

// Int returns m·2^e. It keeps m.
func Int(m *big.Int, e int) Dyadic {
	if m.Sign() == 0 {
		return Dyadic{}
	}
	return Dyadic{m: m, e: e}
}

// PowerOfTwo returns 2^e.
func PowerOfTwo(e int) Dyadic { return Dyadic{m: big.NewInt(1), e: e} }

// split returns x = m·2^e with an odd m, for a finite x other than 0.
func split(x float64) (m int64, e int) {
	f, e := math.Frexp(x)
	m = int64(f * (1 << 53))
	e -= 53
	for m&1 == 0 {
		m >>= 1
		e++
	}
	return m, e
}

func sign(x float64) int {
	switch {
	case x > 0:
		return 1
	case x < 0:
		return -1
	}
	return 0
}

// Inf returns +1 or -1 if x is an infinity, otherwise 0.
func (x Dyadic) Inf() int { return int(x.inf) }

// Sign returns -1, 0 or +1.
func (x Dyadic) Sign() int {
	if x.inf != 0 {
		return int(x.inf)
	}
	if x.m == nil {
		return 0
	}
	return x.m.Sign()
}

// Neg returns -x.
func (x Dyadic) Neg() Dyadic {
	x.inf = -x.inf
	if x.m != nil {
		x.m = new(big.Int).Neg(x.m)
	}
	return x
}

// Add returns x + y for finite x and y.
func (x Dyadic) Add(y Dyadic) Dyadic {
	if x.Sign() == 0 {
		return y
	}
	if y.Sign() == 0 {
		return x
	}
	a, b, e := align(x, y)
	return Int(new(big.Int).Add(a, b), e)
}

// Sub returns x - y for finite x and y.
func (x Dyadic) Sub(y Dyadic) Dyadic { return x.Add(y.Neg()) }

// Mul returns x·y for finite x and y.
func (x Dyadic) Mul(y Dyadic) Dyadic {
	if x.Sign() == 0 || y.Sign() == 0 {
		return Dyadic{}
	}
	return Dyadic{m: new(big.Int).Mul(x.m, y.m), e: x.e + y.e}
}

// Half returns x/2 for a finite x.
func (x Dyadic) Half() Dyadic {
	x.e--
	return x
}

// Cmp returns the sign of x - y, infinities included.
func (x Dyadic) Cmp(y Dyadic) int {
	if x.inf != 0 || y.inf != 0 {
		return sign(float64(x.inf) - float64(y.inf))
	}
	if s, t := x.Sign(), y.Sign(); s != t {
		return sign(float64(s - t))
	} else if s == 0 {
		return 0
	} else if a, b := x.magnitude(), y.magnitude(); a != b {
		return s * sign(float64(a-b))
	}
	a, b, _ := align(x, y)
	return a.Cmp(b)
}

// magnitude returns k such that 2^(k-1) ≤ |x| < 2^k, for a finite x other than 0.
func (x Dyadic) magnitude() int { return x.m.BitLen() + x.e }

// align returns integers a, b and an exponent e with x = a·2^e and y = b·2^e.
func align(x, y Dyadic) (a, b *big.Int, e int) {
	a, b, e = x.mantissa(), y.mantissa(), min(x.e, y.e)
	switch {
	case x.m == nil:
		e = y.e
	case y.m == nil:
		e = x.e
	case x.e > e:
		a = new(big.Int).Lsh(a, uint(x.e-e))
	case y.e > e:
		b = new(big.Int).Lsh(b, uint(y.e-e))
	}
	return a, b, e
}

func (x Dyadic) mantissa() *big.Int {
	if x.m == nil {
		return new(big.Int)
	}
	return x.m
}

// Float64 returns the float64 nearest to x, ties to even; ±Inf beyond the range.
func (x Dyadic) Float64() float64 {
	if x.inf != 0 {
		return math.Inf(int(x.inf))
	}
	if x.m == nil {
		return 0
	}
	f := new(big.Float).SetInt(x.m)
	f.SetMantExp(f, x.e)
	v, _ := f.Float64()
	return v
}

// Rat returns a finite x as a fraction.
func (x Dyadic) Rat() *big.Rat {
	r := new(big.Rat).SetInt(x.mantissa())
	two := new(big.Rat).SetInt(new(big.Int).Lsh(big.NewInt(1), uint(max(x.e, -x.e))))
	if x.e < 0 {
		return r.Quo(r, two)
	}
	return r.Mul(r, two)
}

// Midpoint returns (x + y)/2 for finite x and y.
func Midpoint(x, y Dyadic) Dyadic {
	m := x.Add(y)
	if m.m != nil {
		m.e--
	}
	return m
}
