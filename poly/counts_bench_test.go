package poly

import (
	"fmt"
	"math/rand"
	"testing"

	"github.com/polewright/polewright/internal/baseline"
)

// Random stable plants over two decades, as for the roots; the plain way is to count the
// eigenvalues of the companion matrix.
func BenchmarkCounts(b *testing.B) {
	for _, n := range []int{4, 8, 12, 20} {
		r := rand.New(rand.NewSource(int64(n)))
		inputs := make([][]float64, 512)
		for i := range inputs {
			inputs[i] = randomStable(r, n)
		}
		for _, question := range []struct {
			name string
			ask  func(Poly) (Count, error)
		}{
			{"left", func(p Poly) (Count, error) { return p.CountLeftOf(0) }},
			{"sector", func(p Poly) (Count, error) { return p.CountInSector(0.7) }},
			{"disc", func(p Poly) (Count, error) { return p.CountInDisc(30) }},
		} {
			b.Run(fmt.Sprintf("region=%s/degree=%d/method=proven", question.name, n), func(b *testing.B) {
				for i := 0; b.Loop(); i++ {
					if _, err := question.ask(New(inputs[i%len(inputs)]...)); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
		b.Run(fmt.Sprintf("region=left/degree=%d/method=companion", n), func(b *testing.B) {
			for i := 0; b.Loop(); i++ {
				left := 0
				for _, s := range baseline.CompanionRoots(inputs[i%len(inputs)]) {
					if real(s) < 0 {
						left++
					}
				}
				if left > n {
					b.Fatal("too many")
				}
			}
		})
	}
}

func BenchmarkRealRoots(b *testing.B) {
	for _, n := range []int{4, 8, 12, 20} {
		r := rand.New(rand.NewSource(int64(n)))
		inputs := make([][]float64, 512)
		for i := range inputs {
			inputs[i] = randomStable(r, n)
		}
		b.Run(fmt.Sprintf("degree=%d/method=proven", n), func(b *testing.B) {
			for i := 0; b.Loop(); i++ {
				if _, err := New(inputs[i%len(inputs)]...).RealRoots(-30, 0); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(fmt.Sprintf("degree=%d/method=companion", n), func(b *testing.B) {
			for i := 0; b.Loop(); i++ {
				found := 0
				for _, s := range baseline.CompanionRoots(inputs[i%len(inputs)]) {
					if imag(s) == 0 && real(s) >= -30 && real(s) <= 0 {
						found++
					}
				}
				if found > n {
					b.Fatal("too many")
				}
			}
		})
	}
}
