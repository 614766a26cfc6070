package locus_test

import (
	"errors"
	"math"
	"testing"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

func TestWindowsOf(t *testing.T) {
	third := family(t, poly.New(1, 3, 2, 0), poly.New(1)) // unstable roots: 1 for k < 0, 2 for k > 6
	tests := []struct {
		n    int
		r    locus.Region
		want []locus.Window
	}{
		{3, locus.LeftOf(0), []locus.Window{{0, 6}}},
		{2, locus.LeftOf(0), []locus.Window{{-inf, 0}}},
		{1, locus.LeftOf(0), []locus.Window{{6, inf}}},
		{0, locus.LeftOf(0), nil},
		{3, locus.All(locus.LeftOf(0), locus.Within(10)), []locus.Window{{0, 6}}},
	}
	for _, c := range tests {
		got, err := third.WindowsOf(c.n, c.r)
		if err != nil || !sameWindows(got, c.want) {
			t.Errorf("%d in %#v: %v, %v; want %v", c.n, c.r, got, err, c.want)
		}
	}
	// All counts together cover every gain but the critical ones, and agree with Windows.
	for _, r := range []locus.Region{locus.LeftOf(-0.3), locus.Damped(0.4), locus.Within(1.5), locus.Beyond(1), locus.Strip(0.5), locus.All(locus.Damped(0.4), locus.Within(1.5))} {
		total := 0
		for n := 0; n <= 3; n++ {
			windows, err := third.WindowsOf(n, r)
			if err != nil {
				t.Fatalf("%#v: %v", r, err)
			}
			total += len(windows)
			for _, w := range windows {
				k := (max(w.Lo, -1e3) + min(w.Hi, 1e3)) / 2
				roots, err := third.PolesAt(k)
				if err != nil {
					t.Fatal(err)
				}
				got := 0
				for _, root := range roots {
					if r.Contains(root.Value) {
						got += root.Multiplicity
					}
				}
				if got != n {
					t.Errorf("%#v at %v: %d roots inside, want %d", r, k, got, n)
				}
			}
			if n == 3 {
				want, err := third.Windows(r)
				if err != nil || !sameWindows(windows, want) {
					t.Errorf("%#v: %v, Windows %v", r, windows, want)
				}
			}
		}
		if total == 0 {
			t.Errorf("%#v: no windows at all", r)
		}
	}
	var bad *poly.ArgumentError
	if _, err := third.WindowsOf(-1, locus.LeftOf(0)); !errors.As(err, &bad) {
		t.Errorf("-1 roots: %v", err)
	}
}

func TestWindowsOfAll(t *testing.T) {
	a := family(t, poly.New(1, 3, 2, 0), poly.New(1))      // (0, 6)
	b := family(t, poly.New(1, 0, -1), poly.New(1, 1))     // (s-1)(s+1) + k(s+1): (1, ∞)
	c := family(t, poly.New(1, 8, 36, 80, 0), poly.New(1)) // (0, 260)
	got, err := locus.WindowsOfAll([]locus.Family{a, b, c}, locus.LeftOf(0))
	if err != nil || !sameWindows(got, []locus.Window{{1, 6}}) {
		t.Errorf("%v, %v; want (1, 6)", got, err)
	}
	if got, err := locus.WindowsOfAll(nil, locus.LeftOf(0)); err != nil || !sameWindows(got, []locus.Window{{-inf, inf}}) {
		t.Errorf("no families: %v, %v", got, err)
	}
}

func TestOnCurves(t *testing.T) {
	f := family(t, poly.New(1, 3, 2, 0), poly.New(1))
	// ζ = 0.5 at k = 28/27, s = (-1 ± j√3)/3; the vertical line and the circle cross the axis too.
	got, err := f.On(locus.Ray(0, complex(-0.6, 0.8)))
	if err != nil || len(got) == 0 {
		t.Fatalf("%v, %v", got, err)
	}
	for _, c := range got {
		k, miss := f.GainAt(c.S)
		if math.Abs(miss) > 1e-12 || !(math.Abs(k-c.Gain) <= 1e-12*math.Abs(k)) {
			t.Errorf("on the ray: %v, GainAt says %v, off by %v rad", c, k, miss)
		}
	}
	got, err = f.On(locus.StraightLine(0, 1i))
	if err != nil || len(got) != 2 || got[0].Gain != 6 || distance(got[1].S, complex(0, math.Sqrt2)) > 1e-15 {
		t.Errorf("axis: %v, %v", got, err)
	}
	got, err = f.On(locus.Circle(0, 1.5))
	if err != nil || len(got) != 4 {
		t.Errorf("circle: %v, %v", got, err)
	}
	_, err = f.On(locus.StraightLine(0, 1))
	var whole *locus.BoundaryOnLocusError
	if !errors.As(err, &whole) {
		t.Errorf("real axis: %v", err)
	}
}

func TestSensitivities(t *testing.T) {
	// s² + 2s + k: s = -1 ± j√(k-1), ds/dk = ±j/(2√(k-1)); at k = 5, s = -1 ± 2j.
	f := family(t, poly.New(1, 2, 0), poly.New(1))
	got, err := f.Sensitivities(5)
	if err != nil || len(got) != 2 {
		t.Fatal(got, err)
	}
	for i, sign := range []float64{-1, 1} {
		v := complex(0, sign/4)
		if distance(got[i].Velocity, v) > 1e-15 || distance(got[i].Relative, 5*v/complex(-1, 2*sign)) > 1e-15 {
			t.Errorf("%v", got[i])
		}
	}
	got, _ = f.Sensitivities(1)
	if len(got) != 1 || !math.IsNaN(real(got[0].Velocity)) {
		t.Errorf("at the break point: %v", got)
	}
	got, _ = f.Sensitivities(0)
	for _, s := range got {
		if s.Root.Value == 0 && (!math.IsNaN(real(s.Relative)) || s.Velocity != -0.5) {
			t.Errorf("at 0: %v", s)
		}
	}
	got, err = family(t, poly.New(1, 3, 2), poly.New(1, 1)).Sensitivities(2) // (s+1)(s+2+k)
	if err != nil || len(got) != 2 || got[0].Velocity != -1 || got[1].Velocity != 0 {
		t.Errorf("fixed root: %v, %v", got, err)
	}
}
