package tf

import (
	"fmt"
	"math"
	"math/big"

	"github.com/polewright/polewright/poly"
)

// maxFilterOrder is the highest order of a low-pass filter.
const maxFilterOrder = 60

func checkOrder(call string, order, most int) error {
	if order < 1 || order > most {
		return badArgument(call, "Order", "%d is not from 1 to %d", order, most)
	}
	return nil
}

// Butterworth is the low-pass filter of maximally flat magnitude, |H|² = 1/(1 + (ω/Cutoff)^(2·Order)),
// of static gain 1.
//
// Source: S. Butterworth, On the theory of filter amplifiers, Experimental Wireless and the
// Wireless Engineer 7 (1930) 536–541.
type Butterworth struct {
	Order  int     // 1 to 60
	Cutoff float64 // rad/s, > 0: where the magnitude is 1/√2
}

// Function returns the filter.
func (c Butterworth) Function() (Function, error) {
	const call = "tf.Butterworth.Function"
	if err := checkOrder(call, c.Order, maxFilterOrder); err != nil {
		return invalid(err)
	}
	if err := require(call, checked{"Cutoff", c.Cutoff, positive}); err != nil {
		return invalid(err)
	}
	// Poles on the circle, (2k+1)·π/(2n) off the imaginary axis: pairs of damping ratio sin of that.
	numerator, denominator := one, one
	for k := range c.Order / 2 {
		damping := math.Sin(float64(2*k+1) * math.Pi / float64(2*c.Order))
		if 2*(2*k+1) == c.Order { // 45°
			damping = math.Sqrt2 / 2
		}
		numerator = numerator.Mul(exactProduct(c.Cutoff, c.Cutoff))
		denominator = denominator.Mul(quadratic(damping, c.Cutoff))
	}
	if c.Order%2 == 1 {
		numerator = numerator.Scale(c.Cutoff)
		denominator = denominator.Mul(poly.New(1, c.Cutoff))
	}
	return New(numerator, denominator)
}

func (c Butterworth) String() string {
	return fmt.Sprintf("Butterworth low-pass: order %d, cutoff %v rad/s", c.Order, c.Cutoff)
}

// Bessel is the low-pass filter of maximally flat group delay, of static gain 1: the
// denominator is a reverse Bessel polynomial in Delay·s, whose whole coefficients are exact.
//
// Source: W. E. Thomson, Delay networks having maximally flat frequency characteristics,
// Proc. IEE 96 part III (1949) 487–490.
type Bessel struct {
	Order int     // 1 to 60
	Delay float64 // s, > 0: the group delay at low frequency
}

// BesselByCutoff returns the Bessel filter whose magnitude is 1/√2 at the cutoff, rad/s.
func BesselByCutoff(order int, cutoff float64) (Bessel, error) {
	const call = "tf.BesselByCutoff"
	if err := checkOrder(call, order, maxFilterOrder); err != nil {
		return Bessel{}, err
	}
	if err := require(call, checked{"cutoff", cutoff, positive}); err != nil {
		return Bessel{}, err
	}
	// |θ(jx)|² = 2·θ(0)², x = cutoff·delay. |θ(jx)| grows with x: as a polynomial in x² its square
	// has positive coefficients, 9 + 3x² + x⁴ for order 2.
	theta := reverseBessel(order)
	atZero := theta.At(0)
	above := func(x float64) bool {
		v := theta.AtComplex(complex(0, x))
		return math.Hypot(real(v)/atZero, imag(v)/atZero) > math.Sqrt2
	}
	low, high := 0.0, 1.0
	for !above(high) {
		high *= 2
	}
	for {
		middle := low + (high-low)/2
		if middle <= low || middle >= high {
			break
		}
		if above(middle) {
			high = middle
		} else {
			low = middle
		}
	}
	delay := high / cutoff
	if math.IsInf(delay, 0) || delay == 0 {
		return Bessel{}, badArgument(call, "cutoff", "%v puts the delay beyond the range of float64", cutoff)
	}
	return Bessel{Order: order, Delay: delay}, nil
}

// reverseBessel returns Σ (2n-k)!/(2ⁿ⁻ᵏ·k!·(n-k)!)·sᵏ.
func reverseBessel(n int) poly.Poly {
	c := make([]*big.Int, n+1)
	for k := range c {
		c[k] = new(big.Int).MulRange(int64(n+1), int64(2*n-k)) // (2n-k)!/n!
		c[k].Mul(c[k], new(big.Int).Binomial(int64(n), int64(k)))
		c[k].Rsh(c[k], uint(n-k)) // whole, as is known of these polynomials
	}
	return poly.FromIntegers(c, 0)
}

// Function returns the filter.
func (c Bessel) Function() (Function, error) {
	const call = "tf.Bessel.Function"
	if err := checkOrder(call, c.Order, maxFilterOrder); err != nil {
		return invalid(err)
	}
	if err := require(call, checked{"Delay", c.Delay, positive}); err != nil {
		return invalid(err)
	}
	theta := reverseBessel(c.Order)
	lowest, e := theta.Integers()
	return New(poly.FromIntegers(lowest[:1], e), theta.Stretch(c.Delay))
}

func (c Bessel) String() string {
	return fmt.Sprintf("Bessel low-pass: order %d, delay %v s", c.Order, c.Delay)
}

// ITAE is the all-pole prototype whose step response makes the integral of time multiplied by
// the absolute value of the error small, of static gain 1, with the published coefficients.
//
// Source: D. Graham, R. C. Lathrop, The synthesis of optimum transient response: criteria and
// standard forms, Trans. AIEE 72 part II (1953) 273–288, from memory.
type ITAE struct {
	Order     int     // 1 to 6
	Frequency float64 // rad/s, > 0: the Order-th root of the last coefficient
}

// itaeCoefficients are those of the table, of the normalised frequency, highest power first.
var itaeCoefficients = [...][]float64{
	{1, 1},
	{1, 1.4, 1},
	{1, 1.75, 2.15, 1},
	{1, 2.1, 3.4, 2.7, 1},
	{1, 2.8, 5.0, 5.5, 3.4, 1},
	{1, 3.25, 6.60, 8.60, 7.45, 3.95, 1},
}

// Function returns the prototype.
func (c ITAE) Function() (Function, error) {
	const call = "tf.ITAE.Function"
	if err := checkOrder(call, c.Order, len(itaeCoefficients)); err != nil {
		return invalid(err)
	}
	if err := require(call, checked{"Frequency", c.Frequency, positive}); err != nil {
		return invalid(err)
	}
	denominator, power := poly.Poly{}, one
	for k, x := range itaeCoefficients[c.Order-1] {
		term := power.Scale(x) // x·ωᵏ·sⁿ⁻ᵏ
		denominator = denominator.Add(term.Mul(powerOfVariable(c.Order - k)))
		if k < c.Order {
			power = power.Scale(c.Frequency)
		}
	}
	return New(power, denominator)
}

func (c ITAE) String() string {
	return fmt.Sprintf("ITAE prototype: order %d, frequency %v rad/s", c.Order, c.Frequency)
}
