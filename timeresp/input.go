package timeresp

import (
	"fmt"
	"math"
	"slices"

	"github.com/polewright/polewright/poly"
)

// An Input is a signal that drives a function or a loop, zero before t = 0: a sum of
// polynomial pieces, sines and Dirac impulses. The zero value is the zero signal. An Input
// never changes; goroutines may share one.
//
// Constructors keep what they are given; the first call that can return an error reports a
// number that is not finite, or an instant before t = 0.
type Input struct{ terms []term }

// A term is one summand, zero before from and, a polynomial, from to on.
type term struct {
	from, to         float64   // s; to is +Inf for a term that does not end
	polynomial       []float64 // of t - from, by power
	amplitude, omega float64   // amplitude·sin(omega·(t - from) + phase)
	phase            float64
	impulse          float64 // area of a Dirac impulse at from
}

// StepInput is a step of the given height at t = 0.
func StepInput(height float64) Input {
	return Input{[]term{{to: math.Inf(1), polynomial: []float64{height}}}}
}

// RampInput is slope·t, slope in units per second.
func RampInput(slope float64) Input {
	return Input{[]term{{to: math.Inf(1), polynomial: []float64{0, slope}}}}
}

// ParabolaInput is acceleration·t²/2, acceleration in units per second squared.
func ParabolaInput(acceleration float64) Input {
	return Input{[]term{{to: math.Inf(1), polynomial: []float64{0, 0, acceleration / 2}}}}
}

// SineInput is amplitude·sin(frequency·t + phase) from t = 0 on, frequency in rad/s, phase
// in radians.
func SineInput(amplitude, frequency, phase float64) Input {
	return Input{[]term{{to: math.Inf(1), amplitude: amplitude, omega: frequency, phase: phase}}}
}

// ImpulseInput is a Dirac impulse of the given area at t = 0.
func ImpulseInput(area float64) Input {
	return Input{[]term{{to: math.Inf(1), impulse: area}}}
}

// A Piece is one piece of a piecewise polynomial input.
type Piece struct {
	From         float64   // s, where the piece begins; it ends where the next one begins
	Coefficients []float64 // of the polynomial in t - From, highest power first; none is zero
}

// PiecewiseInput is the input that consists of the given pieces, which begin one after the
// other, the first not before t = 0; the last one does not end.
func PiecewiseInput(pieces ...Piece) Input {
	in := Input{make([]term, 0, len(pieces))}
	for i, p := range pieces {
		t := term{from: p.From, to: math.Inf(1), polynomial: slices.Clone(p.Coefficients)}
		slices.Reverse(t.polynomial)
		if i+1 < len(pieces) {
			t.to = pieces[i+1].From
		}
		in.terms = append(in.terms, t)
	}
	return in
}

// Plus returns the sum of two inputs.
func (in Input) Plus(other Input) Input {
	return Input{append(slices.Clone(in.terms), other.terms...)}
}

// Scale returns the input times a factor.
func (in Input) Scale(factor float64) Input {
	out := Input{slices.Clone(in.terms)}
	for i := range out.terms {
		t := &out.terms[i]
		t.polynomial = slices.Clone(t.polynomial)
		for k := range t.polynomial {
			t.polynomial[k] *= factor
		}
		t.amplitude *= factor
		t.impulse *= factor
	}
	return out
}

// Delay returns the input that comes the given time, in seconds, later.
func (in Input) Delay(seconds float64) Input {
	out := Input{slices.Clone(in.terms)}
	for i := range out.terms {
		out.terms[i].from += seconds
		out.terms[i].to += seconds
	}
	return out
}

// At returns the value at t, in seconds: at a jump the one just after it. Dirac impulses
// have no value and are left out.
func (in Input) At(t float64) float64 {
	sum := 0.0
	for i := range in.terms {
		m := &in.terms[i]
		if !(t >= m.from && t < m.to) {
			continue
		}
		x := t - m.from
		y := 0.0
		for k := len(m.polynomial) - 1; k >= 0; k-- {
			y = y*x + m.polynomial[k]
		}
		sum += y
		if m.amplitude != 0 {
			sum += m.amplitude * math.Sin(m.omega*x+m.phase)
		}
	}
	return sum
}

// Breaks returns the instants, ascending and in seconds, at which a term begins or ends.
func (in Input) Breaks() []float64 {
	var at []float64
	for i := range in.terms {
		at = append(at, in.terms[i].from)
		if !math.IsInf(in.terms[i].to, 1) {
			at = append(at, in.terms[i].to)
		}
	}
	slices.Sort(at)
	return slices.Compact(at)
}

