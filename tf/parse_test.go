package tf

import (
	"errors"
	"math"
	"math/rand"
	"os"
	"strconv"
	"strings"
	"testing"

	"github.com/polewright/polewright/poly"
)

func TestParse(t *testing.T) {
	for _, tt := range []struct {
		text     string
		num, den []float64
		dead     float64
		period   float64
	}{
		{"18 exp(-0.02 s) / (s (s + 3))", []float64{18}, []float64{1, 3, 0}, 0.02, 0},
		{"18/(s(s+3))exp(-0.02s)", []float64{18}, []float64{1, 3, 0}, 0.02, 0},
		{"0.2 z / (z - 0.8), period 0.01", []float64{0.2, 0}, []float64{1, -0.8}, 0, 0.01},
		{"(1 + 0.5 z^-1) / (1 - z^-1 + 0.25z^(-2)), period 1e-3", []float64{1, 0.5, 0}, []float64{1, -1, 0.25}, 0, 1e-3},
		{"z^-1, period 2", []float64{1}, []float64{1, 0}, 0, 2},
		{"3 - 2", []float64{1}, []float64{1}, 0, 0},
		{"-s^2", []float64{-1, 0, 0}, []float64{1}, 0, 0},
		{"2 * -s", []float64{-2, 0}, []float64{1}, 0, 0},
		{"2^-3 s", []float64{0.125, 0}, []float64{1}, 0, 0},
		{"2 s^2 3 s", []float64{6, 0, 0, 0}, []float64{1}, 0, 0},
		{"1 / 2 / s", []float64{1}, []float64{2, 0}, 0, 0},
		{"s / s", []float64{1, 0}, []float64{1, 0}, 0, 0},
		{"exp(-s/4) exp(-0.5s)^2", []float64{1}, []float64{1}, 1.25, 0},
		{"0x1.8p1 (s − 1) · 2", []float64{6, -6}, []float64{1}, 0, 0},
		{"1 + 2/s", []float64{1, 2}, []float64{1, 0}, 0, 0},
		{"((s + 1)^2 + 3^2)", []float64{1, 2, 10}, []float64{1}, 0, 0},
		{"5, period 0.1", []float64{5}, []float64{1}, 0, 0.1},
	} {
		g, err := Parse(tt.text)
		if err != nil {
			t.Errorf("Parse(%q): %v", tt.text, err)
			continue
		}
		if !g.Numerator().Equal(poly.New(tt.num...)) || !g.Denominator().Equal(poly.New(tt.den...)) || g.DeadTime() != tt.dead || g.Period() != tt.period {
			t.Errorf("Parse(%q) = %v, want %v / %v, dead time %v, period %v", tt.text, g, tt.num, tt.den, tt.dead, tt.period)
		}
	}
}

func TestParseKeepsRoots(t *testing.T) {
	g := MustParse("0.3 ((s + 0.1)^2 + 0.2^2) / (s (s + 0.7)^2)")
	zeros, err := g.Zeros()
	if err != nil || len(zeros) != 2 || zeros[1].Value != -0.1+0.2i || zeros[1].Radius != 0 {
		t.Errorf("zeros = %v, %v; want -0.1 ± 0.2i as written", zeros, err)
	}
	poles, err := g.Poles()
	if err != nil || len(poles) != 2 || poles[0].Value != -0.7 || poles[0].Multiplicity != 2 || poles[0].Radius != 0 {
		t.Errorf("poles = %v, %v; want a double one at -0.7 and one at 0", poles, err)
	}
	if got, want := g.String(), "0.3 ((s + 0.1)^2 + 0.2^2) / (s (s + 0.7)^2)"; got != want {
		t.Errorf("String = %q, want %q", got, want)
	}
}

// The coefficients of this function reach over more than 2¹⁶ bits.
func TestParseOfWideCoefficients(t *testing.T) {
	const text = "49 ((z - 4.179591376246709e-308)^2 + 2.0695867270408807e286^2)^16 z^8 (z + 3.736891559583761e-308)^4 / ((z - 6)^4 (z + 3.3623580122583264e-308)^2), period 5"
	if g, err := Parse(text); err != nil || g.String() != text {
		t.Errorf("reads back as %v, %v", g, err)
	}
}

func TestParseErrors(t *testing.T) {
	for _, tt := range []struct {
		text   string
		column int
		says   string
	}{
		{"", 1, "expected a number"},
		{"2 +", 4, "expected a number"},
		{"(s + 1", 7, `")"`},
		{"s + 1)", 6, "expected an operator"},
		{"1 / s(s + 1)", 6, "parentheses"},
		{"s + z", 5, "do not mix"},
		{"z / (z - 1)", 12, "period"},
		{"s, period 1", 4, "no period"},
		{"exp(-0.1 s), period 1", 14, "no period"},
		{"exp(-0.1 s) z, period 1", 13, "do not mix"},
		{"z, period 0", 11, "greater than 0"},
		{"z, period -1", 11, "number of seconds"},
		{"exp(0.1 s)", 5, "negative exponent"},
		{"exp(-0.1 s^2)", 5, "dead time"},
		{"1 / exp(-s)", 5, "future"},
		{"exp(-s) + exp(-2 s)", 9, "different dead times"},
		{"1 / (s - s)", 3, "zero"},
		{"1e999", 1, "beyond the range"},
		{"1e-999", 1, "below the range"},
		{"s^1.5", 3, "whole exponent"},
		{"s^501", 2, "degree"},
		{"((s^15)^15)^15", 12, "degree"},
		{"k s", 1, "expected a number"},
		{"2 $ s", 3, "expected a number"},
		{"1/s, period 1, period 1", 6, "no period"},
		{"1/z, period 1, period 1", 16, "at most once"},
		{"1/z, period 1, dead time 0.5", 26, "whole number of periods"},
		{"((2^4096)^4096)^4096", 10, "bits"},
	} {
		_, err := Parse(tt.text)
		var parse *ParseError
		if !errors.As(err, &parse) || parse.Column != tt.column || !strings.Contains(err.Error(), tt.says) {
			t.Errorf("Parse(%q): error %v, want column %d and %q", tt.text, err, tt.column, tt.says)
		}
	}
	deep := strings.Repeat("(", 1e5)
	if _, err := Parse(deep); err == nil {
		t.Error("endless parentheses are taken")
	}
	if _, err := Parse(strings.Repeat("-", 1e5) + "1"); err == nil {
		t.Error("endless signs are taken")
	}
}

