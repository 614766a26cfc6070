package spec

import (
	"context"
	"errors"
	"math"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
	"github.com/polewright/polewright/timeresp"
)

// Evidence is a loop together with what requirements ask of it, each computed once, when
// first asked for. It belongs to one goroutine.
type Evidence struct {
	loop tf.Loop
	m    *model

	stable   poly.Verdict
	poles    []poly.Root
	polesErr error
	judged   bool

	response    *timeresp.Response
	responseErr error
	overshoot   *[2]float64 // fraction and time
	rise        *float64
	settling    map[float64]float64 // by band
	figures     map[float64]timeresp.Figures

	quickSignal *signal
	quickDone   bool

	margins    tf.Margins
	marginsErr error
	hasMargins bool

	signals [2]*signal // output and load, by trajectory
	traced  [2]bool
}

// NewEvidence returns the evidence of a loop, for requirements that are judged outside of a
// sheet. The error is that of an invalid loop.
func NewEvidence(l tf.Loop) (*Evidence, error) {
	m, err := newModel("spec.NewEvidence", l, &settings{})
	if err != nil {
		return nil, err
	}
	return &Evidence{loop: l, m: m}, nil
}

// Loop returns the loop.
func (e *Evidence) Loop() tf.Loop { return e.loop }

// Stable tells whether the loop is internally stable: every root of the characteristic,
// nothing cancelled, and every pole of the prefilter lies left of the imaginary axis (inside
// the unit circle in z).
func (e *Evidence) Stable() (poly.Verdict, error) {
	e.decide()
	return e.stable, e.polesErr
}

// Poles returns the closed-loop poles, hidden ones and those of the prefilter included,
// sorted as by [poly.Poly.Roots]. A loop with dead time has infinitely many: a
// *[tf.UnsupportedError].
func (e *Evidence) Poles() ([]poly.Root, error) {
	e.decide()
	if e.polesErr == nil && e.m.around != 0 {
		return nil, &tf.UnsupportedError{Call: "spec.Evidence.Poles", What: "the poles of a loop with dead time, which are infinitely many"}
	}
	return e.poles, e.polesErr
}

func (e *Evidence) decide() {
	if e.judged {
		return
	}
	e.judged = true
	if e.m.period != 0 {
		e.polesErr = &tf.UnsupportedError{Call: "spec", What: "loops with a sampling period"}
		return
	}
	if e.m.around != 0 {
		margins, err := e.Margins()
		if err != nil {
			e.polesErr = err
			return
		}
		e.stable = margins.Stable
		if ok, err := e.m.prefilterStable(); err != nil || !ok {
			e.stable, e.polesErr = poly.Fails, err
		}
		return
	}
	c := e.m.character.at(1)
	roots, err := c.Roots()
	if err != nil {
		e.polesErr = err
		return
	}
	e.stable = poly.Holds
	if c.Degree() < max(e.m.character.fixed.Degree(), e.m.character.scaled.Degree()) {
		// A pole at infinity: the algebraic loop through the direct parts has gain -1.
		e.stable = poly.Fails
	}
	if e.m.prefilter.Degree() > 0 {
		more, err := e.m.prefilter.Roots()
		if err != nil {
			e.polesErr = err
			return
		}
		roots = mergeRoots(roots, more)
	}
	for _, r := range roots {
		switch re := real(r.Value); {
		case re >= r.HalfRe:
			e.stable = poly.Fails
		case re+r.HalfRe >= 0 && e.stable == poly.Holds:
			e.stable = poly.Undecided
		}
	}
	e.poles = roots
}

// mergeRoots merges two sorted lists.
func mergeRoots(a, b []poly.Root) []poly.Root {
	out := make([]poly.Root, 0, len(a)+len(b))
	for len(a) > 0 && len(b) > 0 {
		p, q := a[0].Value, b[0].Value
		if real(p) < real(q) || real(p) == real(q) && imag(p) <= imag(q) {
			out, a = append(out, a[0]), a[1:]
		} else {
			out, b = append(out, b[0]), b[1:]
		}
	}
	return append(append(out, a...), b...)
}

// Response returns the unit step response from reference to output.
func (e *Evidence) Response() (*timeresp.Response, error) {
	if e.response == nil && e.responseErr == nil {
		if !e.m.rational() {
			e.response, e.responseErr = timeresp.StepOf(e.loop)
			return e.response, e.responseErr
		}
		g, err := tf.New(e.m.output().at(1), product(e.m.character.at(1), e.m.prefilter))
		if err != nil {
			e.responseErr = err
			return nil, err
		}
		e.response, e.responseErr = timeresp.Step(g)
	}
	return e.response, e.responseErr
}

