package tf

import (
	"math"
	"math/cmplx"

	"github.com/polewright/polewright/poly"
)

// A FrequencyResponse is a function g on the boundary of stability, s = jω or z = e^(jω·period),
// with its zeros and poles known: made once, it answers for many frequencies. It never
// changes; goroutines may share one.
type FrequencyResponse struct {
	g            Function
	a            *axisForm
	zeros, poles []axisPlace
	order        int  // zeros less poles at the origin (z: at 1)
	negative     bool // the sign of g next to the origin, its power of s left out
}

// An axisPlace is a root in the variable jv, not at the origin.
type axisPlace struct {
	re, im       float64
	multiplicity int
}

// FrequencyResponse finds the zeros and poles of g. The error is that of an invalid g, or of
// [poly.Poly.Roots]; a [*poly.ArgumentError] for a function of z that is not causal.
func (g Function) FrequencyResponse() (*FrequencyResponse, error) {
	a, err := g.axis("tf.Function.FrequencyResponse")
	if err != nil {
		return nil, err
	}
	r := &FrequencyResponse{g: g, a: a}
	if a.numerator.Degree() < 0 {
		return r, nil
	}
	lowest := [2]float64{}
	for i, p := range [...]poly.Poly{a.numerator, a.denominator} {
		roots, err := p.Roots()
		if err != nil {
			return nil, err
		}
		for _, s := range roots {
			if s.Value == 0 && s.Radius == 0 {
				if i == 0 {
					r.order += s.Multiplicity
				} else {
					r.order -= s.Multiplicity
				}
				continue
			}
			place := axisPlace{real(s.Value) / a.unit, imag(s.Value) / a.unit, s.Multiplicity}
			if i == 0 {
				r.zeros = append(r.zeros, place)
			} else {
				r.poles = append(r.poles, place)
			}
		}
		// Roots that both have at the origin are gone already.
		for k := range p.Degree() + 1 {
			if lowest[i] = p.Coefficient(k); lowest[i] != 0 {
				break
			}
		}
	}
	r.negative = (lowest[0] < 0) != (lowest[1] < 0)
	return r, nil
}

// inRange tells whether ω is a frequency of the response: ≥ 0, in z up to half the sampling
// frequency (4 units in the last place beyond are forgiven).
func (r *FrequencyResponse) inRange(frequency float64) bool {
	return r.a != nil && frequency >= 0 && (r.a.period == 0 || frequency*r.a.period <= math.Pi*(1+4*0x1p-52))
}

// At returns g at the frequency, rad/s, dead time included. At a pole it is cmplx.Inf. It is NaN
// for a frequency below 0 or, in z, above half the sampling frequency π/period.
func (r *FrequencyResponse) At(frequency float64) complex128 {
	if !r.inRange(frequency) {
		return cmplx.NaN()
	}
	return r.g.AtFrequency(frequency)
}

// AtFrequency returns g at s = jω, or at z = e^(jω·period), dead time included, as
// [Function.At] does. The frequency is in rad/s.
func (g Function) AtFrequency(frequency float64) complex128 {
	if g.err != nil || g.period == 0 {
		return g.At(complex(0, frequency))
	}
	return g.At(cmplx.Rect(1, frequency*g.period))
}

// Magnitude returns |g| at the frequency, a ratio; +Inf at a pole.
func (r *FrequencyResponse) Magnitude(frequency float64) float64 {
	return cmplx.Abs(r.At(frequency))
}

// Phase returns the continuous phase of g at the frequency, rad. It starts, for ω → 0, at a
// quarter turn for each zero at the origin less one for each pole there, less half a turn if
// the gain is negative, and is followed from there by the zeros and poles, not by samples: no
// turn is lost however sharp a resonance or long a dead time. Passing a zero on the axis it
// jumps up by π, passing a pole there down by π, as if these were slightly damped; at the
// very frequency it is NaN. It is NaN too where At is, and for the zero function.
func (r *FrequencyResponse) Phase(frequency float64) float64 {
	if !r.inRange(frequency) || r.a.numerator.Degree() < 0 {
		return math.NaN()
	}
	v := r.a.variable(frequency)
	phase := float64(r.order) * math.Pi / 2
	if r.negative {
		phase -= math.Pi
	}
	phase += turns(r.zeros, v) - turns(r.poles, v)
	y := r.At(frequency)
	if y == 0 || cmplx.IsInf(y) || cmplx.IsNaN(y) {
		if v == 0 || math.IsInf(v, 1) {
			return phase - frequency*r.a.deadTime // a limit
		}
		return math.NaN()
	}
	// The sum tells the turn, the value the angle in it, to all digits.
	if d := r.g.delay; !d.zero() {
		y /= d.factor(complex(0, frequency))
	}
	angle := cmplx.Phase(y)
	phase = angle + 2*math.Pi*math.Round((phase-angle)/(2*math.Pi))
	return phase - frequency*r.a.deadTime
}

// turns returns Σ arg(1 - jv/root), each pair's part in (-π, π].
func turns(roots []axisPlace, v float64) (sum float64) {
	for _, s := range roots {
		m := float64(s.multiplicity)
		switch {
		case s.im < 0:
			// counted with its conjugate
		case s.im == 0:
			sum -= m * math.Atan(v/s.re)
		default:
			size := math.Hypot(s.re, s.im)
			re := (size - v) / size * (1 + v/size)
			im := -2 * (s.re / size) * (v / size)
			if math.IsInf(v, 1) {
				re, im = -1, 0
				if s.re > 0 {
					im = math.Copysign(0, -1)
				}
			}
			if im == 0 && s.re <= 0 {
				im = 0 // not -0: undamped as if slightly damped
			}
			sum += m * math.Atan2(im, re)
		}
	}
	return sum
}

