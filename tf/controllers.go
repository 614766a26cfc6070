package tf

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/poly"
)

// A Law is a controller or filter with named parameters: its String says them, its Function
// is what they make. The types of this package that have the methods are values to be
// changed and compared; bad parameters are a [*poly.ArgumentError] of Function.
type Law interface {
	Function() (Function, error)
	String() string
}

var _ = []Law{P{}, PI{}, PD{}, PID{}, ParallelPID{}, Lead{}, Lag{}, Notch{}, Butterworth{}, Bessel{}, ITAE{}}

// P is the proportional controller Gain.
type P struct{ Gain float64 }

// Function returns the controller.
func (c P) Function() (Function, error) {
	if err := require("tf.P.Function", checked{"Gain", c.Gain, finite}); err != nil {
		return invalid(err)
	}
	return Constant(c.Gain)
}

func (c P) String() string { return fmt.Sprintf("P controller: gain %v", c.Gain) }

// PI is the controller Gain·(1 + 1/(IntegralTime·s)).
type PI struct {
	Gain         float64
	IntegralTime float64 // s, > 0; also called reset time
}

// Function returns the controller.
func (c PI) Function() (Function, error) {
	if err := require("tf.PI.Function", checked{"Gain", c.Gain, finite}, checked{"IntegralTime", c.IntegralTime, positive}); err != nil {
		return invalid(err)
	}
	return New(poly.New(c.IntegralTime, 1).Scale(c.Gain), poly.New(c.IntegralTime, 0))
}

func (c PI) String() string {
	return fmt.Sprintf("PI controller: gain %v, integral time %v s", c.Gain, c.IntegralTime)
}

// PD is the controller Gain·(1 + DerivativeTime·s/(FilterTime·s + 1)); without a filter time it
// is improper.
type PD struct {
	Gain           float64
	DerivativeTime float64 // s, ≥ 0
	FilterTime     float64 // s, ≥ 0; often a fifth to a twentieth of the derivative time
}

// Function returns the controller.
func (c PD) Function() (Function, error) {
	err := require("tf.PD.Function", checked{"Gain", c.Gain, finite}, checked{"DerivativeTime", c.DerivativeTime, notNegative}, checked{"FilterTime", c.FilterTime, notNegative})
	if err != nil {
		return invalid(err)
	}
	if c.DerivativeTime == 0 {
		return Constant(c.Gain)
	}
	filter := poly.New(c.FilterTime, 1)
	return New(filter.Add(poly.New(c.DerivativeTime, 0)).Scale(c.Gain), filter)
}

func (c PD) String() string {
	return fmt.Sprintf("PD controller: gain %v, derivative time %v s, filter time %v s", c.Gain, c.DerivativeTime, c.FilterTime)
}

// PID is the controller in the ideal form,
//
//	Gain·(1 + 1/(IntegralTime·s) + DerivativeTime·s/(FilterTime·s + 1)).
//
// Source: K. J. Åström, T. Hägglund, PID Controllers, 2nd ed., Instrument Society of America
// 1995, chapter 3, from memory.
type PID struct {
	Gain           float64
	IntegralTime   float64 // s, > 0; +Inf for none
	DerivativeTime float64 // s, ≥ 0
	FilterTime     float64 // s, ≥ 0, of the derivative
}

// Function returns the controller.
func (c PID) Function() (Function, error) {
	const call = "tf.PID.Function"
	if math.IsInf(c.IntegralTime, 1) {
		return PD{c.Gain, c.DerivativeTime, c.FilterTime}.Function()
	}
	err := require(call, checked{"Gain", c.Gain, finite}, checked{"IntegralTime", c.IntegralTime, positive},
		checked{"DerivativeTime", c.DerivativeTime, notNegative}, checked{"FilterTime", c.FilterTime, notNegative})
	if err != nil {
		return invalid(err)
	}
	if c.DerivativeTime == 0 {
		return PI{c.Gain, c.IntegralTime}.Function()
	}
	// (Ti·s + 1)(Tf·s + 1) + Ti·Td·s² over Ti·s·(Tf·s + 1)
	integral, filter := poly.New(c.IntegralTime, 0), poly.New(c.FilterTime, 1)
	numerator := integral.Add(one).Mul(filter).Add(integral.Mul(poly.New(c.DerivativeTime, 0)))
	return New(numerator.Scale(c.Gain), integral.Mul(filter))
}

