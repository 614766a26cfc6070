package timeresp

import (
	"math"
	"testing"

	"github.com/polewright/polewright/tf"
)

// TestHiddenModes checks that what cancels exactly has no share in the response, even if it
// would grow.
func TestHiddenModes(t *testing.T) {
	plain, err := Step(tf.MustParse("3 / (s + 2)"))
	if err != nil {
		t.Fatal(err)
	}
	for _, text := range []string{
		"3 (s - 1) / ((s + 2) (s - 1))",
		"3 (s^2 - 0.1 s + 7) / ((s + 2) (s^2 - 0.1 s + 7))",
		"3 s / (s (s + 2))",
		"3 (3 s - 1) / ((s + 2) (3 s - 1))",
		"3 (0.7 s^2 + 3 s - 1.1) / ((s + 2) (0.7 s^2 + 3 s - 1.1))",
		"3 (s + 5) (s + 0.3) / ((s + 2) (s + 5) (s + 0.3))",
	} {
		g, err := tf.Parse(text)
		if err != nil {
			t.Fatal(err)
		}
		r, err := Step(g)
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(r.Final()-1.5) > 1e-15 {
			t.Errorf("%s: final value %v, want 1.5", text, r.Final())
		}
		for at := 0.0; at < 100; at += 0.37 {
			if got, want := r.At(at), plain.At(at); math.Abs(got-want) > 1e-14 {
				t.Errorf("%s: y(%v) = %v, want %v", text, at, got, want)
				break
			}
		}
	}
}
