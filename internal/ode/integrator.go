package ode

import (
	"errors"
	"fmt"
	"math"
)

// A Func writes the derivative of y at time t into dydt. It must not keep the slices.
type Func func(t float64, y, dydt []float64)

// A Method chooses how steps are made.
type Method int

const (
	Automatic Method = iota // explicit until stiffness is measured, implicit while it lasts
	Explicit                // Dormand–Prince 8(5,3)
	Implicit                // Radau IIA of order 5
)

// Options adjust an integration; the zero value is the tested default.
type Options struct {
	RelTol    float64 // relative tolerance of a step; 0 means 1e-9
	AbsTol    float64 // absolute tolerance of a step; 0 means RelTol
	FirstStep float64 // s; 0 lets the problem decide
	MaxStep   float64 // s; 0 means no limit
	MaxSteps  int     // steps, accepted or not, until ErrTooManySteps; 0 means 1e6
	Method    Method
	// Jacobian, if set, writes ∂fᵢ/∂yⱼ to into[i*n+j]; else it is formed by differences.
	Jacobian func(t float64, y, into []float64)
}

// ErrTooManySteps, ErrStepTooSmall and ErrNotFinite say why an integration cannot go on.
var (
	ErrTooManySteps = errors.New("ode: the limit of steps is reached")
	ErrStepTooSmall = errors.New("ode: the step falls below the spacing of the floating-point numbers")
	ErrNotFinite    = errors.New("ode: the derivative is not finite")
)

// Work counts what an integration has cost.
type Work struct {
	Accepted, Rejected, Evaluations, Jacobians, Factorizations int
	Stiff                                                      int // accepted steps made by the implicit method
}

// An Integrator advances one solution step by step. It is not safe for concurrent use.
type Integrator struct {
	f    Func
	o    Options
	n    int
	work Work

	t, next  float64 // now, and the step to try next; next < 0 when time runs backwards
	y, dydt  []float64
	from     float64 // the last step runs from here to t
	reach    float64 // where it ended when it was accepted: Redo goes no further
	unseen   bool    // accept the step whatever its error estimate
	yFrom    []float64
	dydtFrom []float64
	dense    Segment

	explicit *explicit
	implicit *implicit
	stiff    bool
	signs    stiffness
}

// New prepares the integration of y′ = f(t, y) from y(start) = initial. It reports
// tolerances that are negative or not finite, an empty state and one that is not finite.
func New(f Func, start float64, initial []float64, o Options) (*Integrator, error) {
	if o.RelTol == 0 {
		o.RelTol = 1e-9
	}
	if o.AbsTol == 0 {
		o.AbsTol = o.RelTol
	}
	if o.MaxSteps == 0 {
		o.MaxSteps = 1_000_000
	}
	for _, x := range []float64{o.RelTol, o.AbsTol, o.FirstStep, o.MaxStep} {
		if !(x >= 0) || math.IsInf(x, 0) {
			return nil, fmt.Errorf("ode: a tolerance or step of %g; want a finite number not below 0", x)
		}
	}
	// Below this the error estimate is nothing but rounding.
	o.RelTol = max(o.RelTol, 20*unitRoundoff)
	if len(initial) == 0 {
		return nil, errors.New("ode: the state is empty")
	}
	n := len(initial)
	g := &Integrator{f: f, o: o, n: n, stiff: o.Method == Implicit}
	g.y, g.dydt = make([]float64, n), make([]float64, n)
	g.yFrom, g.dydtFrom = make([]float64, n), make([]float64, n)
	if err := g.Restart(start, initial); err != nil {
		return nil, err
	}
	return g, nil
}

const unitRoundoff = 0x1p-53

// Restart goes on from another state, as after a discontinuity: nothing of the past is used.
func (g *Integrator) Restart(t float64, y []float64) error {
	g.t, g.from, g.reach, g.next = t, t, t, 0
	copy(g.y, y)
	g.evaluate(t, g.y, g.dydt)
	copy(g.yFrom, g.y)
	copy(g.dydtFrom, g.dydt)
	g.dense = Segment{}
	if g.implicit != nil {
		g.implicit.forget()
	}
	if !finite(g.y) || !finite(g.dydt) || math.IsNaN(t) || math.IsInf(t, 0) {
		return ErrNotFinite
	}
	return nil
}

func (g *Integrator) evaluate(t float64, y, dydt []float64) {
	g.work.Evaluations++
	g.f(t, y, dydt)
}

// Time returns the time reached.
func (g *Integrator) Time() float64 { return g.t }

// Since returns the time at which the last step began.
func (g *Integrator) Since() float64 { return g.from }

// State returns the state at [Integrator.Time]. The slice changes with the next step.
func (g *Integrator) State() []float64 { return g.y }

// Work returns what the integration has cost so far.
func (g *Integrator) Work() Work { return g.work }

// Last returns the dense output of the last step; it keeps its values when the
// integration goes on.
func (g *Integrator) Last() Segment { return g.dense.clone() }

// At writes the solution at time t, within the last step, into y.
func (g *Integrator) At(t float64, y []float64) {
	if g.dense.coefficients == nil {
		copy(y, g.y)
		return
	}
	g.dense.At(t, y)
}

