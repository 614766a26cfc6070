package tf

import "math"

// DampingRatio returns the damping ratio of a pole in the s plane, -Re/|s|: 1 and more
// damped than that is a negative real pole, 0 lies on the imaginary axis, negative values
// are unstable. NaN for a pole at 0.
func DampingRatio(pole complex128) float64 {
	re, im := real(pole), imag(pole)
	if im == 0 && re != 0 {
		return -math.Copysign(1, re)
	}
	m := math.Max(math.Abs(re), math.Abs(im))
	if m > 0x1p1022 || m < 0x1p-1000 && m > 0 { // hypot must not overflow, nor lose digits
		_, e := math.Frexp(m)
		re, im = math.Ldexp(re, -e), math.Ldexp(im, -e)
	}
	return -re / math.Hypot(re, im)
}

// NaturalFrequency returns the natural frequency of a pole in the s plane, |s| in rad/s: the
// characteristic angular frequency of IEC 60050-351.
func NaturalFrequency(pole complex128) float64 {
	return math.Hypot(real(pole), imag(pole))
}

// ContinuousPole returns the pole in the s plane that a pole in the z plane stands for,
// log(z)/period on the principal strip |Im s| ≤ π/period: [DampingRatio] and
// [NaturalFrequency] of it are those of the sampled mode. A pole at z = 0 lies at real -Inf.
// Where z is near 1, give what it differs by to [ContinuousPoleFromOffset].
func ContinuousPole(z complex128, period float64) complex128 {
	re, im := real(z), imag(z)
	if z == 0 {
		return complex(math.Inf(-1), 0)
	}
	if math.Abs(re-1) <= 0.5 && math.Abs(im) <= 0.5 {
		return ContinuousPoleFromOffset(complex(re-1, im), period) // re - 1 is exact
	}
	return complex(math.Log(math.Hypot(re, im))/period, math.Atan2(im, re)/period)
}

// ContinuousPoleFromOffset is [ContinuousPole] of the pole 1 + offset, with all digits of the
// offset: log(1 + offset)/period.
func ContinuousPoleFromOffset(offset complex128, period float64) complex128 {
	x, y := real(offset), imag(offset)
	// |1+offset|² - 1 = 2x + x² + y², which cancels near the unit circle: the sum of the
	// exact products keeps its digits.
	xx, xl := twoProduct(x, x)
	yy, yl := twoProduct(y, y)
	sum, lost := twoSum(2*x, xx)
	sum, more := twoSum(sum, yy)
	square := sum + (lost + more + (xl + yl))
	return complex(math.Log1p(square)/2/period, math.Atan2(y, 1+x)/period)
}

// twoSum returns a + b rounded and what the rounding lost (Knuth, The Art of Computer
// Programming, vol. 2, 3rd ed., 4.2.2, Theorem B).
func twoSum(a, b float64) (sum, lost float64) {
	sum = a + b
	t := sum - a
	return sum, (a - (sum - t)) + (b - t)
}
