package locus

import "context"

// defaultSteps is the number of steps that Trace allows itself.
const defaultSteps = 200000

// traceSettings are the adjustments of [Family.Trace].
type traceSettings struct {
	ctx   context.Context
	steps int
}

// Interrupted lets [Family.Trace] return early with the error of ctx when that is done.
func Interrupted(ctx context.Context) Option { return func(s *settings) { s.trace.ctx = ctx } }

// StepLimit is the number of steps after which [Family.Trace] gives up with an
// [*UnresolvedError]; 0 and less mean the default, 200000. Ordinary families need a few
// hundred.
func StepLimit(steps int) Option { return func(s *settings) { s.trace.steps = steps } }
