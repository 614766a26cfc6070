package tf_test

import (
	"math"
	"math/cmplx"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// Sampled-data loops, controller in z around a plant in s: the verdict of the references, and
// crossovers where the sampled open loop has them.
func TestMarginsOfSampledDataLoops(t *testing.T) {
	var file struct {
		Loops []struct {
			ID             string
			PlantNum       []refdata.Decimal `json:"plant_numerator"`
			PlantDen       []refdata.Decimal `json:"plant_denominator"`
			ControllerNum  []refdata.Decimal `json:"controller_numerator"`
			ControllerDen  []refdata.Decimal `json:"controller_denominator"`
			Delay, Period  refdata.Decimal
			SpectralRadius refdata.Decimal `json:"spectral_radius"`
			Stable         bool
		}
	}
	refdata.Read(t, "testdata/sampled.json", &file)
	if len(file.Loops) == 0 {
		t.Fatal("no loops")
	}
	function := func(num, den []refdata.Decimal) tf.Function {
		g, err := tf.New(poly.New(refdata.Floats(t, num)...), poly.New(refdata.Floats(t, den)...))
		if err != nil {
			t.Fatal(err)
		}
		return g
	}
	for _, c := range file.Loops {
		period := c.Period.Float(t)
		plant, err := function(c.PlantNum, c.PlantDen).WithDeadTime(c.Delay.Float(t))
		if err != nil {
			t.Fatal(err)
		}
		controller, err := function(c.ControllerNum, c.ControllerDen).WithPeriod(period)
		if err != nil {
			t.Fatal(err)
		}
		loop := tf.Loop{Controller: controller, Plant: plant}
		m, err := loop.Margins()
		if err != nil {
			t.Errorf("%s: %v", c.ID, err)
			continue
		}
		if (m.Stable == poly.Holds) != c.Stable {
			t.Errorf("%s: stable %v, want %v", c.ID, m.Stable, c.Stable)
		}
		open, err := loop.Open()
		if err != nil {
			t.Fatal(err)
		}
		for _, x := range m.GainCrossovers {
			if y := open.AtFrequency(x.Frequency); math.Abs(cmplx.Abs(y)-1) > 1e-10 || math.Abs(cmplx.Phase(-y)-x.Margin) > 1e-9 {
				t.Errorf("%s: L = %v at the gain crossover %v", c.ID, y, x)
			}
		}
		for _, x := range m.PhaseCrossovers {
			if y := open.AtFrequency(x.Frequency); cmplx.Abs(y*complex(x.Margin, 0)+1) > 1e-9 {
				t.Errorf("%s: L = %v at the phase crossover %v", c.ID, y, x)
			}
		}
		// By the gain margin times its ends the loop goes unstable.
		if !math.IsInf(m.GainIncrease, 1) {
			for _, k := range []float64{0.999, 1.001} {
				after, err := loop.WithGain(m.GainIncrease * k).Margins()
				if err != nil || (after.Stable == poly.Holds) != (k < 1) {
					t.Errorf("%s: stable %v at %v of the gain margin, %v", c.ID, after.Stable, k, err)
				}
			}
		}
		t.Log(c.ID, m)
	}
}
