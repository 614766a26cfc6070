package poly

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/internal/refdata"
)

// References: PARI/GP and mpmath, see testdata/README.md.
func TestRealRootsReferences(t *testing.T) {
	for _, c := range rootCases(t) {
		t.Run(c.Name, func(t *testing.T) {
			p := New(refdata.Floats(t, c.Coefficients)...)
			roots, err := p.RealRoots(math.Inf(-1), math.Inf(1))
			if err != nil {
				t.Fatal(err)
			}
			used := 0
			for _, want := range c.Roots {
				if want.Im != "0" {
					continue
				}
				hits := 0
				for _, r := range roots {
					if refdata.Miss(t, real(r.Value), want.Re) <= r.HalfRe {
						hits++
						used += want.Mult
						if r.Distinct == 1 && r.Multiplicity != want.Mult {
							t.Errorf("%v: multiplicity %d, want %d", want.Re, r.Multiplicity, want.Mult)
						}
					}
				}
				if hits != 1 {
					t.Errorf("%v lies in %d discs of %v", want.Re, hits, roots)
				}
			}
			for _, r := range roots {
				used -= r.Multiplicity
			}
			if used != 0 {
				t.Errorf("the discs hold %d roots too many: %v", -used, roots)
			}
		})
	}
}

func TestRealRootsEnds(t *testing.T) {
	p := New(1, 6, 11, 6) // roots -3, -2, -1
	tests := []struct {
		lo, hi float64
		opt    []Option
		want   []float64
	}{
		{-3, -1, nil, []float64{-3, -2, -1}},
		{-3, -1, []Option{Open()}, []float64{-2}},
		{-3, -1, []Option{LeftOpen()}, []float64{-2, -1}},
		{-3, -1, []Option{RightOpen()}, []float64{-3, -2}},
		{math.Inf(-1), math.Inf(1), nil, []float64{-3, -2, -1}},
		{math.Inf(-1), -2, nil, []float64{-3, -2}},
		{math.Nextafter(-2, 0), math.Inf(1), nil, []float64{-1}},
		{-2, -2, nil, []float64{-2}},
		{-2, -2, []Option{Open()}, nil},
		{-1, -3, nil, nil},
		{0, math.Inf(1), nil, nil},
	}
	for _, test := range tests {
		roots, err := p.RealRoots(test.lo, test.hi, test.opt...)
		if err != nil {
			t.Fatal(err)
		}
		if len(roots) != len(test.want) {
			t.Errorf("[%v, %v]: %v, want %v", test.lo, test.hi, roots, test.want)
			continue
		}
		for i, r := range roots {
			if r.Value != complex(test.want[i], 0) || r.Multiplicity != 1 || r.Distinct != 1 {
				t.Errorf("[%v, %v]: %v, want %v", test.lo, test.hi, roots, test.want)
			}
		}
	}
}

// TestRealRootsBesideAnEnd asks for √2 with ends at its two neighbours in float64, which no
// rounded root can decide.
func TestRealRootsBesideAnEnd(t *testing.T) {
	p := New(1, 0, -2)
	below, above := math.Nextafter(math.Sqrt2, 0), math.Sqrt2 // √2 < math.Sqrt2, from its digits
	for _, test := range []struct {
		lo, hi float64
		want   int
	}{{below, above, 1}, {above, 2, 0}, {0, below, 0}, {0, above, 1}, {below, 2, 1}} {
		if roots, err := p.RealRoots(test.lo, test.hi); err != nil || len(roots) != test.want {
			t.Errorf("[%v, %v]: %v, %v; want %d roots", test.lo, test.hi, roots, err, test.want)
		}
	}
}

func TestRealRootsRange(t *testing.T) {
	// (s - 2^1100)(s - 1)(s + 2^-1100), of which only 1 is a float64.
	huge := New(1, 0).Sub(New(0x1p1000).Scale(0x1p100))
	small := New(0x1p1000).Scale(0x1p100).Mul(New(1, 0)).Add(New(1))
	p := huge.Mul(small).Mul(New(1, -1))
	roots, err := p.RealRoots(0.5, 2)
	if err != nil || len(roots) != 1 || roots[0] != (Root{Value: 1, Multiplicity: 1, Distinct: 1}) {
		t.Errorf("between 0.5 and 2: %v, %v", roots, err)
	}
	var tooFar *RangeError
	if _, err := p.RealRoots(0.5, math.Inf(1)); !errors.As(err, &tooFar) {
		t.Errorf("up to infinity: %v, want a RangeError", err)
	}
	if _, err := p.RealRoots(-1, 0.5); !errors.As(err, &tooFar) {
		t.Errorf("about 0: %v, want a RangeError", err)
	}
}

