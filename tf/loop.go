package tf

import (
	"math"

	"github.com/polewright/polewright/poly"
)

// Loop is a control loop with negative feedback:
//
//	reference → Prefilter → (+ error) → Controller → effort → (+ load) → Plant → (+) → output
//	                         −↑                                                          │
//	                          └─────────── (+ noise) ←──────── Sensor ←──────────────────┘
//
// A block left at its zero value is a wire, except the plant: a Loop without a plant is
// refused by every call that can return an error. A controller in z around a plant in s
// makes a sampled-data loop: the controller acts once a period on the sampled output of the
// sensor, through the hold and after the computation delay.
type Loop struct {
	Prefilter, Controller, Plant, Sensor Function

	Hold             Method  // of a sampled-data loop: ZeroOrderHold (the zero value) or FirstOrderHold
	ComputationDelay float64 // s, of a sampled-data loop: from a sample to the effort that follows from it
	Limits           Limits  // of the actuator; linear calls do not look at them
}

// Limits are those of the actuator. 0 means unlimited.
type Limits struct {
	Amplitude float64 // of |u|
	Rate      float64 // of |du/dt|, per second
}

// WithGain returns the loop with its controller multiplied by k. If k is not finite the
// controller becomes invalid, and calls on the loop say so.
func (l Loop) WithGain(k float64) Loop {
	l.Controller, _ = l.Controller.Scale(k) // an invalid function carries its error
	return l
}

// plan is a loop made ready for linear calls: every block in one variable, without dead time
// in z. Of a sampled-data loop the plant and the sensor are sampled.
type plan struct {
	prefilter, controller Function
	forward               Function // plant
	around                Function // plant and sensor in one
	sensor                Function // only where the loop is not sampled jointly
	joint                 bool     // plant and sensor were sampled as one: forward and around have one denominator
	load                  Function // from a load held over the period to the output, of a sampled-data loop
	loadAround            Function // the same through the sensor
	period                float64
}

// check finds what can be wrong with a loop before any arithmetic.
func (l Loop) check(call string) error {
	for _, block := range []struct {
		name string
		g    Function
	}{{"Prefilter", l.Prefilter}, {"Controller", l.Controller}, {"Plant", l.Plant}, {"Sensor", l.Sensor}} {
		if block.g.err != nil {
			return block.g.err
		}
	}
	switch {
	case l.Plant.isWire():
		return badArgument(call, "Plant", "is missing")
	case !(l.ComputationDelay >= 0) || math.IsInf(l.ComputationDelay, 0):
		return badArgument(call, "ComputationDelay", "%v is not a finite number ≥ 0", l.ComputationDelay)
	case !(l.Limits.Amplitude >= 0):
		return badArgument(call, "Limits.Amplitude", "%v is not a number ≥ 0", l.Limits.Amplitude)
	case !(l.Limits.Rate >= 0):
		return badArgument(call, "Limits.Rate", "%v is not a number ≥ 0", l.Limits.Rate)
	case l.Hold < ZeroOrderHold || l.Hold > MatchedRoots:
		return badArgument(call, "Hold", "%d is no method", int(l.Hold))
	}
	return nil
}

// SamplingPeriod returns the period of the loop in seconds: that of its blocks in z, 0 if
// there are none. NaN if the loop is not valid.
func (l Loop) SamplingPeriod() float64 {
	period, err := l.period("tf.Loop.SamplingPeriod")
	if err != nil {
		return math.NaN()
	}
	return period
}

// SampledData tells whether a controller in z stands around a plant in s.
func (l Loop) SampledData() bool {
	period, err := l.period("tf.Loop.SampledData")
	return err == nil && l.isSampledData(period)
}

func (l Loop) isSampledData(period float64) bool {
	continuous := func(g Function) bool { return g.period == 0 && !g.isConstant() }
	return period > 0 && (continuous(l.Plant) || continuous(l.Sensor) || l.ComputationDelay > 0)
}

