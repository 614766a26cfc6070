package spec_test

import (
	"context"
	"encoding/json"
	"fmt"
	"log"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/spec"
	"github.com/polewright/polewright/tf"
)

// function returns num/den and is here to keep the examples short.
func function(num, den []float64) tf.Function {
	g, err := tf.New(poly.New(num...), poly.New(den...))
	if err != nil {
		log.Fatal(err)
	}
	return g
}

// Which gains let the servo 1/(s(s+4)) settle within 2 s, overshoot by at most 20 % and rise
// within 1 s? The settling time jumps with the gain, so that there are three windows.
func ExampleSheet_Windows() {
	loop := tf.Loop{Plant: function([]float64{1}, []float64{1, 4, 0})}
	sheet := spec.Sheet{spec.OvershootAtMost(0.2), spec.SettlesWithin(2, 0.02), spec.RisesWithin(1)}
	gains, err := sheet.Windows(context.Background(), []tf.Loop{loop})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Print(gains)
	// Output:
	//   6.177174731 (rise time) ≤ k ≤ 6.588878244 (settling time)
	//   9.034308699 (settling time) ≤ k ≤ 14.42242147 (settling time)
	//   16.63111744 (settling time) ≤ k ≤ 19.24092345 (overshoot)
}

// Does the gain in use meet the sheet? At k = 8 the damping ratio is 1/√2: 4.3 % overshoot.
func ExampleSheet_Check() {
	loop := tf.Loop{Plant: function([]float64{1}, []float64{1, 4, 0})}
	sheet := spec.Sheet{spec.OvershootAtMost(0.05), spec.PhaseMarginAtLeast(1)}
	report, err := sheet.Check(context.Background(), loop.WithGain(8))
	if err != nil {
		log.Fatal(err)
	}
	fmt.Print(report)
	// Output:
	// The sheet is met.
	// * met        overshoot at most 0.05: overshoot 0.0432139, limit 0.05, slack +0.136 at 1.5708 s
	//   met        phase margin at least 1 rad: phase margin 1.14372 rad, limit 1 rad, slack +0.144 at 1.82036 rad/s
	//   (* the requirement with the smallest slack)
	// Closed-loop poles:
	//   -2 ± j2                      damping ratio 0.7071, natural frequency 2.82843 rad/s
}

// A slow real pole hides a lightly damped pair: the second-order map finds no gain, and there
// is one.
func ExampleSheet_Design() {
	loop := tf.Loop{Plant: function([]float64{20}, []float64{1, 2.5, 27, 13})}
	sheet := spec.Sheet{spec.OvershootAtMost(0.02), spec.RisesWithin(2), spec.SettlesWithin(4.5, 0.02)}
	design, err := sheet.Design(context.Background(), []tf.Loop{loop}, spec.InUse(1))
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(design.Rule.Sentence)
	fmt.Print(design.Gains)
	fmt.Printf("recommended: %.3f\n", design.Gain)
	fmt.Println(design.InUse.Place)
	// Output:
	// The second-order map says that no gain works, wrongly: the true loop meets the sheet in the windows listed.
	//   0.5037780486 (rise time) ≤ k ≤ 0.9877990085 (overshoot)
	// recommended: 0.838
	// gain 1 is in no window, 1.012 times (0.107 dB) above 0.9877990085 (overshoot)
}

// A fast rise and hardly any undershoot exclude each other for a plant with a zero on the
// right.
func ExampleSheet_Design_conflict() {
	loop := tf.Loop{
		Controller: function([]float64{1, 1}, []float64{1, 0}),
		Plant:      function([]float64{-1, 4}, []float64{1, 4, 3}),
	}
	sheet := spec.Sheet{spec.UndershootAtMost(0.03), spec.RisesWithin(1.5), spec.StepErrorAtMost(0)}
	design, err := sheet.Design(context.Background(), []tf.Loop{loop})
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(design.Reason)
	fmt.Printf("nearest miss: %.3f, by %v\n", design.Nearest.Gain, design.Nearest.By)
	// Output:
	// no gain k > 0 meets these together: undershoot at most 0.03; rise time at most 1.5 s
	// nearest miss: 0.476, by rise time
}