// randomFunction makes functions as they come up, with a taste for the awkward.
func randomFunction(r *rand.Rand) Function {
	number := func() float64 {
		switch r.Intn(6) {
		case 0:
			return float64(r.Intn(21) - 10)
		case 1:
			return math.Ldexp(r.NormFloat64(), r.Intn(2000)-1000)
		case 2:
			return math.Float64frombits(r.Uint64() & 0x801fffffffffffff) // near the smallest
		default:
			return r.NormFloat64() * math.Pow(10, float64(r.Intn(9)-4))
		}
	}
	roots := func() []complex128 {
		var list []complex128
		for n := r.Intn(4); n > 0; n-- {
			if re, im := number(), number(); r.Intn(2) == 0 || im == 0 {
				list = append(list, complex(re, 0))
			} else {
				list = append(list, complex(re, im), complex(re, -im))
			}
			if r.Intn(4) == 0 {
				list = append(list, list...)
			}
		}
		return list
	}
	coefficients := func() []float64 {
		list := make([]float64, 1+r.Intn(5))
		for i := range list {
			if r.Intn(4) > 0 {
				list[i] = number()
			}
		}
		return list
	}
	var g Function
	var err error
	if r.Intn(2) == 0 {
		g, err = FromRoots(number(), roots(), roots())
	} else {
		den := coefficients()
		den[0] = 1
		g, err = New(poly.New(coefficients()...), poly.New(den...).Scale(1+math.Abs(number())))
	}
	if err != nil {
		panic(err)
	}
	dead := math.Abs(number())
	switch r.Intn(3) {
	case 0:
		g, err = g.WithDeadTime(dead)
	case 1:
		period := math.Abs(number())
		if period == 0 {
			period = 1
		}
		if g, err = g.WithPeriod(period); err == nil && r.Intn(3) == 0 {
			g, err = g.WithDeadTime(float64(r.Intn(4)) * period)
			if err != nil { // beyond the range
				g, err = g.WithDeadTime(0)
			}
		}
	}
	if err != nil {
		panic(err)
	}
	if r.Intn(3) == 0 { // products have coefficients that are no float64
		h := g
		if r.Intn(2) == 0 {
			h, _ = g.Parallel(g)
		} else {
			h, _ = g.Series(g)
		}
		if h.Err() == nil {
			g = h
		}
	}
	return g
}

// POLEWRIGHT_RANDOM_FUNCTIONS sets how many are tried; the bar is a million.
func TestStringReadsBackIdentically(t *testing.T) {
	n := 1000
	if s := os.Getenv("POLEWRIGHT_RANDOM_FUNCTIONS"); s != "" {
		var err error
		if n, err = strconv.Atoi(s); err != nil {
			t.Fatal(err)
		}
	}
	r := rand.New(rand.NewSource(4))
	for range n {
		g := randomFunction(r)
		text := g.String()
		h, err := Parse(text)
		if err != nil {
			t.Fatalf("Parse(%q): %v", text, err)
		}
		if !h.Equal(g) || !sameGivenRoots(g.Numerator(), h.Numerator()) || !sameGivenRoots(g.Denominator(), h.Denominator()) {
			t.Fatalf("Parse(%q) = %q, not the same", text, h)
		}
		if again := h.String(); again != text {
			t.Fatalf("%q reads back as %q", text, again)
		}
	}
}

// sameGivenRoots tells whether the roots of p, if they were given, are known of q as well.
func sameGivenRoots(p, q poly.Poly) bool {
	a, ok := p.GivenRoots()
	if !ok {
		return true
	}
	b, ok := q.GivenRoots()
	if !ok || len(a) != len(b) {
		return false
	}
	count := map[complex128]int{}
	for i := range a {
		count[a[i]]++
		count[b[i]]--
	}
	for _, n := range count {
		if n != 0 {
			return false
		}
	}
	return true
}

func FuzzParse(f *testing.F) {
	for _, text := range []string{
		"18 exp(-0.02 s) / (s (s + 3))", "0.2 z / (z - 0.8), period 0.01", "1 + 0.5 z^-1, period 1e-3, dead time 2e-3",
		"((s + 1)^2 + 3^2)^2", "2^-1100 s", "0x1.8p-3 - s", "1e308 s^3 + 5e-324", "exp(-s/3)", "-(-s)^-2", "1/(s - s)", "(((((", "1/s(s+1)",
	} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		g, err := Parse(text)
		if err != nil {
			var parse *ParseError
			if !errors.As(err, &parse) || parse.Column < 1 || parse.Column > len([]rune(text))+1 {
				t.Fatalf("Parse(%q): error %#v", text, err)
			}
			if g.Err() != err {
				t.Fatalf("Parse(%q): the function does not carry its error", text)
			}
			return
		}
		written := g.String()
		h, err := Parse(written)
		if err != nil {
			t.Fatalf("Parse(%q) writes %q: %v", text, written, err)
		}
		if !h.Equal(g) || h.String() != written {
			t.Fatalf("Parse(%q) writes %q, which reads as %q", text, written, h)
		}
	})
}
