package spec

import (
	"math"

	"github.com/polewright/polewright/poly"
)

// DampingForOvershoot returns the damping ratio at which the standard second-order step
// overshoots by the given fraction of its final value, 0 ≤ fraction < 1. A fraction of 0
// gives 1, the smallest damping without overshoot. Other arguments are a
// *[poly.ArgumentError].
func DampingForOvershoot(fraction float64) (float64, error) {
	if !(fraction >= 0 && fraction < 1) {
		return 0, &poly.ArgumentError{Call: "spec.DampingForOvershoot", Argument: "fraction", Reason: "must be at least 0 and less than 1"}
	}
	if fraction == 0 {
		return 1, nil
	}
	l := -math.Log(fraction)
	return l / math.Hypot(math.Pi, l), nil
}

// DampingAngle returns acos ζ, the angle in rad off the negative real axis under which
// poles of damping ratio zeta stand, 0 ≤ zeta ≤ 1. Above 1 the poles are real and no angle
// exists: a *[poly.ArgumentError], as for negative and undefined arguments.
func DampingAngle(zeta float64) (float64, error) {
	if !(zeta >= 0 && zeta <= 1) {
		reason := "must lie between 0 and 1"
		if zeta > 1 {
			reason = "above 1 the poles are real and no angle exists"
		}
		return 0, &poly.ArgumentError{Call: "spec.DampingAngle", Argument: "zeta", Reason: reason}
	}
	return math.Atan2(dampedFactor(zeta), zeta), nil
}

// DampingForAngle returns cos of the given angle off the negative real axis, in rad,
// between 0 and π/2: the inverse of [DampingAngle]. Other arguments are a
// *[poly.ArgumentError].
func DampingForAngle(radians float64) (float64, error) {
	if !(radians >= 0 && radians <= math.Pi/2) {
		return 0, &poly.ArgumentError{Call: "spec.DampingForAngle", Argument: "radians", Reason: "must lie between 0 and π/2"}
	}
	return math.Cos(radians), nil
}

// DampingForResonantPeak returns the damping ratio, below 1/√2, at which the standard
// second-order system has the given resonant peak, ratio > 1; 1/√2 for a ratio of 1.
// Other arguments are a *[poly.ArgumentError].
func DampingForResonantPeak(ratio float64) (float64, error) {
	if !(ratio >= 1) || math.IsInf(ratio, 1) {
		return 0, &poly.ArgumentError{Call: "spec.DampingForResonantPeak", Argument: "ratio", Reason: "must be finite and at least 1"}
	}
	// 4z²(1-z²) = 1/M²: z² = (1 - √(1 - 1/M²))/2, rearranged so that nothing cancels.
	x := 1 / ratio
	return x / math.Sqrt(2*(1+math.Sqrt((1-x)*(1+x)))), nil
}

// DampingForPhaseMargin returns the damping ratio at which ω²/(s(s + 2ζω)) has the given
// phase margin in rad, between 0 and π/2, both excluded. Other arguments are a
// *[poly.ArgumentError].
func DampingForPhaseMargin(radians float64) (float64, error) {
	if !(radians > 0 && radians < math.Pi/2) {
		return 0, &poly.ArgumentError{Call: "spec.DampingForPhaseMargin", Argument: "radians", Reason: "must lie between 0 and π/2"}
	}
	// 2z = x·tan φ at the crossover x, where x⁴(1 + tan² φ) = 1.
	sin, cos := math.Sincos(radians)
	return sin / (2 * math.Sqrt(cos)), nil
}

// SecondOrderFromPole returns the standard second-order system with the conjugate pair of
// poles of which one is given, in rad/s, left of the imaginary axis; a real pole stands
// for a double one. Other arguments are a *[poly.ArgumentError].
func SecondOrderFromPole(pole complex128) (SecondOrder, error) {
	re, im := real(pole), imag(pole)
	w := math.Hypot(re, im)
	if !(re < 0) || math.IsInf(w, 0) || math.IsNaN(w) {
		return SecondOrder{}, &poly.ArgumentError{Call: "spec.SecondOrderFromPole", Argument: "pole", Reason: "must be finite, with a negative real part"}
	}
	return SecondOrder{Damping: -re / w, NaturalFrequency: w}, nil
}

// SecondOrderFromRealPoles returns the standard second-order system, of damping ≥ 1, with
// two real poles, both negative, in rad/s. Other arguments are a *[poly.ArgumentError].
func SecondOrderFromRealPoles(p, q float64) (SecondOrder, error) {
	for _, x := range []float64{p, q} {
		if !(x < 0) || math.IsInf(x, 0) {
			return SecondOrder{}, &poly.ArgumentError{Call: "spec.SecondOrderFromRealPoles", Argument: "p, q", Reason: "must be finite and negative"}
		}
	}
	root := math.Sqrt(q / p)
	return SecondOrder{Damping: (root + 1/root) / 2, NaturalFrequency: -p * root}, nil
}

