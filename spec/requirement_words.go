package spec

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/locus"
)

var inf = math.Inf(1)

// The kinds, each with its word in sheets. What a limit may be stands here alone.
var (
	overshoot  = &kind{word: "overshoot", quantity: "overshoot", dimension: fraction, stepped: true, measure: measureOvershoot}
	undershoot = &kind{word: "undershoot", quantity: "undershoot", dimension: fraction, stepped: true, measure: measureUndershoot}
	riseTime   = &kind{word: "rise time", quantity: "rise time, 10 % to 90 %", dimension: seconds, open: true, stepped: true, measure: measureRise}
	peakTime   = &kind{word: "peak time", quantity: "peak time", dimension: seconds, open: true, stepped: true, measure: measurePeakTime}

	settlingTime = &kind{word: "settling time", quantity: "settling time", dimension: seconds, open: true, stepped: true,
		second: &second{word: "band", dimension: fraction, between: [2]float64{0, 1}}, measure: measureSettling}

	stepError     = &kind{word: "step error", quantity: "steady error of the unit step", dimension: fraction, measure: steady(0)}
	rampError     = &kind{word: "ramp error", quantity: "steady error of the unit ramp", dimension: seconds, measure: steady(1)}
	parabolaError = &kind{word: "parabola error", quantity: "steady error of the unit parabola", dimension: secondsSquared, measure: steady(2)}

	effort        = &kind{word: "effort", quantity: "largest effort for the unit step", open: true, stepped: true, measure: measureEffort}
	effortForStep = &kind{word: "effort for a step", quantity: "largest effort for the step", open: true, stepped: true,
		second: &second{word: "of size", between: [2]float64{0, inf}}, measure: measureEffortForStep}

	gainMargin          = &kind{word: "gain margin", quantity: "gain margin", side: atLeast, dimension: ratio, lowest: 1, measure: measureGainMargin}
	gainReductionMargin = &kind{word: "gain reduction margin", quantity: "gain reduction margin", side: atLeast, dimension: ratio, lowest: 1, measure: measureGainReductionMargin}
	phaseMargin         = &kind{word: "phase margin", quantity: "phase margin", side: atLeast, dimension: radians, highest: math.Pi, measure: measurePhaseMargin}
	delayMargin         = &kind{word: "delay margin", quantity: "delay margin", side: atLeast, dimension: seconds, measure: measureDelayMargin}
	sensitivityPeak     = &kind{word: "sensitivity peak", quantity: "peak of the sensitivity", dimension: ratio, open: true, measure: measureSensitivityPeak}
	complementaryPeak   = &kind{word: "complementary sensitivity peak", quantity: "peak of the complementary sensitivity", dimension: ratio, open: true, measure: measureComplementaryPeak}

	dampingRatio = &kind{word: "damping ratio", quantity: "smallest damping ratio of the poles", side: atLeast, dimension: fraction, open: true, highest: 1, measure: measureDamping}
	poleRegion   = &kind{word: "poles", quantity: "poles outside the region", measure: measurePoles}

	loadPeak     = &kind{word: "load peak", quantity: "largest deviation after a unit step of load", open: true, stepped: true, measure: measureLoadPeak}
	loadRecovery = &kind{word: "load recovery time", quantity: "recovery time after a unit step of load", dimension: seconds, open: true, stepped: true,
		second: &second{word: "to", between: [2]float64{0, inf}}, measure: measureLoadRecovery}

	absoluteIntegral     = &kind{word: "integral of absolute error", quantity: "integral of the absolute error", dimension: seconds, open: true, stepped: true, measure: integral((*signal).absolute, 0)}
	squaredIntegral      = &kind{word: "integral of squared error", quantity: "integral of the squared error", dimension: seconds, open: true, stepped: true, measure: integral((*signal).squared, 0)}
	timeAbsoluteIntegral = &kind{word: "integral of time-weighted absolute error", quantity: "integral of the time-weighted absolute error", dimension: secondsSquared, open: true, stepped: true, measure: integral((*signal).absolute, 1)}
	timeSquaredIntegral  = &kind{word: "integral of time-weighted squared error", quantity: "integral of the time-weighted squared error", dimension: secondsSquared, open: true, stepped: true, measure: integral((*signal).squared, 1)}

	bandwidthBetween = &kind{word: "bandwidth", quantity: "bandwidth", side: atLeast, dimension: frequency,
		second: &second{word: "at most", dimension: frequency, between: [2]float64{0, inf}}, measure: measureBandwidth}
	noiseAmplification = &kind{word: "noise amplification", quantity: "largest magnitude from noise to effort", open: true, measure: measureNoise}
)

