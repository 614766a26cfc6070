package tf

import (
	"github.com/polewright/polewright/poly"
)

// sample replaces plant and sensor of a sampled-data loop by what stands between the hold
// and the sampler.
func (l Loop) sample(call string, p *plan) error {
	if l.Hold != ZeroOrderHold && l.Hold != FirstOrderHold {
		return badArgument(call, "Hold", "%v is no hold that a loop can have", l.Hold)
	}
	computation := delayOf(l.ComputationDelay)
	immediate := computation.zero() && l.Hold == ZeroOrderHold // a held load acts as the effort does
	held := func(g Function, delay deadTime, how Method, name string) (Function, error) {
		if !g.isProper() {
			return invalid(badArgument(call, name, "degree %d over %d is improper: a hold cannot drive it", g.numerator.Degree(), g.denominator.Degree()))
		}
		return g.sampleHeld(call, delay, p.period, how)
	}
	plant := p.forward
	plant.period = 0 // a constant may have one
	sensor := p.sensor
	p.joint = sensor.period == 0 && !sensor.isConstant()
	if !p.joint {
		var err error
		if p.forward, err = held(plant, plant.delay.plus(computation), l.Hold, "Plant"); err != nil {
			return err
		}
		sensor.period = p.period
		if p.around, err = p.forward.Series(sensor); err != nil {
			return err
		}
		if immediate {
			p.load = p.forward
			return nil
		}
		p.load, err = held(plant, plant.delay, ZeroOrderHold, "Plant")
		return err
	}
	both, err := plant.Series(sensor)
	if err != nil {
		return err
	}
	// The plant over the denominator of both, so that the sampled functions share theirs.
	plant.numerator = plant.numerator.Mul(sensor.denominator)
	plant.denominator = both.denominator
	todo := []struct {
		to    *Function
		g     Function
		delay deadTime
		how   Method
	}{
		{&p.forward, plant, plant.delay.plus(computation), l.Hold},
		{&p.around, both, both.delay.plus(computation), l.Hold},
		{&p.load, plant, plant.delay, ZeroOrderHold},
		{&p.loadAround, both, both.delay, ZeroOrderHold},
	}
	if immediate {
		todo = todo[:2]
	}
	for _, t := range todo {
		if *t.to, err = held(t.g, t.delay, t.how, "Plant and Sensor"); err != nil {
			return err
		}
	}
	if immediate {
		p.load, p.loadAround = p.forward, p.around
	}
	return nil
}

// shared writes functions of z with one denominator but for powers of z: each numerator over
// the longest of the denominators.
func shared(list ...Function) (numerators []poly.Poly, denominator poly.Poly) {
	for _, g := range list {
		if g.denominator.Degree() > denominator.Degree() {
			denominator = g.denominator
		}
	}
	for _, g := range list {
		numerators = append(numerators, g.numerator.Mul(powerOfVariable(denominator.Degree()-g.denominator.Degree())))
	}
	return numerators, denominator
}

// jointPath is plan.path where plant and sensor were sampled as one. Letters as there, and d
// the denominator that np (plant, from effort to output) and na (around) share.
func (p plan) jointPath(from, to Point) Path {
	nf, df := p.prefilter.numerator, p.prefilter.denominator
	nc, dc := p.controller.numerator, p.controller.denominator
	path := Path{from: from, to: to, outer: one, period: p.period, made: true}
	n, d := shared(p.forward, p.around, p.load, p.loadAround)
	np, na, nl, nla := n[0], n[1], n[2], n[3]
	path.fixed, path.scaled = dc.Mul(d), nc.Mul(na)
	switch from {
	case Reference:
		path.outer = df
		switch to {
		case Output:
			path.forward = productOf(nf, nc, np)
		case Error:
			path.forward = productOf(nf, dc, d)
		case Effort:
			path.forward = productOf(nf, nc, d)
		}
	case LoadDisturbance:
		switch to {
		case Output:
			if np.Equal(nl) && na.Equal(nla) {
				path.forward = nl.Mul(dc)
				break
			}
			// What the load does by itself, and what the controller makes of it:
			// nl/d - (np/d)·nc·nla/(dc·d + nc·na), over d times the characteristic polynomial.
			path.outer = d
			path.forward = nl.Mul(path.fixed.Add(path.scaled)).Sub(productOf(np, nc, nla))
		case Error:
			path.forward = productOf(nla, dc).Scale(-1)
		case Effort:
			path.forward = productOf(nla, nc).Scale(-1)
		}
	case Noise:
		switch to {
		case Output:
			path.forward = productOf(nc, np).Scale(-1)
		case Error:
			path.forward = productOf(dc, d).Scale(-1)
		case Effort:
			path.forward = productOf(nc, d).Scale(-1)
		}
	}
	return path
}

// loadPath fills in the path of a load that is held over each period and does not wait for
// the computation. Letters as in plan.path; nl is the numerator from the load to the output,
// over the sampled plant's denominator dp.
func (p plan) loadPath(path Path, to Point) Path {
	nc, dc := p.controller.numerator, p.controller.denominator
	nh, dh := p.sensor.numerator, p.sensor.denominator
	n, dp := shared(p.load, p.forward)
	nl, np := n[0], n[1]
	path.fixed, path.scaled = productOf(dc, dp, dh), productOf(nc, np, nh)
	switch to {
	case Output:
		path.forward = productOf(nl, dc, dh)
	case Error:
		path.forward = productOf(nl, nh, dc).Scale(-1)
	case Effort:
		path.forward = productOf(nl, nh, nc).Scale(-1)
	}
	return path
}
