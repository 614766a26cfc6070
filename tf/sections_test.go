package tf

import (
	"math/cmplx"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
)

// Any pairing is as good: the product is what is tested.
func TestSectionsReference(t *testing.T) {
	var file struct {
		Sections []struct {
			ID                     string
			Numerator, Denominator []refdata.Decimal
			Gain                   refdata.Decimal
			Sections               [][6]refdata.Decimal
		}
	}
	refdata.Read(t, "testdata/sampled.json", &file)
	for _, c := range file.Sections {
		g := functionOf(t, c.Numerator, c.Denominator, "")
		gain, sections, err := g.Sections()
		if err != nil {
			t.Errorf("%s: %v", c.ID, err)
			continue
		}
		if refdata.Off(t, gain, c.Gain) > 1e-15 || len(sections) != len(c.Sections) {
			t.Errorf("%s: gain %v with %d sections, want %v with %d", c.ID, gain, len(sections), c.Gain, len(c.Sections))
		}
		top, bottom := poly.New(gain), one
		for _, s := range sections {
			top, bottom = top.Mul(poly.New(s.Numerator[:]...)), bottom.Mul(poly.New(s.Denominator[:]...))
			if s.Denominator[0] == 0 && s.Numerator[0] != 0 {
				t.Errorf("%s: improper section %v", c.ID, s)
			}
		}
		samePolynomial(t, c.ID, "numerator", top, c.Numerator, 1e-13)
		samePolynomial(t, c.ID, "denominator", bottom, c.Denominator, 1e-13)
	}
}

func TestSectionsOfManyShapes(t *testing.T) {
	for _, text := range []string{
		"3", "0", "2 (s + 1) (s + 2) (s + 3)", "(s + 1) ((s + 2)^2 + 1) / ((s + 4) ((s + 1)^2 + 5))", "1 / s^5", "(s + 1)^3 / (s + 2)^2",
		"0.2 (z + 1)^3 / ((z - 0.9) (z - 0.8) (z - 0.7)), period 1, dead time 2", "-4 s / (s^2 + 2)",
	} {
		g := MustParse(text)
		gain, sections, err := g.Sections()
		if err != nil {
			t.Errorf("%s: %v", text, err)
			continue
		}
		s := 0.3 + 0.4i
		y := complex(gain, 0)
		for _, c := range sections {
			y *= poly.New(c.Numerator[:]...).AtComplex(s) / poly.New(c.Denominator[:]...).AtComplex(s)
			if g.isProper() && poly.New(c.Numerator[:]...).Degree() > poly.New(c.Denominator[:]...).Degree() {
				t.Errorf("%s: improper section %v", text, c)
			}
		}
		if want := g.At(s); cmplx.Abs(y-want) > 1e-14*cmplx.Abs(want) {
			t.Errorf("%s: product %v, want %v", text, y, want)
		}
	}
}

// The residues are by hand, or by mpmath with 60 digits where noted.
func TestPartialFractions(t *testing.T) {
	for _, tt := range []struct {
		text   string
		direct poly.Poly
		terms  []PartialFraction
	}{
		{"1 / ((s + 1) (s + 2))", poly.New(), []PartialFraction{{-2, 1, -1}, {-1, 1, 1}}},
		{"(s^2 + 3 s + 5) / (s + 1)^3", poly.New(), []PartialFraction{{-1, 1, 1}, {-1, 2, 1}, {-1, 3, 3}}},
		{"(s^3 + 2 s^2 + s + 1) / (s (s + 1))", poly.New(1, 1), []PartialFraction{{-1, 1, -1}, {0, 1, 1}}},
		{"1 / (s^2 + 1)", poly.New(), []PartialFraction{{-1i, 1, 0.5i}, {1i, 1, -0.5i}}},
		{"1 / ((s + 1)^2 + 1)^2", poly.New(), []PartialFraction{{-1 - 1i, 1, 0.25i}, {-1 - 1i, 2, -0.25}, {-1 + 1i, 1, -0.25i}, {-1 + 1i, 2, -0.25}}},
		// Poles 2⁻⁴⁰ apart: residues are ±2⁴⁰, and by coefficients from float64 roots they would have 4 digits.
		{"1 / ((s + 1) (s + 0x1.0000000001p0))", poly.New(), []PartialFraction{{-0x1.0000000001p0, 1, -0x1p40}, {-1, 1, 0x1p40}}},
		{"1 / (s^2 + 0x2.0000000001p0 s + 0x1.0000000001p0)", poly.New(), []PartialFraction{{-0x1.0000000001p0, 1, -0x1p40}, {-1, 1, 0x1p40}}},
		{"(s + 1) / ((s + 1) (s + 2))", poly.New(), []PartialFraction{{-2, 1, 1}, {-1, 1, 0}}},
		{"0.5 / (z - 0.5), period 1, dead time 1", poly.New(), []PartialFraction{{0, 1, -1}, {0.5, 1, 1}}},
	} {
		g := MustParse(tt.text)
		f, err := g.PartialFractions()
		if err != nil {
			t.Errorf("%s: %v", tt.text, err)
			continue
		}
		if !f.Direct.Equal(tt.direct) || len(f.Terms) != len(tt.terms) {
			t.Errorf("%s: %v, want %v + %v", tt.text, f, tt.direct, tt.terms)
			continue
		}
		for i, want := range tt.terms {
			got := f.Terms[i]
			if got.Pole != want.Pole || got.Power != want.Power || cmplx.Abs(got.Residue-want.Residue) > 1e-15*cmplx.Abs(want.Residue) {
				t.Errorf("%s: term %d = %v, want %v", tt.text, i, got, want)
			}
		}
		s := 0.7 + 0.9i
		if got, want := f.At(s), g.At(s); cmplx.Abs(got-want) > 1e-3*cmplx.Abs(want) { // near ±2⁴⁰ the sum cancels
			t.Errorf("%s: sum at %v = %v, want %v", tt.text, s, got, want)
		}
	}
	f, err := MustParse("exp(-0.5 s) / (s + 1)").PartialFractions()
	if err != nil || f.DeadTime != 0.5 || cmplx.Abs(f.At(2i)-cmplx.Exp(-1i)/(1+2i)) > 1e-15 {
		t.Errorf("dead time: %v, %v", f, err)
	}
}
