package locus

import (
	"math"
	"math/cmplx"
	"testing"
)

// Against the constants of the standard library and published digits of π and e.
func TestElementary(t *testing.T) {
	if got := pi(200).Text('f', 50); got != "3.14159265358979323846264338327950288419716939937511" {
		t.Errorf("π = %s", got)
	}
	e := exponential(bigComplex{newFloat(200).SetInt64(1), newFloat(200)}, 200)
	if got := e.re.Text('f', 50); got != "2.71828182845904523536028747135266249775724709369996" || e.im.Sign() != 0 {
		t.Errorf("e = %s", got)
	}
	for _, w := range []complex128{0, 1e-9, -3 + 2i, 20i, -40, 7.5 - 100i, 1e-300i} {
		got, want := number(exponential(exactly(w), 100)), cmplx.Exp(w)
		if cmplx.Abs(got-want) > 1e-14*cmplx.Abs(want) {
			t.Errorf("e^%v = %v, want %v", w, got, want)
		}
	}
	if got := toFloat(pi(60)); got != math.Pi {
		t.Errorf("π = %v", got)
	}
}
