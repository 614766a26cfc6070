package spec

import (
	"math"

	"github.com/polewright/polewright/poly"
)

// Figures of the step response from the sum of its modes in float64: right to about 1e-12
// where the poles stand well apart, and several times faster than the proven ones of
// timeresp, which take over where they do not, where a figure hides under the bound on the
// tail, and where the slack is so small that the last digits decide.

const (
	apart     = 1e-3 // of the poles, relative: closer ones make the modes cancel
	cancels   = 1e3  // sum of the modes over the final value, at most
	fastTail  = 1e-3 // of the final value: how far the trajectory is followed
	closeCall = 1e-8 // a slack below it is judged by the proven figures
)

// quick returns the trajectory of the output if it is good for figures, else nil.
func (e *Evidence) quick() *signal {
	if e.quickDone {
		return e.quickSignal
	}
	e.quickDone = true
	m := e.m
	if !m.rational() || e.stable != poly.Holds {
		return nil
	}
	var room [24]complex128
	poles := room[:0]
	for _, r := range e.poles {
		if r.Multiplicity != 1 || r.Distinct != 1 || len(poles) == len(room) {
			return nil
		}
		poles = append(poles, r.Value)
	}
	for i, p := range poles {
		for _, q := range poles[:i] {
			d, size := p-q, math.Max(math.Abs(real(p))+math.Abs(imag(p)), math.Abs(real(q))+math.Abs(imag(q)))
			if math.Abs(real(d))+math.Abs(imag(d)) < apart*size {
				return nil
			}
		}
	}
	c := m.character.at(1)
	lead := c.Coefficient(c.Degree()) * m.prefilter.Coefficient(m.prefilter.Degree())
	n := m.output().at(1)
	var numbers [24]float64
	numerator := numbers[:0]
	for i := 0; i <= n.Degree() && i < len(numbers); i++ {
		numerator = append(numerator, n.Coefficient(i))
	}
	s := newSignal(numerator, lead, poles)
	if s == nil || s.final == 0 || !(s.scale <= cancels*math.Abs(s.final)) {
		return nil
	}
	s.trace(0, fastTail*math.Abs(s.final), 4096)
	if s.tail > fastTail*math.Abs(s.final) {
		return nil
	}
	e.quickSignal = s
	return s
}

// quickFigure reads a figure of kind k off the trajectory; ok is false where the proven
// figures have to answer.
func (e *Evidence) quickFigure(r *limited) (m measured, ok bool) {
	s := e.quick()
	if s == nil {
		return measured{}, false
	}
	sign, final := 1.0, s.final
	if final < 0 {
		sign, final = -1, -final
	}
	switch r.kind {
	case overshoot, peakTime:
		v, w, above := s.largest(sign, 0, inf)
		if above > v || v <= final*(1+1e-6) {
			return measured{}, false
		}
		m = at(v/final-1, w, "s")
		if r.kind == peakTime {
			m.reached = w
		}
	case undershoot:
		v, w, _ := s.largest(-sign, 0, inf)
		if v < 1e-6*final {
			return measured{}, false
		}
		m = at(v/final, w, "s")
	case riseTime:
		t90 := s.firstAt(sign, 0.9*final)
		m = at(t90-s.firstAt(sign, 0.1*final), t90, "s")
	case settlingTime:
		if !(s.tail < r.second*final) {
			return measured{}, false
		}
		t := s.lastOutside(s.final, r.second*final)
		m = at(t, t, "s")
	default:
		return measured{}, false
	}
	if math.IsInf(m.reached, 0) || math.IsNaN(m.reached) || math.Abs(r.kind.side.slack(m.reached, r.limit)) < closeCall {
		return measured{}, false
	}
	return m, true
}
