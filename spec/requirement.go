package spec

import (
	"context"
	"errors"
	"fmt"
	"math"
	"strconv"

	"github.com/polewright/polewright/locus"
	"github.com/polewright/polewright/poly"
)

// limited is a requirement of this package: a quantity on one side of a limit.
type limited struct {
	kind   *kind
	limit  float64
	second float64 // the second number of kinds that have one: band, step size or upper limit
	region locus.Region
	words  []Field // of a region, where known
}

// A kind is what all requirements on one quantity share.
type kind struct {
	word      string // name in sheets and reports
	quantity  string
	side      limitKind
	dimension dimension
	lowest    float64 // limits below, or at it if open, make no sense
	open      bool
	highest   float64 // 0: no highest
	second    *second
	stepped   bool // judged on a time response: actuator limits matter
	measure   measure
}

// A second describes the second number of a requirement.
type second struct {
	word      string
	dimension dimension
	between   [2]float64 // open interval of what makes sense
}

// measured is a quantity with the place where it is attained.
type measured struct {
	reached float64
	at      float64
	atUnit  string
	pole    complex128
	reason  string
}

var (
	noPole = complex(math.NaN(), math.NaN())
	none   = math.NaN()
)

func at(reached, place float64, unit string) measured {
	return measured{reached: reached, at: place, atUnit: unit, pole: noPole}
}

// absent is a quantity that does not exist and would have to.
func absent(reason string) measured {
	return measured{reached: none, at: none, pole: noPole, reason: reason}
}

// Name returns the word of the vocabulary.
func (r *limited) Name() string { return r.kind.word }

// String returns the line of the sheet.
func (r *limited) String() string {
	e, err := r.Entry()
	if err != nil {
		return r.kind.word
	}
	return e.String()
}

// Validate returns a *[poly.ArgumentError] if the limit makes no sense.
func (r *limited) Validate() error {
	k := r.kind
	bad := func(argument, reason string) error {
		return &poly.ArgumentError{Call: "spec: " + k.word, Argument: argument, Reason: reason}
	}
	if k == poleRegion {
		if r.region == nil {
			return bad("region", "is missing")
		}
		// The windows of a lone pole tell what is wrong with a region at next to no cost.
		lone, err := locus.Parameter(poly.New(1, 1), poly.New(1))
		if err != nil {
			return err
		}
		var argument *poly.ArgumentError
		if _, err := lone.Windows(r.region); errors.As(err, &argument) {
			return bad("region", argument.Reason)
		}
		return nil
	}
	in := func(x float64) string { return withUnit(strconv.FormatFloat(x, 'g', 6, 64), k.dimension.unit()) }
	switch x := r.limit; {
	case math.IsNaN(x) || math.IsInf(x, 0):
		return bad("limit", fmt.Sprintf("is %v and must be a finite number", x))
	case x < k.lowest:
		return bad("limit", "is "+in(x)+" and must not be below "+in(k.lowest))
	case k.open && x == k.lowest:
		return bad("limit", "is "+in(x)+" and must be above that")
	case k.highest != 0 && x > k.highest:
		return bad("limit", "is "+in(x)+" and must not be above "+in(k.highest))
	}
	if s := k.second; s != nil {
		if x := r.second; !(x > s.between[0] && x < s.between[1]) {
			return bad(s.word, fmt.Sprintf("is %g and must lie between %g and %g", x, s.between[0], s.between[1]))
		}
		if k == bandwidthBetween && !(r.second >= r.limit) {
			return bad(s.word, fmt.Sprintf("is %g and must not be below %g", r.second, r.limit))
		}
	}
	return nil
}

// Entry returns the requirement as a sheet writes it.
func (r *limited) Entry() (Entry, error) {
	e := Entry{Requirement: r.kind.word}
	if r.kind == poleRegion {
		if r.words == nil {
			return e, errWords
		}
		e.Fields = r.words
		return e, nil
	}
	e.Fields = append(e.Fields, Field{Name: r.kind.side.String(), Number: r.limit, Unit: r.kind.dimension.unit()})
	if s := r.kind.second; s != nil {
		e.Fields = append(e.Fields, Field{Name: s.word, Number: r.second, Unit: s.dimension.unit()})
	}
	return e, nil
}

