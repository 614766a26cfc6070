package timeresp

import (
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
)

type hardCase struct {
	ID          string              `json:"id"`
	Input       string              `json:"input"`
	Gain        refdata.Decimal     `json:"gain"`
	Zeros       [][]refdata.Decimal `json:"zeros"`
	Poles       [][]refdata.Decimal `json:"poles"`
	Numerator   []refdata.Decimal   `json:"numerator"`
	Denominator []refdata.Decimal   `json:"denominator"`
	Times       []refdata.Decimal   `json:"times"`
	Values      []refdata.Decimal   `json:"values"`
}

// polynomials returns the function of a case.
func (c *hardCase) polynomials(t testing.TB) (num, den poly.Poly) {
	if len(c.Denominator) > 0 {
		return referencePoly(t, c.Numerator), referencePoly(t, c.Denominator)
	}
	list := func(in [][]refdata.Decimal) (out []complex128) {
		for _, r := range in {
			times := 1
			if len(r) > 2 {
				times = int(r[2].Float(t))
			}
			for range times {
				out = append(out, complex(r[0].Float(t), r[1].Float(t)))
			}
		}
		return out
	}
	num, err := poly.FromRoots(c.Gain.Float(t), list(c.Zeros)...)
	if err != nil {
		t.Fatal(err)
	}
	den, err = poly.FromRoots(1, list(c.Poles)...)
	if err != nil {
		t.Fatal(err)
	}
	return num, den
}

func readHard(t testing.TB) []hardCase {
	var f struct {
		Cases []hardCase `json:"cases"`
	}
	refdata.Read(t, "testdata/hard.json", &f)
	return f.Cases
}

func TestHardCases(t *testing.T) {
	inputs := map[string]Input{"step": unitStep, "impulse": unitImpulse, "ramp": unitRamp}
	for _, c := range readHard(t) {
		t.Run(c.ID, func(t *testing.T) {
			num, den := c.polynomials(t)
			roots, err := den.Roots()
			if err != nil {
				t.Fatal(err)
			}
			r, err := rational("test", num, den, roots, inputs[c.Input], 0)
			if err != nil {
				t.Fatal(err)
			}
			checkValues(t, c.Input, r, c.Times, c.Values)
		})
	}
}
