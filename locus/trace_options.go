package locus

import "context"

// defaultSteps is the number of steps that Trace allows itself.
const defaultSteps = 20000

// traceSettings are the adjustments of [Family.Trace].
type traceSettings struct {
	ctx      context.Context
	steps    int
	accuracy float64
}

// Interrupted lets [Family.Trace] return early with the error of ctx when that is done.
func Interrupted(ctx context.Context) Option { return func(s *settings) { s.trace.ctx = ctx } }

// StepLimit is the number of steps after which [Family.Trace] gives up with an
// [*UnresolvedError]; 0 and less mean the default, 20000. Ordinary families need a few
// hundred.
func StepLimit(steps int) Option { return func(s *settings) { s.trace.steps = steps } }

// LineAccuracy is how far, as a share of the diagonal of [Locus.Frame], a point of a branch may be
// from the polyline that [Family.Trace] draws of it: between 1e-7 and 0.1, else the default of
// 2e-4, finer than Trace promises. The number of points grows with the root of its inverse. [Branch.At] does not depend on it.
func LineAccuracy(share float64) Option { return func(s *settings) { s.trace.accuracy = share } }
