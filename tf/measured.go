package tf

import (
	"fmt"
	"math"
	"math/cmplx"
)

// A MeasuredResponse is an open loop, or a plant, known only by its complex values at some
// frequencies, with an interpolation between them.
//
// Results are no more certain than the data: between two samples the logarithm of the
// magnitude and the phase are taken to be straight over the logarithm of the frequency (the
// phase turning the shorter way, by less than half a turn), and nothing is claimed outside
// the measured range. A resonance between two samples, and a turn of more than half between
// neighbours, cannot be seen. Stability cannot be decided from such data, and no result says
// that a loop is stable.
type MeasuredResponse struct {
	frequencies []float64
	logs        []float64 // natural logarithm of the magnitude
	phases      []float64 // unwrapped along the samples
}

// NewMeasuredResponse takes the values of a frequency response at frequencies > 0, rad/s,
// in ascending order; at least two. Values must be finite and not zero. Both slices are copied.
// The error is a [*poly.ArgumentError] that names the first bad entry.
func NewMeasuredResponse(frequencies []float64, values []complex128) (*MeasuredResponse, error) {
	const call = "tf.NewMeasuredResponse"
	if len(frequencies) != len(values) {
		return nil, badArgument(call, "values", "has %d entries, frequencies %d", len(values), len(frequencies))
	}
	if len(frequencies) < 2 {
		return nil, badArgument(call, "frequencies", "has %d entries; at least two are needed", len(frequencies))
	}
	m := &MeasuredResponse{}
	for i, w := range frequencies {
		if !(w > 0) || math.IsInf(w, 1) {
			return nil, badArgument(call, fmt.Sprintf("frequencies[%d]", i), "%v is not a positive finite frequency", w)
		}
		if i > 0 && !(w > frequencies[i-1]) {
			return nil, badArgument(call, fmt.Sprintf("frequencies[%d]", i), "%v does not ascend from %v", w, frequencies[i-1])
		}
		y := values[i]
		size := cmplx.Abs(y)
		if !(size > 0) || math.IsInf(size, 1) {
			return nil, badArgument(call, fmt.Sprintf("values[%d]", i), "%v is not a finite number other than 0", y)
		}
		phase := cmplx.Phase(y)
		if i > 0 {
			last := m.phases[i-1]
			phase = last + math.Remainder(phase-last, 2*math.Pi)
		}
		m.frequencies = append(m.frequencies, w)
		m.logs = append(m.logs, math.Log(size))
		m.phases = append(m.phases, phase)
	}
	return m, nil
}

// Range returns the first and the last measured frequency, rad/s.
func (m *MeasuredResponse) Range() (lo, hi float64) {
	if len(m.frequencies) == 0 {
		return math.NaN(), math.NaN()
	}
	return m.frequencies[0], m.frequencies[len(m.frequencies)-1]
}

// piece returns the values on the way from sample i to i+1, t from 0 to 1.
func (m *MeasuredResponse) piece(i int, t float64) (frequency, magnitude, phase float64) {
	between := func(list []float64) float64 { return (1-t)*list[i] + t*list[i+1] }
	a, b := m.frequencies[i], m.frequencies[i+1]
	switch t {
	case 0:
		frequency = a
	case 1:
		frequency = b
	default:
		frequency = a * math.Exp(t*math.Log(b/a))
	}
	return frequency, math.Exp(between(m.logs)), between(m.phases)
}

// At returns the interpolated value at a frequency; NaN outside the measured range.
func (m *MeasuredResponse) At(frequency float64) complex128 {
	lo, hi := m.Range()
	if !(frequency >= lo && frequency <= hi) {
		return cmplx.NaN()
	}
	i, k := 0, len(m.frequencies)-1
	for k-i > 1 {
		if mid := (i + k) / 2; m.frequencies[mid] <= frequency {
			i = mid
		} else {
			k = mid
		}
	}
	t := math.Log(frequency/m.frequencies[i]) / math.Log(m.frequencies[i+1]/m.frequencies[i])
	_, size, phase := m.piece(i, t)
	return cmplx.Rect(size, phase)
}

// Phase returns the phase at a frequency, rad, unwrapped along the samples from the first, whose phase
// lies in (-π, π]; NaN outside the measured range.
func (m *MeasuredResponse) Phase(frequency float64) float64 {
	y := m.At(frequency)
	if cmplx.IsNaN(y) {
		return math.NaN()
	}
	// The interpolated phase differs from that of the nearest sample by less than π.
	near := 0
	for i, w := range m.frequencies {
		if w <= frequency {
			near = i
		}
	}
	angle := cmplx.Phase(y)
	return angle + 2*math.Pi*math.Round((m.phases[near]-angle)/(2*math.Pi))
}

