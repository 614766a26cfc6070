package timeresp

import (
	"context"
	"math"
	"testing"

	"github.com/polewright/polewright/tf"
)

// TestFiguresUnderPieces checks figures of responses to inputs of several pieces, with and
// without dead time.
func TestFiguresUnderPieces(t *testing.T) {
	inputs := map[string]Input{
		"ramp up, then hold": PiecewiseInput(Piece{0, []float64{0.5, 0}}, Piece{2, []float64{1}}),
		"pulse on a step":    StepInput(1).Plus(PiecewiseInput(Piece{1, []float64{2}}, Piece{1.5, nil})),
		"smooth transition":  PiecewiseInput(Piece{0, []float64{0.5, 0, 0}}, Piece{1, []float64{-0.5, 1, 0.5}}, Piece{2, []float64{1}}),
		"late step":          StepInput(1).Delay(3),
	}
	for _, plant := range []string{"4 / (s (s + 1.2))", "1 / (s + 1)^3", "(1 - 0.3 s) / (s + 1)^2 exp(-0.4 s)", "1 / s exp(-0.5 s)"} {
		l := tf.Loop{Plant: tf.MustParse(plant)}
		for name, in := range inputs {
			r, err := Of(context.Background(), l, tf.Reference, tf.Output, in)
			if err != nil {
				t.Errorf("%s, %s: %v", plant, name, err)
				continue
			}
			checkAgainstSamples(t, r, plant+", "+name)
		}
	}
}

// TestSmoothTransitionByHand: 1/(s+1) under t, from 2 s on held, by hand.
func TestRampThenHoldByHand(t *testing.T) {
	l := tf.Loop{Plant: tf.MustParse("1 / s")}
	r, err := Of(context.Background(), l, tf.Reference, tf.Output, PiecewiseInput(Piece{0, []float64{1, 0}}, Piece{2, []float64{2}}))
	if err != nil {
		t.Fatal(err)
	}
	ramp := func(t float64) float64 { return t + math.Expm1(-t) }
	for at := 0.0; at < 30; at += 0.17 {
		want := ramp(at)
		if at >= 2 {
			want -= ramp(at - 2)
		}
		if got := r.At(at); math.Abs(got-want) > 1e-14 {
			t.Errorf("y(%v) = %v, want %v", at, got, want)
		}
	}
	if r.Final() != 2 {
		t.Errorf("final value %v, want 2", r.Final())
	}
}

func TestSineInResonance(t *testing.T) {
	// 1/(s² + 1) under sin t: (sin t - t·cos t)/2, by hand.
	l := tf.Loop{Plant: tf.MustParse("1 / s^2")}
	r, err := Of(context.Background(), l, tf.Reference, tf.Output, SineInput(1, 1, 0))
	if err != nil {
		t.Fatal(err)
	}
	largest := 0.0
	for at := 0.0; at < 3000; at += 1.37 {
		want := (math.Sin(at) - at*math.Cos(at)) / 2
		if at < 0.1 {
			want = at * at * at / 6
		}
		largest = math.Max(largest, math.Abs(want))
		if got := r.At(at); math.Abs(got-want) > 1e-12*largest {
			t.Fatalf("y(%v) = %v, want %v", at, got, want)
		}
	}
	if _, err := r.Figures(0.02); err == nil {
		t.Error("figures of a growing response: no error")
	}
}

func TestBadInputs(t *testing.T) {
	l := tf.Loop{Plant: tf.MustParse("1 / (s + 1)")}
	for name, in := range map[string]Input{
		"not a number":   StepInput(math.NaN()),
		"infinite":       RampInput(math.Inf(1)),
		"before 0":       StepInput(1).Delay(-1),
		"out of order":   PiecewiseInput(Piece{2, []float64{1}}, Piece{1, []float64{1}}),
		"bad frequency":  SineInput(1, math.Inf(1), 0),
		"bad coefficent": PiecewiseInput(Piece{0, []float64{1, math.NaN()}}),
	} {
		_, err := Of(context.Background(), l, tf.Reference, tf.Output, in)
		if err == nil {
			t.Errorf("%s: no error", name)
			continue
		}
		checkErrorType(t, err)
	}
	if _, err := Of(context.Background(), tf.Loop{}, tf.Reference, tf.Output, StepInput(1)); err == nil {
		t.Error("a loop without a plant: no error")
	}
	if _, err := Step(tf.MustParse("s^2 / (s + 1)")); err == nil {
		t.Error("an improper function: no error")
	}
	r := mustStep(t, "1 / (s + 1)")
	for _, band := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		if _, err := r.Figures(band); err == nil {
			t.Errorf("band %v: no error", band)
		}
	}
	if !math.IsNaN(r.At(math.NaN())) || r.At(-1) != 0 || r.At(math.Inf(1)) != 1 {
		t.Errorf("At(NaN), At(-1), At(+Inf) = %v, %v, %v", r.At(math.NaN()), r.At(-1), r.At(math.Inf(1)))
	}
}

// TestEdgeFunctions: gains, wires, zero, pure integrators.
func TestEdgeFunctions(t *testing.T) {
	r := mustStep(t, "3")
	if f, err := r.Figures(0.02); err != nil || f.Final != 3 || f.SettlingTime != 0 || f.RiseTime != 0 || f.Overshoot != 0 {
		t.Errorf("gain 3: %+v, %v", f, err)
	}
	var wire tf.Function
	r, err := Step(wire)
	if err != nil || r.At(5) != 1 || r.Final() != 1 {
		t.Errorf("wire: %v", err)
	}
	r = mustStep(t, "0 / (s + 1)")
	if f, err := r.Figures(0.02); err != nil || f.Final != 0 || r.At(3) != 0 {
		t.Errorf("zero: %+v, %v", f, err)
	}
	r = mustStep(t, "2 / s^3")
	if got := r.At(1e5); got != 1e15/3 {
		near(t, "triple integrator", got, 1e15/3, 1e-15)
	}
	r = mustStep(t, "5 exp(-2 s)")
	if f, err := r.Figures(0.02); err != nil || f.SettlingTime != 2 || f.Reach90 != 2 || r.At(1.99) != 0 || r.At(2) != 5 {
		t.Errorf("gain behind dead time: %+v, %v", f, err)
	}
}
