package tf_test

import (
	"fmt"
	"log"
	"math"

	"github.com/polewright/polewright/tf"
	"gonum.org/v1/gonum/mat"
)

// must returns the function of a call that should not fail here.
func must(g tf.Function, err error) tf.Function {
	if err != nil {
		log.Fatal(err)
	}
	return g
}

// What does a plant from a data sheet look like, and what is wrong with a text?
func ExampleParse() {
	g, err := tf.Parse("18 exp(-0.02 s) / (s (s + 3))")
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(g, "has a dead time of", g.DeadTime(), "s")
	_, err = tf.Parse("18 / s(s + 3)")
	fmt.Println(err)
	// Output:
	// 18 exp(-0.02 s) / (s (s + 3)) has a dead time of 0.02 s
	// tf.Parse: column 7: found "("; after a division, write "*" or put the denominator in parentheses
}

// What does a disturbance at the motor's input do to the position, in the long run? With
// plant 1/(s(s+1)) and gain 4 it leaves 1/4.
func ExampleLoop_Path() {
	l := tf.Loop{Controller: tf.MustParse("4"), Plant: tf.MustParse("1 / (s (s + 1))")}
	path, err := l.Path(tf.LoadDisturbance, tf.Output)
	if err != nil {
		log.Fatal(err)
	}
	g := must(path.Function())
	fmt.Println(g, "static gain", real(path.At(0)))
	// Output: 1 / (s^2 + s + 4) static gain 0.25
}

// A controller that cancels an unstable pole leaves a quiet output and a runaway inside.
func ExampleLoop_InternalStability() {
	l := tf.Loop{Controller: tf.MustParse("6 (s - 1) / (s + 4)"), Plant: tf.MustParse("1 / ((s - 1) (s + 2))")}
	s, err := l.InternalStability()
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(s)
	// Output: not stable; pole of the plant at (1+0i) hidden by a zero of the controller
}

// How far behind a ramp of 1 per second does a servo with velocity constant 2.5/s stay?
func ExampleLoop_ErrorConstants() {
	c, err := tf.Loop{Plant: tf.MustParse("10 / (s (s + 4))")}.ErrorConstants()
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("type %d, velocity constant %v/s, error on a ramp %v\n", c.Type, c.Velocity, c.RampError)
	// Output: type 1, velocity constant 2.5/s, error on a ramp 0.4
}

// What does a processor see of a lag of 1 s behind a hold of 0.1 s? The pole is exp(-0.1).
func ExampleFunction_Sample() {
	g := must(tf.MustParse("1 / (s + 1)").Sample(0.1, tf.ZeroOrderHold))
	fmt.Println(g.Text(7))
	// Output: 0.09516258 / (z - 0.9048374), period 0.1
}

// At a period of a nanosecond the pole of a lag of 1 s is 1 - 1e-9, and its distance from 1 is
// where the digits are.
func ExampleFunction_PoleOffsets() {
	g := must(tf.MustParse("1 / (s + 1)").Sample(1e-9, tf.ZeroOrderHold))
	offsets, err := g.PoleOffsets()
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(real(offsets[0].Value))
	fmt.Printf("%.14g rad/s\n", real(tf.ContinuousPoleFromOffset(offsets[0].Value, 1e-9)))
	// Output:
	// -9.999999995e-10
	// -1 rad/s
}

// Which plant stands behind the coefficients of a sampled model?
func ExampleFunction_Continuous() {
	sampled := must(tf.MustParse("4 exp(-0.5 s) / (s^2 + 0.4 s + 4)").Sample(0.25, tf.ZeroOrderHold))
	fmt.Println(must(sampled.Continuous(tf.ZeroOrderHold)))
	// Output: 4 exp(-0.5 s) / (s^2 + 0.4 s + 4)
}

// A lead that advances the phase by 45° at 10 rad/s.
func ExampleLeadByPhase() {
	lead, err := tf.LeadByPhase(math.Pi/4, 10)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(lead)
	// Output: lead: static gain 1, zero at -4.142135623730951, pole at -24.14213562373095 rad/s (0.7854 rad at 10 rad/s)
}

func ExamplePID() {
	c := tf.PID{Gain: 2, IntegralTime: 0.5, DerivativeTime: 0.125}
	fmt.Println(c)
	fmt.Println(must(c.Function()))
	// Output:
	// PID controller, ideal form: gain 2, integral time 0.5 s, derivative time 0.125 s, filter time 0 s
	// (0.125 s^2 + s + 2) / (0.5 s)
}

// Nothing cancels by itself; what goes on request is told.
func ExampleFunction_Cancel() {
	g, removed, err := tf.MustParse("(s + 1) (s + 2) / ((s + 1) (s + 3))").Cancel()
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(g, "without", removed[0].Pole)
	// Output: (s + 2) / (s + 3) without (-1+0i)
}

func ExampleFunction_PartialFractions() {
	f, err := tf.MustParse("(s^2 + 3 s + 5) / (s + 1)^3").PartialFractions()
	if err != nil {
		log.Fatal(err)
	}
	for _, t := range f.Terms {
		fmt.Printf("%v/(s - %v)^%d\n", real(t.Residue), real(t.Pole), t.Power)
	}
	// Output:
	// 1/(s - -1)^1
	// 1/(s - -1)^2
	// 3/(s - -1)^3
}

// Firmware computes filters section by section.
func ExampleFunction_Sections() {
	filter := must(tf.Butterworth{Order: 4, Cutoff: 2 * math.Pi * 50}.Function())
	sampled := must(filter.Sample(1e-3, tf.Trapezoidal, tf.MatchFrequency(2*math.Pi*50)))
	gain, sections, err := sampled.Sections()
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("gain %.6g\n", gain)
	for _, s := range sections {
		fmt.Printf("%.6g over %.6g\n", s.Numerator, s.Denominator)
	}
	// Output:
	// gain 0.000416599
	// [1 2 1] over [1 -1.47967 0.555822]
	// [1 2 1] over [1 -1.70096 0.7885]
}

func ExampleFromStateMatrices() {
	g := must(tf.FromStateMatrices(
		mat.NewDense(2, 2, []float64{0, 1, -2, -3}),
		mat.NewDense(2, 1, []float64{0, 1}),
		mat.NewDense(1, 2, []float64{5, 1}), nil))
	fmt.Println(g)
	// Output: (s + 5) / (s^2 + 3 s + 2)
}
