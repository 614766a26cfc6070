package tf

import (
	"fmt"
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
)

// Method is a way from continuous time to samples.
type Method int

const (
	ZeroOrderHold  Method = iota // the input is held over each period
	RampInvariant                // the input runs straight from sample to sample: exact for ramps, not causal as a hold
	FirstOrderHold               // the input goes on with the slope of the last two samples
	Trapezoidal                  // s = c·(z-1)/(z+1) with c = 2/period, or as MatchFrequency says
	MatchedRoots                 // poles and zeros through exp(s·period), zeros at infinity to z = -1, the gain equal towards s = 0
)

var methodNames = [...]string{"zero-order hold", "ramp-invariant", "first-order hold", "trapezoidal", "matched roots"}

// String returns the name in words.
func (m Method) String() string {
	if m < 0 || int(m) >= len(methodNames) {
		return fmt.Sprintf("Method(%d)", int(m))
	}
	return methodNames[m]
}

// MarshalText writes the name in words.
func (m Method) MarshalText() ([]byte, error) {
	if m < 0 || int(m) >= len(methodNames) {
		return nil, badArgument("tf.Method.MarshalText", "m", "%d is no method", int(m))
	}
	return []byte(m.String()), nil
}

// UnmarshalText reads a name in words.
func (m *Method) UnmarshalText(text []byte) error {
	for i, name := range methodNames {
		if string(text) == name {
			*m = Method(i)
			return nil
		}
	}
	return badArgument("tf.Method.UnmarshalText", "text", "%q is none of %q", text, methodNames)
}

// MatchFrequency lets the sampled function have the value of the continuous one at this
// frequency, rad/s, between 0 and π/period. Of [Trapezoidal] it sets c = ω/tan(ω·period/2);
// of [MatchedRoots] it makes the magnitude equal there instead of at 0. Other methods refuse it.
func MatchFrequency(frequency float64) Option {
	return func(s *settings) { s.matchFrequency, s.matches = frequency, true }
}

// ZerosAtInfinity lets [MatchedRoots] leave this many zeros at infinity: without it all of
// them go to z = -1, so that the sampled function is biproper.
func ZerosAtInfinity(n int) Option { return func(s *settings) { s.zerosAtInfinity = n } }

// Sample returns the function of z that stands between samples for a function of s. Behind a
// hold any dead time is exact, whole periods or not; the other methods need whole ones. Whole
// periods are factors z of the denominator, which is monic.
//
// The hold methods work in as many digits as it takes: the coefficients of the result are
// exact numbers so close to the true ones that zeros, poles and static gain keep float64
// accuracy however short or long the period is. Poles of equal place keep their multiplicity. A root
// below the smallest normal float64 is 0. See [Function.PoleOffsets] for poles as 1 + δ.
// Such numbers stand in hexadecimal in [Function.String]; [Function.Text] is for reading, and
// [Function.Sections] or [Function.Rounded] give the float64s for firmware.
//
// The error is a [*poly.ArgumentError] for a period that is not finite and > 0, a function
// of z, an improper function behind a hold, or an option out of place; a [*poly.RangeError]
// for a pole so unstable that exp(s·period) overflows; an [*UnsupportedError] for a function
// of order above 60 behind a hold, and for roots closer together than float64 can part where they
// are mapped one by one.
func (g Function) Sample(period float64, how Method, opt ...Option) (Function, error) {
	const call = "tf.Function.Sample"
	var s settings
	for _, o := range opt {
		o(&s)
	}
	switch {
	case g.err != nil:
		return g, g.err
	case !(period > 0) || math.IsInf(period, 0):
		return invalid(badArgument(call, "period", "%v is not a finite number > 0", period))
	case how < ZeroOrderHold || how > MatchedRoots:
		return invalid(badArgument(call, "how", "%d is no method", int(how)))
	case g.period > 0 && g.isConstant():
		g.period = 0
	case g.period > 0:
		return invalid(badArgument(call, "g", "is a function of z already, with period %v s", g.period))
	case s.matches && how != Trapezoidal && how != MatchedRoots:
		return invalid(badArgument(call, "MatchFrequency", "the %v has no frequency to choose", how))
	case s.matches && !(s.matchFrequency > 0 && s.matchFrequency < math.Pi/period):
		return invalid(badArgument(call, "MatchFrequency", "%v rad/s is not between 0 and π/period = %v", s.matchFrequency, math.Pi/period))
	case s.zerosAtInfinity != 0 && how != MatchedRoots:
		return invalid(badArgument(call, "ZerosAtInfinity", "the %v has no zeros to place", how))
	}
	g = g.filled()
	if how == Trapezoidal || how == MatchedRoots {
		return g.sampleRoots(call, period, how, s)
	}
	if !g.isProper() {
		return invalid(badArgument(call, "g", "degree %d over %d is improper: a hold cannot drive it", g.numerator.Degree(), g.denominator.Degree()))
	}
	return g.sampleHeld(call, g.delay, period, how)
}

