package spec

import (
	"context"
	"errors"
	"math"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
	"github.com/polewright/polewright/timeresp"
)

// What each requirement of this package reads off the evidence. The loop is stable here.

func measureOvershoot(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	r, why, err := e.hasFinal()
	if r == nil {
		return absent(why), err
	}
	fraction, time, err := e.overshootOf(r)
	return at(fraction, time, "s"), err
}

// overshootOf returns the overshoot and its time, once.
func (e *Evidence) overshootOf(r *timeresp.Response) (fraction, time float64, err error) {
	if e.overshoot == nil {
		fraction, time, err := r.Overshoot()
		if err != nil {
			return 0, 0, err
		}
		e.overshoot = &[2]float64{fraction, time}
	}
	return e.overshoot[0], e.overshoot[1], nil
}

func measureUndershoot(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	r, why, err := e.hasFinal()
	if r == nil {
		return absent(why), err
	}
	f, err := e.Figures(0.02)
	var long *tf.UnsupportedError
	if errors.As(err, &long) && e.m.rational() {
		// It settles too slowly for the other figures; the undershoot comes early.
		s, err := e.trajectory(toOutput, 1e-3)
		if s == nil || err != nil {
			return measured{}, err
		}
		sign := math.Copysign(1, s.final)
		v, w, _ := s.largest(-sign, 0, inf)
		if v <= excess*math.Abs(s.final) {
			return at(0, none, ""), nil
		}
		return at(v/math.Abs(s.final), w, "s"), nil
	}
	return at(f.Undershoot, f.UndershootTime, "s"), err
}

func measureRise(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	r, why, err := e.hasFinal()
	var near *tf.UnsupportedError
	if errors.As(err, &near) && e.response != nil {
		return e.riseByHand(e.response)
	}
	if r == nil {
		return absent(why), err
	}
	if e.rise == nil {
		t, err := r.RiseTime()
		if err != nil {
			return measured{}, err
		}
		e.rise = &t
	}
	return at(*e.rise, none, ""), nil
}

// riseByHand finds the rise time of a stable loop with dead time whose decay could not be
// bounded: the first crossings need no bound on what comes later. Steps are a sixty-fourth of
// the shorter of the dead time and the time constants, so that an excursion of the response
// between two samples is far below the rounding of the levels.
func (e *Evidence) riseByHand(r *timeresp.Response) (measured, error) {
	d, miss := e.m.errorSeries(0)
	final := 1 - miss[0].at(1)/d.at(1)
	if final == 0 || math.IsNaN(final) {
		return absent("the final value of the response is zero"), nil
	}
	rate := 1 / e.m.around
	for _, p := range [2]poly.Poly{e.m.openDen, e.m.open.at(1)} {
		if p.Degree() < 1 {
			continue
		}
		roots, err := p.Roots()
		if err != nil {
			return measured{}, err
		}
		for _, s := range roots {
			rate = math.Max(rate, math.Hypot(real(s.Value), imag(s.Value)))
		}
	}
	step := 1 / rate / 64
	crossing := func(from, level float64) float64 {
		if r.At(from)/final >= level {
			return from
		}
		for i := 1; i < 1<<20; i++ {
			t := from + float64(i)*step
			if r.At(t)/final < level {
				continue
			}
			lo, hi := t-step, t
			for range 80 {
				m := lo + (hi-lo)/2
				if m <= lo || m >= hi {
					break
				}
				if r.At(m)/final >= level {
					hi = m
				} else {
					lo = m
				}
			}
			return hi
		}
		return math.NaN()
	}
	t10 := crossing(0, 0.1)
	t90 := crossing(t10, 0.9)
	if math.IsNaN(t90) {
		return absent("90 % of the final value was not reached in the time searched"), nil
	}
	return at(t90-t10, t90, "s"), nil
}

func measurePeakTime(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	r, why, err := e.hasFinal()
	if r == nil {
		return absent(why), err
	}
	_, time, err := e.overshootOf(r)
	if err == nil && math.IsNaN(time) {
		return absent("the response has no peak above its final value"), nil
	}
	return at(time, time, "s"), err
}

func measureSettling(_ context.Context, e *Evidence, l *limited) (measured, error) {
	r, why, err := e.hasFinal()
	if r == nil {
		return absent(why), err
	}
	t, ok := e.settling[l.second]
	if !ok {
		if t, err = r.SettlingTime(l.second); err != nil {
			return measured{}, err
		}
		if e.settling == nil {
			e.settling = map[float64]float64{}
		}
		e.settling[l.second] = t
	}
	return at(t, t, "s"), nil
}

type measure = func(ctx context.Context, e *Evidence, r *limited) (measured, error)