// period returns the one period of the blocks in z. Plant and sensor may be functions of s
// beside it; prefilter and controller may not.
func (l Loop) period(call string) (float64, error) {
	if err := l.check(call); err != nil {
		return 0, err
	}
	period := 0.0
	blocks := []Function{l.Controller, l.Prefilter, l.Sensor, l.Plant}
	for _, g := range blocks {
		if g.period == 0 || g.isConstant() {
			continue
		}
		if period != 0 && g.period != period {
			return 0, &PeriodError{Call: call, Periods: [2]float64{period, g.period}}
		}
		period = g.period
	}
	if period == 0 {
		// A constant with a period declares it, where nothing else speaks against it.
		for _, g := range blocks[:2] {
			if g.period > 0 && l.Plant.period == 0 {
				period = g.period
				break
			}
		}
		if period > 0 && l.ComputationDelay == 0 && l.allConstant() {
			period = 0
		}
	}
	if period > 0 {
		for _, g := range blocks[:2] {
			if g.period == 0 && !g.isConstant() {
				return 0, &PeriodError{Call: call, Periods: [2]float64{0, period}}
			}
		}
		if l.Plant.period > 0 && !l.Plant.isConstant() && l.Sensor.period == 0 && !l.Sensor.isConstant() {
			return 0, &PeriodError{Call: call, Periods: [2]float64{period, 0}}
		}
	}
	if l.ComputationDelay > 0 && l.Plant.period > 0 && !l.Plant.isConstant() {
		return 0, badArgument(call, "ComputationDelay", "%v s around a plant in z, which has no time between samples; give the plant its dead time", l.ComputationDelay)
	}
	if period == 0 && l.ComputationDelay > 0 {
		return 0, badArgument(call, "ComputationDelay", "%v s in a loop that is not sampled; give the plant this dead time", l.ComputationDelay)
	}
	return period, nil
}

func (l Loop) allConstant() bool {
	return l.Plant.isConstant() && l.Sensor.isConstant() && l.Controller.isConstant() && l.Prefilter.isConstant()
}

// plan makes the loop ready.
func (l Loop) plan(call string) (plan, error) {
	period, err := l.period(call)
	if err != nil {
		return plan{}, err
	}
	p := plan{
		prefilter:  l.Prefilter.filled(),
		controller: l.Controller.filled(),
		forward:    l.Plant.filled(),
		sensor:     l.Sensor.filled(),
		period:     period,
	}
	if l.isSampledData(period) {
		if err := l.sample(call, &p); err != nil {
			return plan{}, err
		}
	} else if p.around, err = p.forward.Series(p.sensor); err != nil {
		return plan{}, err
	}
	if period > 0 {
		for _, g := range []*Function{&p.prefilter, &p.controller, &p.forward, &p.around, &p.sensor} {
			if *g, err = g.Rational(); err != nil {
				return plan{}, err
			}
			g.period = period
		}
	}
	return p, nil
}

// loopDelay returns the dead time around the loop.
func (p plan) loopDelay() deadTime { return p.controller.delay.plus(p.around.delay) }

// Open returns controller·plant·sensor, around the loop, nothing cancelled. Of a
// sampled-data loop plant and sensor are sampled as one, behind the hold and after the
// computation delay. The error is a [*poly.ArgumentError] if the plant is missing or a field
// is out of range, and a [*PeriodError] if the periods do not fit.
func (l Loop) Open() (Function, error) {
	p, err := l.plan("tf.Loop.Open")
	if err != nil {
		return invalid(err)
	}
	g, err := p.controller.Series(p.around)
	if err != nil {
		return invalid(err)
	}
	g.period = p.period
	return g, nil
}

// Closed returns the function from reference to output, prefilter included, nothing
// cancelled: poles that the closed loop hides are there. Of a sampled-data loop it holds at
// the samples. The error is that of [Loop.Open], or an [*IrrationalError] if the loop has
// dead time in s: see [Loop.Path].
func (l Loop) Closed() (Function, error) {
	path, err := l.path("tf.Loop.Closed", Reference, Output)
	if err != nil {
		return invalid(err)
	}
	return path.function("tf.Loop.Closed")
}

// Characteristic returns the two parts of the characteristic polynomial with nothing
// cancelled: the poles of the loop whose controller is multiplied by k, hidden ones included,
// are the roots of fixed + k·scaled. They are the denominator and the numerator of [Loop.Open].
// The prefilter stands outside the loop: its poles are not among them. The error is
// that of [Loop.Open], or an [*IrrationalError] if the loop has dead time in s.
func (l Loop) Characteristic() (fixed, scaled poly.Poly, err error) {
	const call = "tf.Loop.Characteristic"
	p, err := l.plan(call)
	if err != nil {
		return poly.Poly{}, poly.Poly{}, err
	}
	fixed, scaled = p.characteristic()
	if d := p.loopDelay(); !d.zero() && scaled.Degree() >= 0 {
		return poly.Poly{}, poly.Poly{}, &IrrationalError{Call: call, DeadTime: d.near}
	}
	return fixed, scaled, nil
}

func (p plan) characteristic() (fixed, scaled poly.Poly) {
	return p.controller.denominator.Mul(p.around.denominator), p.controller.numerator.Mul(p.around.numerator)
}
