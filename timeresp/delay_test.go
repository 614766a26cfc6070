package timeresp

import (
	"context"
	"testing"

	"github.com/polewright/polewright/internal/refdata"
	"github.com/polewright/polewright/tf"
)

// TestDelayedLoops compares with the closed loop expanded in powers of the open loop.
func TestDelayedLoops(t *testing.T) {
	type fraction [2][]refdata.Decimal
	var file struct {
		Cases []struct {
			ID                                   string
			Controller, Plant, Sensor, Prefilter fraction
			Delays                               []refdata.Decimal
			From, Signal                         string
			Times, Values                        []refdata.Decimal
		}
	}
	refdata.Read(t, "testdata/delayed.json", &file)
	points := map[string]tf.Point{"reference": tf.Reference, "load": tf.LoadDisturbance, "output": tf.Output, "error": tf.Error, "effort": tf.Effort}
	for _, c := range file.Cases {
		t.Run(c.ID, func(t *testing.T) {
			function := func(f fraction, delay float64) tf.Function {
				g, err := tf.New(referencePoly(t, f[0]), referencePoly(t, f[1]))
				if err != nil {
					t.Fatal(err)
				}
				if g, err = g.WithDeadTime(delay); err != nil {
					t.Fatal(err)
				}
				return g
			}
			l := tf.Loop{
				Prefilter:  function(c.Prefilter, 0),
				Controller: function(c.Controller, c.Delays[0].Float(t)),
				Plant:      function(c.Plant, c.Delays[1].Float(t)),
				Sensor:     function(c.Sensor, c.Delays[2].Float(t)),
			}
			r, err := Of(context.Background(), l, points[c.From], points[c.Signal], StepInput(1))
			if err != nil {
				t.Fatal(err)
			}
			checkValues(t, "step", r, c.Times, c.Values)
			f, err := r.Figures(0.02)
			t.Logf("final %v, settling %v, overshoot %v, %v", f.Final, f.SettlingTime, f.Overshoot, err)
		})
	}
}