// steady measures the steady error of the input tⁿ/n!.
func steady(n int) measure {
	return func(_ context.Context, e *Evidence, _ *limited) (measured, error) {
		m := at(e.m.steadyError(n, 1), none, "")
		if math.IsInf(m.reached, 1) {
			m.reason = "the error grows without bound"
		}
		return m, nil
	}
}

func measureEffort(ctx context.Context, e *Evidence, r *limited) (measured, error) {
	return largestEffort(ctx, e, 1, r.limit)
}

// largestEffort returns the largest effort for a reference step of the given size.
func largestEffort(ctx context.Context, e *Evidence, size, limit float64) (measured, error) {
	impulse := func() (measured, error) {
		m := at(inf, 0, "s")
		m.reason = "the effort has an impulse at the step"
		return m, nil
	}
	m := e.m
	if max(m.effort().fixed.Degree(), m.effort().scaled.Degree()) > m.openDen.Degree()+m.prefilter.Degree() {
		return impulse()
	}
	u, err := timeresp.Of(ctx, e.loop, tf.Reference, tf.Effort, timeresp.StepInput(1))
	if err != nil {
		return measured{}, err
	}
	if times, _ := u.Impulses(); len(times) > 0 {
		return impulse()
	}
	v, w, err := u.Largest()
	if err != nil {
		return measured{}, err
	}
	v = size * math.Abs(v)
	if math.IsNaN(w) {
		m := at(v, none, "")
		m.reason = "approached in the steady state"
		return m, nil
	}
	return at(v, w, "s"), nil
}

func measureEffortForStep(ctx context.Context, e *Evidence, r *limited) (measured, error) {
	l := e.loop.Limits
	if l.Rate != 0 {
		return measured{}, &tf.UnsupportedError{Call: "spec: effort for a step", What: "a limited rate of the actuator"}
	}
	m, err := largestEffort(ctx, e, r.second, r.limit)
	if err != nil {
		return m, err
	}
	if l.Amplitude > 0 && m.reached > l.Amplitude {
		// The linear controller asks for more than the actuator gives: the largest effort is
		// the actuator's limit.
		m.reached, m.at, m.atUnit, m.reason = l.Amplitude, none, "", "the actuator is at its limit"
	}
	return m, nil
}

// margin reads a margin; a degenerate loop has none.
func margin(e *Evidence, read func(m tf.Margins) measured) (measured, error) {
	m, err := e.Margins()
	if err != nil {
		var degenerate *tf.DegenerateError
		if errors.As(err, &degenerate) {
			return absent(degenerate.What), nil
		}
		return measured{}, err
	}
	return read(m), nil
}

// crossoverOf returns the frequency at which a margin is attained.
func crossoverOf(list []tf.Crossover, margin float64) float64 {
	for _, c := range list {
		if c.Margin == margin || c.Margin == -margin {
			return c.Frequency
		}
	}
	return none
}

func measureGainMargin(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	return margin(e, func(m tf.Margins) measured {
		g := at(m.GainIncrease, crossoverOf(m.PhaseCrossovers, m.GainIncrease), "rad/s")
		if math.IsInf(m.GainIncrease, 1) {
			g.reason = "no increase of the gain destabilises"
		}
		return g
	})
}

func measureGainReductionMargin(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	return margin(e, func(m tf.Margins) measured {
		g := at(1/m.GainDecrease, crossoverOf(m.PhaseCrossovers, m.GainDecrease), "rad/s")
		if m.GainDecrease == 0 {
			g.reason = "no reduction of the gain destabilises"
		}
		return g
	})
}

func measurePhaseMargin(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	return margin(e, func(m tf.Margins) measured {
		g := at(math.Abs(m.PhaseMargin), crossoverOf(m.GainCrossovers, m.PhaseMargin), "rad/s")
		if math.IsInf(g.reached, 1) {
			g.reason = "there is no gain crossover"
		}
		return g
	})
}

func measureDelayMargin(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	return margin(e, func(m tf.Margins) measured {
		g := at(m.Delay, none, "")
		for _, c := range m.GainCrossovers {
			angle := c.Margin
			if angle <= 0 {
				angle += 2 * math.Pi
			}
			if math.Abs(angle/c.Frequency-m.Delay) <= 1e-12*m.Delay {
				g.at, g.atUnit = c.Frequency, "rad/s"
			}
		}
		if math.IsInf(m.Delay, 1) {
			g.reason = "no dead time destabilises"
		}
		return g
	})
}

func measureSensitivityPeak(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	return margin(e, func(m tf.Margins) measured { return at(m.SensitivityPeak, m.SensitivityPeakAt, "rad/s") })
}

func measureComplementaryPeak(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	p, err := e.loop.ComplementaryPeak()
	if err != nil {
		var degenerate *tf.DegenerateError
		if errors.As(err, &degenerate) {
			return absent(degenerate.What), nil
		}
		return measured{}, err
	}
	return at(p.Magnitude, p.Frequency, "rad/s"), nil
}

