package tf

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/internal/baseline"
	"github.com/polewright/polewright/poly"
)

// randomLoop returns coefficients, highest power first, of a stable plant of the given order
// with its roots over two decades.
func randomLoop(r *rand.Rand, order int) (num, den []float64) {
	multiply := func(p, q []float64) []float64 {
		out := make([]float64, len(p)+len(q)-1)
		for i, x := range p {
			for j, y := range q {
				out[i+j] += float64(x * y)
			}
		}
		return out
	}
	factor := func(degree int) []float64 {
		p := []float64{1}
		for degree > 0 {
			w := math.Pow(10, 2*r.Float64()-1)
			if degree >= 2 && r.IntN(2) == 0 {
				p = multiply(p, []float64{1, 2 * w * math.Pow(10, -2*r.Float64()), w * w})
				degree -= 2
			} else {
				p = multiply(p, []float64{1, w})
				degree--
			}
		}
		return p
	}
	den = factor(order)
	num = factor(r.IntN(order))
	k := math.Pow(10, 2*r.Float64()-0.5) * den[order] / num[len(num)-1]
	for i := range num {
		num[i] *= k
	}
	return num, den
}

// All margins of loops never seen before, polynomials made inside the timer, beside a sweep of
// 10⁴ frequencies.
func BenchmarkMargins(b *testing.B) {
	for _, order := range []int{4, 8, 12} {
		r := rand.New(rand.NewPCG(1, uint64(order)))
		type loop struct{ num, den []float64 }
		loops := make([]loop, 4096)
		for i := range loops {
			loops[i].num, loops[i].den = randomLoop(r, order)
		}
		b.Run(fmt.Sprintf("method=exact/order=%d", order), func(b *testing.B) {
			i := 0
			for b.Loop() {
				l := loops[i%len(loops)]
				i++
				g, err := New(poly.New(l.num...), poly.New(l.den...))
				if err != nil {
					b.Fatal(err)
				}
				if _, err := (Loop{Plant: g}).Margins(); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("method=sweep/order=%d", order), func(b *testing.B) {
			i := 0
			for b.Loop() {
				l := loops[i%len(loops)]
				i++
				baseline.SweepMargins(l.num, l.den, 1e-3, 1e3, 10000)
			}
		})
	}
}

// Margins with dead time, and of loops in z.
func BenchmarkMarginsOtherLoops(b *testing.B) {
	run := func(name string, g Function) {
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				if _, err := (Loop{Plant: g}).Margins(); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
	r := rand.New(rand.NewPCG(2, 8))
	num, den := randomLoop(r, 8)
	g, err := New(poly.New(num...), poly.New(den...))
	if err != nil {
		b.Fatal(err)
	}
	late, err := g.WithDeadTime(0.1)
	if err != nil {
		b.Fatal(err)
	}
	run("order=8/dead time", late)
	run("order=2/dead time", MustParse("18 exp(-0.02 s) / (s (s + 3))"))
	z, err := MustParse("0.2 z (z + 0.5)^2 / ((z - 0.8)(z-0.9)(z-0.95)(z-0.5)(z^2-1.8z+0.85)(z-1)(z-0.1)), period 0.01").WithPeriod(0.01)
	if err != nil {
		b.Fatal(err)
	}
	run("order=8/z", z)
	run("order=3/pole on the axis", MustParse("2 (s + 1) / (s (s^2 + 4))"))
	run("order=3/touching", MustParse("8 / (s + 1)^3"))
}
