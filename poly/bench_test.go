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
		b.Run(fmt.Sprintf("degree=%d/method=float64 stage", n), func(b *testing.B) {
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				roots, err := New(inputs[i%len(inputs)]...).Roots(RelativeRadius(1e-3))
				if err != nil {
					b.Fatal(err)
				}
				for _, r := range roots {
					sink += r.Value
				}
			}
		})
		b.Run(fmt.Sprintf("degree=%d/method=warm", n), func(b *testing.B) {
			polynomials := make([]Poly, len(inputs))
			known := make([][]Root, len(inputs))
			for i, c := range inputs {
				moved := append([]float64(nil), c...)
				moved[len(moved)-1] *= 1 + 1e-4
				polynomials[i] = New(moved...)
				known[i], _ = New(c...).Roots()
			}
			var s Solver
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				roots, err := s.Near(polynomials[i%len(inputs)], known[i%len(inputs)])
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

// wilkinson returns the coefficients of (s-1)(s-2)…(s-n), exact in float64 up to n = 15 and
// nearest beyond (J. H. Wilkinson, Rounding Errors in Algebraic Processes, 1963).
func wilkinson(n int) []float64 {
	p := New(1)
	for k := 1; k <= n; k++ {
		p = p.Mul(New(1, -float64(k)))
	}
	return roundedPoly(p).coefficientsDown()
}

// coefficientsDown returns the coefficients as New takes them.
func (p Poly) coefficientsDown() []float64 {
	c := make([]float64, p.Degree()+1)
	for i := range c {
		c[i] = p.Coefficient(p.Degree() - i)
	}
	return c
}

// Ill-conditioned and large polynomials, all bars met.
func BenchmarkRootsHard(b *testing.B) {
	r := rand.New(rand.NewSource(100))
	normal := make([]float64, 101)
	for i := range normal {
		normal[i] = r.NormFloat64()
	}
	repeated := New(1)
	for range 8 {
		repeated = repeated.Mul(New(1, 1))
	}
	cluster := New(1)
	for k := range 3 {
		cluster = cluster.Mul(New(1, 1+float64(k)*1e-6))
	}
	for _, input := range []struct {
		name string
		c    []float64
	}{
		{"wilkinson20", wilkinson(20)}, {"normal100", normal}, {"(s+1)^8", repeated.coefficientsDown()},
		{"cluster3", cluster.coefficientsDown()}, {"s^16-1", append(append([]float64{1}, make([]float64, 15)...), -1)},
	} {
		b.Run(fmt.Sprintf("roots=%s/method=certified", input.name), func(b *testing.B) {
			for b.Loop() {
				roots, err := New(input.c...).Roots()
				if err != nil {
					b.Fatal(err)
				}
				for _, r := range roots {
					sink += r.Value
				}
			}
		})
		b.Run(fmt.Sprintf("roots=%s/method=companion", input.name), func(b *testing.B) {
			for b.Loop() {
				for _, s := range baseline.CompanionRoots(input.c) {
					sink += s
				}
			}
		})
	}
}