// StandardVocabulary returns a new vocabulary with the names of this package. The fields of
// each stand in the form in which [Sheet.String] writes them:
//
//	overshoot at most 0.15
//	undershoot at most 0.1
//	rise time at most 0.5 s
//	peak time at most 0.8 s
//	settling time at most 2 s, band 0.02
//	step error at most 0.01
//	ramp error at most 0.05 s
//	parabola error at most 0.1 s²
//	effort at most 24
//	effort for a step at most 24, of size 0.5
//	gain margin at least 2
//	gain reduction margin at least 2
//	phase margin at least 0.8 rad
//	delay margin at least 0.02 s
//	sensitivity peak at most 1.6
//	complementary sensitivity peak at most 1.3
//	damping ratio at least 0.5
//	poles left of -1 rad/s, damped 0.5, within 50 rad/s, beyond 0.1 rad/s
//	load peak at most 0.2
//	load recovery time at most 3 s, to 0.01
//	integral of absolute error at most 0.5 s
//	integral of squared error at most 0.3 s
//	integral of time-weighted absolute error at most 0.3 s²
//	integral of time-weighted squared error at most 0.2 s²
//	bandwidth at least 5 rad/s, at most 20 rad/s
//	noise amplification at most 40
//
// Of the four fields of "poles" any may be left out but not all.
func StandardVocabulary() Vocabulary {
	v := Vocabulary{poleRegion.word: readPoles}
	for _, k := range []*kind{
		overshoot, undershoot, riseTime, peakTime, settlingTime, stepError, rampError, parabolaError,
		effort, effortForStep, gainMargin, gainReductionMargin, phaseMargin, delayMargin,
		sensitivityPeak, complementaryPeak, dampingRatio, loadPeak, loadRecovery,
		absoluteIntegral, squaredIntegral, timeAbsoluteIntegral, timeSquaredIntegral,
		bandwidthBetween, noiseAmplification,
	} {
		v[k.word] = k.read
	}
	return v
}

func (k *kind) read(e *Entry) (Requirement, error) {
	r := &limited{kind: k}
	var err error
	if r.limit, err = e.quantity(k.side.String(), k.dimension); err != nil {
		return nil, err
	}
	if k.second != nil {
		if r.second, err = e.quantity(k.second.word, k.second.dimension); err != nil {
			return nil, err
		}
	}
	return r, nil
}

// PolesLeftOf requires Re s < sigma, rad/s, of every closed-loop pole: [PolesIn] of a half
// plane, which a sheet can write.
func PolesLeftOf(sigma float64) Requirement {
	return polesFrom([]Field{{Name: "left of", Number: sigma, Unit: "rad/s"}})
}

// PolesWithin requires |s| < radius, rad/s, of every closed-loop pole: [PolesIn] of a disc,
// which a sheet can write.
func PolesWithin(radius float64) Requirement {
	return polesFrom([]Field{{Name: "within", Number: radius, Unit: "rad/s"}})
}

// PolesBeyond requires |s| > radius, rad/s, of every closed-loop pole: [PolesIn] of the
// outside of a disc, which a sheet can write.
func PolesBeyond(radius float64) Requirement {
	return polesFrom([]Field{{Name: "beyond", Number: radius, Unit: "rad/s"}})
}

func readPoles(e *Entry) (Requirement, error) {
	var words []Field
	for _, f := range []Field{{Name: "left of", Unit: "rad/s"}, {Name: "damped"}, {Name: "within", Unit: "rad/s"}, {Name: "beyond", Unit: "rad/s"}} {
		if !e.Has(f.Name) {
			continue
		}
		x, err := e.Number(f.Name, f.Unit)
		if err != nil {
			return nil, err
		}
		switch {
		case f.Name == "damped" && !(x > 0 && x < 1):
			return nil, &EntryError{Field: f.Name, Reason: "must lie between 0 and 1"}
		case (f.Name == "within" || f.Name == "beyond") && !(x > 0):
			return nil, &EntryError{Field: f.Name, Reason: "must be positive"}
		}
		f.Number = x
		words = append(words, f)
	}
	if words == nil {
		return nil, &EntryError{Reason: `expected one or more of "left of", "damped", "within" and "beyond"`}
	}
	return polesFrom(words), nil
}

func polesFrom(words []Field) Requirement {
	var regions []locus.Region
	for _, f := range words {
		switch f.Name {
		case "left of":
			regions = append(regions, locus.LeftOf(f.Number))
		case "damped":
			regions = append(regions, locus.Damped(f.Number))
		case "within":
			regions = append(regions, locus.Within(f.Number))
		case "beyond":
			regions = append(regions, locus.Beyond(f.Number))
		default:
			panic(fmt.Sprintf("spec: region word %q", f.Name)) // only the words above reach here
		}
	}
	r := &limited{kind: poleRegion, region: regions[0], words: words}
	if len(regions) > 1 {
		r.region = locus.All(regions...)
	}
	return r
}
