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

// oracle follows the roots from lo to hi by certified roots at gains so close together that each
// moves by less than a quarter of its distance to the others, and calls visit at each gain with the
// roots in the order of the first gain. It is slow, uses none of the tracker's machinery, and does
// not pass through break points.
func oracle(t testing.TB, f Family, lo, hi float64, visit func(k float64, roots []complex128)) {
	t.Helper()
	at := func(k float64) []complex128 {
		roots, err := f.PolesAt(k)
		if err != nil {
			t.Fatal(err)
		}
		var s []complex128
		for _, r := range roots {
			for range r.Multiplicity {
				s = append(s, r.Value)
			}
		}
		return s
	}
	k, old := lo, at(lo)
	visit(k, old)
	step := (hi - lo) / 100
	for k < hi {
		next := min(k+step, hi)
		if !(next > k) {
			t.Logf("the oracle ends at gain %v, where float64 gains are too far apart for it", k)
			return
		}
		found := at(next)
		order := make([]complex128, len(old))
		fits := len(found) == len(old)
		used := make([]bool, len(found))
		for i := range old {
			if !fits {
				break
			}
			near := math.Inf(1)
			for j := range old {
				if j != i {
					near = min(near, cmplx.Abs(old[i]-old[j]))
				}
			}
			best, pick := math.Inf(1), 0
			for j, s := range found {
				if d := cmplx.Abs(s - old[i]); d < best {
					best, pick = d, j
				}
			}
			fits = best < 0.25*near && !used[pick]
			used[pick] = true
			order[i] = found[pick]
		}
		if !fits {
			step /= 2
			continue
		}
		k, old = next, order
		visit(k, old)
		step *= 1.5
	}
}

// agrees compares Trace with the oracle between two gains without break points between them.
func agrees(t *testing.T, name string, f Family, lo, hi float64) {
	t.Helper()
	l, err := f.Trace(lo, hi)
	if err != nil {
		t.Errorf("%s: %v", name, err)
		return
	}
	var pick []int
	bad := 0
	oracle(t, f, lo, hi, func(k float64, roots []complex128) {
		if bad > 3 {
			return
		}
		if pick == nil {
			for _, s := range roots {
				best, at := math.Inf(1), -1
				for i, b := range l.Branches {
					if p, ok := b.At(k); ok && cmplx.Abs(p-s) < best {
						best, at = cmplx.Abs(p-s), i
					}
				}
				pick = append(pick, at)
			}
		}
		for i, s := range roots {
			p, ok := l.Branches[pick[i]].At(k)
			if !ok || cmplx.Abs(p-s) > 1e-13*cmplx.Abs(s) {
				bad++
				t.Errorf("%s: branch %d at gain %v: %v %v, want %v", name, pick[i], k, p, ok, s)
			}
		}
	})
}

// quietSpans returns intervals of gains in [lo, hi] free of break points, with a small distance to
// them.
func quietSpans(t testing.TB, f Family, lo, hi float64) [][2]float64 {
	points, err := f.BreakPoints()
	if err != nil {
		t.Fatal(err)
	}
	var spans [][2]float64
	from := lo
	for _, p := range points {
		if p.Gain > lo && p.Gain < hi {
			if to := p.Gain * (1 - 1e-7*math.Copysign(1, p.Gain)); to > from {
				spans = append(spans, [2]float64{from, to})
			}
			from = max(from, p.Gain*(1+1e-7*math.Copysign(1, p.Gain)))
		}
	}
	return append(spans, [2]float64{from, hi})
}

// nearMisses are families of which branches nearly meet: a complex or a triple or a quadruple
// point, missed by a gap.
func nearMisses(gap float64) map[string]Family {
	families := map[string]Family{}
	add := func(name string, fixed, scaled poly.Poly) {
		families[fmt.Sprintf("%s gap %g", name, gap)] = Family{fixed: fixed, scaled: scaled}
	}
	for _, sign := range []float64{1, -1} {
		g := sign * gap
		pair := func(re, im float64) poly.Poly { return poly.New(1, -2*re, re*re+im*im) }
		add(fmt.Sprintf("pairs %+.0f", sign), pair(-2+g, 1).Mul(pair(-2, 4)), poly.New(1))
		add(fmt.Sprintf("triple %+.0f", sign), poly.New(1, 9+g, 0, 0), poly.New(1, 1))
		add(fmt.Sprintf("quadruple %+.0f", sign), poly.New(1, 4, 6+g, 4, -15), poly.New(1))
		add(fmt.Sprintf("skew quadruple %+.0f", sign), poly.New(1, 4+g, 6, 4, -15), poly.New(1))
		add(fmt.Sprintf("modes %+.0f", sign), pair(-0.01, 1).Mul(pair(-0.02, 1+g)).Mul(poly.New(1, 5)), pair(-0.015, 1+g/2).Mul(poly.New(1, 2)))
	}
	return families
}

func TestNearMisses(t *testing.T) {
	gaps := []float64{1e-3, 1e-6, 1e-9}
	if os.Getenv("POLEWRIGHT_LONG") != "" {
		gaps = []float64{1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-8, 1e-9, 1e-10, 1e-11, 1e-12}
	}
	for _, gap := range gaps {
		for name, f := range nearMisses(gap) {
			for _, span := range quietSpans(t, f, 1e-2, 1e3) {
				agrees(t, name, f, span[0], span[1])
			}
			if _, err := f.Trace(0, math.Inf(1)); err != nil {
				t.Errorf("%s: %v", name, err)
			}
			if _, err := f.Trace(math.Inf(-1), 0); err != nil {
				t.Errorf("%s: %v", name, err)
			}
		}
	}
}

// TestMixedTimeScales follows random plants whose poles and zeros spread over many decades.
func TestMixedTimeScales(t *testing.T) {
	count := 40
	if os.Getenv("POLEWRIGHT_LONG") != "" {
		count = 400
	}
	r := rand.New(rand.NewPCG(7, 7))
	for i := range count {
		fixed, scaled := randomPlant(r, 3+r.IntN(6))
		f := Family{fixed: poly.New(fixed...), scaled: poly.New(scaled...)}
		for _, span := range quietSpans(t, f, 1e-3, 1e3) {
			agrees(t, fmt.Sprint(i, " ", span), f, span[0], span[1])
		}
	}
}
