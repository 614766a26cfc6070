package poly

import "fmt"

// An ArgumentError reports an argument that a call cannot work with. The packages above
// use it too, so that one errors.As finds a bad input wherever it was noticed.
type ArgumentError struct {
	Call     string // the function or method, such as "tf.New"
	Argument string // the argument, such as "denominator" or "roots[2]"
	Reason   string // what is wrong with it and what was expected
}

func (e *ArgumentError) Error() string {
	return fmt.Sprintf("%s: %s: %s", e.Call, e.Argument, e.Reason)
}

// A RangeError reports a root outside the range of float64.
type RangeError struct {
	Call   string // the function or method
	Reason string // which root, and on which side of the range it lies
}

func (e *RangeError) Error() string { return fmt.Sprintf("%s: %s", e.Call, e.Reason) }
