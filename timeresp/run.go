package timeresp

import (
	"context"
	"errors"
	"fmt"
	"math"

	"github.com/polewright/polewright/internal/hybrid"
	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// runSettings are the settings of Run.
type runSettings struct {
	until                    float64
	tracking                 float64
	load, disturbance, noise Input
	progress                 func(t float64)
	actuator, sensor         func(float64) float64
}

// Until sets how long [Run] follows the loop, in seconds. Without it, that is ten times the
// time in which the slowest mode of the linear loop decays to 2 %, and an error for a loop
// that does not decay or has dead time.
func Until(seconds float64) Option { return func(s *settings) { s.run.until = seconds } }

// TrackingTime sets the time constant, in seconds, with which the integrators of the
// controller follow the actuator while it is at its limit: back-calculation, Åström and
// Hägglund, Advanced PID Control, ISA 2006, section 3.5. The input of the last integrator
// gets (u - v)/TrackingTime more, v being what the controller asks for and u what the
// actuator gives. 0, the default, leaves the controller as it is written: it winds up.
func TrackingTime(seconds float64) Option { return func(s *settings) { s.run.tracking = seconds } }

// LoadInput lets [Run] add a disturbance to what the actuator gives.
func LoadInput(in Input) Option { return func(s *settings) { s.run.load = in } }

// OutputDisturbanceInput lets [Run] add a disturbance to the output of the plant.
func OutputDisturbanceInput(in Input) Option { return func(s *settings) { s.run.disturbance = in } }

// NoiseInput lets [Run] add a signal to what the sensor delivers.
func NoiseInput(in Input) Option { return func(s *settings) { s.run.noise = in } }

// Progress lets [Run] tell the time it has reached, in seconds, now and then.
func Progress(tell func(t float64)) Option { return func(s *settings) { s.run.progress = tell } }

// ActuatorCharacteristic puts a static block between the actuator, after its limit, and the
// plant: a dead zone, a gear with backlash left out, a valve's curve. It must be a function
// of its argument alone. Time responses are then integrated numerically.
func ActuatorCharacteristic(f func(effort float64) float64) Option {
	return func(s *settings) { s.run.actuator = f }
}

// SensorCharacteristic puts a static block between the output and the sensor, likewise.
func SensorCharacteristic(f func(output float64) float64) Option {
	return func(s *settings) { s.run.sensor = f }
}

// Run follows every signal of a loop, at rest before t = 0, while the reference is in: with
// the limits of the actuator on amplitude and rate in force, dead time exact, and a
// controller in z acting once a period. Disturbances come by options.
//
// Between switching and sampling instants the signals are Taylor series, so that they are
// known at every t; switching instants are roots of such series. With a characteristic the
// loop is integrated numerically, to a tolerance of 1e-10 of each step. Either way the error
// is an estimate, not a bound.
//
// The error is a [*poly.ArgumentError] for a block that is improper, an invalid input or
// option, and a loop of direct parts without a solution; a [*tf.UnsupportedError] for a plant
// in z and for what a characteristic cannot be combined with; a [*poly.RangeError] for signals
// that grow out of the range of float64; and the context's error if it is cancelled.
func Run(ctx context.Context, l tf.Loop, in Input, opt ...Option) (*Record, error) {
	const call = "timeresp.Run"
	s := settingsOf(opt)
	loop, inputs, err := prepareRun(call, l, in, &s.run)
	if err != nil {
		return nil, err
	}
	until := s.run.until
	if until == 0 {
		if until, err = defaultUntil(call, l); err != nil {
			return nil, err
		}
	}
	record := &Record{loop: l, until: until, inputs: inputs}
	if s.run.actuator != nil || s.run.sensor != nil {
		record.source, err = runCharacteristic(ctx, call, loop, inputs, &s.run, until)
	} else {
		var result *hybrid.Result
		result, err = hybrid.Simulate(ctx, loop, inputs.sources(), until, s.run.progress)
		if err == nil {
			record.source = hybridSource{result}
		}
	}
	if err != nil {
		return nil, runError(call, err)
	}
	return record, nil
}

// prepareRun checks the loop and the inputs and writes them down as plain numbers.
func prepareRun(call string, l tf.Loop, in Input, s *runSettings) (loop hybrid.Loop, inputs runInputs, err error) {
	bad := func(argument, reason string, args ...any) error {
		return &poly.ArgumentError{Call: call, Argument: argument, Reason: fmt.Sprintf(reason, args...)}
	}
	if _, err := l.Open(); err != nil {
		return loop, inputs, err
	}
	inputs = runInputs{in, s.load, s.disturbance, s.noise}
	for i, name := range [...]string{"in", "LoadInput", "OutputDisturbanceInput", "NoiseInput"} {
		if err := inputs[i].check(call); err != nil {
			var argument *poly.ArgumentError
			if errors.As(err, &argument) {
				return loop, inputs, bad(name, "%s", argument.Reason)
			}
			return loop, inputs, err
		}
		if inputs[i].HasImpulse() {
			return loop, inputs, bad(name, "a Dirac impulse cannot pass an actuator; use Of for linear responses to impulses")
		}
	}
	for _, check := range []struct {
		name  string
		value float64
	}{{"Until", s.until}, {"TrackingTime", s.tracking}, {"l.Limits.Amplitude", l.Limits.Amplitude}, {"l.Limits.Rate", l.Limits.Rate}} {
		if !(check.value >= 0) || math.IsInf(check.value, 0) {
			return loop, inputs, bad(check.name, "%g; want a finite number not below 0", check.value)
		}
	}
	if l.Plant.Period() > 0 {
		return loop, inputs, &tf.UnsupportedError{Call: call, What: "a plant in z; StepOf answers for loops in z"}
	}
	loop = hybrid.Loop{Amplitude: l.Limits.Amplitude, Rate: l.Limits.Rate, Tracking: s.tracking}
	for _, part := range []struct {
		function tf.Function
		into     *hybrid.Block
	}{{l.Prefilter, &loop.Prefilter}, {l.Controller, &loop.Controller}, {l.Plant, &loop.Plant}, {l.Sensor, &loop.Sensor}} {
		*part.into = hybrid.Block{Numerator: coefficients(part.function.Numerator()),
			Denominator: coefficients(part.function.Denominator()), DeadTime: part.function.DeadTime()}
	}
	if l.SampledData() {
		loop.Period, loop.ComputationDelay = l.SamplingPeriod(), l.ComputationDelay
		loop.Extrapolate = l.Hold == tf.FirstOrderHold
		if l.Prefilter.Period() > 0 {
			return loop, inputs, &tf.UnsupportedError{Call: call, What: "a prefilter in z; put it into the input"}
		}
		if l.Sensor.Period() > 0 {
			return loop, inputs, &tf.UnsupportedError{Call: call, What: "a sensor in z; put it into the controller"}
		}
		if loop.Extrapolate && (loop.Amplitude > 0 || loop.Rate > 0) {
			return loop, inputs, &tf.UnsupportedError{Call: call, What: "a limited actuator behind an extrapolating hold"}
		}
		if s.tracking > 0 {
			return loop, inputs, &tf.UnsupportedError{Call: call, What: "back-calculation in a controller in z"}
		}
	}
	return loop, inputs, nil
}

// coefficients lists the coefficients of p, highest power first.
func coefficients(p poly.Poly) []float64 {
	c := make([]float64, p.Degree()+1)
	for i := range c {
		c[i] = p.Coefficient(p.Degree() - i)
	}
	return c
}

// runInputs are the inputs in the order of [tf.Reference] and what follows it.
type runInputs [4]Input

func (in runInputs) sources() hybrid.Inputs {
	var out [4]hybrid.Source
	for i := range in {
		if len(in[i].terms) > 0 {
			out[i] = inputSource{in[i], in[i].Breaks()}
		}
	}
	return hybrid.Inputs{Reference: out[0], Load: out[1], Disturbance: out[2], Noise: out[3]}
}

// inputSource tells an input as Taylor series.
type inputSource struct {
	Input
	breaks []float64
}

// Next implements [hybrid.Source].
func (s inputSource) Next(t float64) float64 {
	for _, b := range s.breaks {
		if b > t {
			return b
		}
	}
	return math.Inf(1)
}

// Taylor implements [hybrid.Source].
func (s inputSource) Taylor(t float64, into []float64) {
	clear(into)
	for i := range s.terms {
		m := &s.terms[i]
		if !(t >= m.from && t < m.to) {
			continue
		}
		x := t - m.from
		for k, c := range shifted(m.polynomial, x) {
			if k < len(into) {
				into[k] += c
			}
		}
		if m.amplitude == 0 {
			continue
		}
		sin, cos := math.Sincos(m.omega*x + m.phase)
		weight := m.amplitude
		for k := range into {
			// The derivatives of the sine go round sin, cos, -sin, -cos.
			into[k] += weight * [4]float64{sin, cos, -sin, -cos}[k%4]
			weight *= m.omega / float64(k+1)
		}
	}
}

// defaultUntil is ten times the time in which the slowest mode decays to 2 %.
func defaultUntil(call string, l tf.Loop) (float64, error) {
	refuse := func(why string) (float64, error) {
		return 0, &poly.ArgumentError{Call: call, Argument: "Until", Reason: "is needed: " + why}
	}
	fixed, scaled, err := l.Characteristic()
	if err != nil {
		return refuse("the loop has no characteristic polynomial to tell its slowest mode")
	}
	roots, err := fixed.Add(scaled).Roots()
	if err != nil {
		return 0, err
	}
	period := l.SamplingPeriod()
	slowest := math.Inf(1)
	for _, root := range roots {
		s := root.Value
		if period > 0 {
			s = tf.ContinuousPole(s, period)
		}
		slowest = math.Min(slowest, -real(s))
	}
	if math.IsInf(slowest, 1) {
		return refuse("the loop has no modes")
	}
	if slowest <= 0 {
		return refuse("the loop is not stable")
	}
	return 10 * math.Log(50) / slowest, nil
}

// runError turns the errors of the machinery into those of the package.
func runError(call string, err error) error {
	var block *hybrid.BlockError
	var over *hybrid.OverflowError
	switch {
	case errors.As(err, &over):
		return &poly.RangeError{Call: call, Reason: fmt.Sprintf("the signals leave the range of float64 by t = %.3g s", over.Time)}
	case errors.As(err, &block):
		return &poly.ArgumentError{Call: call, Argument: "l." + block.Block, Reason: block.Err.Error()}
	case errors.Is(err, hybrid.ErrAlgebraic):
		return &poly.ArgumentError{Call: call, Argument: "l", Reason: "the direct parts around the loop multiply to -1 or less: no solution at an instant"}
	case errors.Is(err, hybrid.ErrTooLong):
		return &poly.ArgumentError{Call: call, Argument: "Until", Reason: "is too long beside the fastest part of the loop"}
	}
	return err
}