// Judge measures the quantity on an internally stable loop; an unstable one does not meet
// the requirement.
func (r *limited) Judge(ctx context.Context, e *Evidence) (Finding, error) {
	if err := r.Validate(); err != nil {
		return Finding{}, err
	}
	if err := ctx.Err(); err != nil {
		return Finding{}, err
	}
	k := r.kind
	stable, err := e.Stable()
	if err != nil {
		return Finding{}, err
	}
	if stable != poly.Holds {
		f := newFinding(k.side, k.quantity, k.dimension.unit(), none, r.limit, none, "")
		f.Verdict, f.Reason = stable, "the closed loop is not internally stable"
		if stable == poly.Undecided {
			f.Reason = "whether the closed loop is stable could not be decided"
		}
		return f, nil
	}
	if k.stepped {
		if err := e.withinLimits(ctx); err != nil {
			return Finding{}, err
		}
	}
	m, quick := measured{}, false
	if k.stepped {
		m, quick = e.quickFigure(r)
	}
	if !quick {
		if m, err = k.measure(ctx, e, r); err != nil {
			return Finding{}, err
		}
	}
	f := newFinding(k.side, k.quantity, k.dimension.unit(), m.reached, r.limit, m.at, m.atUnit)
	if k == bandwidthBetween {
		if other := newFinding(atMost, k.quantity, k.dimension.unit(), m.reached, r.second, m.at, m.atUnit); other.Slack < f.Slack {
			f = other
		}
	}
	f.Pole, f.Reason = m.pole, m.reason
	return f, nil
}

// OvershootAtMost requires that the unit step response exceed its final value by at most
// the given fraction of it, ≥ 0.
func OvershootAtMost(fraction float64) Requirement { return &limited{kind: overshoot, limit: fraction} }

// UndershootAtMost requires that the unit step response go at most the given fraction of
// its final value, ≥ 0, to the other side of zero.
func UndershootAtMost(fraction float64) Requirement {
	return &limited{kind: undershoot, limit: fraction}
}

// RisesWithin requires a rise time, from the first crossing of 10 % to the first crossing
// of 90 % of the final value, of at most the given seconds, > 0.
func RisesWithin(seconds float64) Requirement { return &limited{kind: riseTime, limit: seconds} }

// PeaksWithin requires that the largest value of the unit step response, dead time
// included, be attained within the given seconds, > 0. A response without a peak above its
// final value does not meet it.
func PeaksWithin(seconds float64) Requirement { return &limited{kind: peakTime, limit: seconds} }

// SettlesWithin requires that the unit step response, dead time included, be inside the
// band about its final value for good within the given seconds, > 0; the band is a fraction
// of the final value, 0 < band < 1.
func SettlesWithin(seconds, band float64) Requirement {
	return &limited{kind: settlingTime, limit: seconds, second: band}
}

// StepErrorAtMost requires |1 - y(∞)| ≤ fraction for the unit reference step, fraction ≥ 0.
// A limit of 0 is decided by the poles at s = 0.
func StepErrorAtMost(fraction float64) Requirement { return &limited{kind: stepError, limit: fraction} }

// RampErrorAtMost requires that the output follow the unit ramp with a steady delay of at
// most the given seconds, ≥ 0. A limit of 0 is decided by the poles at s = 0.
func RampErrorAtMost(seconds float64) Requirement { return &limited{kind: rampError, limit: seconds} }

// ParabolaErrorAtMost requires that the output follow t²/2 with a steady error of at most
// the given s², ≥ 0.
func ParabolaErrorAtMost(secondsSquared float64) Requirement {
	return &limited{kind: parabolaError, limit: secondsSquared}
}

// EffortAtMost requires |u(t)| ≤ limit for every t ≥ 0+ of the unit reference step, limit > 0.
// The effort u is what the controller hands to the plant.
func EffortAtMost(limit float64) Requirement { return &limited{kind: effort, limit: limit} }

// EffortForStepAtMost requires |u(t)| ≤ limit for a reference step of the given size, > 0,
// with the limits of the loop's actuator in force.
func EffortForStepAtMost(size, limit float64) Requirement {
	return &limited{kind: effortForStep, limit: limit, second: size}
}

// GainMarginAtLeast requires that the loop stay stable under any increase of the loop gain
// by less than the given ratio, ≥ 1. A loop that no increase destabilises meets it.
func GainMarginAtLeast(ratio float64) Requirement { return &limited{kind: gainMargin, limit: ratio} }

