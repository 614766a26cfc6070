// Package polewright is the map of the library; the code is in the packages below it.
//
// Polewright chooses loop gains by root locus and proves them on the true closed loop. A
// program hands it a plant and a requirement sheet and gets every gain that meets the sheet,
// what ends each interval of such gains, and the reason where there is none.
//
//	spec       requirement sheet: second-order map, verdict on a loop, gain windows, recommended gain
//	locus      the roots of A(s) + k·B(s) over k: branches, break points, crossings, windows
//	timeresp   time responses of linear and limited loops, and their figures of merit
//	tf         transfer functions with dead time and sampling period, loops, margins, compensators
//	poly       real polynomials, kept exact, with certified roots
//
// Imports run downward only: spec stands on locus and timeresp, both stand on tf, tf on poly.
// Start with [github.com/polewright/polewright/spec] for the whole job, with
// [github.com/polewright/polewright/locus] for the locus of one loop, or with
// [github.com/polewright/polewright/poly] for nothing but roots.
//
// # Conventions
//
//   - SI units: seconds, radians, rad/s. Ratios are fractions (0.15), never per cent.
//   - Polynomials are written highest power first, as on paper.
//   - Feedback is negative; the characteristic equation is 1 + k·L(s) = 0, and the gain k multiplies the controller.
//   - A sampling period of 0 means continuous time.
//   - Values are immutable and safe for concurrent use. Nothing prints, logs or keeps global state.
//   - Bad input is a [github.com/polewright/polewright/poly.ArgumentError]; what arithmetic cannot settle is a
//     [github.com/polewright/polewright/poly.Verdict] that says so.
//
// # What is guaranteed
//
// A root comes with a disc that provably holds it. A branch keeps its identity by proof. A
// settling time is the last entry into the band, found by root-finding. Sets of gains are
// returned whole. Each package says where its guarantee ends.
//
// # Caution
//
// A gain from a model is a proposal. The plant at hand differs from its model; the results
// are about the model. Try a gain first with limits, guards and an emergency stop in place.
// Local codes, functional-safety rules and licensed practice prevail.
package polewright
