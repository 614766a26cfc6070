package timeresp

import (
	"errors"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// The output grows like exp(4t): past float64 near t = 177 s, long before the end asked for.
func TestRunSaysWhereSignalsOverflow(t *testing.T) {
	_, err := Run(t.Context(), tf.Loop{Plant: tf.MustParse("1 / (s - 5)")}, StepInput(1), Until(1000))
	var beyond *poly.RangeError
	if !errors.As(err, &beyond) {
		t.Errorf("%v", err)
	}
	t.Log(err)
}
