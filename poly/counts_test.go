package poly

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/internal/refdata"
)

func TestCounts(t *testing.T) {
	mustRoots := func(roots ...complex128) Poly {
		p, err := FromRoots(1, roots...)
		if err != nil {
			t.Fatal(err)
		}
		return p
	}
	tests := []struct {
		source string
		p      Poly
		ask    func(Poly) (Count, error)
		want   Count
	}{
		{"(s+1)(s+2)(s+3)", New(1, 6, 11, 6), leftOf(0), Count{3, 0, 0}},
		{"the same, at its own root", New(1, 6, 11, 6), leftOf(-2), Count{1, 1, 1}},
		{"the same, at infinity", New(1, 6, 11, 6), leftOf(math.Inf(1)), Count{3, 0, 0}},
		{"the same, at infinity", New(1, 6, 11, 6), leftOf(math.Inf(-1)), Count{0, 0, 3}},
		{"a constant", New(5), leftOf(0), Count{}},
		{"three integrators", New(1, 1, 0, 0, 0), leftOf(0), Count{1, 3, 0}},
		{"zero in the first column: s⁴+s³+2s²+2s+3 (a textbook case, from memory)", New(1, 1, 2, 2, 3), leftOf(0), Count{2, 0, 2}},
		{"zero in the first column: s⁵+2s⁴+3s³+6s²+5s+3 (a textbook case, from memory)", New(1, 2, 3, 6, 5, 3), leftOf(0), Count{3, 0, 2}},
		{"row of zeros: s³+2s²+s+2 = (s²+1)(s+2)", New(1, 2, 1, 2), leftOf(0), Count{1, 2, 0}},
		{"row of zeros: (s²+1)²(s+1)", New(1, 1, 2, 2, 1, 1), leftOf(0), Count{1, 4, 0}},
		{"row of zeros off the axis: s⁵+2s⁴+24s³+48s²-25s-50 (a textbook case, from memory)", New(1, 2, 24, 48, -25, -50), leftOf(0), Count{2, 2, 1}},
		{"mirrored real roots: s²-1", New(1, 0, -1), leftOf(0), Count{1, 0, 1}},
		{"both singular cases: s⁶+s⁵+3s⁴+3s³+3s²+2s+1 (Gantmacher, vol. 2, ch. XV, § 4, from memory)", New(1, 1, 3, 3, 3, 2, 1), leftOf(0), Count{2, 2, 2}},

		{"s²+s+1 has damping 1/2", New(1, 1, 1), inSector(0.5), Count{0, 2, 0}},
		{"s²+s+1 beside 1/2", New(1, 1, 1), inSector(math.Nextafter(0.5, 0)), Count{2, 0, 0}},
		{"s²+s+1 beside 1/2", New(1, 1, 1), inSector(math.Nextafter(0.5, 1)), Count{0, 0, 2}},
		{"damping 3/5", mustRoots(-3+4i, -3-4i, -1, 0, 2), inSector(0.5), Count{3, 1, 1}},
		{"zeta 0 is the half-plane", New(1, 0, 1), inSector(0), Count{0, 2, 0}},
		{"zeta 1 is the axis", New(1, 6, 11, 6).Mul(New(1, 0)).Mul(New(1, 1, 1)), inSector(1), Count{0, 4, 2}},

		{"(z-1)(z+1)(z-1/2)", New(1, -0.5, -1, 0.5), inDisc(1), Count{1, 2, 0}},
		{"z⁴ = 1", New(1, 0, 0, 0, -1), inDisc(1), Count{0, 4, 0}},
		{"reciprocal pair 2, 1/2", New(1, -2.5, 1), inDisc(1), Count{1, 0, 1}},
		{"radius 0", New(1, 1, 0, 0), inDisc(0), Count{0, 2, 1}},
		{"radius infinite", New(1, 1, 0, 0), inDisc(math.Inf(1)), Count{3, 0, 0}},
		{"3-4-5 on the circle", mustRoots(3+4i, 3-4i, 4.5, 6), inDisc(5), Count{1, 2, 1}},
	}
	for _, test := range tests {
		got, err := test.ask(test.p)
		if err != nil || got != test.want {
			t.Errorf("%s: got %+v, %v; want %+v", test.source, got, err, test.want)
		}
	}
}

func leftOf(x float64) func(Poly) (Count, error) {
	return func(p Poly) (Count, error) { return p.CountLeftOf(x) }
}

func inSector(x float64) func(Poly) (Count, error) {
	return func(p Poly) (Count, error) { return p.CountInSector(x) }
}

func inDisc(x float64) func(Poly) (Count, error) {
	return func(p Poly) (Count, error) { return p.CountInDisc(x) }
}

