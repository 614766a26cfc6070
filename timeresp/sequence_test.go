package timeresp

import (
	"math"
	"testing"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

func TestSampledFirstOrder(t *testing.T) {
	// y[k] = 1 - 0.8^k for 0.2/(z - 0.8), by hand.
	r := mustStep(t, "0.2 / (z - 0.8), period 0.01")
	for k := range 300 {
		want := -math.Expm1(float64(k) * math.Log(0.8))
		for _, part := range []float64{0, 0.5, 0.999} {
			if got := r.At((float64(k) + part) * 0.01); math.Abs(got-want) > 2e-13 { // held at the limit from 1e-13 of it on
				t.Errorf("y(%v periods) = %v, want %v", float64(k)+part, got, want)
			}
		}
	}
	f, err := r.Figures(0.02)
	if err != nil {
		t.Fatal(err)
	}
	// 0.8^k ≤ 0.9 first at 1, ≤ 0.1 at 11, ≤ 0.02 at 18.
	near(t, "Final", f.Final, 1, 1e-15)
	near(t, "Reach10", f.Reach10, 0.01, 1e-12)
	near(t, "Reach90", f.Reach90, 0.11, 1e-12)
	near(t, "SettlingTime", f.SettlingTime, 0.18, 1e-12)
	if f.Overshoot != 0 || !math.IsNaN(f.PeakTime) {
		t.Errorf("overshoot %v at %v, want none", f.Overshoot, f.PeakTime)
	}
	i, err := r.Integrals()
	if err != nil {
		t.Fatal(err)
	}
	near(t, "Absolute", i.Absolute, 0.01/0.2, 1e-12) // a geometric series
	near(t, "Square", i.Square, 0.01/(1-0.64), 1e-12)
}

func TestSampledDeadbeatUnstableAndHidden(t *testing.T) {
	r := mustStep(t, "(0.5 z + 0.5) / z^2, period 2")
	for k, want := range []float64{0, 0.5, 1, 1, 1} {
		if got := r.At(2 * float64(k)); got != want {
			t.Errorf("deadbeat: y[%d] = %v, want %v", k, got, want)
		}
	}
	settling, err := r.SettlingTime(0.02)
	if err != nil || settling != 4 {
		t.Errorf("deadbeat: settling time %v, %v, want 4", settling, err)
	}
	r = mustStep(t, "1 / (z - 2), period 1")
	if got := r.At(300); got != math.Pow(2, 300)-1 {
		t.Errorf("unstable: y[300] = %v", got)
	}
	if got := r.At(600); got != math.Pow(2, 600)-1 {
		t.Errorf("unstable: y[600] = %v", got)
	}
	if !math.IsNaN(r.Final()) {
		t.Errorf("unstable: final value %v", r.Final())
	}
	r = mustStep(t, "(z - 2) / ((z - 0.5) (z - 2)), period 1")
	near(t, "hidden: final value", r.Final(), 2, 1e-15)
	near(t, "hidden: y[100]", r.At(100), 2, 1e-15)
}

func TestSampledPulseRampAndDeadTime(t *testing.T) {
	g := tf.MustParse("0.2 z / (z - 0.8), period 0.5")
	g, err := g.WithDeadTime(1)
	if err != nil {
		t.Fatal(err)
	}
	pulse, err := Impulse(g)
	if err != nil {
		t.Fatal(err)
	}
	ramp, err := Ramp(g)
	if err != nil {
		t.Fatal(err)
	}
	y := 0.0
	for k := range 40 {
		want := 0.0
		if k >= 2 {
			want = 0.2 * math.Pow(0.8, float64(k-2))
			y = 0.8*y + 0.2*0.5*float64(k-2)
		}
		if got := pulse.At(0.5 * float64(k)); math.Abs(got-want) > 1e-15 {
			t.Errorf("pulse: y[%d] = %v, want %v", k, got, want)
		}
		if got := ramp.At(0.5 * float64(k)); math.Abs(got-y) > 1e-14*(1+y) {
			t.Errorf("ramp: y[%d] = %v, want %v", k, got, y)
		}
	}
}

// TestSampledLoop follows the difference equation by hand in a closed loop of functions of z.
func TestSampledLoop(t *testing.T) {
	plant, err := tf.New(poly.New(0.1, 0.08), poly.New(1, -1.7, 0.72))
	if err != nil {
		t.Fatal(err)
	}
	if plant, err = plant.WithPeriod(0.1); err != nil {
		t.Fatal(err)
	}
	r, err := StepOf(tf.Loop{Plant: plant, Controller: tf.MustParse("0.5")})
	if err != nil {
		t.Fatal(err)
	}
	var e1, e2, y1, y2 float64
	for k := range 200 {
		y := 1.7*y1 - 0.72*y2 + 0.5*(0.1*e1+0.08*e2)
		if got := r.At(float64(k) * 0.1); math.Abs(got-y) > 1e-12 {
			t.Fatalf("y[%d] = %v, want %v", k, got, y)
		}
		e1, e2, y1, y2 = 1-y, e1, y, y1
	}
	checkAgainstSamples(t, r, "loop in z")
}
