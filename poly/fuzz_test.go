package poly

import (
	"encoding/binary"
	"encoding/json"
	"errors"
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/polewright/polewright/internal/exact"
)

// polyFromBytes reads coefficients: after each kind byte come a small integer, a small binary
// fraction, or all 64 bits of a float64. At most 24, so that the exact judges stay quick.
func polyFromBytes(data []byte) Poly {
	var c []float64
	for len(data) >= 2 && len(c) < 24 {
		kind := data[0] % 4
		switch {
		case kind == 3 && len(data) >= 9:
			x := math.Float64frombits(binary.LittleEndian.Uint64(data[1:]))
			if math.IsNaN(x) || math.IsInf(x, 0) {
				x = 1
			}
			c = append(c, x)
			data = data[9:]
		case kind == 2:
			c = append(c, float64(int8(data[1]))/16)
			data = data[2:]
		default:
			c = append(c, float64(int8(data[1])))
			data = data[2:]
		}
	}
	return New(c...)
}

func FuzzRealRoots(f *testing.F) {
	f.Add([]byte{0, 1, 0, 6, 0, 11, 0, 6}, -2.0, 5.0, byte(1))
	f.Add([]byte{0, 1, 0, 254}, math.Sqrt2, 2.0, byte(2)) // s² - 2 at its rounded root
	f.Add([]byte{0, 1, 0, 2, 0, 1}, -1.0, -1.0, byte(3))
	f.Add([]byte{0, 1, 0, 0, 3, 0, 0, 0, 0, 0, 0, 1, 0}, math.Inf(-1), math.Inf(1), byte(0))
	f.Fuzz(func(t *testing.T, data []byte, lo, hi float64, multiply byte) {
		p := polyFromBytes(data)
		if multiply%4 == 1 {
			p = p.Mul(p)
		}
		if p.Degree() < 1 || math.IsNaN(lo) || math.IsNaN(hi) {
			return
		}
		if multiply%4 == 2 && !math.IsInf(lo, 0) {
			p = p.Mul(New(1, -lo)) // a root at an end
		}
		c, _ := p.Integers()
		bits := 0
		for _, n := range c {
			bits = max(bits, n.BitLen())
		}
		if bits*p.Degree()*p.Degree() > 300000 {
			return // Sturm's chain, the judge, would take seconds
		}
		if lo < hi {
			checkRealRoots(t, p, lo, hi)
		}
		if lo <= hi {
			closed, err := p.RealRoots(lo, hi)
			if err != nil {
				return
			}
			if !math.IsInf(lo, 0) && p.integers().SignAtFloat(lo) == 0 && (len(closed) == 0 || real(closed[0].Value)-closed[0].Radius > lo) {
				t.Fatalf("%v: the root at the end %v is missing from %v", p, lo, closed)
			}
		}
	})
}

func FuzzCounts(f *testing.F) {
	f.Add([]byte{0, 1, 0, 6, 0, 11, 0, 6}, 0.0)
	f.Add([]byte{0, 1, 0, 1, 0, 2, 0, 2, 0, 3}, 0.5)
	f.Add([]byte{0, 1, 0, 0, 0, 2, 0, 0, 0, 1}, 1.0)
	f.Add([]byte{0, 1, 0, 1, 0, 1}, 0.5)
	f.Add([]byte{0, 8, 0, 0, 0, 0, 0, 1}, 0.5)
	f.Fuzz(func(t *testing.T, data []byte, x float64) {
		p := polyFromBytes(data)
		if p.Degree() < 0 || p.Degree() > 12 || math.IsNaN(x) || math.IsInf(x, 0) {
			return
		}
		check := func(name string, c Count, err error) {
			if err != nil {
				t.Fatalf("%s(%v, %v): %v", name, p, x, err)
			}
			if c.Inside < 0 || c.Boundary < 0 || c.Outside < 0 || c.Inside+c.Boundary+c.Outside != p.Degree() {
				t.Fatalf("%s(%v, %v) = %+v", name, p, x, c)
			}
		}
		line, err := p.CountLeftOf(x)
		check("CountLeftOf", line, err)
		if want := Count(exact.LeftOf(p.integers(), exact.Float(x))); line != want {
			t.Fatalf("CountLeftOf(%v, %v) = %+v, exactly %+v", p, x, line, want)
		}
		table, err := p.Shift(x).RouthTable()
		check("RouthTable", table.Count, err)
		if table.Count != line {
			t.Fatalf("%v at %v: %+v, by the table %+v", p, x, line, table.Count)
		}
		disc, err := p.CountInDisc(math.Abs(x))
		check("CountInDisc", disc, err)
		if r := math.Abs(x); r > 0 {
			if want := Count(exact.InDisc(p.integers(), exact.Float(r))); disc != want {
				t.Fatalf("CountInDisc(%v, %v) = %+v, exactly %+v", p, r, disc, want)
			}
		}
		zeta := math.Abs(x)
		if zeta > 1 {
			zeta = 1 / zeta
		}
		if zeta < 1e-30 && zeta > 0 {
			return // exact Chebyshev polynomials of such numbers take too long here
		}
		sector, err := p.CountInSector(zeta)
		check("CountInSector", sector, err)
		// Against the discs of all roots, as far as they decide.
		roots, err := p.Roots()
		if err != nil {
			return
		}
		checkCountByRoots(t, "CountLeftOf", p, x, line, roots, func(s complex128) float64 { return real(s) - x })
		checkCountByRoots(t, "CountInDisc", p, x, disc, roots, func(s complex128) float64 {
			return math.Hypot(real(s), imag(s)) - math.Abs(x)
		})
		across := math.Sqrt((1 - zeta) * (1 + zeta))
		checkCountByRoots(t, "CountInSector", p, zeta, sector, roots, func(s complex128) float64 {
			return zeta*math.Abs(imag(s)) + across*real(s) // distance from the nearer ray's line
		})
	})
}

