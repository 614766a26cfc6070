package locus

import "fmt"

// An UnresolvedError is the [UndecidedError] of [Family.Trace] with the place: it could not prove
// how branches go on, within the arithmetic or the number of steps that it allows itself, see
// [StepLimit].
type UnresolvedError struct {
	Call   string     // the function or method
	Gain   float64    // the gain up to which all is proven
	S      complex128 // where it stopped, rad/s in the s-plane; NaN if at no particular place
	Reason string
}

func (e *UnresolvedError) Error() string {
	return fmt.Sprintf("%s: undecided at gain %g near s = %g: %s", e.Call, e.Gain, e.S, e.Reason)
}

// Unwrap returns the same as an [*UndecidedError].
func (e *UnresolvedError) Unwrap() error { return &UndecidedError{Call: e.Call, What: e.Reason} }
