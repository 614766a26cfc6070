package timeresp_test

import (
	"context"
	"fmt"
	"log"

	"github.com/polewright/polewright/tf"
	"github.com/polewright/polewright/timeresp"
)

// How far does a servo with damping 0.5 and natural frequency 2 rad/s overshoot, and when?
// By the textbook exp(-πζ/√(1-ζ²)) = 16.3 % at π/(ω√(1-ζ²)) = 1.81 s.
func ExampleStep() {
	r, err := timeresp.Step(tf.MustParse("4 / (s^2 + 2 s + 4)"))
	if err != nil {
		log.Fatal(err)
	}
	f, err := r.Figures(0.02)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("overshoot %.1f %% at %.2f s, settled to 2 %% at %.2f s\n", 100*f.Overshoot, f.PeakTime, f.SettlingTime)
	// Output: overshoot 16.3 % at 1.81 s, settled to 2 % at 4.04 s
}

// What does a proportional loop around an integrator make of half a second of dead time?
// Until 0.5 s nothing moves; until 1 s the output is the ramp 2·(t - 0.5).
func ExampleStepOf() {
	r, err := timeresp.StepOf(tf.Loop{
		Controller: tf.MustParse("2"),
		Plant:      tf.MustParse("exp(-0.5 s) / s"),
	})
	if err != nil {
		log.Fatal(err)
	}
	for _, t := range []float64{0.25, 0.75, 1, 10} {
		fmt.Printf("y(%v s) = %.4f\n", t, r.At(t))
	}
	// Output:
	// y(0.25 s) = 0.0000
	// y(0.75 s) = 0.5000
	// y(1 s) = 1.0000
	// y(10 s) = 0.9980
}

// Which effort does a load of 3 for two seconds cost? The integrator of the controller takes
// the load over while it is there.
func ExampleOf() {
	l := tf.Loop{Controller: tf.MustParse("2 + 1/s"), Plant: tf.MustParse("1 / (s + 1)")}
	load := timeresp.PiecewiseInput(
		timeresp.Piece{From: 0, Coefficients: []float64{3}},
		timeresp.Piece{From: 2},
	)
	r, err := timeresp.Of(context.Background(), l, tf.LoadDisturbance, tf.Effort, load)
	if err != nil {
		log.Fatal(err)
	}
	effort, at, err := r.Largest()
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("at most %.3f, at %.2f s; %.3f left in the end\n", effort, at, r.Final())
	// Output: at most -2.602, at 2.00 s; 0.000 left in the end
}

// An impulse on a biproper function comes through its direct part.
func ExampleImpulse() {
	r, err := timeresp.Impulse(tf.MustParse("(s + 3) / (s + 1)")) // 1 + 2/(s + 1)
	if err != nil {
		log.Fatal(err)
	}
	times, areas := r.Impulses()
	fmt.Println(times, areas, r.At(0))
	// Output: [0] [1] 2
}

// The following error of a type 1 loop on a ramp is 1/Kv: here 1/4 s.
func ExampleRamp() {
	closed, err := tf.Loop{Plant: tf.MustParse("4 / (s (s + 1))")}.Closed()
	if err != nil {
		log.Fatal(err)
	}
	r, err := timeresp.Ramp(closed)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("%.6f\n", 60-r.At(60))
	// Output: 0.250000
}

// Samples come without allocation; Sample fills a slice of the caller's.
func ExampleResponse_Samples() {
	r, err := timeresp.Step(tf.MustParse("1 / (s + 1)"))
	if err != nil {
		log.Fatal(err)
	}
	for t, y := range r.Samples(0, 0.5) {
		if t > 2 {
			break
		}
		fmt.Printf("%.1f s: %.4f\n", t, y)
	}
	// Output:
	// 0.0 s: 0.0000
	// 0.5 s: 0.3935
	// 1.0 s: 0.6321
	// 1.5 s: 0.7769
	// 2.0 s: 0.8647
}

// The integral of the absolute error, for two gains.
func ExampleResponse_Integrals() {
	for _, k := range []float64{1, 4} {
		l := tf.Loop{Plant: tf.MustParse("1 / (s (s + 2))")}.WithGain(k)
		r, err := timeresp.Of(context.Background(), l, tf.Reference, tf.Error, timeresp.StepInput(1))
		if err != nil {
			log.Fatal(err)
		}
		i, err := r.Integrals()
		if err != nil {
			log.Fatal(err)
		}
		fmt.Printf("gain %v: IAE %.4f s, ITAE %.4f s²\n", k, i.Absolute, i.TimeAbsolute)
	}
	// Output:
	// gain 1: IAE 2.0000 s, ITAE 3.0000 s²
	// gain 4: IAE 0.8566 s, ITAE 0.7354 s²
}
