package locus

import (
	"errors"
	"fmt"
	"strings"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

func TestWords(t *testing.T) {
	z, err := Gain(tf.MustParse("0.5 z / (z - 0.8), period 0.1"))
	if err != nil {
		t.Fatal(err)
	}
	s, err := Parameter(poly.New(1, 2, 3), poly.New(4))
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		value any
		want  string
	}{
		{LeftOf(-2), "Re s < -2"},
		{Damped(0.5), "damping ratio > 0.5"},
		{All(LeftOf(-0.2), Within(20), Beyond(0.1), Strip(3)), "Re s < -0.2 and |s| < 20 and |s| > 0.1 and |Im s| < 3"},
		{All(), "the whole plane"},
		{OnSamples(Damped(0.7), 0.01), "(damping ratio > 0.7) sampled every 0.01 s"},
		{Positive, "k > 0"},
		{Negative, "k < 0"},
		{s, "(s² + 2s + 3) + k·(4)"},
		{z, "(z - 0.8) + k·(0.5z)"},
		{Family{}, "no family"},
	} {
		if got := fmt.Sprint(c.value); got != c.want {
			t.Errorf("%q, want %q", got, c.want)
		}
	}
	double, err := Gain(tf.MustParse("1 / s^2"))
	if err != nil {
		t.Fatal(err)
	}
	_, err = double.Crossings(LeftOf(0))
	var boundary *BoundaryOnLocusError
	if !errors.As(err, &boundary) || !strings.Contains(err.Error(), "Re s < 0") {
		t.Errorf("%v", err)
	}
}
