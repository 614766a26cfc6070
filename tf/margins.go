package tf

import (
	"cmp"
	"errors"
	"math"

	"github.com/polewright/polewright/poly"
)

// Margins say how far a loop is from instability, and where. They are of the open loop
// L = controller·plant·sensor with negative feedback, dead time included.
//
// Every crossing is found: they are roots of polynomials, isolated with proof, and with dead
// time lie between such roots. Frequencies and margins are right to about 1e-11 relative.
// A margin speaks of safety only if Stable is [poly.Holds].
type Margins struct {
	GainCrossovers  []Crossover // |L| = 1, ascending, with the signed phase margin arg(-L) in (-π, π], rad
	PhaseCrossovers []Crossover // L real and negative, finite and > 0, ascending, with the gain margin -1/L, a ratio
	CompleteTo      float64     // rad/s: phase crossovers are listed up to here; +Inf without dead time

	// Delay is the smallest added delay that destabilises, s: 0 if the loop is not stable
	// already or |L(j∞)| ≥ 1, +Inf if no delay does. In z it is the smallest angle/ω, nominal,
	// since a delay between samples is no function of z.
	Delay float64

	SensitivityPeak   float64 // supremum over frequency of |1/(1+L)|; +Inf with a closed-loop pole on the boundary
	SensitivityPeakAt float64 // rad/s; 0 or +Inf where it is only approached

	// GainIncrease is the smallest gain margin above 1, at any frequency with 0 and +Inf
	// included: a stable loop stays stable until its gain has grown by this ratio. +Inf for a
	// stable loop that no increase destabilises; NaN if there is none and the loop is not stable.
	GainIncrease float64

	// GainDecrease is the largest gain margin below 1, likewise: a stable loop stays stable until
	// its gain has fallen to this fraction. 0 for a stable loop that no decrease destabilises,
	// NaN if there is none and the loop is not stable.
	GainDecrease float64

	// PhaseMargin is the phase margin of least magnitude, with its sign. +Inf for a stable loop
	// without gain crossover, NaN if there is none and the loop is not stable.
	PhaseMargin float64

	// Stable tells whether every closed-loop pole lies inside the region of stability, before
	// any cancellation: a hidden unstable mode fails it. A pole on the boundary is not inside.
	Stable poly.Verdict
}

// margins computes everything that Margins has. After a [*DegenerateError] the fields that are
// defined are filled all the same.
func (a *axisForm) margins(upTo float64) (m Margins, err error) {
	var degenerate error
	failed := func(err error) bool {
		var d *DegenerateError
		if errors.As(err, &d) {
			degenerate = cmp.Or(degenerate, err)
			return false
		}
		return err != nil
	}
	if m.GainCrossovers, err = a.gainCrossovers(); failed(err) {
		return Margins{}, err
	}
	m.Stable = a.stable()
	m.CompleteTo = math.Inf(1)
	m.GainIncrease, m.GainDecrease = math.Inf(1), 0
	var s Peak
	if a.deadTime == 0 {
		if m.PhaseCrossovers, err = a.phaseCrossovers(); failed(err) {
			return Margins{}, err
		}
		for _, c := range m.PhaseCrossovers {
			m.account(c.Margin)
		}
		m.account(a.marginAtInfinity())
		s, err = a.peak(sensitivityCurve)
	} else {
		d, err := a.delayedPhaseCrossovers(upTo)
		if failed(err) {
			return Margins{}, err
		}
		m.PhaseCrossovers, m.CompleteTo = d.crossovers, d.completeTo
		m.account(d.smallest)
		m.account(d.largest)
		s, err = a.delayedPeak(sensitivityCurve, d)
		if failed(err) {
			return Margins{}, err
		}
	}
	if failed(err) {
		return Margins{}, err
	}
	m.account(a.marginAtZero())
	m.SensitivityPeak, m.SensitivityPeakAt = s.Magnitude, s.Frequency
	m.PhaseMargin = smallestPhase(m.GainCrossovers)
	m.Delay = a.delayMargin(m.GainCrossovers, m.Stable)
	if m.Stable != poly.Holds || degenerate != nil {
		m.withdraw()
	}
	return m, degenerate
}

// withdraw takes back what would claim safety for a loop that is not proven stable, or whose
// crossovers are not a list.
func (m *Margins) withdraw() {
	m.Delay = 0
	if math.IsInf(m.GainIncrease, 1) {
		m.GainIncrease = math.NaN()
	}
	if m.GainDecrease == 0 {
		m.GainDecrease = math.NaN()
	}
	if math.IsInf(m.PhaseMargin, 1) {
		m.PhaseMargin = math.NaN()
	}
}

// account takes a gain margin into the two that are nearest to 1.
func (m *Margins) account(margin float64) {
	switch {
	case margin > 1:
		m.GainIncrease = min(m.GainIncrease, margin)
	case margin > 0 && margin < 1:
		m.GainDecrease = max(m.GainDecrease, margin)
	}
}

// closedLoopPeak returns the supremum of |D/F| or |N/F|.
func (a *axisForm) closedLoopPeak(c curve) (Peak, error) {
	if a.deadTime == 0 {
		return a.peak(c)
	}
	d, err := a.delayedPhaseCrossovers(0)
	if err != nil {
		return Peak{}, err
	}
	return a.delayedPeak(c, d)
}

// smallestPhase returns the margin of least magnitude, +Inf if there is none.
func smallestPhase(list []Crossover) float64 {
	least := math.Inf(1)
	for _, c := range list {
		if math.Abs(c.Margin) < math.Abs(least) {
			least = c.Margin
		}
	}
	return least
}