// checkCountByRoots counts the roots by their signed distance from the boundary, negative inside,
// and compares if none is near it.
func checkCountByRoots(t *testing.T, name string, p Poly, x float64, got Count, roots []Root, distance func(complex128) float64) {
	t.Helper()
	var want Count
	for _, r := range roots {
		d := distance(r.Value)
		if !(math.Abs(d) > 1e-9*(math.Hypot(real(r.Value), imag(r.Value))+math.Abs(x))+2*r.Radius) {
			return
		}
		if d < 0 {
			want.Inside += r.Multiplicity
		} else {
			want.Outside += r.Multiplicity
		}
	}
	if got != want {
		t.Fatalf("%s(%v, %v) = %+v, by the roots %+v", name, p, x, got, want)
	}
}

func FuzzJSON(f *testing.F) {
	for _, seed := range []string{`[1,6,11,6]`, `[]`, `null`, `"s² + 0.5"`, `["0x1p-1100",2]`, `{"coefficients":[2,14,62,50],"roots":[-1,[-3,4],[-3,-4]]}`,
		`{"coefficients":[1],"x":1}`, `[1e400]`, `[1,null]`, `{"roots":[]}`, `[-0.0,1]`, `{"coefficients":[1,0],"roots":[-0]}`} {
		f.Add([]byte(seed))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		var p Poly
		if err := json.Unmarshal(data, &p); err != nil {
			if p.Degree() != -1 || p.Err() != nil {
				t.Fatalf("%q: an error, and %v", data, p)
			}
			return
		}
		if p.Err() != nil {
			t.Fatalf("%q: read without an error, but %v", data, p.Err())
		}
		out, err := json.Marshal(p)
		if err != nil {
			t.Fatalf("%q: %v", data, err)
		}
		var q Poly
		if err := json.Unmarshal(out, &q); err != nil || !q.Equal(p) {
			t.Fatalf("%q: written as %s, read back as %v, %v", data, out, q, err)
		}
		a, okA := p.GivenRoots()
		b, okB := q.GivenRoots()
		if okA != okB || cmp.Diff(a, b) != "" {
			t.Fatalf("%q: given roots %v, %v became %v, %v", data, a, okA, b, okB)
		}
	})
}

func FuzzText(f *testing.F) {
	for _, seed := range []string{"s³ + 6s² + 11s + 6", "-z", "0", "1e-3·p - 0x1.8p-1100", "2e + 3", "s^500", "s - s", ".5s**2", "s⁹⁹⁹", "1e999", "−s"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		p, err := Parse(text)
		if err != nil {
			var wrong *FormatError
			if !errors.As(err, &wrong) || p.Err() == nil {
				t.Fatalf("%q: %v, %v", text, p, err)
			}
			return
		}
		out, err := p.MarshalText()
		if err != nil {
			t.Fatalf("%q: %v", text, err)
		}
		var q Poly
		if err := q.UnmarshalText(out); err != nil || !q.Equal(p) {
			t.Fatalf("%q: written as %s, read back as %v, %v", text, out, q, err)
		}
	})
}

func FuzzDivide(f *testing.F) {
	f.Add([]byte{0, 1, 0, 3, 0, 3, 0, 1}, []byte{0, 1, 0, 1}, byte(0))
	f.Add([]byte{0, 1, 0, 0, 0, 1}, []byte{0, 3, 0, 0}, byte(0))
	f.Add([]byte{0, 5}, []byte{3, 0, 0, 0, 0, 0, 0, 1, 0}, byte(1))
	f.Fuzz(func(t *testing.T, a, b []byte, multiply byte) {
		p, q := polyFromBytes(a), polyFromBytes(b)
		if q.Degree() < 0 {
			return
		}
		if multiply%2 == 1 {
			p = p.Mul(q)
		}
		d, err := p.Divide(q)
		if err != nil {
			t.Fatal(err)
		}
		checkDivision(t, p, q, d)
		if multiply%2 == 1 && p.Degree() >= 0 && (!d.Exact || d.Remainder.Degree() >= 0) {
			t.Fatalf("p·(%v) / (%v) is not exact", q, q)
		}
		common, err := p.CommonFactor(q, 0)
		if err != nil {
			t.Fatal(err)
		}
		for _, x := range []Poly{p, q} {
			if x.Degree() < 0 {
				continue
			}
			if _, r := longDivision(rationals(x), rationals(common)); !allZero(r) {
				t.Fatalf("%v does not divide %v", common, x)
			}
		}
	})
}