// GroupDelay returns -dφ/dω at the frequency, s, dead time included: a sum over zeros and
// poles, right beside the sharpest resonance. A root on the axis adds nothing to it. NaN where At
// is, and for the zero function.
func (r *FrequencyResponse) GroupDelay(frequency float64) float64 {
	if !r.inRange(frequency) || r.a.numerator.Degree() < 0 {
		return math.NaN()
	}
	v := r.a.variable(frequency)
	// In z the roots at w = ∞, where z = -1, lie on the axis and add nothing; v = ∞ is their place.
	slope := 1 / r.a.unit // dv/dω
	if r.a.period != 0 {
		t := v * r.a.unit
		slope = r.a.period / 2 * (1 + t*t) / r.a.unit
		if math.IsInf(v, 1) {
			// With u = 1/v the parts re/|jv - root|²·(1+v²) tend to re.
			return r.a.period / 2 * r.a.unit * (sumOfRealParts(r.zeros) - sumOfRealParts(r.poles))
		}
	}
	return (slopes(r.zeros, v)-slopes(r.poles, v))*slope + r.a.deadTime
}

// slopes returns Σ Re(root)/|jv - root|², the negative of the slope of arg ∏(jv - root).
func slopes(roots []axisPlace, v float64) (sum float64) {
	for _, s := range roots {
		if s.re == 0 {
			continue
		}
		d := math.Hypot(s.re, v-s.im)
		sum += float64(s.multiplicity) * (s.re / d / d)
	}
	return sum
}

func sumOfRealParts(roots []axisPlace) (sum float64) {
	for _, s := range roots {
		sum += float64(s.multiplicity) * s.re
	}
	return sum
}

// Phase returns the continuous phase of g at a frequency, rad, as [FrequencyResponse.Phase] does,
// which is the one to use for many frequencies.
func (g Function) Phase(frequency float64) (float64, error) {
	r, err := g.FrequencyResponse()
	if err != nil {
		return math.NaN(), err
	}
	return r.Phase(frequency), nil
}

// GroupDelay returns the group delay of g at a frequency, s, as [FrequencyResponse.GroupDelay]
// does, which is the one to use for many frequencies.
func (g Function) GroupDelay(frequency float64) (float64, error) {
	r, err := g.FrequencyResponse()
	if err != nil {
		return math.NaN(), err
	}
	return r.GroupDelay(frequency), nil
}

// Resonance returns the supremum of |g| over frequency: exact, from the roots of the derivative,
// and +Inf with a pole on the boundary of stability. Dead time does not matter.
func (g Function) Resonance() (Peak, error) {
	a, err := g.axis("tf.Function.Resonance")
	if err != nil {
		return Peak{}, err
	}
	a.deadTime = 0
	return a.peak(resonanceCurve)
}

// Bandwidth returns the lowest frequency, rad/s, at which |g| has fallen to 1/√2 of its value
// at zero frequency (common practice for a closed loop from reference to output); +Inf if it
// never does. The error is a [*poly.ArgumentError] if g(0) is zero or infinite.
func (g Function) Bandwidth() (float64, error) {
	const call = "tf.Function.Bandwidth"
	a, err := g.axis(call)
	if err != nil {
		return math.NaN(), err
	}
	list, err := a.levelCrossings(call)
	if err != nil {
		return math.NaN(), err
	}
	if len(list) == 0 {
		return math.Inf(1), nil
	}
	return list[0].Frequency, nil
}

// levelCrossings returns the frequencies at which |g|² = |g(0)|²/2. The level is exact, not a
// rounded 1/√2: with the lowest coefficients n and d of N and D, 2·d²·|N|² = n²·|D|² is
// |(d(1+j)N)|² = |nD|², which a numerator d·N and a denominator n·D with weights 2 and 1 say.
func (a *axisForm) levelCrossings(call string) ([]Crossover, error) {
	k := 0
	for a.numerator.Coefficient(k) == 0 && a.denominator.Coefficient(k) == 0 {
		k++
	}
	n, d := a.numerator.Coefficient(k), a.denominator.Coefficient(k)
	if n == 0 || d == 0 || math.IsInf(n, 0) || math.IsInf(d, 0) {
		return nil, badArgument(call, "g", "has the value %v at zero frequency; a bandwidth needs one that is neither 0 nor infinite", math.Abs(n/d))
	}
	// The lowest coefficients are made equal by exact products, and the weight of |N|² is 2.
	b := *a
	b.numerator, b.denominator, b.deadTime = a.numerator.Scale(d), a.denominator.Scale(n), 0
	b.weight = 2
	b.prepare()
	return b.gainCrossovers()
}

// Resonance returns the supremum of the path's magnitude, as [Function.Resonance] does. For a
// loop with dead time in s the error is an [*IrrationalError]; [Loop.SensitivityPeak] and
// [Loop.ComplementaryPeak] take dead time.
func (p Path) Resonance() (Peak, error) {
	g, err := p.function("tf.Path.Resonance")
	if err != nil {
		return Peak{}, err
	}
	return g.Resonance()
}
