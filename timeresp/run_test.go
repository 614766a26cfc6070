package timeresp

import (
	"context"
	"errors"
	"fmt"
	"log"
	"math"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// limitedLoop reads the limited loops of testdata/step.json; `about` there says what they are.
type limitedLoop struct {
	ID               string
	PlantNumerator   []refdata.Decimal `json:"plant_numerator"`
	PlantDenominator []refdata.Decimal `json:"plant_denominator"`
	Controller       struct{ Kp, Ki, Tt refdata.Decimal }
	ActuatorLimit    refdata.Decimal `json:"actuator_limit"`
	FinalValue       refdata.Decimal `json:"final_value"`
	Switches         []struct{ T refdata.Decimal }
	Times, Y, U      []refdata.Decimal
	Figures          map[string]refdata.Decimal
}

func TestRunReference(t *testing.T) {
	var file struct{ Limited []limitedLoop }
	refdata.Read(t, "testdata/step.json", &file)
	if len(file.Limited) == 0 {
		t.Fatal("no limited loops in the file")
	}
	for _, c := range file.Limited {
		plant, err := tf.New(poly.New(refdata.Floats(t, c.PlantNumerator)...), poly.New(refdata.Floats(t, c.PlantDenominator)...))
		if err != nil {
			t.Fatal(err)
		}
		numerator, denominator := poly.New(c.Controller.Kp.Float(t)), poly.New(1)
		if c.Controller.Ki != "" {
			numerator, denominator = poly.New(c.Controller.Kp.Float(t), c.Controller.Ki.Float(t)), poly.New(1, 0)
		}
		controller, err := tf.New(numerator, denominator)
		if err != nil {
			t.Fatal(err)
		}
		options := []Option{Until(3 * c.Times[len(c.Times)-1].Float(t))}
		if c.Controller.Tt != "" {
			options = append(options, TrackingTime(c.Controller.Tt.Float(t)))
		}
		loop := tf.Loop{Controller: controller, Plant: plant, Limits: tf.Limits{Amplitude: c.ActuatorLimit.Float(t)}}
		r, err := Run(context.Background(), loop, StepInput(1), options...)
		if err != nil {
			t.Fatalf("%s: %v", c.ID, err)
		}
		peak := 0.0
		for _, y := range c.Y {
			peak = math.Max(peak, math.Abs(y.Float(t)))
		}
		d := r.Reader()
		for i, at := range c.Times {
			if miss := refdata.Miss(t, d.At(tf.Output, at.Float(t)), c.Y[i]); miss > 1e-11*peak {
				t.Errorf("%s: output at %s off by %.2g", c.ID, at, miss)
			}
			if miss := refdata.Miss(t, d.At(tf.Effort, at.Float(t)), c.U[i]); miss > 1e-11*loop.Limits.Amplitude {
				t.Errorf("%s: effort at %s off by %.2g", c.ID, at, miss)
			}
		}
		changes := r.LimitChanges()
		for i, want := range c.Switches {
			if i >= len(changes) || refdata.Off(t, changes[i].Time, want.T) > 1e-12 {
				t.Errorf("%s: limit change %d is missing or not at %s", c.ID, i, want.T)
			}
		}
		checkRecordFigures(t, c.ID, r, c.Figures, c.FinalValue)
	}
}

func checkRecordFigures(t *testing.T, id string, r *Record, want map[string]refdata.Decimal, final refdata.Decimal) {
	t.Helper()
	f, err := r.Figures(0.02)
	if err != nil {
		t.Errorf("%s: %v", id, err)
		return
	}
	five, err := r.Figures(0.05)
	if err != nil {
		t.Fatal(err)
	}
	for name, got := range map[string]float64{"overshoot": f.Overshoot, "peak_time": f.PeakTime, "peak_value": f.PeakValue, "undershoot": f.Undershoot,
		"t10": f.Reach10, "t90": f.Reach90, "rise_10_90": f.RiseTime, "settling_2_percent": f.SettlingTime, "settling_5_percent": five.SettlingTime} {
		w := want[name]
		if w == "" {
			if !math.IsNaN(got) {
				t.Errorf("%s: %s is %g, want none", id, name, got)
			}
			continue
		}
		if off := refdata.Off(t, got, w); off > 1e-9 {
			t.Errorf("%s: %s is %.15g, want %s", id, name, got, w)
		}
	}
	if refdata.Off(t, f.Final, final) > 1e-12 {
		t.Errorf("%s: final value %g, want %s", id, f.Final, final)
	}
}

// TestRunAgainstResponses: without a limit in reach Run and the linear responses, which share
// nothing, agree; dead time and disturbances included.
func TestRunAgainstResponses(t *testing.T) {
	loop := tf.Loop{
		Controller: tf.MustParse("2 (s + 1.5) / s"),
		Plant:      tf.MustParse("3 / ((s + 2) (s^2 + s + 4))"),
		Sensor:     tf.MustParse("20 / (s + 20)"),
		Prefilter:  tf.MustParse("4 / (s + 4)"),
		Limits:     tf.Limits{Amplitude: 1e6},
	}
	ctx := context.Background()
	for from, option := range map[tf.Point]func(Input) Option{
		tf.Reference: nil, tf.LoadDisturbance: LoadInput, tf.OutputDisturbance: OutputDisturbanceInput, tf.Noise: NoiseInput} {
		in := StepInput(1).Plus(RampInput(-0.3).Delay(1)).Plus(SineInput(0.2, 3, 0.4).Delay(2))
		reference, options := in, []Option{Until(8)}
		if option != nil {
			reference, options = Input{}, append(options, option(in))
		}
		r, err := Run(ctx, loop, reference, options...)
		if err != nil {
			t.Fatal(err)
		}
		for _, to := range []tf.Point{tf.Output, tf.Error, tf.Effort} {
			want, err := Of(ctx, loop, from, to, in)
			if err != nil {
				t.Fatal(err)
			}
			for at := 0.05; at < 8; at += 0.1 {
				if got, w := r.At(to, at), want.At(at); math.Abs(got-w) > 1e-11*(1+math.Abs(w)) {
					t.Errorf("%v to %v at t = %g: Run %.15g, Of %.15g", from, to, at, got, w)
					break
				}
			}
		}
	}
}

// TestRunCharacteristic: a straight characteristic changes nothing but the way of computing.
func TestRunCharacteristic(t *testing.T) {
	loop := tf.Loop{Controller: tf.MustParse("2 (s + 1) / s"), Plant: tf.MustParse("1 / (s (s + 2))"), Limits: tf.Limits{Amplitude: 1}}
	ctx := context.Background()
	plain, err := Run(ctx, loop, StepInput(1), Until(12), TrackingTime(1))
	if err != nil {
		t.Fatal(err)
	}
	straight, err := Run(ctx, loop, StepInput(1), Until(12), TrackingTime(1), ActuatorCharacteristic(func(u float64) float64 { return u }))
	if err != nil {
		t.Fatal(err)
	}
	for at := 0.1; at < 12; at += 0.1 {
		if a, b := plain.At(tf.Output, at), straight.At(tf.Output, at); math.Abs(a-b) > 1e-9 {
			t.Errorf("t = %g: %.12g by series, %.12g integrated", at, a, b)
		}
	}
	a, err := plain.Figures(0.02)
	if err != nil {
		t.Fatal(err)
	}
	b, err := straight.Figures(0.02)
	if err != nil {
		t.Fatal(err)
	}
	for name, pair := range map[string][2]float64{"overshoot": {a.Overshoot, b.Overshoot}, "rise": {a.RiseTime, b.RiseTime}, "settling": {a.SettlingTime, b.SettlingTime}} {
		if math.Abs(pair[0]-pair[1]) > 1e-7 {
			t.Errorf("%s: %.12g by series, %.12g integrated", name, pair[0], pair[1])
		}
	}
	// A dead zone of ±d in front of an integrating plant under P control leaves the output
	// where the effort enters the zone: k·(1 - y) = d. (By hand.)
	loop = tf.Loop{Controller: tf.MustParse("2"), Plant: tf.MustParse("1 / s")}
	const d = 0.3
	zone, err := Run(ctx, loop, StepInput(1), Until(40), ActuatorCharacteristic(func(u float64) float64 {
		return math.Copysign(math.Max(0, math.Abs(u)-d), u)
	}))
	if err != nil {
		t.Fatal(err)
	}
	if got := zone.At(tf.Output, 40); math.Abs(got-(1-d/2)) > 1e-8 {
		t.Errorf("behind a dead zone the output rests at %.10g, want %g", got, 1-d/2.0)
	}
}

func TestRunRefuses(t *testing.T) {
	good := tf.Loop{Controller: tf.MustParse("2"), Plant: tf.MustParse("1 / (s + 1)")}
	ctx := context.Background()
	var argument *poly.ArgumentError
	var unsupported *tf.UnsupportedError
	for _, tt := range []struct {
		name string
		call func() error
		want any
	}{
		{"no plant", func() error { _, err := Run(ctx, tf.Loop{}, StepInput(1)); return err }, &argument},
		{"input not finite", func() error { _, err := Run(ctx, good, StepInput(math.Inf(1))); return err }, &argument},
		{"impulse", func() error { _, err := Run(ctx, good, ImpulseInput(1)); return err }, &argument},
		{"negative time", func() error { _, err := Run(ctx, good, StepInput(1), Until(-1)); return err }, &argument},
		{"negative limit", func() error {
			l := good
			l.Limits.Amplitude = -1
			_, err := Run(ctx, l, StepInput(1))
			return err
		}, &argument},
		{"improper controller", func() error {
			l := good
			l.Controller = tf.MustParse("s + 1")
			_, err := Run(ctx, l, StepInput(1), Until(1))
			return err
		}, &argument},
		{"unstable without Until", func() error {
			l := good
			l.Plant = tf.MustParse("1 / (s - 5)")
			_, err := Run(ctx, l, StepInput(1))
			return err
		}, &argument},
		{"characteristic and dead time", func() error {
			l := good
			l.Plant = tf.MustParse("exp(-s) / (s + 1)")
			_, err := Run(ctx, l, StepInput(1), Until(1), SensorCharacteristic(math.Abs))
			return err
		}, &unsupported},
		{"plant in z", func() error {
			l := good
			l.Plant = tf.MustParse("0.2 / (z - 0.8), period 0.1")
			_, err := Run(ctx, l, StepInput(1), Until(1))
			return err
		}, &unsupported},
	} {
		if err := tt.call(); err == nil || !errors.As(err, tt.want) {
			t.Errorf("%s: got %v, want a %T", tt.name, err, tt.want)
		}
	}
}

func TestZeroRecord(t *testing.T) {
	var r Record
	if y := r.At(tf.Output, 0); !math.IsNaN(y) {
		t.Errorf("the output of the zero record is %g, want NaN", y)
	}
	if c := r.LimitChanges(); c != nil {
		t.Errorf("limit changes of the zero record: %v", c)
	}
	if _, err := r.Figures(0.02); err == nil {
		t.Error("figures of the zero record: no error")
	}
	if s, err := r.Resample(tf.Output, 1); err != nil || len(s.Times) != 1 || !math.IsNaN(s.Values[0]) {
		t.Errorf("the zero record resampled: %v, %v", s, err)
	}
}

func TestSeriesCompare(t *testing.T) {
	a := Series{Times: []float64{0, 1, 2}, Values: []float64{1, 2, 3}}
	b := Series{Times: []float64{0, 1, 2}, Values: []float64{1, 2.5, 2}}
	d, err := a.Compare(b)
	if err != nil {
		t.Fatal(err)
	}
	if d.Worst != 1 || d.At != 2 || math.Abs(d.RootMeanSquare-math.Sqrt(1.25/3)) > 1e-15 {
		t.Errorf("got %+v", d)
	}
	for name, s := range map[string]Series{
		"other times": {Times: []float64{0, 1, 3}, Values: []float64{1, 2, 3}},
		"too short":   {Times: []float64{0}, Values: []float64{1}},
		"NaN":         {Times: []float64{0, 1, 2}, Values: []float64{1, math.NaN(), 3}},
		"backwards":   {Times: []float64{0, 2, 1}, Values: []float64{1, 2, 3}},
		"ragged":      {Times: []float64{0, 1, 2}, Values: []float64{1, 2}},
	} {
		if _, err := a.Compare(s); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// A heater that gives at most 1.5 is under PI control. How far does the temperature overshoot
// while the integrator winds up, and how far with back-calculation?
func ExampleRun() {
	loop := tf.Loop{
		Controller: tf.MustParse("8 (s + 0.5) / s"),
		Plant:      tf.MustParse("1 / ((s + 1) (2 s + 1))"),
		Limits:     tf.Limits{Amplitude: 1.5},
	}
	for _, tracking := range []float64{0, 0.5} {
		record, err := Run(context.Background(), loop, StepInput(1), Until(60), TrackingTime(tracking))
		if err != nil {
			log.Fatal(err)
		}
		figures, err := record.Figures(0.02)
		if err != nil {
			log.Fatal(err)
		}
		fmt.Printf("tracking time %.1f s: overshoot %.1f %%, settled after %.2f s\n", tracking, 100*figures.Overshoot, figures.SettlingTime)
	}
	// Output:
	// tracking time 0.0 s: overshoot 38.5 %, settled after 11.69 s
	// tracking time 0.5 s: overshoot 0.0 %, settled after 8.18 s
}

// A recorded output has the largest value that the response has, also around a final value of 0.
func TestRecordLargestValue(t *testing.T) {
	l := tf.Loop{Plant: tf.MustParse("4 / (s (s + 1))"), Controller: tf.MustParse("1 + 1/(20 s)")}
	for _, c := range []struct {
		from tf.Point
		opt  Option
	}{
		{tf.Reference, nil},
		{tf.LoadDisturbance, LoadInput(StepInput(-1))}, // comes to rest at 0
	} {
		in := StepInput(1)
		opt := []Option{Until(60)}
		if c.opt != nil {
			in, opt = Input{}, append(opt, c.opt)
		}
		r, err := Run(t.Context(), l, in, opt...)
		if err != nil {
			t.Fatal(err)
		}
		f, err := r.Figures(0.02)
		if err != nil {
			t.Fatal(err)
		}
		height := 1.0
		if c.from == tf.LoadDisturbance {
			height = -1
		}
		response, err := Of(t.Context(), l, c.from, tf.Output, StepInput(height))
		if err != nil {
			t.Fatal(err)
		}
		value, at, err := response.Largest()
		if err != nil {
			t.Fatal(err)
		}
		if math.Abs(f.LargestValue-value) > 1e-9 || math.Abs(f.LargestTime-at) > 1e-6 {
			t.Errorf("from %v: largest %v at %v, want %v at %v", c.from, f.LargestValue, f.LargestTime, value, at)
		}
	}
	// A lag only approaches its final value.
	r, err := Run(t.Context(), tf.Loop{Plant: tf.MustParse("3 / (s + 1)")}, StepInput(1))
	if err != nil {
		t.Fatal(err)
	}
	if f, err := r.Figures(0.02); err != nil || f.LargestValue != f.Final || !math.IsNaN(f.LargestTime) {
		t.Errorf("%+v, %v", f, err)
	}
}