// delayMargin returns what [Margins] says of Delay.
func (a *axisForm) delayMargin(list []Crossover, stable poly.Verdict) float64 {
	if stable != poly.Holds || a.period == 0 && a.gainAtInfinityReaches1() {
		return 0
	}
	least := math.Inf(1)
	for _, c := range list {
		angle := c.Margin
		if angle <= 0 {
			angle += 2 * math.Pi
		}
		least = min(least, angle/c.Frequency)
	}
	return least
}

// Margins returns the margins of the loop. A loop whose |L| is 1 at every frequency, or whose L
// is real and negative over a whole range of frequencies, gets a [*DegenerateError] beside
// the fields that are defined all the same; Delay claims nothing then. What [Loop.Open] refuses is
// refused. A prefilter stands outside the loop, but an unstable one fails Stable.
func (l Loop) Margins(opt ...Option) (Margins, error) {
	const call = "tf.Loop.Margins"
	o, err := l.openForm(call)
	if err != nil {
		return Margins{}, err
	}
	upTo, err := settingsOf(opt).crossoversUpTo(call)
	if err != nil {
		return Margins{}, err
	}
	m, err := o.margins(upTo)
	if m.Stable == poly.Holds && !l.prefilterStable() {
		m.Stable = poly.Fails
		m.withdraw()
	}
	return m, err
}

// openForm makes the open loop ready.
func (l Loop) openForm(call string) (*axisForm, error) {
	open, err := l.Open()
	if err != nil {
		return nil, err
	}
	return open.axis(call)
}

// prefilterStable tells whether the poles of the prefilter lie in the region of stability.
func (l Loop) prefilterStable() bool {
	if l.Prefilter.isWire() || l.Prefilter.Denominator().Degree() < 1 {
		return true
	}
	return newAxisForm(poly.Poly{}, l.Prefilter.Denominator(), 0, l.Prefilter.Period()).stable() == poly.Holds
}

// axis returns g ready for questions on frequency.
func (g Function) axis(call string) (*axisForm, error) {
	if g.err != nil {
		return nil, g.err
	}
	if g.period == 0 {
		return newAxisForm(g.Numerator(), g.Denominator(), g.DeadTime(), 0), nil
	}
	h, err := g.Rational()
	if err != nil {
		return nil, err
	}
	if h.Numerator().Degree() > h.Denominator().Degree() {
		return nil, badArgument(call, "loop", "is not causal: the numerator in z has degree %d, the denominator %d", h.Numerator().Degree(), h.Denominator().Degree())
	}
	return newAxisForm(h.Numerator(), h.Denominator(), 0, g.period), nil
}

// GainCrossovers returns every frequency > 0, ascending, at which |L| = 1, with the signed
// phase margin there, as [Margins] has them. It takes less time than all margins.
func (l Loop) GainCrossovers() ([]Crossover, error) {
	a, err := l.openForm("tf.Loop.GainCrossovers")
	if err != nil {
		return nil, err
	}
	return a.gainCrossovers()
}

// PhaseCrossovers returns the frequencies > 0, ascending, at which L is real and negative, with
// the gain margin there, as [Margins] has them: up to completeTo, which is +Inf without dead time.
// The only option is [CrossoversUpTo].
func (l Loop) PhaseCrossovers(opt ...Option) (list []Crossover, completeTo float64, err error) {
	const call = "tf.Loop.PhaseCrossovers"
	a, err := l.openForm(call)
	if err != nil {
		return nil, 0, err
	}
	upTo, err := settingsOf(opt).crossoversUpTo(call)
	if err != nil {
		return nil, 0, err
	}
	if a.deadTime == 0 {
		list, err = a.phaseCrossovers()
		return list, math.Inf(1), err
	}
	d, err := a.delayedPhaseCrossovers(upTo)
	return d.crossovers, d.completeTo, err
}

// SensitivityPeak returns the supremum of |1/(1+L)| over frequency.
func (l Loop) SensitivityPeak() (Peak, error) {
	a, err := l.openForm("tf.Loop.SensitivityPeak")
	if err != nil {
		return Peak{}, err
	}
	return a.closedLoopPeak(sensitivityCurve)
}

// ComplementaryPeak returns the supremum of |L/(1+L)| over frequency.
func (l Loop) ComplementaryPeak() (Peak, error) {
	a, err := l.openForm("tf.Loop.ComplementaryPeak")
	if err != nil {
		return Peak{}, err
	}
	return a.closedLoopPeak(complementaryCurve)
}

// CrossoversUpTo makes [Loop.Margins] list the phase crossovers of a loop with dead time up to
// this frequency, rad/s, instead of down to |L| = 0.02. It must be positive and finite; a list
// does not grow beyond twenty thousand, and CompleteTo says how far it goes.
func CrossoversUpTo(frequency float64) Option {
	return func(s *settings) { s.upTo, s.upToGiven = frequency, true }
}

func settingsOf(opt []Option) (s settings) {
	for _, o := range opt {
		if o != nil {
			o(&s)
		}
	}
	return s
}

func (s settings) crossoversUpTo(call string) (float64, error) {
	if s.upToGiven && !(s.upTo > 0 && !math.IsInf(s.upTo, 1)) {
		return 0, badArgument(call, "CrossoversUpTo", "%v is not a positive finite frequency", s.upTo)
	}
	return s.upTo, nil
}
