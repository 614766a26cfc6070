package hybrid

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

// mostPeriods bounds the dead time of a sampled controller.
const mostPeriods = 10_000

// A Source is an input signal. Taylor writes the coefficients of its Taylor series about t,
// as it is from t on; Next returns where its form changes next after t, +Inf if it does not.
type Source interface {
	Taylor(t float64, into []float64)
	Next(t float64) float64
}

// Inputs are the signals that act on a loop from outside; nil is zero.
type Inputs struct{ Reference, Load, Disturbance, Noise Source }

// A Loop is reference → prefilter → (−) → controller → actuator → (+ load) → plant →
// (+ disturbance) = output → sensor → (+ noise) → back.
type Loop struct {
	Prefilter, Controller, Plant, Sensor Block
	Amplitude                            float64 // |u| ≤ Amplitude; 0 means unlimited
	Rate                                 float64 // |du/dt| ≤ Rate; 0 means unlimited
	Tracking                             float64 // s, time constant of back-calculation; 0 means none
	Period                               float64 // s; if above 0 the controller is a function of z
	ComputationDelay                     float64 // s, from sample to actuator, less than Period
	Extrapolate                          bool    // hold with the slope of the last two samples, not the value; excludes Amplitude and Rate
}

// A Signal names a quantity of the loop.
type Signal int

// The signals that a [Result] can tell.
const (
	Reference Signal = iota // as given, before the prefilter
	Error                   // filtered reference less what the sensor says
	Demand                  // what the controller asks for
	Effort                  // what the actuator gives
	Output                  // of the plant, with the output disturbance
	Measured                // what the sensor says, with the noise
	Load
	Disturbance
	Noise
	signals
)

// A Mode says whether the actuator follows its demand.
type Mode int8

// The modes of the actuator.
const (
	Falling Mode = -2 // as fast as it can, behind its demand
	Lower   Mode = -1 // at the lower limit
	Linear  Mode = 0  // as demanded
	Upper   Mode = 1
	Rising  Mode = 2
)

// ErrAlgebraic reports a loop of direct parts with a gain of −1 or beyond: the model has
// no solution, or no stable one, at a single instant.
var ErrAlgebraic = errors.New("hybrid: the direct parts around the loop multiply to -1 or less: no solution at an instant")

// ErrTooLong reports that the limit of segments was reached.
var ErrTooLong = errors.New("hybrid: too many segments; the time asked for is too long beside the fastest part of the loop")

// An OverflowError reports that a signal has grown out of the range of float64.
type OverflowError struct{ Time float64 } // s

func (e *OverflowError) Error() string {
	return fmt.Sprintf("hybrid: the signals leave the range of float64 by t = %.3g s", e.Time)
}

// A BlockError says which block cannot be simulated.
type BlockError struct {
	Block string // "prefilter", "controller", "plant" or "sensor"
	Err   error
}

func (e *BlockError) Error() string { return fmt.Sprintf("hybrid: %s: %v", e.Block, e.Err) }

func (e *BlockError) Unwrap() error { return e.Err }

// machine is a loop made ready.
type machine struct {
	loop                                 Loop
	prefilter, controller, plant, sensor realisation
	at                                   [5]int  // offsets of their states in the state vector, and its length
	direct                               float64 // product of the direct parts around the loop where nothing delays it
	longest                              float64 // longest segment, s
	in                                   [4]Source
	delays                               [4]float64 // of reference, demand, plant input, sensor input
}

// Places of inputs in machine.in.
const (
	inReference = iota
	inLoad
	inDisturbance
	inNoise
)

// Places of delays in machine.delays and of their histories.
const (
	lineReference = iota
	lineDemand
	linePlant
	lineSensor
	lines
)

func newMachine(l Loop, in Inputs) (*machine, error) {
	m := &machine{loop: l, in: [4]Source{in.Reference, in.Load, in.Disturbance, in.Noise}}
	for _, part := range []struct {
		name  string
		block Block
		into  *realisation
		apart bool
	}{
		{"prefilter", l.Prefilter, &m.prefilter, false},
		{"controller", l.Controller, &m.controller, l.Period == 0},
		{"plant", l.Plant, &m.plant, false},
		{"sensor", l.Sensor, &m.sensor, false},
	} {
		if l.Period > 0 && part.name == "controller" {
			// Whole periods of dead time are powers of z.
			whole := int(math.Round(part.block.DeadTime / l.Period))
			if whole > mostPeriods {
				return nil, &BlockError{Block: part.name, Err: fmt.Errorf("a dead time of %d periods; at most %d can be followed", whole, mostPeriods)}
			}
			part.block.Denominator = append(slices.Clone(part.block.Denominator), make([]float64, max(0, whole))...)
		}
		r, err := realise(part.block, part.apart)
		if err != nil {
			return nil, &BlockError{Block: part.name, Err: err}
		}
		*part.into = r
		if d := part.block.DeadTime; !(d >= 0) || math.IsInf(d, 0) {
			return nil, &BlockError{Block: part.name, Err: fmt.Errorf("a dead time of %g s; want a finite one not below 0", d)}
		}
	}
	m.delays = [lines]float64{l.Prefilter.DeadTime, l.Controller.DeadTime, l.Plant.DeadTime, l.Sensor.DeadTime}
	if l.Period > 0 {
		m.delays[lineDemand] = 0 // whole periods, which the recursion holds
	}
	for i, r := range []*realisation{&m.prefilter, &m.controller, &m.plant, &m.sensor} {
		m.at[i+1] = m.at[i] + r.states()
		if i == 1 && l.Period > 0 {
			m.at[i+1] = m.at[i] // the states of a sampled controller live in the sampling
		}
	}
	if l.Period == 0 {
		m.direct = m.controller.direct * m.plant.direct * m.sensor.direct
		if m.delays[lineDemand]+m.delays[linePlant]+m.delays[lineSensor] > 0 {
			m.direct = 0
		}
		if m.direct <= -1 {
			return nil, ErrAlgebraic
		}
	}
	m.longest = math.Inf(1)
	for _, d := range m.delays[1:] {
		if d > 0 {
			m.longest = math.Min(m.longest, d)
		}
	}
	return m, nil
}
