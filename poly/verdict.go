package poly

// A Verdict answers a question that arithmetic may be unable to settle.
type Verdict int8

const (
	Undecided Verdict = iota // nothing is claimed; the zero value
	Holds                    // proved to hold
	Fails                    // proved not to hold
)
