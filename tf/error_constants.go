package tf

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
)

// ErrorConstants tell how a loop follows slow references. They are limits towards s = 0
// (z = 1) of the exact functions: a constant is infinite, and an error zero, only if it is.
type ErrorConstants struct {
	Type         int     // poles of the open loop at s = 0 (z = 1), less zeros there; may be negative
	Position     float64 // lim L
	Velocity     float64 // lim s·L, 1/s; in z: lim (z-1)/period·L
	Acceleration float64 // lim s²·L, 1/s²; in z likewise

	// What remains of reference less output, for a unit step, a unit ramp and the parabola
	// t²/2: prefilter and sensor included, at the samples of a sampled loop. ±Inf if it grows for
	// ever. With a wire for prefilter and for sensor these are 1/(1+Position), 1/Velocity and
	// 1/Acceleration, for type 0, 1 and 2.
	StepError     float64
	RampError     float64 // s
	ParabolaError float64 // s²
}

// ErrorConstants returns the type of the loop, its error constants and the errors that remain.
// The errors exist only if the loop is stable inside: without that they are NaN, and the constants
// are given together with a [*NotStableError]. Other errors are those of [Loop.Open].
func (l Loop) ErrorConstants() (ErrorConstants, error) {
	const call = "tf.Loop.ErrorConstants"
	p, err := l.plan(call)
	if err != nil {
		return ErrorConstants{}, err
	}
	nan := math.NaN()
	c := ErrorConstants{StepError: nan, RampError: nan, ParabolaError: nan}
	fixed, scaled := p.characteristic()
	if p.period > 0 {
		fixed, scaled = fixed.Shift(1), scaled.Shift(1)
	}
	if scaled.Degree() >= 0 {
		i, j := lowestPower(fixed), lowestPower(scaled)
		c.Type = i - j
		lowest := coefficientRatio(scaled, j, fixed, i)
		// In z the variable is δ = period·s, so far as limits go.
		constants := [...]*float64{&c.Position, &c.Velocity, &c.Acceleration}
		for k, x := range constants {
			switch {
			case c.Type > k:
				*x = math.Copysign(math.Inf(1), lowest)
			case c.Type == k && p.period > 0:
				*x = lowest / math.Pow(p.period, float64(k))
			case c.Type == k:
				*x = lowest
			}
		}
	}
	if err := l.requireStable(call); err != nil {
		return c, err
	}
	path, err := l.path(call, Reference, Output)
	if err != nil {
		return c, err
	}
	c.StepError, c.RampError, c.ParabolaError = path.remainders()
	return c, nil
}

// lowestPower returns the lowest power of a polynomial other than zero: how often 0 is a root.
func lowestPower(p poly.Poly) int {
	c, _ := p.Integers()
	i := 0
	for i < len(c) && c[i].Sign() == 0 {
		i++
	}
	return i
}

// remainders returns the first coefficients of 1 - path as a series about s = 0, as far as
// those before are zero: after a step of order k the error tends to coefficient k. All terms
// are rational numbers, those of the dead times too. The path is stable, so that its
// denominator is not zero there.
func (p Path) remainders() (step, ramp, parabola float64) {
	const terms = 3
	series := func(q poly.Poly, delay deadTime) [terms]*big.Rat {
		if p.period > 0 {
			q = q.Shift(1)
		}
		var a [terms]*big.Rat
		for i := range a {
			a[i] = ratCoefficient(q, i)
		}
		if delay.zero() {
			return a
		}
		// exp(-τs) = 1 - τs + τ²s²/2
		tau := delay.rat()
		half := new(big.Rat).Mul(tau, tau)
		half.Quo(half, big.NewRat(2, 1))
		e := [terms]*big.Rat{big.NewRat(1, 1), new(big.Rat).Neg(tau), half}
		return multiply(a, e)
	}
	outer := series(p.outer, deadTime{})
	characteristic := series(p.fixed, deadTime{})
	around := series(p.scaled, p.around)
	for i := range characteristic {
		characteristic[i] = new(big.Rat).Add(characteristic[i], around[i])
	}
	denominator := multiply(outer, characteristic)
	forward := series(p.forward, p.delay)
	var results [terms]float64
	grows := 0
	for i := range results {
		difference := new(big.Rat).Sub(denominator[i], forward[i])
		switch {
		case grows != 0:
			results[i] = math.Inf(grows)
		default:
			// As long as all before are zero, the coefficient is difference/denominator(0).
			quotient := difference.Quo(difference, denominator[0])
			results[i], _ = quotient.Float64()
			if p.period > 0 {
				results[i] *= math.Pow(p.period, float64(i))
			}
			grows = quotient.Sign()
		}
	}
	return results[0], results[1], results[2]
}

// ratCoefficient returns a coefficient as a fraction.
func ratCoefficient(p poly.Poly, power int) *big.Rat {
	c, e := p.Integers()
	if power >= len(c) {
		return new(big.Rat)
	}
	if e >= 0 {
		return new(big.Rat).SetInt(c[power].Lsh(c[power], uint(e)))
	}
	return new(big.Rat).SetFrac(c[power], new(big.Int).Lsh(big.NewInt(1), uint(-e)))
}

// multiply returns the product of two series.
func multiply(a, b [3]*big.Rat) [3]*big.Rat {
	var c [3]*big.Rat
	for i := range c {
		c[i] = new(big.Rat)
		for j := 0; j <= i; j++ {
			c[i].Add(c[i], new(big.Rat).Mul(a[j], b[i-j]))
		}
	}
	return c
}
