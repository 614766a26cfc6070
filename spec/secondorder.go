package spec

import (
	"math"

	"github.com/polewright/polewright/poly"
)

// SecondOrder is the standard second-order system ω²/(s² + 2ζω s + ω²) with unit steady
// gain, the system that damping ratio and natural frequency describe.
//
// Its figures are those of its unit step response and of its frequency response, exact to
// rounding for every damping > 0: underdamped (< 1), critical (1) and overdamped (> 1,
// two real poles). Where Damping or NaturalFrequency is not a positive finite number every
// figure is NaN.
//
// They hold for this system alone. A loop with a further pole, a zero or dead time has
// other figures; [Sheet.Check] judges those.
type SecondOrder struct {
	Damping          float64 // damping ratio ζ, dimensionless, > 0
	NaturalFrequency float64 // characteristic angular frequency ω (undamped natural frequency), rad/s, > 0
}

func (q SecondOrder) valid() bool {
	return q.Damping > 0 && q.NaturalFrequency > 0 &&
		!math.IsInf(q.Damping, 1) && !math.IsInf(q.NaturalFrequency, 1)
}

// Poles returns the two poles, in rad/s: for Damping < 1 a conjugate pair, the one with
// positive imaginary part first; otherwise two real poles, the slower (nearer to zero) first.
func (q SecondOrder) Poles() [2]complex128 {
	if !q.valid() {
		nan := complex(math.NaN(), math.NaN())
		return [2]complex128{nan, nan}
	}
	w := q.NaturalFrequency
	if q.Damping < 1 {
		p := complex(-q.Damping*w, dampedFactor(q.Damping)*w)
		return [2]complex128{p, complex(real(p), -imag(p))}
	}
	slow, fast := realPoles(q.Damping)
	return [2]complex128{complex(-slow*w, 0), complex(-fast*w, 0)}
}

// Polar returns the poles of an underdamped system in polar form: the distance from the
// origin, which is the natural frequency in rad/s, and the angle off the negative real
// axis, acos ζ, in rad. The angle is NaN for Damping > 1, where no angle exists.
func (q SecondOrder) Polar() (radius, angle float64) {
	if !q.valid() {
		return math.NaN(), math.NaN()
	}
	if q.Damping > 1 {
		return q.NaturalFrequency, math.NaN()
	}
	return q.NaturalFrequency, math.Atan2(dampedFactor(q.Damping), q.Damping)
}

// DampedFrequency returns the angular frequency of the oscillation, ω√(1-ζ²), in rad/s;
// 0 for Damping ≥ 1.
func (q SecondOrder) DampedFrequency() float64 {
	switch {
	case !q.valid():
		return math.NaN()
	case q.Damping >= 1:
		return 0
	}
	return q.NaturalFrequency * dampedFactor(q.Damping)
}

// At returns the unit step response at time t in s; 0 for t ≤ 0.
func (q SecondOrder) At(t float64) float64 {
	if !q.valid() || math.IsNaN(t) {
		return math.NaN()
	}
	if t <= 0 {
		return 0
	}
	return standardStep(q.Damping, t*q.NaturalFrequency)
}

// Overshoot returns exp(-πζ/√(1-ζ²)), the largest excess over the final value as a
// fraction of it; 0 for Damping ≥ 1.
func (q SecondOrder) Overshoot() float64 {
	switch {
	case !q.valid():
		return math.NaN()
	case q.Damping >= 1:
		return 0
	}
	return math.Exp(-math.Pi * q.Damping / dampedFactor(q.Damping))
}

// PeakTime returns the time of the largest value, π/(ω√(1-ζ²)), in s; NaN for
// Damping ≥ 1, where the response has no peak.
func (q SecondOrder) PeakTime() float64 {
	if !q.valid() || q.Damping >= 1 {
		return math.NaN()
	}
	return math.Pi / dampedFactor(q.Damping) / q.NaturalFrequency
}

// RiseTime returns the time from 10 % to 90 % of the final value, in s.
func (q SecondOrder) RiseTime() float64 {
	if !q.valid() {
		return math.NaN()
	}
	return (timeToLevel(q.Damping, 0.9) - timeToLevel(q.Damping, 0.1)) / q.NaturalFrequency
}

// FullRiseTime returns the time of the first crossing of the final value, in s; NaN for
// Damping ≥ 1, where the response never reaches it.
func (q SecondOrder) FullRiseTime() float64 {
	if !q.valid() || q.Damping >= 1 {
		return math.NaN()
	}
	// sin(ω_d·t + acos ζ) = 0.
	wd := dampedFactor(q.Damping)
	return (math.Pi - math.Atan2(wd, q.Damping)) / wd / q.NaturalFrequency
}

// DelayTime returns the time to 50 % of the final value, in s.
func (q SecondOrder) DelayTime() float64 {
	if !q.valid() {
		return math.NaN()
	}
	return timeToLevel(q.Damping, 0.5) / q.NaturalFrequency
}

// SettlingTime returns the time in s of the last entry into the band about the final
// value, band being a fraction of it, 0 < band < 1 (NaN otherwise). As a function of the
// damping it jumps wherever an extremum of the response touches the band; see
// [SettlingJump].
func (q SecondOrder) SettlingTime(band float64) float64 {
	if !q.valid() || !(band > 0 && band < 1) {
		return math.NaN()
	}
	t, _ := settling(q.Damping, band)
	return t / q.NaturalFrequency
}