func measureDamping(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	poles, err := e.Poles()
	if err != nil {
		return measured{}, err
	}
	m := measured{reached: 1, at: none, pole: noPole}
	for i, r := range poles {
		if z := tf.DampingRatio(r.Value); i == 0 || z < m.reached {
			m.reached, m.pole = z, r.Value
		}
	}
	if imag(m.pole) < 0 {
		m.pole = complex(real(m.pole), -imag(m.pole))
	}
	return m, nil
}

func measurePoles(_ context.Context, e *Evidence, r *limited) (measured, error) {
	poles, err := e.Poles()
	if err != nil {
		return measured{}, err
	}
	m := measured{at: none, pole: noPole}
	for _, p := range poles {
		if !r.region.Contains(p.Value) {
			m.reached += float64(p.Multiplicity)
			m.pole = p.Value
		}
	}
	return m, nil
}

func measureLoadPeak(ctx context.Context, e *Evidence, _ *limited) (measured, error) {
	r, err := timeresp.Of(ctx, e.loop, tf.LoadDisturbance, tf.Output, timeresp.StepInput(1))
	if err != nil {
		return measured{}, err
	}
	if times, _ := r.Impulses(); len(times) > 0 {
		return at(inf, 0, "s"), nil
	}
	v, w, err := r.Largest()
	return at(math.Abs(v), w, "s"), err
}

func measureLoadRecovery(_ context.Context, e *Evidence, r *limited) (measured, error) {
	s, err := e.trajectory(loadToOutput, 1e-9)
	if err != nil {
		return measured{}, err
	}
	if s == nil || math.Abs(s.final) > r.second {
		return absent("the output never comes back: its steady deviation is larger"), nil
	}
	t := s.lastOutside(0, r.second)
	return at(t, t, "s"), nil
}

// integral measures ∫tⁿ·(…) dt of the error.
func integral(of func(s *signal, n int) float64, n int) measure {
	return func(_ context.Context, e *Evidence, _ *limited) (measured, error) {
		s, err := e.trajectory(toOutput, 1e-12)
		if err != nil {
			return measured{}, err
		}
		if s == nil {
			return absent("the response has an impulse"), nil
		}
		return at(of(s, n), none, ""), nil
	}
}

func measureBandwidth(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	if !e.m.rational() {
		return measured{}, &tf.UnsupportedError{Call: "spec: bandwidth", What: "loops with dead time"}
	}
	// |T|² = |T(0)|²/2, a polynomial in x = ω².
	num, den := e.m.output().at(1), e.m.character.at(1).Mul(e.m.prefilter)
	s := newSpectrum(num, den)
	n0, d0 := s.n2.Coefficient(0), s.d2.Coefficient(0)
	if n0 == 0 {
		return absent("the magnitude at zero frequency is zero"), nil
	}
	roots, err := positiveRoots(s.n2.Scale(2 * d0).Sub(s.d2.Scale(n0)))
	if err != nil {
		return measured{}, err
	}
	for i, x := range roots {
		hi := inf
		if i+1 < len(roots) {
			hi = roots[i+1]
		}
		if y := inside(x, hi); 2*d0*s.n2.At(y) < n0*s.d2.At(y) {
			return at(math.Sqrt(x), math.Sqrt(x), "rad/s"), nil
		}
	}
	m := at(inf, none, "")
	m.reason = "the magnitude never falls under 1/√2 of its value at zero frequency"
	return m, nil
}

func measureNoise(_ context.Context, e *Evidence, _ *limited) (measured, error) {
	if !e.m.rational() {
		return measured{}, &tf.UnsupportedError{Call: "spec: noise amplification", What: "loops with dead time"}
	}
	v, w, err := supremumOfMagnitude(e.m.noise().at(1), e.m.character.at(1))
	if err != nil {
		return measured{}, err
	}
	return at(v, w, "rad/s"), nil
}

// supremumOfMagnitude returns the supremum over frequency of |num/den| and where it is
// attained or approached: at 0, at infinity, or where the derivative of |num|²/|den|² by ω²
// vanishes.
func supremumOfMagnitude(num, den poly.Poly) (value, where float64, err error) {
	s := newSpectrum(num, den)
	roots, err := positiveRoots(s.n2.Derivative().Mul(s.d2).Sub(s.n2.Mul(s.d2.Derivative())))
	if err != nil {
		return 0, 0, err
	}
	value, where = -1, 0
	for _, x := range append(roots, 0, inf) {
		if v := 1 / s.gainAt(x); v > value {
			value, where = v, math.Sqrt(x)
		}
	}
	return value, where, nil
}