// Step makes one accepted step towards limit, which it does not pass.
func (g *Integrator) Step(limit float64) error {
	if limit == g.t {
		return nil
	}
	direction := math.Copysign(1, limit-g.t)
	if g.next == 0 || math.Signbit(g.next) != math.Signbit(direction) {
		g.next = direction * g.firstStep(limit)
	}
	for {
		if g.work.Accepted+g.work.Rejected >= g.o.MaxSteps {
			return ErrTooManySteps
		}
		h := g.next
		if g.o.MaxStep > 0 {
			h = direction * math.Min(math.Abs(h), g.o.MaxStep)
		}
		// A step that would leave a sliver, or pass the limit, ends on it.
		last := math.Abs(limit-g.t) <= 1.01*math.Abs(h)
		if last {
			h = limit - g.t
		}
		if !last && (math.Abs(h) < 4*unitRoundoff*math.Abs(g.t) || h == 0) {
			return ErrStepTooSmall
		}
		end := g.t + h
		if last {
			end = limit
		}
		accepted, factor, err := g.try(end)
		if err != nil {
			return err
		}
		if accepted {
			g.work.Accepted++
			if g.stiff {
				g.work.Stiff++
			}
			if !last || math.Abs(h*factor) > math.Abs(g.next) {
				g.next = h * factor
			}
			g.watchStiffness(h)
			return nil
		}
		g.work.Rejected++
		g.next = h * factor
	}
}

// Redo repeats the last step so that it ends at time t, within the step, instead. The whole
// step was accepted, so a part of it is accepted unseen.
func (g *Integrator) Redo(t float64) error {
	if t == g.t {
		return nil
	}
	if (t-g.from)*(g.reach-t) < 0 || math.IsNaN(t) {
		return fmt.Errorf("ode: time %g is outside the last step, from %g to %g", t, g.from, g.reach)
	}
	from, reach, next := g.from, g.reach, g.next
	copy(g.y, g.yFrom)
	copy(g.dydt, g.dydtFrom)
	g.t = from
	if t == from {
		return nil
	}
	g.unseen = true
	accepted, _, err := g.try(t)
	g.unseen = false
	if err == nil && !accepted {
		err = ErrNotFinite
	}
	g.reach, g.next = reach, next
	return err
}

// To integrates up to time end.
func (g *Integrator) To(end float64) error {
	for g.t != end {
		if err := g.Step(end); err != nil {
			return err
		}
	}
	return nil
}

// try makes a step to end with the method in force. On acceptance the state moves on.
func (g *Integrator) try(end float64) (accepted bool, factor float64, err error) {
	if g.stiff {
		if g.implicit == nil {
			g.implicit = newImplicit(g.n)
		}
		return g.implicit.try(g, end)
	}
	if g.explicit == nil {
		g.explicit = newExplicit(g.n)
	}
	return g.explicit.try(g, end)
}

// accept moves the state on to y with derivative dydt at time end.
func (g *Integrator) accept(end float64, y, dydt []float64) {
	copy(g.yFrom, g.y)
	copy(g.dydtFrom, g.dydt)
	g.from, g.t, g.reach = g.t, end, end
	copy(g.y, y)
	copy(g.dydt, dydt)
}

// firstStep guesses a step from the sizes of y, y′ and y″: Hairer, Nørsett, Wanner,
// section II.4.
func (g *Integrator) firstStep(limit float64) float64 {
	span := math.Abs(limit - g.t)
	if g.o.FirstStep > 0 {
		return math.Min(g.o.FirstStep, span)
	}
	d0, d1 := g.norm(g.y, g.y, g.y), g.norm(g.dydt, g.y, g.y)
	h := 1e-6 * span
	if d0 >= 1e-5 && d1 >= 1e-5 {
		h = 0.01 * d0 / d1
	} else if d1 > 0 {
		h = math.Min(h, 1e-2/d1)
	}
	h = math.Min(h, span)
	direction := math.Copysign(1, limit-g.t)
	ahead, slope := make([]float64, g.n), make([]float64, g.n)
	for i := range ahead {
		ahead[i] = g.y[i] + direction*h*g.dydt[i]
	}
	g.evaluate(g.t+direction*h, ahead, slope)
	for i := range slope {
		slope[i] -= g.dydt[i]
	}
	d2 := g.norm(slope, g.y, g.y) / h
	best := math.Max(1e-6*span, h*1e-3)
	if m := math.Max(d1, d2); m > 1e-15 {
		best = math.Pow(0.01/m, 1.0/8)
	}
	h = math.Min(math.Min(100*h, best), span)
	if !(h > 0) {
		h = 1e-6 * span
	}
	return h
}

// norm returns the root mean square of x in units of the tolerance at a and b.
func (g *Integrator) norm(x, a, b []float64) float64 {
	var sum float64
	for i, v := range x {
		scale := g.o.AbsTol + g.o.RelTol*math.Max(math.Abs(a[i]), math.Abs(b[i]))
		sum += (v / scale) * (v / scale)
	}
	return math.Sqrt(sum / float64(len(x)))
}

func finite(x []float64) bool {
	for _, v := range x {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}
