package hybrid

import (
	"context"
	"math"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
)

// unitStep is 1 from t = 0 on.
type unitStep struct{}

func (unitStep) Taylor(_ float64, into []float64) { clear(into); into[0] = 1 }
func (unitStep) Next(float64) float64             { return math.Inf(1) }

type limitedFile struct {
	Limited []struct {
		ID               string
		PlantNumerator   []refdata.Decimal `json:"plant_numerator"`
		PlantDenominator []refdata.Decimal `json:"plant_denominator"`
		Controller       struct{ Kp, Ki, Tt refdata.Decimal }
		ActuatorLimit    refdata.Decimal `json:"actuator_limit"`
		Switches         []struct {
			T        refdata.Decimal
			From, To string
		}
		Times, Y, U []refdata.Decimal
	}
	DeadTime []struct {
		ID                     string
		Kind                   string
		Numerator, Denominator []refdata.Decimal
		Delay                  refdata.Decimal
		Times, Step            []refdata.Decimal
	} `json:"dead_time"`
}

var modes = map[string]Mode{"upper": Upper, "lower": Lower, "linear": Linear}

func TestLimitedReference(t *testing.T) {
	var file limitedFile
	refdata.Read(t, "testdata/limited.json", &file)
	for _, c := range file.Limited {
		controller := Block{Numerator: []float64{c.Controller.Kp.Float(t)}, Denominator: []float64{1}}
		loop := Loop{Prefilter: Wire, Sensor: Wire, Amplitude: c.ActuatorLimit.Float(t),
			Plant: Block{Numerator: refdata.Floats(t, c.PlantNumerator), Denominator: refdata.Floats(t, c.PlantDenominator)}}
		if c.Controller.Ki != "" {
			controller = Block{Numerator: []float64{c.Controller.Kp.Float(t), c.Controller.Ki.Float(t)}, Denominator: []float64{1, 0}}
		}
		if c.Controller.Tt != "" {
			loop.Tracking = c.Controller.Tt.Float(t)
		}
		loop.Controller = controller
		until := c.Times[len(c.Times)-1].Float(t)
		got, err := Simulate(context.Background(), loop, Inputs{Reference: unitStep{}}, until, nil)
		if err != nil {
			t.Fatalf("%s: %v", c.ID, err)
		}
		peak := 0.0
		for _, y := range c.Y {
			peak = math.Max(peak, math.Abs(y.Float(t)))
		}
		reader := got.Reader()
		worst := 0.0
		for i, at := range c.Times {
			worst = math.Max(worst, refdata.Miss(t, reader.At(Output, at.Float(t)), c.Y[i])/peak)
			worst = math.Max(worst, refdata.Miss(t, reader.At(Effort, at.Float(t)), c.U[i])/loop.Amplitude)
		}
		if worst > 1e-12 {
			t.Errorf("%s: off by %.2g", c.ID, worst)
		}
		n := 0
		for _, s := range c.Switches {
			if s.T.Float(t) > until {
				break
			}
			n++
			if n > len(got.Switches) {
				t.Errorf("%s: switch at %s is missing", c.ID, s.T)
				continue
			}
			have := got.Switches[n-1]
			if refdata.Off(t, have.Time, s.T) > 1e-12 || have.From != modes[s.From] || have.To != modes[s.To] {
				t.Errorf("%s: switch %v, want %v", c.ID, have, s)
			}
		}
		if len(got.Switches) > n {
			t.Errorf("%s: %d switches, want %d", c.ID, len(got.Switches), n)
		}
		t.Logf("%s: off by %.2g, %d switches, %d segments", c.ID, worst, n, got.Segments())
	}
}

func TestDeadTimeReference(t *testing.T) {
	var file limitedFile
	refdata.Read(t, "testdata/limited.json", &file)
	for _, c := range file.DeadTime {
		loop := Loop{Prefilter: Wire, Controller: Wire, Sensor: Wire,
			Plant: Block{Numerator: refdata.Floats(t, c.Numerator), Denominator: refdata.Floats(t, c.Denominator), DeadTime: c.Delay.Float(t)}}
		if c.Kind == "plant" {
			loop.Sensor = Block{Denominator: []float64{1}}
		}
		got, err := Simulate(context.Background(), loop, Inputs{Reference: unitStep{}}, c.Times[len(c.Times)-1].Float(t), nil)
		if err != nil {
			t.Fatalf("%s: %v", c.ID, err)
		}
		reader := got.Reader()
		worst := 0.0
		for i, at := range c.Times {
			worst = math.Max(worst, refdata.Miss(t, reader.At(Output, at.Float(t)), c.Step[i]))
		}
		if worst > 1e-12 {
			t.Errorf("%s: off by %.2g", c.ID, worst)
		}
		t.Logf("%s: off by %.2g, %d segments", c.ID, worst, got.Segments())
	}
}

func TestSampledReference(t *testing.T) {
	var file struct {
		Loops []struct {
			ID                    string
			PlantNumerator        []refdata.Decimal `json:"plant_numerator"`
			PlantDenominator      []refdata.Decimal `json:"plant_denominator"`
			ControllerNumerator   []refdata.Decimal `json:"controller_numerator"`
			ControllerDenominator []refdata.Decimal `json:"controller_denominator"`
			Delay, Period         refdata.Decimal
			Y                     []refdata.Decimal `json:"y_samples"`
			U                     []refdata.Decimal `json:"u_samples"`
			Times                 []refdata.Decimal `json:"between_times"`
			Between               []refdata.Decimal `json:"between_y"`
		}
	}
	refdata.Read(t, "testdata/sampled_loops.json", &file)
	for _, c := range file.Loops {
		loop := Loop{Prefilter: Wire, Sensor: Wire, Period: c.Period.Float(t),
			Controller: Block{Numerator: refdata.Floats(t, c.ControllerNumerator), Denominator: refdata.Floats(t, c.ControllerDenominator)},
			Plant:      Block{Numerator: refdata.Floats(t, c.PlantNumerator), Denominator: refdata.Floats(t, c.PlantDenominator), DeadTime: c.Delay.Float(t)}}
		until := loop.Period * (float64(len(c.Y)) - 0.5)
		got, err := Simulate(context.Background(), loop, Inputs{Reference: unitStep{}}, until, nil)
		if err != nil {
			t.Fatalf("%s: %v", c.ID, err)
		}
		demand, _ := got.Samples()
		reader := got.Reader()
		worst := 0.0
		for i := range c.Y {
			worst = math.Max(worst, refdata.Miss(t, reader.At(Output, float64(i)*loop.Period), c.Y[i]))
			worst = math.Max(worst, refdata.Miss(t, demand[i], c.U[i]))
		}
		for i, at := range c.Times {
			worst = math.Max(worst, refdata.Miss(t, reader.At(Output, at.Float(t)), c.Between[i]))
		}
		if worst > 1e-11 {
			t.Errorf("%s: off by %.2g", c.ID, worst)
		}
		t.Logf("%s: off by %.2g, %d segments", c.ID, worst, got.Segments())
	}
}
