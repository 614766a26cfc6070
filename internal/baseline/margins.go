package baseline

import (
	"math"
	"math/cmplx"
)

// SweptMargins are what a sweep of frequencies by hand reads off.
type SweptMargins struct {
	GainCrossovers, PhaseCrossovers []float64
	PhaseMargin, GainMargin         float64
	SensitivityPeak                 float64
}

// SweepMargins evaluates num/den (highest power first) at n frequencies, logarithmically
// spaced over [lo, hi], and interpolates the crossings linearly between neighbours.
func SweepMargins(num, den []float64, lo, hi float64, n int) SweptMargins {
	m := SweptMargins{PhaseMargin: math.Inf(1), GainMargin: math.Inf(1)}
	horner := func(c []float64, s complex128) complex128 {
		y := complex(0, 0)
		for _, a := range c {
			y = y*s + complex(a, 0)
		}
		return y
	}
	ratio := math.Pow(hi/lo, 1/float64(n-1))
	var lastW, lastGain, lastPhase float64
	w := lo
	for i := range n {
		s := complex(0, w)
		l := horner(num, s) / horner(den, s)
		gain, phase := cmplx.Abs(l), cmplx.Phase(-l)
		if peak := 1 / cmplx.Abs(1+l); peak > m.SensitivityPeak {
			m.SensitivityPeak = peak
		}
		if i > 0 {
			if (gain-1)*(lastGain-1) <= 0 {
				t := (1 - lastGain) / (gain - lastGain)
				m.GainCrossovers = append(m.GainCrossovers, lastW+t*(w-lastW))
				m.PhaseMargin = min(m.PhaseMargin, math.Abs(lastPhase+t*(phase-lastPhase)))
			}
			if phase*lastPhase <= 0 && math.Abs(phase-lastPhase) < math.Pi {
				t := lastPhase / (lastPhase - phase)
				m.PhaseCrossovers = append(m.PhaseCrossovers, lastW+t*(w-lastW))
				m.GainMargin = min(m.GainMargin, 1/(lastGain+t*(gain-lastGain)))
			}
		}
		lastW, lastGain, lastPhase = w, gain, phase
		w *= ratio
	}
	return m
}
