package locus

import "fmt"

// A BoundaryOnLocusError says that a whole piece of a boundary belongs to the locus, so that its
// crossings cannot be listed: k/s² and the imaginary axis.
type BoundaryOnLocusError struct {
	Region Region // the region, as it was given
}

func (e *BoundaryOnLocusError) Error() string {
	if words, ok := e.Region.(fmt.Stringer); ok {
		return "locus: a whole piece of the boundary of the region " + words.String() + " belongs to the locus"
	}
	return "locus: a whole piece of the region's boundary belongs to the locus"
}

// An UndecidedError says that a question could not be settled within the bounds on work.
type UndecidedError struct {
	Call string // the method
	What string // what is undecided
}

func (e *UndecidedError) Error() string { return e.Call + ": undecided: " + e.What }