func (c PID) String() string {
	return fmt.Sprintf("PID controller, ideal form: gain %v, integral time %v s, derivative time %v s, filter time %v s", c.Gain, c.IntegralTime, c.DerivativeTime, c.FilterTime)
}

// Parallel returns the same controller in the parallel form, its gains rounded to float64.
func (c PID) Parallel() ParallelPID {
	return ParallelPID{Proportional: c.Gain, Integral: c.Gain / c.IntegralTime, Derivative: c.Gain * c.DerivativeTime, FilterTime: c.FilterTime}
}

// ParallelPID is the controller in the parallel form,
//
//	Proportional + Integral/s + Derivative·s/(FilterTime·s + 1).
type ParallelPID struct {
	Proportional float64
	Integral     float64 // 1/s
	Derivative   float64 // s
	FilterTime   float64 // s, ≥ 0, of the derivative
}

// Function returns the controller. A part whose gain is zero leaves no pole behind.
func (c ParallelPID) Function() (Function, error) {
	err := require("tf.ParallelPID.Function", checked{"Proportional", c.Proportional, finite}, checked{"Integral", c.Integral, finite},
		checked{"Derivative", c.Derivative, finite}, checked{"FilterTime", c.FilterTime, notNegative})
	if err != nil {
		return invalid(err)
	}
	integral, filter := one, one
	if c.Integral != 0 {
		integral = powerOfVariable(1)
	}
	if c.Derivative != 0 {
		filter = poly.New(c.FilterTime, 1)
	}
	numerator := integral.Mul(filter).Scale(c.Proportional).
		Add(filter.Scale(c.Integral)).
		Add(integral.Mul(poly.New(c.Derivative, 0)))
	return New(numerator, integral.Mul(filter))
}

func (c ParallelPID) String() string {
	return fmt.Sprintf("PID controller, parallel form: proportional %v, integral %v 1/s, derivative %v s, filter time %v s", c.Proportional, c.Integral, c.Derivative, c.FilterTime)
}

// Ideal returns the same controller in the ideal form, its parameters rounded to float64. The
// error is a [*poly.ArgumentError] where there is none: without a proportional part, or with an
// integral or derivative part of the other sign.
func (c ParallelPID) Ideal() (PID, error) {
	const call = "tf.ParallelPID.Ideal"
	if err := require(call, checked{"Proportional", c.Proportional, nonZero}); err != nil {
		return PID{}, err
	}
	i, d := c.Proportional/c.Integral, c.Derivative/c.Proportional
	if c.Integral == 0 {
		i = math.Inf(1)
	}
	if !(i > 0) || !(d >= 0) {
		return PID{}, badArgument(call, "Proportional", "an integral time of %v s or a derivative time of %v s", i, d)
	}
	return PID{Gain: c.Proportional, IntegralTime: i, DerivativeTime: d, FilterTime: c.FilterTime}, nil
}

// Lead is the compensator Gain·(s/Zero + 1)/(s/Pole + 1) with Zero < Pole: it advances the
// phase, most at the geometric mean of the two corners.
type Lead struct {
	Gain float64 // at s = 0
	Zero float64 // rad/s, > 0: the zero lies at -Zero
	Pole float64 // rad/s, > Zero: the pole lies at -Pole
}

// LeadByPhase returns the lead of static gain 1 that advances by the given angle, rad between 0
// and π/2, at the given frequency, rad/s, and by less elsewhere.
func LeadByPhase(maximumPhase, frequency float64) (Lead, error) {
	const call = "tf.LeadByPhase"
	if err := require(call, checked{"frequency", frequency, positive}); err != nil {
		return Lead{}, err
	}
	if !(maximumPhase > 0 && maximumPhase < math.Pi/2) {
		return Lead{}, badArgument(call, "maximumPhase", "%v is not between 0 and π/2", maximumPhase)
	}
	// √(pole/zero) = √((1+sin φ)/(1-sin φ)) = tan(π/4 + φ/2)
	root := math.Tan(math.Pi/4 + maximumPhase/2)
	return Lead{Gain: 1, Zero: frequency / root, Pole: frequency * root}, nil
}

