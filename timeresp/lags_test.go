package timeresp

import (
	"math"
	"testing"

	"github.com/polewright/polewright/tf"
)

// TestEqualLags: the step response of aⁿ/(s+a)ⁿ is the incomplete gamma function P(n, at),
// e^(-x)·Σ xᵏ/k! over k ≥ n with x = at (M. Abramowitz and I. A. Stegun, Handbook of
// Mathematical Functions, 6.5.13 and 6.5.29), a sum of positive terms.
func TestEqualLags(t *testing.T) {
	for _, n := range []int{1, 2, 3, 5, 8, 12, 20, 30} {
		for _, a := range []float64{0.51, 0.6, 0.75, 0.99, 1, 1.01, 1.9, 1e-5, 3e9} {
			poles := make([]complex128, n)
			gain := 1.0
			for i := range poles {
				poles[i] = complex(-a, 0)
				gain *= a
			}
			g, err := tf.FromRoots(gain, nil, poles)
			if err != nil {
				t.Fatal(err)
			}
			r, err := Step(g)
			if err != nil {
				t.Fatal(err)
			}
			worst := 0.0
			for x := 0.05; x < 90; x *= 1.07 {
				// The gain is a rounded power.
				scale := gain
				for range n {
					scale /= a
				}
				// x as At sees it.
				at := x / a
				x := at * a
				term := math.Exp(-x)
				for k := 1; k <= n; k++ {
					term *= x / float64(k)
				}
				want, k := 0.0, float64(n)
				for want+term != want {
					want += term
					k++
					term *= x / k
				}
				want *= scale
				worst = math.Max(worst, math.Abs(r.At(at)-want)/want)
			}
			// Rounding x shifts the result by n units in the last place, e^-x by x units.
			if worst > 1e-11 {
				t.Errorf("n = %d, a = %v: off by %.2g of the value", n, a, worst)
			}
		}
	}
}