// HasImpulse reports whether the input holds a Dirac impulse.
func (in Input) HasImpulse() bool {
	return slices.ContainsFunc(in.terms, func(t term) bool { return t.impulse != 0 })
}

// Err returns what is wrong with the input, a [*poly.ArgumentError]; nil if nothing is.
func (in Input) Err() error { return in.check("timeresp.Input") }

func (in Input) check(call string) error {
	bad := func(format string, args ...any) error {
		return &poly.ArgumentError{Call: call, Argument: "input", Reason: fmt.Sprintf(format, args...)}
	}
	finite := func(x float64) bool { return !math.IsNaN(x - x) }
	for _, t := range in.terms {
		switch {
		case !finite(t.from) || t.from < 0:
			return bad("a term begins at %v; times are finite and not before 0", t.from)
		case !(t.to > t.from):
			return bad("the piece that begins at %v ends at %v", t.from, t.to)
		case !finite(t.amplitude) || !finite(t.omega) || !finite(t.phase) || !finite(t.impulse):
			return bad("a number is not finite")
		}
		for _, c := range t.polynomial {
			if !finite(c) {
				return bad("a coefficient is not finite")
			}
		}
	}
	return nil
}

// An event is a change of the input at one instant: from then on it also holds this.
type event struct {
	at         float64
	polynomial []float64 // of t - at, by power
	sines      []term
	impulse    float64
}

// events returns the changes in their order.
func (in Input) events() []event {
	var out []event
	at := func(t float64) *event {
		for i := range out {
			if out[i].at == t {
				return &out[i]
			}
		}
		out = append(out, event{at: t})
		return &out[len(out)-1]
	}
	for _, t := range in.terms {
		e := at(t.from)
		e.add(t.polynomial, +1)
		e.impulse += t.impulse
		if t.amplitude != 0 {
			e.sines = append(e.sines, t)
		}
		if !math.IsInf(t.to, 1) && len(t.polynomial) > 0 {
			at(t.to).add(shifted(t.polynomial, t.to-t.from), -1)
		}
	}
	slices.SortFunc(out, func(a, b event) int {
		if a.at < b.at {
			return -1
		}
		return +1
	})
	for i := range out {
		p := out[i].polynomial
		for len(p) > 0 && p[len(p)-1] == 0 {
			p = p[:len(p)-1]
		}
		out[i].polynomial = p
	}
	return slices.DeleteFunc(out, func(e event) bool {
		return len(e.polynomial) == 0 && len(e.sines) == 0 && e.impulse == 0
	})
}

func (e *event) add(p []float64, sign float64) {
	for len(e.polynomial) < len(p) {
		e.polynomial = append(e.polynomial, 0)
	}
	for k, c := range p {
		e.polynomial[k] += sign * c
	}
}

// shifted returns the polynomial of x - d instead of x, by power.
func shifted(p []float64, d float64) []float64 {
	p = slices.Clone(p)
	for k := range p {
		for i := len(p) - 2; i >= k; i-- {
			p[i] += p[i+1] * d
		}
	}
	return p
}

// factors returns the transforms of the event, time counted from it.
func (e *event) factors() []factor {
	var out []factor
	// Σ c[k]·k!/s^(k+1), over s^n, and the impulse.
	if n := len(e.polynomial); n > 0 || e.impulse != 0 {
		f := factor{num: make([]float64, n, n+1), zeros: n}
		factorial := 1.0
		for k, c := range e.polynomial {
			if k > 1 {
				factorial *= float64(k)
			}
			f.num[n-1-k] = c * factorial
		}
		if e.impulse != 0 {
			f.num = append(f.num, e.impulse)
		}
		for len(f.num) > 0 && f.num[0] == 0 && f.zeros > 0 {
			f.num, f.zeros = f.num[1:], f.zeros-1
		}
		out = append(out, f)
	}
	for _, t := range e.sines {
		sin, cos := math.Sincos(t.phase)
		f := factor{num: []float64{t.amplitude * cos * math.Abs(t.omega), t.amplitude * sin}, omega: math.Abs(t.omega)}
		if t.omega < 0 {
			f.num[0] = -f.num[0]
		}
		if t.omega == 0 {
			f = factor{num: []float64{t.amplitude * sin}, zeros: 1}
		}
		out = append(out, f)
	}
	return out
}