// maxHeld is the highest order that is sampled behind a hold: the work grows with the fifth
// power, to some ten seconds here.
const maxHeld = 60

// sampleHeld samples a proper function behind a hold, with the dead time given.
func (g Function) sampleHeld(call string, delay deadTime, period float64, how Method) (Function, error) {
	if n := g.denominator.Degree(); n > maxHeld {
		return invalid(&UnsupportedError{Call: call, What: fmt.Sprintf("a hold before a function of order %d; at most %d", n, maxHeld)})
	}
	// delay = (whole - fraction)·period, 0 ≤ fraction < 1.
	ratio := new(big.Rat).Quo(delay.rat(), ratOf(period))
	whole, rest := new(big.Int).DivMod(ratio.Num(), ratio.Denom(), new(big.Int))
	fraction := new(big.Rat)
	if rest.Sign() != 0 {
		whole.Add(whole, big.NewInt(1))
		fraction.Sub(new(big.Rat).SetInt(whole), ratio)
	}
	if !whole.IsInt64() || whole.Int64() > maxPeriods {
		return invalid(badArgument(call, "period", "the dead time of %v s is more than %d periods", delay.near, maxPeriods))
	}
	periods := int(whole.Int64())
	if how == FirstOrderHold {
		periods++
	}
	denominator, err := g.sampledDenominator(call, period)
	if err != nil {
		return invalid(err)
	}
	h := Function{denominator: denominator, period: period, made: true}
	if g.numerator.Degree() >= 0 {
		var common int
		if h.numerator, common, err = g.sampledNumerator(call, period, fraction, how); err != nil {
			return invalid(err)
		}
		// A power of z in the numerator is a shorter dead time.
		common = min(common, periods)
		h.numerator = dropPowers(h.numerator, common)
		periods -= common
	}
	if periods > 0 {
		h.denominator = h.denominator.Mul(powerOfVariable(periods))
	}
	return h, nil
}

// dropPowers returns p/zⁿ, where p has this factor.
func dropPowers(p poly.Poly, n int) poly.Poly {
	if n == 0 {
		return p
	}
	c, e := p.Integers()
	return poly.FromIntegers(c[n:], e)
}

// PoleOffsets returns the poles of a function of z by what they differ from z = 1: with a
// short period all of them crowd there, and the offset keeps the digits that 1 + offset would
// lose. Offset/period is near the pole in s; [ContinuousPoleFromOffset] is exact.
func (g Function) PoleOffsets() ([]poly.Root, error) {
	return g.offsets("tf.Function.PoleOffsets", g.Denominator())
}

// ZeroOffsets returns the zeros of a function of z by what they differ from z = 1, see
// [Function.PoleOffsets].
func (g Function) ZeroOffsets() ([]poly.Root, error) {
	return g.offsets("tf.Function.ZeroOffsets", g.Numerator())
}

func (g Function) offsets(call string, p poly.Poly) ([]poly.Root, error) {
	switch {
	case g.err != nil:
		return nil, g.err
	case g.period == 0:
		return nil, badArgument(call, "g", "is no function of z")
	}
	return p.Shift(1).Roots()
}
