package locus_test

import (
	"math"
	"slices"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/locus"
)

// Against mpmath at 120 digits, see testdata/README.md.
func TestFactsAgainstHighPrecision(t *testing.T) {
	var cases []struct {
		reference
		Windows []struct {
			Kind  string
			Limit decimal
			K     [][2]decimal
		}
	}
	refdata.Read(t, "testdata/facts.json", &cases)
	for _, c := range cases {
		f := c.family(t)
		got, err := f.BreakPoints()
		if err != nil || len(got) != len(c.BreakPoints) {
			t.Errorf("%s: %v, %v; want %v", c.Name, got, err, c.BreakPoints)
			continue
		}
		for _, w := range c.BreakPoints {
			i := closest(len(got), func(i int) float64 {
				return math.Hypot(refdata.Miss(t, real(got[i].S), w.Re), refdata.Miss(t, imag(got[i].S), w.Im))
			})
			nearPoint(t, c.Name+": break point", got[i].S, w.Re, w.Im)
			near(t, c.Name+": gain of a break point", got[i].Gain, w.K)
			got = slices.Delete(got, i, i+1)
		}
		for _, w := range c.Windows {
			var r locus.Region
			switch x := w.Limit.Float(t); w.Kind {
			case "half_plane":
				r = locus.LeftOf(x)
			case "sector":
				r = locus.Damped(x)
			case "disc":
				r = locus.Within(x)
			}
			got, err := f.Windows(r)
			if err != nil {
				t.Errorf("%s: %v", c.Name, err)
			}
			nearWindows(t, c.Name+": "+w.Kind+" "+string(w.Limit), got, w.K)
		}
	}
}
