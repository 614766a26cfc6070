package locus_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

// Each root of a workspace, at gains that come in steps of all sizes, against the sharp discs of
// Family.PolesAt: as many, in the same order, and each disc meets its counterpart.
func TestWorkspace(t *testing.T) {
	rng := rand.New(rand.NewPCG(21, 22))
	var w locus.Workspace
	families := []locus.Family{
		family(t, poly.New(1, 3, 2, 0), poly.New(1)),
		family(t, poly.New(1, 8, 36, 80, 0), poly.New(1)),
		family(t, poly.New(1, 5, 0), poly.New(1, 4, 3)),
		family(t, poly.New(1, 1), poly.New(1, 0.5, 2)),
		family(t, poly.New(2, 1), poly.New(1)),
	}
	for _, n := range []int{8, 12, 20} {
		fixed, scaled := chain(n)
		families = append(families, family(t, fixed, scaled))
	}
	for _, f := range families {
		k := 0.0
		for range 300 {
			step := math.Pow(10, rng.Float64()*8-7)
			if rng.IntN(10) == 0 {
				step = 0
			}
			k += step * (1 + math.Abs(k)) * (rng.Float64()*2 - 1)
			got, err := w.PolesAt(f, k)
			if err != nil {
				t.Fatal(err)
			}
			want, err := f.PolesAt(k)
			if err != nil || len(got) != len(want) {
				t.Fatalf("at %v: %v, want %v, %v", k, got, want, err)
			}
			for i, g := range got {
				// Values of equal real part may be sorted otherwise.
				best := math.Inf(1)
				for _, x := range want {
					if imag(x.Value) == 0 != (imag(g.Value) == 0) {
						continue
					}
					if d := distance(g.Value, x.Value) - x.Radius; d < best {
						best = d
					}
				}
				if !(best <= g.Radius) || g.Multiplicity != 1 && g.Multiplicity != want[i].Multiplicity || g.Radius > 1e-10*distance(g.Value, 0) {
					t.Errorf("at %v: %v, want one of %v", k, g, want)
				}
			}
		}
	}
	if _, err := w.PolesAt(families[0], math.NaN()); err == nil {
		t.Error("NaN")
	}
	if _, err := w.PolesAt(locus.Family{}, 1); err == nil {
		t.Error("the zero Family")
	}
}
