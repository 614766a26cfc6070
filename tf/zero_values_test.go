package tf_test

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/polewright/polewright/tf"
)

// TestZeroResponses: responses that nobody made know nothing, and say so.
func TestZeroResponses(t *testing.T) {
	var f tf.FrequencyResponse
	if !cmplx.IsNaN(f.At(1)) || !math.IsNaN(f.Phase(1)) || !math.IsNaN(f.GroupDelay(1)) || !math.IsNaN(f.Magnitude(1)) {
		t.Error("the zero frequency response has a value")
	}
	if _, err := f.Curve(0, 0); err == nil {
		t.Error("the zero frequency response has a curve")
	}
	if _, err := f.PolarCurve(0, 0, 10); err == nil {
		t.Error("the zero frequency response has a polar curve")
	}
	if lo, hi := f.Window(); !math.IsNaN(lo) || !math.IsNaN(hi) {
		t.Errorf("the zero frequency response has the window %g to %g", lo, hi)
	}
	var m tf.MeasuredResponse
	if !cmplx.IsNaN(m.At(1)) || !math.IsNaN(m.Phase(1)) {
		t.Error("the zero measured response has a value")
	}
	if margins := m.Margins(); !math.IsNaN(margins.Delay) || margins.GainCrossovers != nil {
		t.Errorf("the zero measured response has the margins %+v", margins)
	}
}
