// Package spec turns a requirement sheet into gains: every gain that meets it on the true
// closed loop, the evidence, and the reason where there is none.
//
// A [Sheet] is a list of requirements: overshoot, rise, peak and settling time, steady
// errors, effort, margins, peaks of the sensitivities, regions for the poles, rejection of a
// load, integral criteria, bandwidth, noise; or types of one's own that implement
// [Requirement]. It is written in code, as text or as JSON. Four calls answer it:
//
//   - [Sheet.Check] judges one loop: what every requirement reached, the limit, the slack and
//     where. [Sheet.CheckEach] does so for any number of loops, in parallel and in order, and
//     [Require] in a test.
//   - [Sheet.Windows] returns all gains k > 0 that meet the sheet, on one loop or on every one
//     of several variants, as closed intervals with what ends them.
//   - [Sheet.Design] also recommends one of them, reports on it, says what the second-order
//     rule would have chosen and whether that holds, places a gain in use, and, where no gain
//     works, names the smallest set of requirements that exclude each other and the gain that
//     misses least.
//   - [Sheet.Map] returns the second-order map from requirement to region.
//
// # What decides
//
// Gains are accepted or refused on the response of the actual closed loop, its zeros, hidden
// modes and dead time included. Damping ratio and natural frequency describe the standard
// system of [SecondOrder] exactly and other loops more or less; [Resembles] says which.
//
// Every requirement, and the empty sheet, is met only by an internally stable loop. Times and
// overshoot refer to the response's own final value; where that is zero, requirements that
// need it are not met and say why. A limit met with equality is met.
//
// # What is guaranteed
//
// Windows of stability, of regions for the poles, of steady errors and of margins follow from
// real roots of polynomials. Windows of requirements on time responses are searched, with
// proof on rational loops: between two gains that were looked at, a bound on the second
// derivative of the response by the gain says how far it can stray from the chord, and a
// stretch that this leaves in doubt is halved until it is narrower than a ten-thousandth of
// the gap between critical gains. [Gains.MissedBelow] says how wide a window may have been
// missed. Ends are located to rounding, also where the figure jumps.
//
// The proofs are made in float64, up to its rounding. Beyond the range in [Gains], below the
// smallest and above the largest critical gain, verdicts are sampled only. For requirements of
// one's own, integral criteria, bandwidth and loops with dead time the search rests on samples
// of the figure, and [Gains.Estimated] is set.
//
// Loops with a sampling period, and response requirements on loops with actuator limits,
// are refused with a *[github.com/polewright/polewright/tf.UnsupportedError].
//
// # Caution
//
// A gain from a model is a proposal. Try it on the machine with reduced limits, guards in
// place and an emergency stop within reach; local codes, functional-safety rules and licensed
// practice prevail over anything computed here.
//
// # Units
//
// SI units throughout: seconds, radians, rad/s. Ratios and overshoot are fractions, never per
// cent; texts and JSON may carry "%", "ms", "deg", "dB" and "Hz".
package spec