// MeasuredMargins are the margins of a measured open loop within the measured range, as
// certain as the data and the interpolation of [MeasuredResponse]. There is no verdict
// on stability in them: a loop may be unstable whatever they say.
type MeasuredMargins struct {
	GainCrossovers    []Crossover // with the signed phase margin arg(-L) in (-π, π], rad
	PhaseCrossovers   []Crossover // with the gain margin -1/L, a ratio
	From, To          float64     // rad/s: the measured range, outside of which nothing is known
	SensitivityPeak   float64     // the largest |1/(1+L)| of the interpolated response
	SensitivityPeakAt float64     // rad/s
	Delay             float64     // s: the smallest of angle/ω over the gain crossovers, +Inf if there are none
}

// Margins reads the margins off the interpolated response, the measured one being an open loop
// with negative feedback. Each straight piece is solved exactly.
func (m *MeasuredResponse) Margins() MeasuredMargins {
	out := MeasuredMargins{Delay: math.Inf(1)}
	if len(m.frequencies) == 0 {
		out.Delay = math.NaN() // nothing was measured
	}
	out.From, out.To = m.Range()
	add := func(list *[]Crossover, w, margin float64) {
		if k := len(*list); k > 0 && (*list)[k-1].Frequency >= w {
			return // the sample that two pieces share
		}
		*list = append(*list, Crossover{w, margin})
	}
	for i := range len(m.frequencies) - 1 {
		a, b := m.logs[i], m.logs[i+1]
		if a == 0 || b == 0 || (a < 0) != (b < 0) {
			t := 0.0
			switch {
			case a != 0 && b != 0:
				t = a / (a - b)
			case a != 0:
				t = 1
			}
			if a != b || a == 0 {
				w, _, phase := m.piece(i, t)
				margin := wrap(phase + math.Pi)
				add(&out.GainCrossovers, w, margin)
				if margin <= 0 {
					margin += 2 * math.Pi
				}
				out.Delay = min(out.Delay, margin/w)
			}
		}
		// Odd multiples of π between the phases.
		from, to := m.phases[i], m.phases[i+1]
		k := math.Ceil((min(from, to)/math.Pi - 1) / 2)
		if goal := (2*k + 1) * math.Pi; goal <= max(from, to) {
			t := 0.0
			if from != to {
				t = (goal - from) / (to - from)
			}
			w, size, _ := m.piece(i, t)
			add(&out.PhaseCrossovers, w, 1/size)
		}
		if 1/m.distanceOfPiece(i) <= out.SensitivityPeak {
			continue
		}
		t, peak := m.peakOfPiece(i)
		if peak > out.SensitivityPeak {
			out.SensitivityPeak = peak
			out.SensitivityPeakAt, _, _ = m.piece(i, t)
		}
	}
	return out
}

// distanceOfPiece returns a lower bound on |1+L| over a piece: the distance of -1 from the
// part of a ring that its magnitudes and phases span.
func (m *MeasuredResponse) distanceOfPiece(i int) float64 {
	lo, hi := math.Exp(min(m.logs[i], m.logs[i+1])), math.Exp(max(m.logs[i], m.logs[i+1]))
	a, b := m.phases[i], m.phases[i+1]
	nearest := math.Pi // the angle of the ring's part that is nearest to -1
	if k := math.Ceil((min(a, b)/math.Pi - 1) / 2); (2*k+1)*math.Pi > max(a, b) {
		if math.Cos(a) < math.Cos(b) {
			nearest = a
		} else {
			nearest = b
		}
	}
	size := min(max(-math.Cos(nearest), lo), hi)
	return cmplx.Abs(1 + cmplx.Rect(size, nearest))
}

// peakOfPiece returns the largest |1/(1+L)| on a piece: on a logarithmic spiral, |1+L|² has few
// minima; each bracket of a fine division is narrowed by the golden section.
func (m *MeasuredResponse) peakOfPiece(i int) (at, peak float64) {
	value := func(t float64) float64 {
		_, size, phase := m.piece(i, t)
		return 1 / cmplx.Abs(1+cmplx.Rect(size, phase))
	}
	const parts = 8
	best, bestAt := math.Inf(-1), 0.0
	for k := range parts + 1 {
		t := float64(k) / parts
		if v := value(t); v > best {
			best, bestAt = v, t
		}
	}
	lo, hi := max(0, bestAt-1.0/parts), min(1, bestAt+1.0/parts)
	golden := (math.Sqrt(5) - 1) / 2
	x, y := hi-golden*(hi-lo), lo+golden*(hi-lo)
	fx, fy := value(x), value(y)
	for range 60 {
		if fx >= fy {
			hi, y, fy = y, x, fx
			x = hi - golden*(hi-lo)
			fx = value(x)
		} else {
			lo, x, fx = x, y, fy
			y = lo + golden*(hi-lo)
			fy = value(y)
		}
	}
	if fx > best {
		best, bestAt = fx, x
	}
	return bestAt, best
}