// SecondOrderFromPolar returns the standard second-order system whose poles lie at the
// given distance from the origin, rad/s, and angle off the negative real axis, in rad,
// 0 ≤ angle < π/2. Other arguments are a *[poly.ArgumentError].
func SecondOrderFromPolar(radius, angle float64) (SecondOrder, error) {
	if !(radius > 0) || math.IsInf(radius, 1) {
		return SecondOrder{}, &poly.ArgumentError{Call: "spec.SecondOrderFromPolar", Argument: "radius", Reason: "must be finite and positive"}
	}
	if !(angle >= 0 && angle < math.Pi/2) {
		return SecondOrder{}, &poly.ArgumentError{Call: "spec.SecondOrderFromPolar", Argument: "angle", Reason: "must be at least 0 and less than π/2"}
	}
	return SecondOrder{Damping: math.Cos(angle), NaturalFrequency: radius}, nil
}

// SecondOrderFromPeak returns the standard second-order system with the given overshoot,
// 0 < overshoot < 1, and peak time in s: what a recorded step tells of a loop that behaves
// like second order. Other arguments are a *[poly.ArgumentError].
func SecondOrderFromPeak(overshoot, peakTime float64) (SecondOrder, error) {
	if !(overshoot > 0 && overshoot < 1) {
		return SecondOrder{}, &poly.ArgumentError{Call: "spec.SecondOrderFromPeak", Argument: "overshoot", Reason: "must lie between 0 and 1"}
	}
	if !(peakTime > 0) || math.IsInf(peakTime, 1) {
		return SecondOrder{}, &poly.ArgumentError{Call: "spec.SecondOrderFromPeak", Argument: "peakTime", Reason: "must be finite and positive"}
	}
	l := -math.Log(overshoot)
	h := math.Hypot(math.Pi, l)
	return SecondOrder{Damping: l / h, NaturalFrequency: h / peakTime}, nil
}

// NaturalFrequencyForPeakTime returns the natural frequency in rad/s that gives the
// standard second-order step of the given damping its peak at the given time in s. Times
// scale with 1/ω: there is exactly one. Damping ≥ 1 has no peak; that and other arguments
// out of range are a *[poly.ArgumentError].
func NaturalFrequencyForPeakTime(damping, seconds float64) (float64, error) {
	return frequencyFor("spec.NaturalFrequencyForPeakTime", damping, seconds, SecondOrder{damping, 1}.PeakTime())
}

// NaturalFrequencyForRiseTime returns the natural frequency in rad/s that gives the
// standard second-order step of the given damping the given rise time in s, 10 % to 90 %.
// Arguments out of range are a *[poly.ArgumentError].
func NaturalFrequencyForRiseTime(damping, seconds float64) (float64, error) {
	return frequencyFor("spec.NaturalFrequencyForRiseTime", damping, seconds, SecondOrder{damping, 1}.RiseTime())
}

// NaturalFrequencyForSettlingTime returns the natural frequency in rad/s that gives the
// standard second-order step of the given damping the given settling time in s into the
// given band. Arguments out of range are a *[poly.ArgumentError].
func NaturalFrequencyForSettlingTime(damping, seconds, band float64) (float64, error) {
	if !(band > 0 && band < 1) {
		return 0, &poly.ArgumentError{Call: "spec.NaturalFrequencyForSettlingTime", Argument: "band", Reason: "must lie between 0 and 1"}
	}
	return frequencyFor("spec.NaturalFrequencyForSettlingTime", damping, seconds, SecondOrder{damping, 1}.SettlingTime(band))
}

func frequencyFor(call string, damping, seconds, normalised float64) (float64, error) {
	if !(damping > 0) || math.IsInf(damping, 1) || math.IsNaN(normalised) {
		return 0, &poly.ArgumentError{Call: call, Argument: "damping", Reason: "must be positive and finite, and less than 1 where a peak is asked for"}
	}
	if !(seconds > 0) || math.IsInf(seconds, 1) {
		return 0, &poly.ArgumentError{Call: call, Argument: "seconds", Reason: "must be finite and positive"}
	}
	return normalised / seconds, nil
}

// NaturalFrequencyForBandwidth returns the natural frequency in rad/s that gives the
// standard second-order system of the given damping the given bandwidth in rad/s.
// Arguments out of range are a *[poly.ArgumentError].
func NaturalFrequencyForBandwidth(damping, bandwidth float64) (float64, error) {
	if !(damping > 0) || math.IsInf(damping, 1) {
		return 0, &poly.ArgumentError{Call: "spec.NaturalFrequencyForBandwidth", Argument: "damping", Reason: "must be positive and finite"}
	}
	if !(bandwidth > 0) || math.IsInf(bandwidth, 1) {
		return 0, &poly.ArgumentError{Call: "spec.NaturalFrequencyForBandwidth", Argument: "bandwidth", Reason: "must be finite and positive"}
	}
	return bandwidth / SecondOrder{damping, 1}.Bandwidth(), nil
}
