package locus

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"os"
	"testing"

	"github.com/polewright/polewright/poly"
)

// offLine returns the distance of s from the polyline of a branch.
func offLine(b Branch, s complex128) float64 {
	best := math.Inf(1)
	for i := 1; i < b.Len(); i++ {
		x0, y0 := b.XY(i - 1)
		x1, y1 := b.XY(i)
		p, d := complex(x0, y0), complex(x1-x0, y1-y0)
		t := 0.0
		if l := real(d)*real(d) + imag(d)*imag(d); l > 0 {
			t = ((real(s)-x0)*real(d) + (imag(s)-y0)*imag(d)) / l
			t = max(0, min(1, t))
		}
		best = min(best, cmplx.Abs(s-p-complex(t, 0)*d))
	}
	return best
}

// TestPolylineAccuracy checks that the points of branches at many gains are near the polyline,
// within 5e-4 of the diagonal of the drawing window.
func TestPolylineAccuracy(t *testing.T) {
	check := func(name string, f Family, lo, hi float64) {
		l, err := f.Trace(lo, hi)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			return
		}
		frame := l.Frame()
		limit := 5e-4 * frame.Diagonal()
		gains := 1000
		if os.Getenv("POLEWRIGHT_LONG") != "" {
			gains = 10000
		}
		for _, b := range l.Branches {
			worst, at := 0.0, 0.0
			for i := range gains {
				k := lo * math.Pow(hi/lo, float64(i)/float64(gains-1))
				s, ok := b.At(k)
				if !ok {
					t.Errorf("%s: no place at gain %v", name, k)
					break
				}
				if d := offLine(b, s); d > worst {
					worst, at = d, k
				}
			}
			if worst > limit {
				t.Errorf("%s: at gain %v %.2g from the line, limit %.2g", name, at, worst, limit)
			}
		}
	}
	for _, r := range referenceFamilies(t) {
		check(r.Name, r.family(t), 1e-3, 1e3)
	}
	r := rand.New(rand.NewPCG(3, 3))
	for i := range 12 {
		fixed, scaled := randomPlant(r, 3+r.IntN(10))
		check(fmt.Sprint("random ", i), Family{fixed: poly.New(fixed...), scaled: poly.New(scaled...)}, 1e-3, 1e3)
	}
}

// TestLineAccuracy asks for finer and coarser polylines.
func TestLineAccuracy(t *testing.T) {
	f := Family{fixed: poly.New(1, 2, 0), scaled: poly.New(1, 3)}
	points := func(opt ...Option) int {
		l, err := f.Trace(0, 100, opt...)
		if err != nil {
			t.Fatal(err)
		}
		n := 0
		for _, b := range l.Branches {
			n += b.Len()
		}
		return n
	}
	if fine, plain := points(LineAccuracy(1e-6)), points(); fine < 4*plain {
		t.Errorf("%d points for 1e-6, %d for the default", fine, plain)
	}
	if odd, plain := points(LineAccuracy(math.NaN())), points(); odd != plain {
		t.Errorf("%d points for NaN, %d for the default", odd, plain)
	}
}