// GainReductionMarginAtLeast requires that the loop stay stable under any reduction of the
// loop gain by less than the given ratio, ≥ 1. A loop that no reduction destabilises meets it.
func GainReductionMarginAtLeast(ratio float64) Requirement {
	return &limited{kind: gainReductionMargin, limit: ratio}
}

// PhaseMarginAtLeast requires |arg(-L)| ≥ radians at every gain crossover, 0 ≤ radians ≤ π.
// A stable loop without gain crossover meets it.
func PhaseMarginAtLeast(radians float64) Requirement {
	return &limited{kind: phaseMargin, limit: radians}
}

// DelayMarginAtLeast requires that the loop stay stable under any added dead time of less
// than the given seconds, ≥ 0.
func DelayMarginAtLeast(seconds float64) Requirement {
	return &limited{kind: delayMargin, limit: seconds}
}

// SensitivityPeakAtMost requires |1/(1+L)| ≤ ratio at every frequency, ratio > 0.
func SensitivityPeakAtMost(ratio float64) Requirement {
	return &limited{kind: sensitivityPeak, limit: ratio}
}

// ComplementaryPeakAtMost requires |L/(1+L)| ≤ ratio at every frequency, ratio > 0.
func ComplementaryPeakAtMost(ratio float64) Requirement {
	return &limited{kind: complementaryPeak, limit: ratio}
}

// DampingAtLeast requires that every closed-loop pole have at least the damping ratio zeta,
// 0 < zeta ≤ 1; at 1 all are real.
func DampingAtLeast(zeta float64) Requirement { return &limited{kind: dampingRatio, limit: zeta} }

// PolesIn requires that every closed-loop pole lie in the region, its boundary excluded.
func PolesIn(r locus.Region) Requirement { return &limited{kind: poleRegion, region: r} }

// LoadPeakAtMost requires that a unit step of load, at the input of the plant, move the
// output by at most the given amount, > 0, in units of the output.
func LoadPeakAtMost(amount float64) Requirement { return &limited{kind: loadPeak, limit: amount} }

// LoadRecoversWithin requires that after a unit step of load, at the input of the plant,
// the output be back within the given amount of where it was, > 0, in units of the output,
// for good within the given seconds, > 0. A loop with a steady load error above the amount
// does not meet it.
func LoadRecoversWithin(seconds, amount float64) Requirement {
	return &limited{kind: loadRecovery, limit: seconds, second: amount}
}

// AbsoluteErrorIntegralAtMost requires ∫|y - y(∞)| dt ≤ limit for the unit reference step,
// in s, limit > 0.
func AbsoluteErrorIntegralAtMost(limit float64) Requirement {
	return &limited{kind: absoluteIntegral, limit: limit}
}

// SquaredErrorIntegralAtMost requires ∫(y - y(∞))² dt ≤ limit for the unit reference step,
// in s, limit > 0.
func SquaredErrorIntegralAtMost(limit float64) Requirement {
	return &limited{kind: squaredIntegral, limit: limit}
}

// TimeWeightedAbsoluteErrorIntegralAtMost requires ∫t·|y - y(∞)| dt ≤ limit for the unit
// reference step, in s², limit > 0.
func TimeWeightedAbsoluteErrorIntegralAtMost(limit float64) Requirement {
	return &limited{kind: timeAbsoluteIntegral, limit: limit}
}

// TimeWeightedSquaredErrorIntegralAtMost requires ∫t·(y - y(∞))² dt ≤ limit for the unit
// reference step, in s², limit > 0.
func TimeWeightedSquaredErrorIntegralAtMost(limit float64) Requirement {
	return &limited{kind: timeSquaredIntegral, limit: limit}
}

// BandwidthBetween requires that the bandwidth, the lowest frequency at which the magnitude
// from reference to output falls under 1/√2 of its value at zero frequency, lie between the
// two limits, rad/s, 0 ≤ lo ≤ hi. A reading of +Inf means that it never falls under it.
func BandwidthBetween(lo, hi float64) Requirement {
	return &limited{kind: bandwidthBetween, limit: lo, second: hi}
}

// NoiseAmplificationAtMost requires that the largest magnitude, over frequency, from
// measurement noise to effort be at most the given ratio, > 0, in units of effort per unit
// of output.
func NoiseAmplificationAtMost(ratio float64) Requirement {
	return &limited{kind: noiseAmplification, limit: ratio}
}
