package locus_test

import (
	"errors"
	"math"
	"math/cmplx"
	"testing"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

// own is a region of the user's own.
type own struct {
	contains func(s complex128) bool
	boundary []locus.Curve
}

func (r own) Contains(s complex128) bool { return r.contains(s) }
func (r own) Boundary() []locus.Curve    { return r.boundary }

// The library's regions given as the user's own have the same windows and crossings.
func TestOwnRegions(t *testing.T) {
	ellipse := func(center, a, b float64) own {
		return own{
			func(s complex128) bool {
				x, y := (real(s)-center)/a, imag(s)/b
				return x*x+y*y < 1
			},
			[]locus.Curve{locus.Parametric(-math.Pi, math.Pi,
				func(t float64) complex128 { return complex(center+a*math.Cos(t), b*math.Sin(t)) },
				func(lo, hi float64) locus.Disc {
					m := lo/2 + hi/2
					return locus.Disc{Center: complex(-a*math.Sin(m), b*math.Cos(m)), Radius: 1.001 * max(a, b) * (hi - lo) / 2}
				})},
		}
	}
	circle := own{func(s complex128) bool { return cmplx.Abs(s) < 2 }, []locus.Curve{locus.Circle(0, 2)}}
	arcs := own{circle.contains, []locus.Curve{locus.Arc(0, 2, -math.Pi, 0), locus.Arc(0, 2, 0, math.Pi)}}
	pairs := []struct {
		name      string
		own, same locus.Region
		crossings bool
	}{
		{"half-plane", own{locus.LeftOf(-0.25).Contains, locus.LeftOf(-0.25).Boundary()}, locus.LeftOf(-0.25), true},
		{"sector", own{locus.Damped(0.6).Contains, locus.Damped(0.6).Boundary()}, locus.Damped(0.6), false},
		{"circle", circle, locus.Within(2), true},
		{"arcs", arcs, locus.Within(2), true},
		{"ellipse that is a circle", ellipse(0, 2, 2), locus.Within(2), false},
		{"strip", own{locus.Strip(1).Contains, locus.Strip(1).Boundary()}, locus.Strip(1), true},
	}
	families := []locus.Family{
		family(t, poly.New(1, 3, 2, 0), poly.New(1)),
		family(t, poly.New(1, 8, 36, 80, 0), poly.New(1, 1)),
		family(t, poly.New(1, 3, 7, 4, 1, 0), poly.New(3, 5, 4)),
		family(t, poly.New(1, 0.5, 2), poly.New(1, 4, 3)),
	}
	for _, p := range pairs {
		for i, f := range families {
			got, err := f.Windows(p.own)
			if err != nil {
				t.Errorf("%s %d: %v", p.name, i, err)
				continue
			}
			want, err := f.Windows(p.same)
			if err != nil || !sameWindows(got, want) {
				t.Errorf("%s %d: windows %v, want %v, %v", p.name, i, got, want, err)
			}
			if !p.crossings {
				continue // the points of these curves are rounded
			}
			a, err := f.Crossings(p.own)
			b, err2 := f.Crossings(p.same)
			if err != nil || err2 != nil || len(a) != len(b) {
				t.Errorf("%s %d: crossings %v, want %v; %v %v", p.name, i, a, b, err, err2)
				continue
			}
			for j := range a {
				if distance(a[j].S, b[j].S) > 1e-11*(1+cmplx.Abs(b[j].S)) || !closeTo(a[j].Gain, b[j].Gain) || a[j].Touch != b[j].Touch {
					t.Errorf("%s %d: crossing %v, want %v", p.name, i, a[j], b[j])
				}
			}
		}
	}
	// An ellipse, against the roots.
	for i, f := range families {
		r := ellipse(-1, 1.5, 0.7)
		windows, err := f.Windows(r)
		if err != nil {
			t.Errorf("%d: %v", i, err)
		}
		checkWindows(t, "ellipse", f, r, windows)
		image := locus.OnSamples(r, 0.3)
		windows, err = f.Windows(image)
		if err != nil {
			t.Errorf("image %d: %v", i, err)
		}
		checkWindows(t, "image of an ellipse", f, image, windows)
	}
}

func TestInvalidCurves(t *testing.T) {
	f := family(t, poly.New(1, 3, 2, 0), poly.New(1))
	for name, c := range map[string]locus.Curve{
		"direction":  locus.StraightLine(0, 0),
		"not finite": locus.Ray(complex(math.NaN(), 0), 1),
		"no length":  locus.Segment(1, 1),
		"radius":     locus.Circle(0, -1),
		"angles":     locus.Arc(0, 1, 2, 1),
		"interval":   locus.Parametric(0, math.Inf(1), func(float64) complex128 { return 0 }, func(lo, hi float64) locus.Disc { return locus.Disc{} }),
		"function":   locus.Parametric(0, 1, nil, nil),
	} {
		var bad *poly.ArgumentError
		if _, err := f.Windows(own{func(complex128) bool { return true }, []locus.Curve{c}}); !errors.As(err, &bad) {
			t.Errorf("%s: %v", name, err)
		}
	}
	if lo, hi := (locus.Curve{}).Interval(); lo != 0 || hi != 0 || (locus.Curve{}).At(1) != 0 {
		t.Error("the zero Curve is no point at the origin")
	}
}
