package exact

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

func BenchmarkCounts(b *testing.B) {
	for _, n := range []int{4, 8, 20, 50} {
		r := rand.New(rand.NewPCG(1, uint64(n)))
		p := integers(1)
		for p.Degree() < n {
			a, w := r.ExpFloat64(), r.ExpFloat64()
			p = p.Mul(FromFloats(a*a+w*w, 2*a, 1))
		}
		c := make([]float64, n+1)
		for i := range c {
			c[i] = p.Coefficient(i).Float64()
		}
		p = FromFloats(c...)
		b.Run(fmt.Sprintf("LeftOf/degree=%d", n), func(b *testing.B) {
			for b.Loop() {
				LeftOf(p, Dyadic{})
			}
		})
		b.Run(fmt.Sprintf("InSector/degree=%d", n), func(b *testing.B) {
			for b.Loop() {
				InSector(p, Float(math.Sqrt2/2))
			}
		})
		b.Run(fmt.Sprintf("InDisc/degree=%d", n), func(b *testing.B) {
			for b.Loop() {
				InDisc(p, Float(1.1))
			}
		})
		q := FromFloats(1)
		for i := range n {
			q = q.Mul(FromFloats(-r.NormFloat64()*float64(i+1), 1))
		}
		for i := range c {
			c[i] = q.Coefficient(i).Float64()
		}
		q = FromFloats(c...)
		b.Run(fmt.Sprintf("RealRoots/degree=%d", n), func(b *testing.B) {
			for b.Loop() {
				for _, r := range q.RealRoots(inf(-1), inf(1), Open) {
					r.Nearest()
				}
			}
		})
		b.Run(fmt.Sprintf("Isolate/degree=%d", n), func(b *testing.B) {
			for b.Loop() {
				q.Isolate(inf(-1), inf(1), Open)
			}
		})
		b.Run(fmt.Sprintf("GCD/degree=%d", n), func(b *testing.B) {
			for b.Loop() {
				GCD(q, q.Derivative())
			}
		})
	}
}
