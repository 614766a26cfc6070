package exact

import (
	"math/rand/v2"
	"testing"
)

// With d = ∏ (s - rᵢ) the polynomial is ∏ (a(rᵢ) + k·b(rᵢ)), to be formed by hand.
func TestGainPolynomial(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	random := func(degree int) Poly {
		c := make([]float64, degree+1)
		for i := range c {
			c[i] = float64(rng.IntN(2001)-1000) / 64
		}
		c[degree] = 1 + float64(rng.IntN(5))
		return FromFloats(c...)
	}
	for range 200 {
		a, b := random(rng.IntN(6)), random(rng.IntN(6))
		d, want := FromFloats(3), FromFloats(1)
		for range 1 + rng.IntN(6) {
			r := Float(float64(rng.IntN(64)-32) / 8)
			d = d.Mul(FromDyadics(r.Neg(), Float(1)))
			want = want.Mul(FromDyadics(a.At(r), b.At(r)))
		}
		got := GainPolynomial(d, a, b)
		if !got.Equal(want.Primitive()) {
			t.Fatalf("GainPolynomial(%v, %v, %v) = %v, want %v", d, a, b, got, want.Primitive())
		}
	}
}