func TestCountsRefuse(t *testing.T) {
	bad := []struct {
		p   Poly
		ask func(Poly) (Count, error)
	}{
		{Poly{}, leftOf(0)}, {Poly{}, inSector(0.5)}, {Poly{}, inDisc(1)},
		{New(1, math.NaN()), leftOf(0)}, {New(1, 1), leftOf(math.NaN())},
		{New(1, 1), inSector(-0.1)}, {New(1, 1), inSector(1.1)}, {New(1, 1), inSector(math.NaN())},
		{New(1, 1), inDisc(-1)}, {New(1, 1), inDisc(math.NaN())},
		{New(append([]float64{1}, make([]float64, MaxDegree+1)...)...), leftOf(0)},
	}
	for i, b := range bad {
		var argument *ArgumentError
		if c, err := b.ask(b.p); !errors.As(err, &argument) || c != (Count{}) {
			t.Errorf("case %d: got %+v, %v; want an ArgumentError", i, c, err)
		}
	}
}

// drawPoly draws polynomials of all kinds: few bits and shared roots, any coefficients, wide
// exponents, exact products that are no float64.
func drawPoly(r *rand.Rand) Poly {
	n := r.IntN(12)
	p := New(1 + float64(r.IntN(3)))
	switch r.IntN(5) {
	case 0: // roots on a grid
		for range n/2 + 1 {
			a, w := float64(r.IntN(17)-8)/8, float64(r.IntN(9))/8
			if r.IntN(2) == 0 {
				p = p.Mul(New(1, -2*a, a*a+w*w))
			} else {
				p = p.Mul(New(1, -a))
			}
		}
	case 1, 2:
		c := make([]float64, n+1)
		for i := range c {
			c[i] = r.NormFloat64()
		}
		c[0] = 1
		p = New(c...)
	case 3:
		c := make([]float64, n+1)
		for i := range c {
			c[i] = math.Ldexp(r.NormFloat64(), r.IntN(2000)-1000)
		}
		c[0] = 1e-100
		p = New(c...)
	default:
		for range n/2 + 1 {
			p = p.Mul(New(1, r.ExpFloat64(), r.ExpFloat64()))
		}
		if r.IntN(2) == 0 {
			p = New(p.Coefficients()...)
		}
	}
	if r.IntN(8) == 0 {
		p = p.Mul(New(1, 0))
	}
	return p
}

// TestCountsStages sets the float64 coefficients alone against the exact integers.
func TestCountsStages(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	settled, total := 0, 0
	for range 2000 {
		p := drawPoly(r)
		if p.Degree() < 1 {
			continue
		}
		total++
		if got, ok := exact.FilterLeftOf(p.c, p.inexact(), 0); ok {
			settled++
			table, err := p.RouthTable()
			if err != nil || Count(got) != table.Count {
				t.Fatalf("%v: %+v, by the table %+v, %v", p.c, got, table.Count, err)
			}
		}
	}
	if settled < total/2 {
		t.Errorf("float64 settles only %d of %d", settled, total)
	}
}

// TestCountsReferences counts the reference roots themselves. References: PARI/GP and mpmath, see
// testdata/README.md.
func TestCountsReferences(t *testing.T) {
	for _, c := range rootCases(t) {
		p := New(refdata.Floats(t, c.Coefficients)...)
		if p.Degree() < 1 {
			continue
		}
		var line Count
		for _, r := range c.Roots {
			// A part printed as "0" is exactly zero.
			switch re := r.Re.Float(t); {
			case r.Re == "0":
				line.Boundary += r.Mult
			case re < 0:
				line.Inside += r.Mult
			default:
				line.Outside += r.Mult
			}
		}
		if got, err := p.CountLeftOf(0); err != nil || got != line {
			t.Errorf("%s: CountLeftOf(0) = %+v, %v; want %+v", c.Name, got, err, line)
		}
		if p.Degree() <= maxTableDegree {
			if table, err := p.RouthTable(); err != nil || table.Count != line {
				t.Errorf("%s: the table counts %+v, %v; want %+v", c.Name, table.Count, err, line)
			}
		}
		// A radius and a damping ratio that keep clear of all reference roots.
		radius, zeta := 1.0625, 0.6875
		disc, sector, clear := Count{}, Count{}, true
		for _, r := range c.Roots {
			re, im := r.Re.Float(t), r.Im.Float(t)
			m := math.Hypot(re, im)
			d, e := m-radius, -re-zeta*m
			clear = clear && math.Abs(d) > 1e-9*m && (math.Abs(e) > 1e-9*m || m == 0)
			if d < 0 {
				disc.Inside += r.Mult
			} else {
				disc.Outside += r.Mult
			}
			switch {
			case m == 0:
				sector.Boundary += r.Mult
			case e > 0:
				sector.Inside += r.Mult
			default:
				sector.Outside += r.Mult
			}
		}
		if !clear {
			t.Errorf("%s: a root is too near the boundary for this test", c.Name)
		}
		if got, err := p.CountInDisc(radius); err != nil || got != disc {
			t.Errorf("%s: CountInDisc(%v) = %+v, %v; want %+v", c.Name, radius, got, err, disc)
		}
		if got, err := p.CountInSector(zeta); err != nil || got != sector {
			t.Errorf("%s: CountInSector(%v) = %+v, %v; want %+v", c.Name, zeta, got, err, sector)
		}
	}
}
