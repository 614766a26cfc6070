package spec

import (
	"math"
	"slices"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// A linear is a polynomial in s whose coefficients depend linearly on the gain k:
// fixed + k·scaled.
type linear struct{ fixed, scaled poly.Poly }

func (l linear) mul(p poly.Poly) linear { return linear{l.fixed.Mul(p), l.scaled.Mul(p)} }

func (l linear) at(k float64) poly.Poly { return l.fixed.Add(l.scaled.Scale(k)) }

// A model is a loop with everything that the requirements look at, as polynomials in s
// that are linear in the gain. Letters: C, G, H, F controller, plant, sensor and prefilter;
// n and d their numerators and denominators.
type model struct {
	loop      tf.Loop
	vary      variation
	character linear    // dC·dG·dH + k·nC·nG·nH: the internal characteristic, nothing cancelled
	output    linear    // of reference to output, over prefilter·character
	effort    linear    // of reference to effort, over prefilter·character
	load      linear    // of load to output, over character
	open      linear    // nC·nG·nH, numerator of the open loop
	openDen   poly.Poly // dC·dG·dH
	noise     linear    // of measurement noise to effort, over character, sign aside
	prefilter poly.Poly // dF
	negative  bool      // the gain was turned round: k stands for -k of the user
	forward   float64   // s, dead time from reference to output
	around    float64   // s, dead time around the loop
	toEffort  float64   // s, dead time from reference to effort
	unity     bool      // output is L/(1+L): no prefilter, no sensor
	period    float64
}

// variation says what the gain k multiplies.
type variation int

const (
	controllerGain variation = iota // k times the controller
	sensorGain                      // k times the sensor
	controllerPart                  // controller = fixed + k·scaled
)

func isWire(g tf.Function) bool {
	n, d := g.Numerator(), g.Denominator()
	return g.DeadTime() == 0 && n.Degree() == 0 && d.Degree() == 0 && n.Coefficient(0) == d.Coefficient(0)
}

// newModel takes the loop apart. The gain multiplies what the settings say.
func newModel(call string, l tf.Loop, set *settings) (*model, error) {
	for _, b := range []struct {
		name string
		g    tf.Function
	}{{"controller", l.Controller}, {"plant", l.Plant}, {"sensor", l.Sensor}, {"prefilter", l.Prefilter}} {
		if err := b.g.Err(); err != nil {
			return nil, err
		}
		n, d := b.g.Numerator(), b.g.Denominator()
		if err := n.Err(); err != nil {
			return nil, err
		}
		if err := d.Err(); err != nil {
			return nil, err
		}
	}
	if _, err := l.Open(); err != nil { // the loop's own checks: a missing plant, mixed periods
		return nil, err
	}
	m := &model{loop: l, vary: set.vary}
	for _, g := range []tf.Function{l.Controller, l.Plant, l.Sensor, l.Prefilter} {
		m.period = math.Max(m.period, g.Period())
	}
	nC, dC := l.Controller.Numerator(), l.Controller.Denominator()
	nG, dG := l.Plant.Numerator(), l.Plant.Denominator()
	nH, dH := l.Sensor.Numerator(), l.Sensor.Denominator()
	nF, dF := l.Prefilter.Numerator(), l.Prefilter.Denominator()
	zero := poly.Poly{}
	c := linear{zero, nC} // numerator of the controller
	h := linear{nH, zero} // numerator of the sensor
	switch set.vary {
	case sensorGain:
		c, h = linear{nC, zero}, linear{zero, nH}
	case controllerPart:
		a, b := set.fixedPart, set.scaledPart
		for _, g := range []tf.Function{a, b} {
			if err := g.Err(); err != nil {
				return nil, err
			}
		}
		if a.DeadTime() != b.DeadTime() || a.Period() != b.Period() {
			return nil, &poly.ArgumentError{Call: call, Argument: "option VaryController", Reason: "the two parts must have the same dead time and period"}
		}
		dC = a.Denominator().Mul(b.Denominator())
		c = linear{a.Numerator().Mul(b.Denominator()), b.Numerator().Mul(a.Denominator())}
		if a.Denominator().Equal(b.Denominator()) {
			dC = a.Denominator()
			c = linear{a.Numerator(), b.Numerator()}
		}
	}
	dead := l.Controller.DeadTime()
	if set.vary == controllerPart {
		dead = set.fixedPart.DeadTime()
	}
	m.toEffort = l.Prefilter.DeadTime() + dead
	m.forward = m.toEffort + l.Plant.DeadTime()
	m.around = dead + l.Plant.DeadTime() + l.Sensor.DeadTime()

	m.openDen = dC.Mul(dG).Mul(dH)
	around := nG
	if set.vary == sensorGain {
		m.open = h.mul(nC).mul(nG)
	} else {
		m.open = c.mul(around).mul(nH)
	}
	m.character = linear{m.openDen.Add(m.open.fixed), m.open.scaled}
	m.output = c.mul(nF).mul(nG).mul(dH)
	m.effort = c.mul(nF).mul(dG).mul(dH)
	m.load = linear{nG.Mul(dC).Mul(dH), zero}
	if set.vary == sensorGain {
		m.noise = h.mul(nC).mul(dG)
	} else {
		m.noise = c.mul(nH).mul(dG)
	}
	m.prefilter = dF
	m.unity = isWire(l.Prefilter) && isWire(l.Sensor)
	if set.negative {
		m.negative = true
		for _, p := range []*linear{&m.character, &m.output, &m.effort, &m.load, &m.open, &m.noise} {
			p.scaled = p.scaled.Scale(-1)
		}
	}
	for _, p := range []linear{m.character, m.output, m.effort, m.load, m.noise} {
		if err := p.fixed.Err(); err != nil {
			return nil, err
		}
		if err := p.scaled.Err(); err != nil {
			return nil, err
		}
	}
	return m, nil
}

// rational reports whether no dead time stands in the loop or before it.
func (m *model) rational() bool { return m.around == 0 && m.forward == 0 }

// loopAt returns the loop with the gain in it.
func (m *model) loopAt(k float64, set *settings) (tf.Loop, error) {
	if set.negative {
		k = -k
	}
	switch m.vary {
	case sensorGain:
		l := m.loop
		g, err := l.Sensor.Series(constant(k))
		if err != nil {
			return tf.Loop{}, err
		}
		l.Sensor = g
		return l, nil
	case controllerPart:
		l := m.loop
		scaled, err := set.scaledPart.Series(constant(k))
		if err != nil {
			return tf.Loop{}, err
		}
		g, err := set.fixedPart.Parallel(scaled)
		if err != nil {
			return tf.Loop{}, err
		}
		l.Controller = g
		return l, nil
	}
	return m.loop.WithGain(k), nil
}

func constant(k float64) tf.Function {
	g, err := tf.New(poly.New(k), poly.New(1))
	if err != nil { // k is finite and tf.New takes any constant
		return tf.Function{}
	}
	return g
}

// ---- the float64 side, for the search ----

// floats is a linear in float64, coefficients by power.
type floats struct{ fixed, scaled []float64 }

func newFloats(l linear) floats {
	n := max(l.fixed.Degree(), l.scaled.Degree()) + 1
	f := floats{make([]float64, n), make([]float64, n)}
	for i := range n {
		f.fixed[i], f.scaled[i] = l.fixed.Coefficient(i), l.scaled.Coefficient(i)
	}
	return f
}

// at sets c to the coefficients at gain k, without leading zeros.
func (f floats) at(k float64, c []float64) []float64 {
	c = c[:0]
	for i, a := range f.fixed {
		c = append(c, math.FMA(k, f.scaled[i], a))
	}
	for len(c) > 0 && c[len(c)-1] == 0 {
		c = c[:len(c)-1]
	}
	return c
}

// horner evaluates the polynomial c at x + jy.
func horner(c []float64, x, y float64) (re, im float64) {
	if y == 0 {
		for _, a := range slices.Backward(c) {
			re = re*x + a
		}
		return re, 0
	}
	for _, a := range slices.Backward(c) {
		re, im = re*x-im*y+a, re*y+im*x
	}
	return re, im
}
