package ode

import "math"

// An Event is a function of the state whose sign change is to be located.
type Event func(t float64, y []float64) float64

// Locate looks for the first sign change of the event within the last step and, if there
// is one, ends the step there: afterwards [Integrator.Time] is the time of the event, to
// 1e-13 of the step or the spacing of the floating-point numbers, whichever is more, with
// the sign that the event has after it. The sign is looked up at 16 places of the step; two
// changes between neighbouring places go unseen. An event that is zero where the step
// begins does not count there.
//
// The place is found on the solution itself, by repeating the step with another end, so it
// is as good as the integration and not as its dense output.
func (g *Integrator) Locate(event Event) (found bool, err error) {
	const places = 16
	if g.dense.coefficients == nil {
		return false, nil
	}
	y := make([]float64, g.n)
	from, to := g.from, g.t
	a, fa := from, event(from, g.yFrom)
	for i := 1; i <= places; i++ {
		b := from + (to-from)*float64(i)/places
		var fb float64
		if i == places {
			b = to
			fb = event(b, g.y)
		} else {
			g.dense.At(b, y)
			fb = event(b, y)
		}
		if fa != 0 && (fb > 0) != (fa > 0) {
			return true, g.endAt(event, a, b, fa)
		}
		a, fa = b, fb
	}
	return false, nil
}

// endAt narrows the sign change in (a, b] by the rule of Illinois, each value taken on a
// step made anew, and leaves the integrator at its upper side.
func (g *Integrator) endAt(event Event, a, b, fa float64) error {
	value := func(t float64) (float64, error) {
		err := g.Redo(t)
		return event(t, g.y), err
	}
	fb, err := value(b)
	if err != nil {
		return err
	}
	if fa*fb > 0 {
		// The dense output promised the change a little too early.
		b = g.reach
		if fb, err = value(b); err != nil || fa*fb > 0 {
			return err
		}
	}
	resolution := math.Max(1e-13*math.Abs(g.reach-g.from), 2*unitRoundoff*math.Abs(b))
	side := 0
	for n := 0; n < 100 && math.Abs(b-a) > resolution && fb != 0; n++ {
		c := b - fb*(b-a)/(fb-fa)
		if n%8 == 7 || !(math.Min(a, b) < c && c < math.Max(a, b)) {
			c = a + (b-a)/2
		}
		if c == a || c == b {
			break
		}
		fc, err := value(c)
		if err != nil {
			return err
		}
		if fa*fc > 0 {
			a, fa = c, fc
			if side < 0 {
				fb /= 2
			}
			side = -1
		} else {
			b, fb = c, fc
			if side > 0 {
				fa /= 2
			}
			side = 1
		}
	}
	return g.Redo(b)
}