// HalfCycles returns how many extrema of the step response lie outside the band, the
// extremum at t = 0 not counted: the oscillations, in half periods, before it settles.
// It is 0 for a band outside (0, 1).
func (q SecondOrder) HalfCycles(band float64) int {
	if !q.valid() || !(band > 0 && band < 1) {
		return 0
	}
	_, n := settling(q.Damping, band)
	return n
}

// ThreeTimeConstants returns 3/(ζω), in s: the usual approximation (common practice) of
// the settling time into a band of 5 %. [SecondOrder.SettlingTime] is the exact figure.
func (q SecondOrder) ThreeTimeConstants() float64 { return q.timeConstants(3) }

// FourTimeConstants returns 4/(ζω), in s: the usual approximation (common practice) of
// the settling time into a band of 2 %. [SecondOrder.SettlingTime] is the exact figure.
func (q SecondOrder) FourTimeConstants() float64 { return q.timeConstants(4) }

func (q SecondOrder) timeConstants(n float64) float64 {
	if !q.valid() {
		return math.NaN()
	}
	return n / q.Damping / q.NaturalFrequency
}

// ResonantPeak returns the largest magnitude of the frequency response over the magnitude
// at zero frequency: 1/(2ζ√(1-ζ²)), or 1 for Damping ≥ 1/√2, where there is no resonance.
func (q SecondOrder) ResonantPeak() float64 {
	switch {
	case !q.valid():
		return math.NaN()
	case q.Damping >= math.Sqrt2/2:
		return 1
	}
	return 1 / (2 * q.Damping * dampedFactor(q.Damping))
}

// ResonantFrequency returns the frequency of the resonant peak, ω√(1-2ζ²), in rad/s; 0
// where there is no resonance.
func (q SecondOrder) ResonantFrequency() float64 {
	switch {
	case !q.valid():
		return math.NaN()
	case q.Damping >= math.Sqrt2/2:
		return 0
	}
	r := math.Sqrt2 * q.Damping
	return q.NaturalFrequency * math.Sqrt((1-r)*(1+r))
}

// Bandwidth returns the frequency in rad/s above which the magnitude stays under 1/√2.
func (q SecondOrder) Bandwidth() float64 {
	if !q.valid() {
		return math.NaN()
	}
	// x = (Ω/ω)² solves x² - 2bx - 1 = 0 with b = 1 - 2ζ²; for b < 0 the quotient keeps
	// the digits that the sum would cancel.
	r := math.Sqrt2 * q.Damping
	if r > 1e7 { // b = -r² to the last bit, and r² might overflow
		return q.NaturalFrequency / r / math.Sqrt2
	}
	b := (1 - r) * (1 + r)
	x := b + math.Hypot(b, 1)
	if b < 0 {
		x = 1 / (math.Hypot(b, 1) - b)
	}
	return q.NaturalFrequency * math.Sqrt(x)
}

// GainCrossover returns the frequency in rad/s at which the open loop ω²/(s(s + 2ζω)),
// closed by unity feedback, has magnitude one.
func (q SecondOrder) GainCrossover() float64 {
	if !q.valid() {
		return math.NaN()
	}
	return q.NaturalFrequency * crossover(q.Damping)
}

// PhaseMargin returns the phase margin of the open loop ω²/(s(s + 2ζω)) in rad.
func (q SecondOrder) PhaseMargin() float64 {
	if !q.valid() {
		return math.NaN()
	}
	return math.Atan2(2*q.Damping, crossover(q.Damping))
}

// crossover solves x⁴ + 4ζ²x² = 1 for x > 0, without cancellation.
func crossover(zeta float64) float64 {
	if zeta > 1e7 {
		return 1 / (2 * zeta)
	}
	z2 := 2 * zeta * zeta
	return 1 / math.Sqrt(math.Hypot(z2, 1)+z2)
}

// SettlingJump tells where the settling time of the standard second-order step jumps:
// the damping at which the given extremum (1 is the overshoot, 2 the undershoot after it)
// just touches the band, and the limits of ω·SettlingTime for dampings just below and just
// above it. For 0 < band < 1 and extremum ≥ 1, else a *[poly.ArgumentError].
func SettlingJump(band float64, extremum int) (damping, justBelow, justAbove float64, err error) {
	if !(band > 0 && band < 1) {
		return 0, 0, 0, &poly.ArgumentError{Call: "spec.SettlingJump", Argument: "band", Reason: "must lie between 0 and 1"}
	}
	if extremum < 1 {
		return 0, 0, 0, &poly.ArgumentError{Call: "spec.SettlingJump", Argument: "extremum", Reason: "must be at least 1"}
	}
	n := float64(extremum)
	l := -math.Log(band) / n
	damping = l / math.Hypot(math.Pi, l)
	wd := math.Pi / math.Hypot(math.Pi, l)
	justBelow = n * math.Pi / wd
	// The extremum before it is band·e^l high, so the entry is where the step that starts
	// there has covered the fraction 1 - e^-l.
	justAbove = (n-1)*math.Pi/wd + timeToLevel(damping, -math.Expm1(-l))
	return damping, justBelow, justAbove, nil
}
