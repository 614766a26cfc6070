package tf

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
)

// Function is a transfer function: a ratio of polynomials in s, times exp(-s·dead time), or
// a ratio of polynomials in z with a sampling period. It may be improper.
//
// The zero value is a plain wire: gain 1, joining any period. A Function never changes;
// goroutines may share one. A Function that was returned together with an error is invalid:
// its value is NaN everywhere and every use returns that error.
type Function struct {
	numerator, denominator poly.Poly
	delay                  deadTime // of a function of s
	periods                int      // dead time of a function of z
	period                 float64  // s; 0 in continuous time
	made                   bool     // false only for the wire, whose polynomials are not filled in
	err                    error    // what is wrong with an invalid function
}

// one is the polynomial 1.
var one = poly.New(1)

// invalid returns the function that goes with err, and err.
func invalid(err error) (Function, error) { return Function{err: err}, err }

// New returns numerator/denominator, a function of s. Common factors stay. The error is a
// [*poly.ArgumentError] if the denominator is zero or a polynomial is invalid. A zero
// numerator is allowed.
func New(numerator, denominator poly.Poly) (Function, error) {
	const call = "tf.New"
	if err := numerator.Err(); err != nil {
		return invalid(err)
	}
	if err := denominator.Err(); err != nil {
		return invalid(err)
	}
	if denominator.Degree() < 0 {
		return invalid(badArgument(call, "denominator", "is zero"))
	}
	return Function{numerator: numerator, denominator: denominator, made: true}, nil
}

// FromRoots returns gain·∏(s - zero)/∏(s - pole), a function of s. The roots are kept as
// given: [Function.Zeros] and [Function.Poles] return them, also after series connection and
// a change of gain. The error is a [*poly.ArgumentError] if a number is not finite or a list
// is not closed under conjugation: as many of each non-real root as of its conjugate.
func FromRoots(gain float64, zeros, poles []complex128) (Function, error) {
	const call = "tf.FromRoots"
	if math.IsNaN(gain) || math.IsInf(gain, 0) {
		return invalid(badArgument(call, "gain", "%v is not finite", gain))
	}
	numerator, err := rootList(call, "zeros", zeros)
	if err != nil {
		return invalid(err)
	}
	denominator, err := rootList(call, "poles", poles)
	if err != nil {
		return invalid(err)
	}
	return New(numerator.Scale(gain), denominator)
}

func rootList(call, argument string, roots []complex128) (poly.Poly, error) {
	p, err := poly.FromRoots(1, roots...)
	if bad, ok := err.(*poly.ArgumentError); ok {
		return p, &poly.ArgumentError{Call: call, Argument: argument, Reason: bad.Argument + ": " + bad.Reason}
	}
	return p, err
}

// Err returns the error that came with an invalid function, nil for a valid one.
func (g Function) Err() error { return g.err }

// Numerator returns the numerator; 1 for the wire. Of an invalid function it is an invalid
// polynomial.
func (g Function) Numerator() poly.Poly {
	switch {
	case g.err != nil:
		return poly.New(math.NaN())
	case !g.made:
		return one
	}
	return g.numerator
}

// Denominator returns the denominator; 1 for the wire. Of an invalid function it is an
// invalid polynomial. The dead time of a function of z is not in it, see [Function.Rational].
func (g Function) Denominator() poly.Poly {
	switch {
	case g.err != nil:
		return poly.New(math.NaN())
	case !g.made:
		return one
	}
	return g.denominator
}

// Zeros returns the roots of the numerator, those that a pole may cancel included, as
// [poly.Poly.Roots] does. It is an error to ask it of a zero numerator, of which every
// number is a root.
func (g Function) Zeros() ([]poly.Root, error) {
	if g.err != nil {
		return nil, g.err
	}
	return g.Numerator().Roots()
}

// Poles returns the roots of the denominator, those that a zero may cancel included, as
// [poly.Poly.Roots] does.
func (g Function) Poles() ([]poly.Root, error) {
	if g.err != nil {
		return nil, g.err
	}
	return g.Denominator().Roots()
}

// DeadTime returns the dead time in seconds, rounded to nearest: of several blocks in series
// the exact sum is kept. Of a function of z it is a whole number of periods; powers of z in
// the denominator do not count as dead time. NaN for an invalid function.
func (g Function) DeadTime() float64 {
	switch {
	case g.err != nil:
		return math.NaN()
	case g.periods > 0:
		return float64(g.periods) * g.period
	}
	return g.delay.near
}

// WithDeadTime returns the function with this dead time, s, in the place of the one it has.
// The error is a [*poly.ArgumentError] if it is negative or not finite, or, for a function
// of z, not a whole number of periods (to 4 units in the last place).
func (g Function) WithDeadTime(seconds float64) (Function, error) {
	const call = "tf.Function.WithDeadTime"
	if g.err != nil {
		return g, g.err
	}
	if !(seconds >= 0) || math.IsInf(seconds, 0) {
		return invalid(badArgument(call, "seconds", "%v is not a finite number ≥ 0", seconds))
	}
	g = g.filled()
	if g.period == 0 {
		g.delay = delayOf(seconds + 0)
		return g, nil
	}
	n, ok := wholePeriods(seconds, g.period)
	if !ok {
		return invalid(badArgument(call, "seconds", "%v s is not a whole number of periods of %v s", seconds, g.period))
	}
	g.periods = n
	return g, nil
}

