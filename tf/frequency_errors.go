package tf

// A DegenerateError says that a set of frequencies which is finite for every ordinary loop
// is not so for this one: |L| is 1 everywhere, or L is real and negative over a whole range.
type DegenerateError struct {
	Call string // the function or method
	What string // what holds everywhere
}

func (e *DegenerateError) Error() string { return e.Call + ": " + e.What }
