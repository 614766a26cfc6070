package timeresp

import (
	"encoding/json"
	"fmt"
	"math"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

type referenceFigures struct {
	Overshoot    refdata.Decimal `json:"overshoot"`
	PeakTime     refdata.Decimal `json:"peak_time"`
	PeakValue    refdata.Decimal `json:"peak_value"`
	Undershoot   refdata.Decimal `json:"undershoot"`
	UndershootAt refdata.Decimal `json:"undershoot_time"`
	T10          refdata.Decimal `json:"t10"`
	T90          refdata.Decimal `json:"t90"`
	Rise         refdata.Decimal `json:"rise_10_90"`
	Settling2    refdata.Decimal `json:"settling_2_percent"`
	Settling5    refdata.Decimal `json:"settling_5_percent"`
	ExtremeTime  refdata.Decimal `json:"extreme_time"`
	ExtremeValue refdata.Decimal `json:"extreme_value"`
}

type referenceCase struct {
	ID          string            `json:"id"`
	Kind        string            `json:"kind"`
	Numerator   []refdata.Decimal `json:"numerator"`
	Denominator []refdata.Decimal `json:"denominator"`
	Delay       refdata.Decimal   `json:"delay"`
	Final       refdata.Decimal   `json:"final_value"`
	Times       []refdata.Decimal `json:"times"`
	Step        []refdata.Decimal `json:"step"`
	Impulse     []refdata.Decimal `json:"impulse"`
	Dirac       refdata.Decimal   `json:"impulse_weight_at_0"`
	RampTimes   []refdata.Decimal `json:"ramp_times"`
	Ramp        []refdata.Decimal `json:"ramp"`
	Figures     *referenceFigures `json:"figures"`
}

type referenceFile struct {
	Cases    []referenceCase `json:"cases"`
	DeadTime []referenceCase `json:"dead_time"`
}

func readReference(t testing.TB) (f referenceFile) {
	refdata.Read(t, "testdata/step.json", &f)
	if len(f.Cases) == 0 || len(f.DeadTime) == 0 {
		t.Fatal("testdata/step.json holds no cases")
	}
	return f
}

func referencePoly(t testing.TB, c []refdata.Decimal) poly.Poly {
	return poly.New(refdata.Floats(t, c)...)
}

// checkValues compares a response with reference values, the error counted against the
// largest value so far.
func checkValues(t *testing.T, what string, r *Response, times, values []refdata.Decimal) {
	t.Helper()
	largest, worst := 0.0, 0.0
	for i := range times {
		at := times[i].Float(t)
		largest = math.Max(largest, math.Abs(values[i].Float(t)))
		miss := refdata.Miss(t, r.At(at), values[i])
		if bound := r.ErrorBound(at); !(miss <= bound) || bound > 1e-11*largest {
			t.Errorf("%s: ErrorBound(%v) = %.3g, with an error of %.3g and a largest value of %.3g so far", what, at, bound, miss, largest)
		}
		if largest > 0 {
			miss /= largest
		}
		worst = math.Max(worst, miss)
		if miss > 1e-11 {
			t.Errorf("%s(%v) = %v, want %v: off by %.2g of the largest value so far", what, at, r.At(at), values[i], miss)
		}
	}
	t.Logf("%s: off by at most %.1e", what, worst)
}

func checkFigure(t *testing.T, what string, got float64, want refdata.Decimal) {
	t.Helper()
	if want == "" {
		if !math.IsNaN(got) {
			t.Errorf("%s = %v, want none", what, got)
		}
		return
	}
	if off := refdata.Off(t, got, want); off > 1e-9 {
		t.Errorf("%s = %v, want %v (off by %.2g)", what, got, want, off)
	}
}

func checkFigures(t *testing.T, r *Response, want *referenceFigures) {
	t.Helper()
	f, err := r.Figures(0.02)
	if want.ExtremeTime != "" {
		checkFigure(t, "LargestTime", f.LargestTime, want.ExtremeTime)
		checkFigure(t, "LargestValue", f.LargestValue, want.ExtremeValue)
	}
	if err != nil {
		t.Error(err)
	}
	checkFigure(t, "Overshoot", f.Overshoot, want.Overshoot)
	checkFigure(t, "PeakTime", f.PeakTime, want.PeakTime)
	checkFigure(t, "PeakValue", f.PeakValue, want.PeakValue)
	checkFigure(t, "Undershoot", f.Undershoot, want.Undershoot)
	checkFigure(t, "UndershootTime", f.UndershootTime, want.UndershootAt)
	checkFigure(t, "Reach10", f.Reach10, want.T10)
	checkFigure(t, "Reach90", f.Reach90, want.T90)
	checkFigure(t, "RiseTime", f.RiseTime, want.Rise)
	checkFigure(t, "SettlingTime", f.SettlingTime, want.Settling2)
	f, _ = r.Figures(0.05)
	checkFigure(t, "SettlingTime(5 %)", f.SettlingTime, want.Settling5)
}

func sumOf(xs []float64) (sum float64) {
	for _, x := range xs {
		sum += x
	}
	return sum
}

func TestReferenceCases(t *testing.T) {
	for _, c := range readReference(t).Cases {
		t.Run(c.ID, func(t *testing.T) {
			num, den := referencePoly(t, c.Numerator), referencePoly(t, c.Denominator)
			g, err := tf.New(num, den)
			if err != nil {
				t.Fatal(err)
			}
			r, err := Step(g)
			if err != nil {
				t.Fatal(err)
			}
			checkValues(t, "step", r, c.Times, c.Step)
			if c.Figures != nil {
				checkFigure(t, "Final", r.final, c.Final)
				checkFigures(t, r, c.Figures)
			}
			r, err = Impulse(g)
			if err != nil {
				t.Fatal(err)
			}
			checkValues(t, "impulse", r, c.Times, c.Impulse)
			_, areas := r.Impulses()
			checkFigure(t, "area of the impulse", sumOf(areas), c.Dirac)
			r, err = Ramp(g)
			if err != nil {
				t.Fatal(err)
			}
			checkValues(t, "ramp", r, c.RampTimes, c.Ramp)
		})
	}
}

// TestReferenceDeadTime checks dead time outside and inside the loop.
func TestReferenceDeadTime(t *testing.T) {
	for _, c := range readReference(t).DeadTime {
		t.Run(c.ID, func(t *testing.T) {
			g, err := tf.New(referencePoly(t, c.Numerator), referencePoly(t, c.Denominator))
			if err != nil {
				t.Fatal(err)
			}
			if g, err = g.WithDeadTime(c.Delay.Float(t)); err != nil {
				t.Fatal(err)
			}
			var r *Response
			if c.Kind == "plant" {
				r, err = Step(g)
			} else {
				r, err = StepOf(tf.Loop{Plant: g})
			}
			if err != nil {
				t.Fatal(err)
			}
			checkValues(t, "step", r, c.Times, c.Step)
			checkFigure(t, "Final", r.Final(), c.Final)
			checkFigures(t, r, c.Figures)
		})
	}
}

// TestStandardSecondOrder checks the figures of 1/(s² + 2ζs + 1).
func TestStandardSecondOrder(t *testing.T) {
	var file struct {
		Cases []struct {
			ID      string                     `json:"id"`
			Zeta    refdata.Decimal            `json:"zeta"`
			Figures map[string]json.RawMessage `json:"figures"`
			// How much a rounding of zeta moves a figure.
			Condition map[string]refdata.Decimal `json:"relative_condition"`
		} `json:"cases"`
	}
	refdata.Read(t, "testdata/second.json", &file)
	for _, c := range file.Cases {
		t.Run(c.ID, func(t *testing.T) {
			zeta := c.Zeta.Float(t)
			g, err := tf.New(poly.New(1), poly.New(1, 2*zeta, 1))
			if err != nil {
				t.Fatal(err)
			}
			r, err := Step(g)
			if err != nil {
				t.Fatal(err)
			}
			check := func(name string, got float64) {
				t.Helper()
				var want refdata.Decimal
				if err := json.Unmarshal(c.Figures[name], &want); err != nil {
					t.Fatal(err)
				}
				checkFigure(t, name, got, want)
			}
			f, err := r.Figures(0.02)
			if err != nil {
				t.Fatal(err)
			}
			check("overshoot", f.Overshoot)
			check("peak_time", f.PeakTime)
			check("rise_0_100", f.Reach100)
			check("t10", f.Reach10)
			check("t90", f.Reach90)
			check("rise_10_90", f.RiseTime)
			check("settling_2_percent", f.SettlingTime)
			settling, err := r.SettlingTime(0.05)
			if err != nil {
				t.Fatal(err)
			}
			check("settling_5_percent", settling)
			for _, band := range []string{"2", "5"} {
				count, err := r.HalfCycles(map[string]float64{"2": 0.02, "5": 0.05}[band])
				if err != nil {
					t.Fatal(err)
				}
				if want := string(c.Figures["settling_"+band+"_percent_half_cycles"]); fmt.Sprint(count) != want {
					t.Errorf("HalfCycles(%s %%) = %d, want %s", band, count, want)
				}
			}
		})
	}
}
