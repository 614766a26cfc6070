package tf

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
)

// checked is a named argument and what it must be.
type checked struct {
	name string
	x    float64
	is   requirement
}

type requirement int

const (
	finite requirement = iota
	positive
	notNegative
	nonZero
)

// require returns the error for the first argument that is not as required.
func require(call string, arguments ...checked) error {
	for _, a := range arguments {
		ok, want := true, "finite number"
		switch a.is {
		case positive:
			ok, want = a.x > 0, "finite number > 0"
		case notNegative:
			ok, want = a.x >= 0, "finite number ≥ 0"
		case nonZero:
			ok, want = a.x != 0, "finite number other than 0"
		}
		if !ok || math.IsNaN(a.x) || math.IsInf(a.x, 0) {
			return badArgument(call, a.name, "%v is not a %s", a.x, want)
		}
	}
	return nil
}

// Constant returns the function k, which joins any period. The error is a
// [*poly.ArgumentError] if k is not finite.
func Constant(k float64) (Function, error) {
	if err := require("tf.Constant", checked{"k", k, finite}); err != nil {
		return invalid(err)
	}
	return New(poly.New(k), one)
}

// FromCoefficients returns the function of s with these coefficients, highest power first,
// as [New] does.
func FromCoefficients(numerator, denominator []float64) (Function, error) {
	return New(poly.New(numerator...), poly.New(denominator...))
}

// FirstOrder returns gain/(timeConstant·s + 1), timeConstant in seconds; a negative one is
// unstable, zero leaves the gain. The error is a [*poly.ArgumentError] if a number is not finite.
func FirstOrder(gain, timeConstant float64) (Function, error) {
	if err := require("tf.FirstOrder", checked{"gain", gain, finite}, checked{"timeConstant", timeConstant, finite}); err != nil {
		return invalid(err)
	}
	return New(poly.New(gain), poly.New(timeConstant, 1))
}

// SecondOrder returns gain·ω²/(s² + 2ζω·s + ω²) with the damping ratio ζ and the natural
// frequency ω in rad/s, each product exact. The error is a [*poly.ArgumentError] if a number
// is not finite or the frequency not > 0; a negative damping ratio is unstable.
func SecondOrder(gain, damping, naturalFrequency float64) (Function, error) {
	err := require("tf.SecondOrder", checked{"gain", gain, finite}, checked{"damping", damping, finite}, checked{"naturalFrequency", naturalFrequency, positive})
	if err != nil {
		return invalid(err)
	}
	return New(exactProduct(naturalFrequency, naturalFrequency, gain), quadratic(damping, naturalFrequency))
}

// exactProduct returns a product of numbers, exactly.
func exactProduct(factors ...float64) poly.Poly {
	p := one
	for _, x := range factors {
		p = p.Scale(x)
	}
	return p
}

// quadratic returns s² + 2ζω·s + ω², exactly.
func quadratic(damping, frequency float64) poly.Poly {
	s := poly.New(1, 0)
	return s.Mul(s).Add(s.Mul(exactProduct(2, damping, frequency))).Add(exactProduct(frequency, frequency))
}

// Integrator returns gain/s. The error is a [*poly.ArgumentError] if gain is not finite.
func Integrator(gain float64) (Function, error) {
	if err := require("tf.Integrator", checked{"gain", gain, finite}); err != nil {
		return invalid(err)
	}
	return New(poly.New(gain), powerOfVariable(1))
}

// DeadTime returns exp(-seconds·s), exactly. The error is a [*poly.ArgumentError] if seconds
// is negative or not finite.
func DeadTime(seconds float64) (Function, error) {
	if err := require("tf.DeadTime", checked{"seconds", seconds, notNegative}); err != nil {
		return invalid(err)
	}
	return Function{}.WithDeadTime(seconds)
}

// DeadTimeApproximation returns the rational function with these degrees that agrees with
// exp(-seconds·s) in the most derivatives at s = 0, by Padé's formula. All its coefficients are
// exact, multiplied by (numerator + denominator)!. It is stable for a numerator degree from
// denominator - 2 to denominator. The library itself never approximates dead time.
//
// Source: C. Brezinski, History of Continued Fractions and Padé Approximants, Springer 1991,
// 5.2.5; the formula from memory.
func DeadTimeApproximation(seconds float64, numerator, denominator int) (Function, error) {
	const call = "tf.DeadTimeApproximation"
	if err := require(call, checked{"seconds", seconds, positive}); err != nil {
		return invalid(err)
	}
	const most = 60
	if numerator < 0 || denominator < 0 || numerator > most || denominator > most {
		return invalid(badArgument(call, "degrees", "%d and %d are not from 0 to %d", numerator, denominator, most))
	}
	// Σ (m+n-k)!·m!/(k!·(m-k)!)·(∓T·s)ᵏ, for degree m of this side and n of the other.
	side := func(m int, sign float64) poly.Poly {
		factorial := func(n int) *big.Int { return new(big.Int).MulRange(1, int64(n)) }
		sum, power := poly.Poly{}, one
		step := poly.New(seconds, 0).Scale(sign)
		for k := 0; k <= m; k++ {
			c := new(big.Int).Mul(factorial(numerator+denominator-k), new(big.Int).Binomial(int64(m), int64(k)))
			sum = sum.Add(power.Mul(poly.FromIntegers([]*big.Int{c}, 0)))
			power = power.Mul(step)
		}
		return sum
	}
	return New(side(numerator, -1), side(denominator, 1))
}
