package poly

import (
	"math"
	"math/rand"
	"slices"
	"testing"
)

// Answers from a warm start and with wide discs are as sound as others.
func TestSolverVariants(t *testing.T) {
	count := 40
	if testing.Short() {
		count = 10
	}
	var s Solver
	for i, f := range families {
		r := rand.New(rand.NewSource(int64(77 + i)))
		for range count {
			p := f.make(r)
			if p.Degree() < 1 {
				continue
			}
			moved := p.Add(New(p.Coefficient(0)).Scale(math.Ldexp(1, -r.Intn(40))))
			known, err := p.Roots()
			if err != nil {
				t.Fatalf("%s: %v: %v", f.name, p, err)
			}
			near, err := s.Near(moved, known)
			if err != nil {
				t.Fatalf("%s: %v: %v", f.name, moved, err)
			}
			checkShape(t, moved, near)
			if wrong := newJudge(moved).check(near); wrong != "" {
				t.Errorf("%s: near %v: %s", f.name, moved, wrong)
			}
			wide, err := s.Roots(p, RelativeRadius(1e-6))
			if err != nil {
				t.Fatalf("%s: %v: %v", f.name, p, err)
			}
			if wrong := newJudge(p).check(wide); wrong != "" {
				t.Errorf("%s: wide %v: %s", f.name, p, wrong)
			}
			for _, r := range wide {
				if r.Radius > 1e-6*math.Hypot(real(r.Value), imag(r.Value)) && r.Radius > minNormal {
					t.Errorf("%s: wide %v: %+v", f.name, p, r)
				}
			}
			if t.Failed() {
				return
			}
		}
	}
}

// A start from anywhere costs time, not truth.
func TestSolverNearFromFar(t *testing.T) {
	var s Solver
	p := New(1, 6, 11, 6)
	want, _ := p.Roots()
	for _, known := range [][]Root{
		nil, {{Value: 5, Multiplicity: 3}}, {{Value: 1e300, Multiplicity: 3}}, {{Value: complex(math.NaN(), 1), Multiplicity: 3}},
		{{Value: 1, Multiplicity: 1}}, {{Value: 0, Multiplicity: 3}}, {{Value: 1 + 1i, Multiplicity: 7}}, {{Value: 2, Multiplicity: 0}}, want,
	} {
		got, err := s.Near(p, known)
		if err != nil || len(got) != 3 {
			t.Fatalf("from %v: %v %v", known, got, err)
		}
		for i := range got {
			if math.Abs(real(got[i].Value-want[i].Value)) > got[i].Radius+want[i].Radius {
				t.Errorf("from %v: %v, want %v", known, got, want)
			}
		}
	}
}

func TestSolverAllocatesNothing(t *testing.T) {
	r := rand.New(rand.NewSource(5))
	var s Solver
	for _, n := range []int{4, 8, 12, 40} {
		c := make([]float64, n+1)
		for i := range c {
			c[i] = r.NormFloat64()
		}
		p := New(c...)
		known, err := s.Roots(p)
		if err != nil {
			t.Fatal(err)
		}
		known = slices.Clone(known)
		if allocs := testing.AllocsPerRun(20, func() { s.Roots(p) }); allocs != 0 {
			t.Errorf("degree %d: %v allocations", n, allocs)
		}
		if allocs := testing.AllocsPerRun(20, func() { s.Near(p, known) }); allocs != 0 {
			t.Errorf("degree %d, warm: %v allocations", n, allocs)
		}
	}
}
