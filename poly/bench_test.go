package poly

import (
	"fmt"
	"math"
	"math/rand"
	"testing"

	"github.com/polewright/polewright/internal/baseline"
)

// randomStable returns the coefficients, highest power first, of a plant with random poles
// over two decades, real and in pairs of any damping ratio.
func randomStable(r *rand.Rand, n int) []float64 {
	c := []float64{1}
	for k := 0; k < n; {
		w := math.Pow(10, 2*r.Float64())
		factor := []float64{1, w}
		if n-k >= 2 && r.Intn(2) == 0 {
			factor = []float64{1, 2 * r.Float64() * w, w * w}
		}
		k += len(factor) - 1
		product := make([]float64, len(c)+len(factor)-1)
		for i, a := range c {
			for j, b := range factor {
				product[i+j] += a * b
			}
		}
		c = product
	}
	return c
}

var sink complex128

// Random stable plants over two decades; the polynomial is made and every root read inside
// the timer, and each input comes once in 4096.
func BenchmarkRoots(b *testing.B) {
	for _, n := range []int{4, 8, 12, 20} {
		r := rand.New(rand.NewSource(int64(n)))
		inputs := make([][]float64, 4096)
		for i := range inputs {
			inputs[i] = randomStable(r, n)
		}
		b.Run(fmt.Sprintf("degree=%d/method=certified", n), func(b *testing.B) {
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				roots, err := New(inputs[i%len(inputs)]...).Roots()
				if err != nil {
					b.Fatal(err)
				}
				for _, r := range roots {
					sink += r.Value
				}
			}
		})
		b.Run(fmt.Sprintf("degree=%d/method=workspace", n), func(b *testing.B) {
			polynomials := make([]Poly, len(inputs))
			for i, c := range inputs {
				polynomials[i] = New(c...)
			}
			var s Solver
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				roots, err := s.Roots(polynomials[i%len(inputs)])
				if err != nil {
					b.Fatal(err)
				}
				for _, r := range roots {
					sink += r.Value
				}
			}
		})
		b.Run(fmt.Sprintf("degree=%d/method=companion", n), func(b *testing.B) {
			for i := 0; b.Loop(); i++ {
				for _, s := range baseline.CompanionRoots(inputs[i%len(inputs)]) {
					sink += s
				}
			}
		})
	}
}
