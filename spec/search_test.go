package spec

import (
	"context"
	"math"
	"testing"
)

// synthetic surveys a function of the gain by its margin, with a bound on its slope for
// proofs: between two gains it cannot pass zero if both values exceed the slope times half
// the distance.
func synthetic(f func(k float64) float64, slope float64, evaluated *int) *survey {
	return &survey{
		at: func(k float64) (*look, error) {
			*evaluated++
			m := f(k)
			return &look{k: k, met: m >= 0, margin: m}, nil
		},
		prove: func(a, b *look) (bool, bool) {
			reach := slope * (b.k - a.k) / 2
			return a.margin > reach && b.margin > reach, a.margin < -reach && b.margin < -reach
		},
		floor:  func(a, b float64) float64 { return 1e-4 },
		budget: 1 << 20,
	}
}

func TestSearchSynthetic(t *testing.T) {
	step := func(k float64) float64 {
		if k < 1.25 {
			return 0.3
		}
		return -0.7
	}
	for _, c := range []struct {
		name  string
		f     func(k float64) float64
		slope float64
		want  [][2]float64 // 0 and 3 are the ends of the search
		exact float64
	}{
		{"line", func(k float64) float64 { return k - 1 }, 1, [][2]float64{{1, 3}}, 1e-15},
		{"band", func(k float64) float64 { return 0.25 - (k-1.5)*(k-1.5) }, 3, [][2]float64{{1, 2}}, 1e-15},
		{"jump", step, 0, [][2]float64{{0, 1.25}}, 1e-15},
		{"saw", func(k float64) float64 { return math.Mod(k, 1) - 0.5 }, 1, [][2]float64{{0.5, 1}, {1.5, 2}, {2.5, 3}}, 1e-15},
		{"cubic flat", func(k float64) float64 { return -math.Pow(k-1.1, 3) }, 12, [][2]float64{{0, 1.1}}, 1e-15},
		{"touch from above", func(k float64) float64 { return (k - 2) * (k - 2) }, 4, [][2]float64{{0, 3}}, 0},
		{"touch from below", func(k float64) float64 { return -(k - 2) * (k - 2) }, 4, nil, 0},
		{"narrow", func(k float64) float64 { return 1e-8 - (k-1.7)*(k-1.7) }, 4, [][2]float64{{1.6999, 1.7001}}, 1e-12},
		{"narrow hole", func(k float64) float64 { return (k-1.7)*(k-1.7) - 1e-8 }, 4, [][2]float64{{0, 1.6999}, {1.7001, 3}}, 1e-12},
		{"never", func(k float64) float64 { return math.Inf(-1) }, 0, nil, 0},
		{"wave", func(k float64) float64 { return math.Sin(20 * k) }, 20, [][2]float64{{0, math.Pi / 20}, {math.Pi / 10, 3 * math.Pi / 20}}, 1e-14},
	} {
		t.Run(c.name, func(t *testing.T) {
			evaluated := 0
			s := synthetic(c.f, c.slope, &evaluated)
			a, _ := s.at(0)
			b, _ := s.at(3)
			cells, err := s.cells(context.Background(), a, b)
			if err != nil {
				t.Fatal(err)
			}
			runs, missed, err := s.stretches(cells, func(a, b float64) float64 { return b - a })
			if err != nil {
				t.Fatal(err)
			}
			if missed > 1e-4 {
				t.Errorf("missed below %g", missed)
			}
			if c.name == "wave" {
				runs = runs[:2]
			}
			if len(runs) != len(c.want) {
				t.Fatalf("%d runs, want %d", len(runs), len(c.want))
			}
			for i, w := range c.want {
				lo, hi := 0.0, 3.0
				if runs[i].lo != nil {
					lo = runs[i].lo.met.k
				}
				if runs[i].hi != nil {
					hi = runs[i].hi.met.k
				}
				if math.Abs(lo-w[0]) > c.exact*math.Max(1, w[0])*4 || math.Abs(hi-w[1]) > c.exact*math.Max(1, w[1])*4 {
					t.Errorf("run %d: [%.17g, %.17g], want [%.17g, %.17g]", i, lo, hi, w[0], w[1])
				}
			}
			t.Logf("%d evaluations", evaluated)
		})
	}
}

// A search out of budget says how wide a window it may have missed.
func TestSearchBudget(t *testing.T) {
	evaluated := 0
	s := synthetic(func(k float64) float64 { return math.Sin(40 * k) }, 40, &evaluated)
	s.budget = 10
	a, _ := s.at(0)
	b, _ := s.at(3)
	cells, err := s.cells(context.Background(), a, b)
	if err != nil {
		t.Fatal(err)
	}
	if _, missed, err := s.stretches(cells, func(a, b float64) float64 { return b - a }); err != nil || missed < 0.1 {
		t.Errorf("missed below %g, %v, with 10 evaluations", missed, err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := s.cells(ctx, a, b); err == nil {
		t.Error("a search goes on after the context ended")
	}
}
