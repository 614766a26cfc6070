package tf

import "github.com/polewright/polewright/poly"

// joinPeriods returns the period of what two functions are joined to.
func joinPeriods(call string, g, h Function) (float64, error) {
	switch {
	case g.err != nil:
		return 0, g.err
	case h.err != nil:
		return 0, h.err
	case g.period == h.period, h.isConstant():
		return g.period, nil
	case g.isConstant():
		return h.period, nil
	}
	return 0, &PeriodError{Call: call, Periods: [2]float64{g.period, h.period}}
}

// Series returns g·h. Nothing cancels; dead times add up exactly; given roots are kept. The
// error is a [*PeriodError] if the periods differ; a constant joins any.
func (g Function) Series(h Function) (Function, error) {
	period, err := joinPeriods("tf.Function.Series", g, h)
	if err != nil {
		return invalid(err)
	}
	if g.isWire() {
		return h, nil
	}
	if h.isWire() {
		return g, nil
	}
	return Function{
		numerator:   g.numerator.Mul(h.numerator),
		denominator: g.denominator.Mul(h.denominator),
		delay:       g.delay.plus(h.delay),
		periods:     g.periods + h.periods,
		period:      period,
		made:        true,
	}, nil
}

// Parallel returns g + h over the product of the denominators; nothing cancels. The error is
// a [*PeriodError] if the periods differ and an [*IrrationalError] if functions of s have
// different dead times. Different dead times of functions of z become poles at 0.
func (g Function) Parallel(h Function) (Function, error) {
	return g.combine("tf.Function.Parallel", h, false)
}

// Minus returns g - h, as [Function.Parallel] does.
func (g Function) Minus(h Function) (Function, error) { return g.combine("tf.Function.Minus", h, true) }

func (g Function) combine(call string, h Function, subtract bool) (Function, error) {
	period, err := joinPeriods(call, g, h)
	if err != nil {
		return invalid(err)
	}
	g, h = g.filled(), h.filled()
	switch {
	case g.numerator.Degree() < 0 && g.denominator.Degree() == 0: // 0 has any dead time
		g.delay, g.periods = h.delay, h.periods
	case h.numerator.Degree() < 0 && h.denominator.Degree() == 0:
		h.delay, h.periods = g.delay, g.periods
	}
	if !g.delay.equal(h.delay) {
		dead := g.delay.near
		if h.delay.near > dead {
			dead = h.delay.near
		}
		return invalid(&IrrationalError{Call: call, DeadTime: dead})
	}
	common := min(g.periods, h.periods)
	g.periods -= common
	h.periods -= common
	if g, err = g.atNoDelay(); err != nil {
		return invalid(err)
	}
	if h, err = h.atNoDelay(); err != nil {
		return invalid(err)
	}
	a, b := g.numerator.Mul(h.denominator), h.numerator.Mul(g.denominator)
	if subtract {
		a = a.Sub(b)
	} else {
		a = a.Add(b)
	}
	return Function{numerator: a, denominator: g.denominator.Mul(h.denominator), delay: g.delay, periods: common, period: period, made: true}, nil
}

// atNoDelay folds the periods of dead time into the denominator and leaves seconds alone.
func (g Function) atNoDelay() (Function, error) {
	delay := g.delay
	g.delay = deadTime{}
	g, err := g.Rational()
	g.delay = delay
	return g, err
}

// Scale returns k·g. Given roots are kept. The error is a [*poly.ArgumentError] if k is not
// finite.
func (g Function) Scale(k float64) (Function, error) {
	if g.err != nil {
		return g, g.err
	}
	g = g.filled()
	g.numerator = g.numerator.Scale(k)
	if g.numerator.Err() != nil {
		return invalid(badArgument("tf.Function.Scale", "k", "%v is not finite", k))
	}
	return g, nil
}

// Feedback returns g/(1 + g·h), negative feedback over h. Nothing cancels: the poles of h are
// zeros of the result. The error is a [*PeriodError] if the periods differ, an
// [*IrrationalError] if the loop has dead time in s, and a [*poly.ArgumentError] if 1 + g·h
// is zero everywhere.
func (g Function) Feedback(h Function) (Function, error) {
	return g.close("tf.Function.Feedback", h, false)
}

// PositiveFeedback returns g/(1 - g·h), as [Function.Feedback] does.
func (g Function) PositiveFeedback(h Function) (Function, error) {
	return g.close("tf.Function.PositiveFeedback", h, true)
}

func (g Function) close(call string, h Function, positive bool) (Function, error) {
	period, err := joinPeriods(call, g, h)
	if err != nil {
		return invalid(err)
	}
	g, h = g.filled(), h.filled()
	loop := g.delay.plus(h.delay)
	product := g.numerator.Mul(h.numerator)
	if !loop.zero() && product.Degree() >= 0 {
		return invalid(&IrrationalError{Call: call, DeadTime: loop.near})
	}
	// Without the dead time of z: g = a·z^-i/b, h = c·z^-j/d; the result is
	// a·d·z^j/(b·d·z^(i+j) ± a·c), so that the dead time of h is a zero and that of g is not.
	open := g.denominator.Mul(h.denominator).Mul(powerOfVariable(g.periods + h.periods))
	closed := open.Add(product)
	if positive {
		closed = open.Sub(product)
	}
	if closed.Degree() < 0 {
		return invalid(badArgument(call, "h", "the loop has the value -1 everywhere: no signal satisfies it"))
	}
	numerator := g.numerator.Mul(h.denominator).Mul(powerOfVariable(h.periods))
	return Function{numerator: numerator, denominator: closed, delay: g.delay, period: period, made: true}, nil
}

// Inverse returns 1/g. The error is a [*poly.ArgumentError] if the numerator is zero or the
// function has dead time, whose inverse would predict. The inverse of a strictly proper
// function is improper.
func (g Function) Inverse() (Function, error) {
	const call = "tf.Function.Inverse"
	switch {
	case g.err != nil:
		return g, g.err
	case !g.made:
		return g, nil
	case g.numerator.Degree() < 0:
		return invalid(badArgument(call, "g", "is zero"))
	case !g.delay.zero() || g.periods > 0:
		return invalid(badArgument(call, "g", "has a dead time of %v s, whose inverse would know the future", g.DeadTime()))
	}
	g.numerator, g.denominator = g.denominator, g.numerator
	return g, nil
}

// productOf multiplies polynomials out.
func productOf(first poly.Poly, others ...poly.Poly) poly.Poly {
	for _, p := range others {
		first = first.Mul(p)
	}
	return first
}
