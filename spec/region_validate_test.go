package spec

import (
	"errors"
	"math"
	"testing"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

func TestValidateRegions(t *testing.T) {
	for name, r := range map[string]locus.Region{
		"damping above 1": locus.Damped(7), "NaN": locus.LeftOf(math.NaN()), "negative radius": locus.Within(-1), "none": nil,
		"no period": locus.OnSamples(locus.LeftOf(-1), 0), "inside another": locus.All(locus.LeftOf(0), locus.Damped(-1)),
	} {
		var argument *poly.ArgumentError
		if err := (Sheet{PolesIn(r)}).Validate(); !errors.As(err, &argument) {
			t.Errorf("%s: got %v, want a %T", name, err, argument)
		}
	}
	for _, r := range []locus.Region{locus.Damped(0.5), locus.LeftOf(-1), locus.Within(3), locus.Beyond(2), locus.All(locus.LeftOf(0), locus.Damped(0.2))} {
		if err := (Sheet{PolesIn(r)}).Validate(); err != nil {
			t.Errorf("%v: %v", r, err)
		}
	}
}
