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

func (l linear) mul(p poly.Poly) linear { return linear{product(l.fixed, p), product(l.scaled, p)} }

// product is p·q, without work where one of them is 0 or 1, as in most loops.
func product(p, q poly.Poly) poly.Poly {
	switch {
	case p.Degree() < 0 && p.Err() == nil || isOne(q):
		return p
	case q.Degree() < 0 && q.Err() == nil || isOne(p):
		return q
	}
	return p.Mul(q)
}

func isOne(p poly.Poly) bool { return p.Degree() == 0 && p.Coefficient(0) == 1 }

func (l linear) at(k float64) poly.Poly {
	switch {
	case l.scaled.Degree() < 0:
		return l.fixed
	case k != 1:
		l.scaled = l.scaled.Scale(k)
	}
	if l.fixed.Degree() < 0 {
		return l.scaled
	}
	return l.fixed.Add(l.scaled)
}

// A model is a loop with everything that the requirements look at, as polynomials in s
// that are linear in the gain. Letters: C, G, H, F controller, plant, sensor and prefilter;
// n and d their numerators and denominators.
type model struct {
	loop      tf.Loop
	vary      variation
	character linear    // dC·dG·dH + k·nC·nG·nH: the internal characteristic, nothing cancelled
	open      linear    // nC·nG·nH, numerator of the open loop
	openDen   poly.Poly // dC·dG·dH
	prefilter poly.Poly // dF
	negative  bool      // the gain was turned round: k stands for -k of the user
	forward   float64   // s, dead time from reference to output
	around    float64   // s, dead time around the loop
	toEffort  float64   // s, dead time from reference to effort
	unity     bool      // output is L/(1+L): no prefilter, no sensor
	period    float64

	controller, sensor         linear // numerators nC and nH
	nG, nF, dC, dG, dH         poly.Poly
	outputOf, effortOf, loadOf *linear
}

// output is the numerator of reference to output, over prefilter·character.
func (m *model) output() linear {
	if m.outputOf == nil {
		l := m.controller.mul(m.nF).mul(m.nG).mul(m.dH)
		m.outputOf = &l
	}
	return *m.outputOf
}

// effort is the numerator of reference to effort, over prefilter·character.
func (m *model) effort() linear {
	if m.effortOf == nil {
		l := m.controller.mul(m.nF).mul(m.dG).mul(m.dH)
		m.effortOf = &l
	}
	return *m.effortOf
}

// load is the numerator of load to output, over character.
func (m *model) load() linear {
	if m.loadOf == nil {
		m.loadOf = &linear{fixed: product(product(m.nG, m.dC), m.dH)}
	}
	return *m.loadOf
}

// noise is the numerator of measurement noise to effort, over character, sign aside.
func (m *model) noise() linear {
	if m.sensor.scaled.Degree() >= 0 {
		return m.sensor.mul(m.controller.fixed).mul(m.dG)
	}
	return m.controller.mul(m.sensor.fixed).mul(m.dG)
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
	}
	m := &model{loop: l, vary: set.vary, period: l.SamplingPeriod()}
	if math.IsNaN(m.period) { // the loop's own checks: a missing plant, mixed periods
		_, err := l.Open()
		if err == nil {
			err = &poly.ArgumentError{Call: call, Argument: "loop", Reason: "is not valid"}
		}
		return nil, err
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
		dC = product(a.Denominator(), b.Denominator())
		c = linear{product(a.Numerator(), b.Denominator()), product(b.Numerator(), a.Denominator())}
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

	m.openDen = product(product(dC, dG), dH)
	if set.vary == sensorGain {
		m.open = h.mul(nC).mul(nG)
	} else {
		m.open = c.mul(nG).mul(nH)
	}
	m.character = linear{m.openDen, m.open.scaled}
	if m.open.fixed.Degree() >= 0 {
		m.character.fixed = m.openDen.Add(m.open.fixed)
	}
	m.controller, m.sensor = c, h
	m.nG, m.nF, m.dC, m.dG, m.dH = nG, nF, dC, dG, dH
	m.prefilter = dF
	m.unity = isWire(l.Prefilter) && isWire(l.Sensor)
	if set.negative {
		m.negative = true
		for _, p := range []*linear{&m.character, &m.open, &m.controller, &m.sensor} {
			p.scaled = p.scaled.Scale(-1)
		}
	}
	for _, p := range []linear{m.character, m.open} {
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