// Figures returns the figures of the unit step response, the settling time for the band.
func (e *Evidence) Figures(band float64) (timeresp.Figures, error) {
	if f, ok := e.figures[band]; ok {
		return f, nil
	}
	r, err := e.Response()
	if err != nil {
		return timeresp.Figures{}, err
	}
	f, err := r.Figures(band)
	if err != nil {
		var without *timeresp.NoFinalValueError
		if !errors.As(err, &without) {
			return f, err
		}
	}
	if e.figures == nil {
		e.figures = map[float64]timeresp.Figures{}
	}
	e.figures[band] = f
	return f, nil
}

// hasFinal returns the response if it has a final value other than zero, else why not.
func (e *Evidence) hasFinal() (r *timeresp.Response, why string, err error) {
	if r, err = e.Response(); err != nil {
		return nil, "", err
	}
	switch f := r.Final(); {
	case math.IsNaN(f) && e.m.around != 0 && e.stable == poly.Holds:
		return nil, "", &tf.UnsupportedError{Call: "spec", What: "a response with dead time this close to the limit of stability"}
	case math.IsNaN(f):
		return nil, "the response has no final value", nil
	case f == 0:
		return nil, "the final value of the response is zero", nil
	}
	return r, "", nil
}

// Margins returns the margins of the loop.
func (e *Evidence) Margins() (tf.Margins, error) {
	if !e.hasMargins {
		e.margins, e.marginsErr = e.loop.Margins()
		e.hasMargins = true
	}
	return e.margins, e.marginsErr
}

const (
	toOutput = iota
	loadToOutput
)

// trajectory returns a step response as the search sees it, traced until the envelope is
// below small, a fraction of the sum of the modes. nil means that the path has an impulse.
func (e *Evidence) trajectory(which int, small float64) (*signal, error) {
	if !e.m.rational() {
		return nil, &tf.UnsupportedError{Call: "spec", What: "recovery from a load, integral criteria and comparison with second order for loops with dead time"}
	}
	if !e.traced[which] {
		e.traced[which] = true
		numerator := [2]linear{e.m.output(), e.m.load()}[which].at(1)
		poles, lead := make([]complex128, 0, 16), e.m.character.at(1)
		pre := e.m.prefilter
		if which == loadToOutput {
			pre = poly.New(1)
		}
		all, err := lead.Roots()
		if err != nil {
			return nil, err
		}
		for _, r := range all {
			poles = appendPole(poles, r.Value, r.Multiplicity)
		}
		first := lead.Coefficient(lead.Degree()) * pre.Coefficient(pre.Degree())
		if pre.Degree() > 0 {
			more, err := pre.Roots()
			if err != nil {
				return nil, err
			}
			for _, r := range more {
				poles = appendPole(poles, r.Value, r.Multiplicity)
			}
		}
		c := make([]float64, numerator.Degree()+1)
		for i := range c {
			c[i] = numerator.Coefficient(i)
		}
		e.signals[which] = newSignal(c, first, poles)
	}
	s := e.signals[which]
	if s != nil && (len(s.t) == 0 || s.tail > small*s.scale) {
		s.trace(0, small*s.scale, maxSteps)
	}
	return s, nil
}

// withinLimits returns an error where the actuator's limits would make the response differ
// from the linear one that the figures describe.
func (e *Evidence) withinLimits(ctx context.Context) error {
	l := e.loop.Limits
	if l == (tf.Limits{}) {
		return nil
	}
	if l.Rate == 0 {
		u, err := largestEffort(ctx, e, 1, l.Amplitude)
		if err != nil {
			return err
		}
		if u.reached <= l.Amplitude {
			return nil
		}
	}
	return &tf.UnsupportedError{Call: "spec", What: "response requirements where the actuator's limits are reached"}
}

func (m *model) prefilterStable() (bool, error) {
	if m.prefilter.Degree() < 1 {
		return true, nil
	}
	roots, err := m.prefilter.Roots()
	if err != nil {
		return false, err
	}
	for _, r := range roots {
		if !(real(r.Value) < 0) {
			return false, nil
		}
	}
	return true, nil
}