func TestRealRootsRefuse(t *testing.T) {
	var argument *ArgumentError
	for _, p := range []Poly{{}, New(math.NaN())} {
		if _, err := p.RealRoots(0, 1); !errors.As(err, &argument) {
			t.Errorf("%v: %v, want an ArgumentError", p, err)
		}
	}
	for _, ends := range [][2]float64{{math.NaN(), 1}, {0, math.NaN()}} {
		if _, err := New(1, 1).RealRoots(ends[0], ends[1]); !errors.As(err, &argument) {
			t.Errorf("%v: %v, want an ArgumentError", ends, err)
		}
	}
}

// TestRealRootsAgainstSturm counts the roots in each answer by Sturm's theorem, which no stage
// uses.
func TestRealRootsAgainstSturm(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 300 {
		p := drawPoly(r)
		if p.Degree() < 1 {
			continue
		}
		lo, hi := r.NormFloat64()-1, r.NormFloat64()+1
		if r.IntN(2) == 0 {
			lo, hi = math.Round(lo*8)/8, math.Round(hi*8)/8
		}
		if r.IntN(3) == 0 {
			lo, hi = math.Inf(-1), math.Inf(1)
		}
		if !(lo < hi) {
			continue
		}
		checkRealRoots(t, p, lo, hi)
	}
}

func checkRealRoots(t *testing.T, p Poly, lo, hi float64) {
	t.Helper()
	roots, err := p.RealRoots(lo, hi, Open())
	var tooFar *RangeError
	if errors.As(err, &tooFar) {
		return
	}
	if err != nil {
		t.Fatalf("RealRoots(%v, %v, %v): %v", p, lo, hi, err)
	}
	chain := exact.SturmChain(p.integers())
	want := chain.Count(exact.Float(lo), exact.Float(hi))
	got := 0
	for i, r := range roots {
		if imag(r.Value) != 0 || r.Multiplicity < 1 || r.Distinct < 1 {
			t.Fatalf("RealRoots(%v, %v, %v): %v is no real root", p, lo, hi, r)
		}
		if i > 0 && !(real(r.Value)-r.Radius > real(roots[i-1].Value)+roots[i-1].Radius) {
			t.Fatalf("RealRoots(%v, %v, %v): %v and %v meet", p, lo, hi, roots[i-1], r)
		}
		if r.Distinct == 1 {
			got++
			if r.HalfIm != 0 {
				t.Fatalf("RealRoots(%v, %v, %v): %v is not exactly real", p, lo, hi, r)
			}
		} else {
			v, reach := exact.Float(real(r.Value)), exact.Float(r.Radius)
			a, b := v.Sub(reach), v.Add(reach)
			if x := exact.Float(lo); a.Cmp(x) < 0 {
				a = x
			}
			if x := exact.Float(hi); b.Cmp(x) > 0 {
				b = x
			}
			got += chain.Count(a, b)
		}
	}
	if got != want {
		t.Fatalf("RealRoots(%v, %v, %v) = %v: %d roots, by Sturm %d", p, lo, hi, roots, got, want)
	}
}

// TestRealRootsStages sets the stage that does without Roots against the usual one.
func TestRealRootsStages(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	for range 300 {
		p := drawPoly(r)
		if p.Degree() < 1 {
			continue
		}
		a, errA := p.RealRoots(math.Inf(-1), math.Inf(1))
		b, errB := p.realRootsExact("test", math.Inf(-1), math.Inf(1), exact.Closed)
		if (errA == nil) != (errB == nil) || len(a) != len(b) {
			t.Fatalf("%v: %v, %v and %v, %v", p.c, a, errA, b, errB)
		}
		for i := range a {
			if math.Abs(real(a[i].Value)-real(b[i].Value)) > a[i].Radius+b[i].Radius || a[i].Multiplicity != b[i].Multiplicity || a[i].Distinct != b[i].Distinct {
				t.Fatalf("%v: %v and %v", p.c, a[i], b[i])
			}
		}
	}
}
