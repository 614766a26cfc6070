package spec

import (
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

func mustFunction(t testing.TB, num, den []float64) tf.Function {
	t.Helper()
	g, err := tf.New(poly.New(num...), poly.New(den...))
	if err != nil {
		t.Fatal(err)
	}
	return g
}