// maxPeriods is the longest dead time, in periods, that a function of z may have: each
// period is a pole at 0 when the function is used.
const maxPeriods = poly.MaxDegree

// wholePeriods returns dead/period if that is whole, to 4 units in the last place.
func wholePeriods(dead, period float64) (int, bool) {
	n := math.Round(dead / period)
	if !(n <= maxPeriods) {
		return 0, false
	}
	miss := math.Abs(math.FMA(n, period, -dead))
	return int(n), miss <= 4*0x1p-52*dead
}

// Period returns the sampling period in seconds, 0 for a function of s. NaN for an invalid
// function.
func (g Function) Period() float64 {
	if g.err != nil {
		return math.NaN()
	}
	return g.period
}

// WithPeriod declares a function of z with this sampling period, s; the polynomials stay as
// they are. 0 declares a function of s. The error is a [*poly.ArgumentError] if the period is
// negative or not finite, or the dead time is not a whole number of periods.
func (g Function) WithPeriod(seconds float64) (Function, error) {
	const call = "tf.Function.WithPeriod"
	if g.err != nil {
		return g, g.err
	}
	if !(seconds >= 0) || math.IsInf(seconds, 0) {
		return invalid(badArgument(call, "seconds", "%v is not a finite number ≥ 0", seconds))
	}
	dead := g.DeadTime()
	g = g.filled()
	g.period, g.delay, g.periods = seconds+0, deadTime{}, 0
	if dead == 0 {
		return g, nil
	}
	h, err := g.WithDeadTime(dead)
	if err != nil {
		return invalid(badArgument(call, "seconds", "the dead time of %v s is not a whole number of periods of %v s", dead, seconds))
	}
	return h, nil
}

// filled returns the same function with its polynomials filled in.
func (g Function) filled() Function {
	if !g.made && g.err == nil {
		g.numerator, g.denominator, g.made = one, one, true
	}
	return g
}

// Rational returns the function without dead time: of a function of z, whose dead time is
// rational, with a factor zⁿ in the denominator instead. For a function of s with dead time
// the error is an [*IrrationalError].
func (g Function) Rational() (Function, error) {
	switch {
	case g.err != nil:
		return g, g.err
	case !g.delay.zero():
		return invalid(&IrrationalError{Call: "tf.Function.Rational", DeadTime: g.delay.near})
	case g.periods > 0:
		g.denominator = g.denominator.Mul(powerOfVariable(g.periods))
		g.periods = 0
	}
	return g.filled(), nil
}

// powerOfVariable returns sⁿ, with its roots as long as they are not too many to be kept.
func powerOfVariable(n int) poly.Poly {
	p, err := poly.FromRoots(1, make([]complex128, n)...)
	if err != nil {
		c := make([]*big.Int, n+1)
		for i := range c {
			c[i] = new(big.Int)
		}
		c[n].SetInt64(1)
		return poly.FromIntegers(c, 0)
	}
	return p
}

// isConstant tells whether the function is a number, which joins any period.
func (g Function) isConstant() bool {
	return !g.made || g.numerator.Degree() <= 0 && g.denominator.Degree() == 0 && g.delay.zero() && g.periods == 0
}

// isWire tells whether the function is the zero value.
func (g Function) isWire() bool { return !g.made && g.err == nil }

// Equal reports whether both are written alike: the same polynomials, by their exact
// coefficients, the same dead time and period. (s+1)/(s+1) does not equal 1. An invalid
// function equals none.
func (g Function) Equal(h Function) bool {
	return g.err == nil && h.err == nil && g.period == h.period && g.periods == h.periods && g.delay.equal(h.delay) &&
		g.Numerator().Equal(h.Numerator()) && g.Denominator().Equal(h.Denominator())
}

// Rounded returns the function with every coefficient rounded to the nearest float64: what a
// program gets that reads its coefficients. Exact products and sampled functions have more
// digits, and keep their roots by them; given roots are multiplied out. The error is a
// [*poly.RangeError] where a coefficient is beyond the range of float64.
func (g Function) Rounded() (Function, error) {
	if g.err != nil {
		return g, g.err
	}
	g = g.filled()
	g.numerator, g.denominator = poly.New(g.numerator.Coefficients()...), poly.New(g.denominator.Coefficients()...)
	if g.numerator.Err() != nil || g.denominator.Err() != nil || g.denominator.Degree() < 0 {
		return invalid(&poly.RangeError{Call: "tf.Function.Rounded", Reason: "a coefficient is beyond the range of float64"})
	}
	return g, nil
}

// isProper tells whether the function stays finite at infinity.
func (g Function) isProper() bool { return g.Numerator().Degree() <= g.Denominator().Degree() }

// ratOf returns x, finite, as a fraction.
func ratOf(x float64) *big.Rat { return new(big.Rat).SetFloat64(x) }
