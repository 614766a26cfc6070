package hybrid

import (
	"errors"
	"math"
)

// A Block is a transfer function: numerator and denominator by falling powers, and dead
// time in seconds.
type Block struct {
	Numerator, Denominator []float64
	DeadTime               float64
}

// Wire is the block that changes nothing.
var Wire = Block{Numerator: []float64{1}, Denominator: []float64{1}}

// A realisation is a block as states x with x′ = rate·(companion·x + e₁·in): the
// controllable canonical form in time stretched by rate, which keeps its entries near one.
type realisation struct {
	rate   float64
	a      []float64 // first row of the companion matrix, negated denominator
	c      []float64
	direct float64
	// The part of a controller at s = 0, kept apart so that windup can be undone:
	// z[0] adds to the output, z[i]′ = z[i+1] + integral[i]·in.
	integral []float64
}

// Errors of blocks.
var (
	ErrImproper    = errors.New("the numerator has a higher degree than the denominator, so its output holds derivatives of the input")
	ErrDenominator = errors.New("the denominator is zero")
	ErrNotFinite   = errors.New("a coefficient is not finite")
)

func trim(c []float64) []float64 {
	for len(c) > 0 && c[0] == 0 {
		c = c[1:]
	}
	return c
}

// realise brings a proper block into canonical form; apart splits off its integrators.
func realise(b Block, apart bool) (realisation, error) {
	num, den := trim(b.Numerator), trim(b.Denominator)
	for _, list := range [][]float64{num, den} {
		for _, x := range list {
			if math.IsNaN(x) || math.IsInf(x, 0) {
				return realisation{}, ErrNotFinite
			}
		}
	}
	if len(den) == 0 {
		return realisation{}, ErrDenominator
	}
	if len(num) > len(den) {
		return realisation{}, ErrImproper
	}
	// Common powers of s cancel nothing that can be seen from outside, and would count as
	// integrators.
	for len(num) > 1 && len(den) > 1 && num[len(num)-1] == 0 && den[len(den)-1] == 0 {
		num, den = num[:len(num)-1], den[:len(den)-1]
	}
	var integral []float64
	if apart {
		integral, num, den = splitIntegrators(num, den)
	}
	n := len(den) - 1
	r := realisation{integral: integral, rate: 1}
	full := make([]float64, n+1)
	for i := range num {
		full[n+1-len(num)+i] = num[i] / den[0]
	}
	r.direct = full[0]
	if n == 0 {
		return r, nil
	}
	// The largest |aᵢ|^(1/i) bounds the poles within a factor 2 (Fujiwara) and makes every
	// entry of the scaled companion matrix at most 1.
	rate := 0.0
	for i := 1; i <= n; i++ {
		rate = math.Max(rate, math.Pow(math.Abs(den[i]/den[0]), 1/float64(i)))
	}
	if rate == 0 {
		rate = 1
	}
	// A power of two scales without rounding.
	_, e := math.Frexp(rate)
	r.rate = math.Ldexp(1, e)
	r.a, r.c = make([]float64, n), make([]float64, n)
	scale := 1.0
	for i := 1; i <= n; i++ {
		scale /= r.rate
		a := den[i] / den[0]
		r.a[i-1] = -a * scale
		r.c[i-1] = (full[i] - r.direct*a) * scale
	}
	return r, nil
}

// splitIntegrators writes num/den = Σ integral[i]/s^(i+1) + rest.
func splitIntegrators(num, den []float64) (integral, restNum, restDen []float64) {
	m := 0
	for m < len(den)-1 && den[len(den)-1-m] == 0 {
		m++
	}
	if m == 0 {
		return nil, num, den
	}
	d := den[:len(den)-m]
	nd, nn := len(d)-1, len(num)-1
	dp := func(i int) float64 { // coefficient of sⁱ
		if i > nd {
			return 0
		}
		return d[nd-i]
	}
	// Power series of num/d at 0 up to s^(m-1).
	series := make([]float64, m)
	for i := range series {
		v := 0.0
		if i <= nn {
			v = num[nn-i]
		}
		for j := 1; j <= i; j++ {
			v -= dp(j) * series[i-j]
		}
		series[i] = v / dp(0)
	}
	integral = make([]float64, m)
	for i, g := range series {
		integral[m-1-i] = g
	}
	// rest = (num - d·Σ seriesᵢ sⁱ)/s^m over d.
	rest := make([]float64, max(nn-m, nd-1)+1)
	for i := range rest {
		v := 0.0
		if i+m <= nn {
			v = num[nn-i-m]
		}
		for j := 0; j < m; j++ {
			v -= dp(i+m-j) * series[j]
		}
		rest[len(rest)-1-i] = v
	}
	return integral, trim(rest), d
}

// states counts the states of the realisation.
func (r *realisation) states() int { return len(r.a) + len(r.integral) }

// output returns the output for state x and input in.
func (r *realisation) output(x []float64, in float64) float64 {
	v := r.direct * in
	for i, c := range r.c {
		v += c * x[i]
	}
	if len(r.integral) > 0 {
		v += x[len(r.a)]
	}
	return v
}

// slope writes the derivative of state x for input in; track is added to the first integrator.
func (r *realisation) slope(x []float64, in, track float64, dx []float64) {
	n := len(r.a)
	if n > 0 {
		v := in
		for i, a := range r.a {
			v += a * x[i]
		}
		dx[0] = r.rate * v
		for i := 1; i < n; i++ {
			dx[i] = r.rate * x[i-1]
		}
	}
	for i, g := range r.integral {
		v := g * in
		if i+1 < len(r.integral) {
			v += x[n+i+1]
		}
		if i == 0 {
			v += track
		}
		dx[n+i] = v
	}
}