// 15 % overshoot asks for a damping ratio just over 0.5, about 1 rad off the axis (common
// practice).
func ExampleDampingForOvershoot() {
	zeta, err := spec.DampingForOvershoot(0.15)
	if err != nil {
		log.Fatal(err)
	}
	angle, err := spec.DampingAngle(zeta)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Printf("damping ratio %.3f, angle %.3f rad\n", zeta, angle)
	// Output: damping ratio 0.517, angle 1.028 rad
}

// The exact settling time beside the usual approximation.
func ExampleSecondOrder() {
	q := spec.SecondOrder{Damping: 0.5, NaturalFrequency: 4}
	fmt.Printf("overshoot %.4f, peak at %.4f s\n", q.Overshoot(), q.PeakTime())
	fmt.Printf("settles into 2 %% at %.4f s; four time constants are %.4f s\n", q.SettlingTime(0.02), q.FourTimeConstants())
	// Output:
	// overshoot 0.1630, peak at 0.9069 s
	// settles into 2 % at 2.0191 s; four time constants are 2.0000 s
}

// A sheet as it stands in a job file.
func ExampleSheet_UnmarshalJSON() {
	var sheet spec.Sheet
	err := json.Unmarshal([]byte(`[
		{"require": "overshoot", "at most": "15 %"},
		{"require": "settling time", "at most": "300 ms", "band": 0.02},
		{"require": "gain margin", "at least": 2}
	]`), &sheet)
	if err != nil {
		log.Fatal(err)
	}
	fmt.Print(sheet)
	err = json.Unmarshal([]byte(`[{"require": "overshoot", "at mots": 0.1}]`), &sheet)
	fmt.Println(err)
	// Output:
	// overshoot at most 0.15
	// settling time at most 0.3 s, band 0.02
	// gain margin at least 2
	// spec: requirement 0 (overshoot) at [0]."at most": "at most": is missing
}

// Which region would a textbook ask for, and on what assumptions?
func ExampleSheet_Map() {
	sheet := spec.Sheet{spec.OvershootAtMost(0.1), spec.SettlesWithin(2, 0.02), spec.EffortAtMost(10)}
	m, err := sheet.Map()
	if err != nil {
		log.Fatal(err)
	}
	for _, l := range m.Lines {
		fmt.Printf("%s: %s\n", l.Name, l.Words)
	}
	fmt.Println(m.AllPoles.Contains(-2+2i), m.AllPoles.Contains(-1+1i))
	fmt.Println(m.Assumptions[1])
	// Output:
	// overshoot: damping ratio at least 0.5912, 0.9383 rad off the negative real axis
	// settling time: Re s < -1.95601 rad/s, ln(band)/t
	// effort: the map says nothing
	// true false
	// The map says nothing of: effort.
}

// Does the loop behave like second order?
func ExampleResembles() {
	loop := tf.Loop{Plant: function([]float64{1}, []float64{1, 4, 0})}
	r, err := spec.Resembles(context.Background(), loop.WithGain(8))
	if err != nil {
		log.Fatal(err)
	}
	fmt.Println(r.Sentence)
	lead := tf.Loop{Plant: function([]float64{2, 4}, []float64{1, 4, 0})}
	if r, err = spec.Resembles(context.Background(), lead); err != nil {
		log.Fatal(err)
	}
	fmt.Println(r.Sentence)
	// Output:
	// The loop behaves like a second-order system with damping ratio 0.707 and natural frequency 2.828 rad/s.
	// The loop does not behave like second order: rise time 2.53 s instead of 2.93 s, settling time 4.7 s instead of 5.33 s; a zero stands 0.62 natural frequencies from the pair.
}
