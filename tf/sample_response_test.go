package tf

import (
	"math"
	"math/big"
	"math/cmplx"
	"math/rand"
	"testing"
)

// timeResponse evaluates the inverse transform of partial fractions at t: a way that has
// nothing in common with the ring in which functions are sampled. At t = 0 it is the limit
// from above; before, it is 0. size adds up the magnitudes of the terms: what they cancel is lost.
func timeResponse(f PartialFractions, t float64) (value, size float64) {
	if t < 0 {
		return 0, 0
	}
	var y complex128
	for _, term := range f.Terms {
		v := term.Residue * cmplx.Exp(term.Pole*complex(t, 0))
		for k := 1; k < term.Power; k++ {
			v *= complex(t/float64(k), 0)
		}
		y += v
		size += cmplx.Abs(v)
	}
	return real(y), size
}

// Behind a zero-order hold a step, in the ramp-invariant function a ramp, and behind an
// extrapolating hold a ramp once it has seen two samples, are answered at the samples as in
// continuous time, whatever the dead time.
func TestSampledResponses(t *testing.T) {
	r := rand.New(rand.NewSource(7))
	step, ramp := MustParse("1 / s"), MustParse("1 / s^2")
	for i := range 25 {
		var poles, zeros []complex128
		for n := 1 + r.Intn(4); n > 0; n-- {
			switch r.Intn(4) {
			case 0:
				p := complex(-r.Float64(), 1+3*r.Float64())
				poles = append(poles, p, cmplx.Conj(p))
			case 1:
				poles = append(poles, 0)
			case 2:
				p := complex(-3*r.Float64(), 0)
				poles = append(poles, p, p)
			default:
				poles = append(poles, complex(2*r.Float64()-2.5, 0))
			}
		}
		for n := r.Intn(len(poles) + 1); n > 0; n-- {
			zeros = append(zeros, complex(2*r.NormFloat64(), 0))
		}
		g, err := FromRoots(r.NormFloat64(), zeros, poles)
		if err != nil {
			t.Fatal(err)
		}
		period, dead := 0.05+0.5*r.Float64(), 0.0
		if r.Intn(3) > 0 {
			dead = 2 * r.Float64()
		}
		delayed, err := g.WithDeadTime(dead)
		if err != nil {
			t.Fatal(err)
		}
		answer := func(input Function) PartialFractions {
			h, err := g.Series(input)
			if err != nil {
				t.Fatal(err)
			}
			f, err := h.PartialFractions()
			if err != nil {
				t.Fatal(err)
			}
			return f
		}
		toStep, toRamp := answer(step), answer(ramp)
		const n = 25
		for _, tt := range []struct {
			how  Method
			want func(time float64) (value, size float64)
			in   func(k int) float64
		}{
			{ZeroOrderHold, func(time float64) (float64, float64) { return timeResponse(toStep, time-dead) }, func(int) float64 { return 1 }},
			{RampInvariant, func(time float64) (float64, float64) { return timeResponse(toRamp, time-dead) }, func(k int) float64 { return float64(k) * period }},
			{FirstOrderHold, func(time float64) (float64, float64) {
				r, sizeR := timeResponse(toRamp, time-dead-period)
				s, sizeS := timeResponse(toStep, time-dead-period)
				return r + period*s, sizeR + period*sizeS
			}, func(k int) float64 { return float64(k) * period }},
		} {
			h, err := delayed.Sample(period, tt.how)
			if err != nil {
				t.Fatalf("%v: %v", delayed, err)
			}
			got := difference(h, tt.in, n)
			scale := 0.0
			for k := range n {
				// Exactly at a jump the two may differ in which side a rounded time is on.
				if time := float64(k)*period - dead; len(zeros) == len(poles) && math.Abs(math.Remainder(time, period)) < 1e-9 && math.Abs(time) < 2*period && dead > 0 {
					continue
				}
				want, size := tt.want(float64(k) * period)
				scale = max(scale, math.Abs(want))
				if math.Abs(got[k]-want) > 1e-13*scale+1e-14*size {
					t.Errorf("case %d, %v, period %v, %v: sample %d = %v, want %v", i, delayed, period, tt.how, k, got[k], want)
					break
				}
			}
		}
	}
}

// difference runs the difference equation of a function of z with its exact coefficients: with
// rounded ones six poles near z = 1 would lose eleven digits.
func difference(g Function, in func(k int) float64, n int) []float64 {
	const precision = 400
	a, b := bigCoefficients(g.Denominator(), precision), bigCoefficients(g.Numerator(), precision)
	order := len(a) - 1
	y, results := make([]*big.Float, n), make([]float64, n)
	t := bigNumber(precision)
	for k := range y {
		sum := bigNumber(precision)
		for i := 0; i <= order && i <= k; i++ {
			if j := order - i; j < len(b) {
				sum.Add(sum, t.Mul(b[j], bigNumber(precision).SetFloat64(in(k-i))))
			}
			if i > 0 {
				sum.Sub(sum, t.Mul(a[order-i], y[k-i]))
			}
		}
		y[k] = sum.Quo(sum, a[order])
		results[k], _ = y[k].Float64()
	}
	return results
}
