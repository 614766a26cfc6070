package tf

import (
	"fmt"

	"github.com/polewright/polewright/poly"
)

// UnsupportedError says that a combination is outside what a call can do. Packages above
// use it too.
type UnsupportedError struct {
	Call string // the function or method
	What string // what it cannot do
}

func (e *UnsupportedError) Error() string { return e.Call + ": not supported: " + e.What }

// IrrationalError says that the answer would be no rational function, because dead time
// lies inside a loop or in only one of two parallel branches.
type IrrationalError struct {
	Call     string  // the function or method
	DeadTime float64 // s, the dead time in the way
}

func (e *IrrationalError) Error() string {
	return fmt.Sprintf("%s: a dead time of %v s makes the result irrational; Path evaluates it exactly", e.Call, e.DeadTime)
}

// PeriodError says that functions of different sampling periods meet.
type PeriodError struct {
	Call    string     // the function or method
	Periods [2]float64 // s; 0 is continuous time
}

func (e *PeriodError) Error() string {
	name := func(period float64) string {
		if period == 0 {
			return "continuous time"
		}
		return fmt.Sprintf("period %v s", period)
	}
	return fmt.Sprintf("%s: %s meets %s", e.Call, name(e.Periods[0]), name(e.Periods[1]))
}

// badArgument returns the error for an argument that a call cannot work with.
func badArgument(call, argument, format string, values ...any) error {
	return &poly.ArgumentError{Call: call, Argument: argument, Reason: fmt.Sprintf(format, values...)}
}
