package locus_test

import (
	"fmt"
	"math"
	"testing"

	"github.com/polewright/polewright/internal/baseline"
	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

// chain returns a plant with n real poles over two decades and a zero, as a drive train has.
func chain(n int) (fixed, scaled poly.Poly) {
	fixed = poly.New(1)
	for i := range n {
		fixed = poly.New(fixed.Mul(poly.New(1, math.Round(100*math.Pow(10, 2*float64(i)/float64(n)))/100)).Coefficients()...)
	}
	return fixed, poly.New(1, 0.5)
}

// BenchmarkWindows sets the proven windows, the family built inside the timer, beside a sweep of
// 10⁴ gains by the eigenvalues of companion matrices.
func BenchmarkWindows(b *testing.B) {
	for _, n := range []int{4, 8, 12} {
		fixed, scaled := chain(n)
		for name, r := range map[string]locus.Region{"line": locus.LeftOf(0), "shifted": locus.LeftOf(-0.1), "ray": locus.Damped(0.5), "ray0.6": locus.Damped(0.6), "circle": locus.Within(50)} {
			b.Run(fmt.Sprintf("method=proven/region=%s/degree=%d", name, n), func(b *testing.B) {
				b.ReportAllocs()
				for b.Loop() {
					f, err := locus.Parameter(fixed, scaled)
					if err != nil {
						b.Fatal(err)
					}
					if _, err := f.Windows(r); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
		b.Run(fmt.Sprintf("method=sweep/gains=10000/degree=%d", n), func(b *testing.B) {
			for b.Loop() {
				for i := range 10_000 {
					k := math.Pow(10, float64(i)/10_000*6-3)
					c := fixed.Coefficients()
					for j, x := range scaled.Coefficients() {
						c[len(c)-1-scaled.Degree()+j] += k * x
					}
					for _, s := range baseline.CompanionRoots(c) {
						_ = real(s) < 0
					}
				}
			}
		})
	}
}

// modes returns a plant with n/2 lightly damped modes over a decade, as a flexible structure has.
func modes(n int) (fixed, scaled poly.Poly) {
	fixed = poly.New(1)
	for i := range n / 2 {
		w := math.Round(100*math.Pow(10, float64(2*i)/float64(n))) / 100
		fixed = poly.New(fixed.Mul(poly.New(1, 0.1*w, w*w)).Coefficients()...)
	}
	return fixed, poly.New(1, 0.5)
}

// BenchmarkPolesAt sets the proven roots at gains in steps of a thousandth beside the eigenvalues
// of companion matrices.
func BenchmarkPolesAt(b *testing.B) {
	for _, n := range []int{8, 12, 20} {
		fixed, scaled := modes(n)
		f, err := locus.Parameter(fixed, scaled)
		if err != nil {
			b.Fatal(err)
		}
		gain := func(i int) float64 { return 10 * (1 + 0.001*float64(i%1000)) }
		b.Run(fmt.Sprintf("method=warm/degree=%d", n), func(b *testing.B) {
			var w locus.Workspace
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				if _, err := w.PolesAt(f, gain(i)); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("method=cold/degree=%d", n), func(b *testing.B) {
			for i := 0; b.Loop(); i++ {
				if _, err := f.PolesAt(gain(i)); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("method=companion/degree=%d", n), func(b *testing.B) {
			for i := 0; b.Loop(); i++ {
				c := fixed.Coefficients()
				for j, x := range scaled.Coefficients() {
					c[len(c)-1-scaled.Degree()+j] += gain(i) * x
				}
				baseline.CompanionRoots(c)
			}
		})
	}
}