// MaximumPhase returns the largest advance, rad.
func (c Lead) MaximumPhase() float64 { return math.Asin((c.Pole - c.Zero) / (c.Pole + c.Zero)) }

// Frequency returns where the advance is largest, rad/s.
func (c Lead) Frequency() float64 { return math.Sqrt(c.Pole) * math.Sqrt(c.Zero) }

// Function returns the compensator, its zero and its pole as given.
func (c Lead) Function() (Function, error) {
	const call = "tf.Lead.Function"
	if err := require(call, checked{"Gain", c.Gain, finite}, checked{"Zero", c.Zero, positive}, checked{"Pole", c.Pole, positive}); err != nil {
		return invalid(err)
	}
	if c.Pole <= c.Zero {
		return invalid(badArgument(call, "Pole", "%v is not above the zero, %v: that is a lag", c.Pole, c.Zero))
	}
	return corners(exactProduct(c.Gain, c.Pole), c.Zero, exactProduct(c.Zero), c.Pole)
}

// corners returns a·(s + zero)/(b·(s + pole)), roots kept.
func corners(a poly.Poly, zero float64, b poly.Poly, pole float64) (Function, error) {
	numerator, err := poly.FromRoots(1, complex(-zero, 0))
	if err != nil {
		return invalid(err)
	}
	denominator, err := poly.FromRoots(1, complex(-pole, 0))
	if err != nil {
		return invalid(err)
	}
	return New(numerator.Mul(a), denominator.Mul(b))
}

func (c Lead) String() string {
	return fmt.Sprintf("lead: static gain %v, zero at -%v, pole at -%v rad/s (%.4g rad at %.4g rad/s)", c.Gain, c.Zero, c.Pole, c.MaximumPhase(), c.Frequency())
}

// Lag is the compensator Gain·(s + Corner)/(s + Corner/Ratio): it multiplies the static gain by
// Ratio and leaves Gain above the corner.
type Lag struct {
	Gain   float64 // at high frequency
	Ratio  float64 // > 1
	Corner float64 // rad/s, > 0: the zero lies at -Corner
}

// Function returns the compensator.
func (c Lag) Function() (Function, error) {
	const call = "tf.Lag.Function"
	if err := require(call, checked{"Gain", c.Gain, finite}, checked{"Ratio", c.Ratio, positive}, checked{"Corner", c.Corner, positive}); err != nil {
		return invalid(err)
	}
	if c.Ratio <= 1 {
		return invalid(badArgument(call, "Ratio", "%v is not above 1", c.Ratio))
	}
	pole := c.Corner / c.Ratio
	if pole == 0 {
		return invalid(badArgument(call, "Ratio", "%v puts the pole below the range of float64", c.Ratio))
	}
	return corners(exactProduct(c.Gain), c.Corner, one, pole)
}

func (c Lag) String() string {
	return fmt.Sprintf("lag: gain %v, ratio %v, corner %v rad/s", c.Gain, c.Ratio, c.Corner)
}

// Notch is the filter (s² + 2·ZeroDamping·ω·s + ω²)/(s² + 2·PoleDamping·ω·s + ω²) with ω =
// Frequency: gain 1 far from the frequency and ZeroDamping/PoleDamping at it.
type Notch struct {
	Frequency   float64 // rad/s, > 0
	ZeroDamping float64 // ≥ 0; 0 blocks the frequency altogether
	PoleDamping float64 // > 0; the width
}

// Function returns the filter.
func (c Notch) Function() (Function, error) {
	err := require("tf.Notch.Function", checked{"Frequency", c.Frequency, positive}, checked{"ZeroDamping", c.ZeroDamping, notNegative}, checked{"PoleDamping", c.PoleDamping, positive})
	if err != nil {
		return invalid(err)
	}
	return New(quadratic(c.ZeroDamping, c.Frequency), quadratic(c.PoleDamping, c.Frequency))
}

func (c Notch) String() string {
	return fmt.Sprintf("notch: frequency %v rad/s, damping ratio of the zeros %v, of the poles %v", c.Frequency, c.ZeroDamping, c.PoleDamping)
}
