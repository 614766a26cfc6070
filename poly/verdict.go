package poly

import "fmt"

// A Verdict answers a question that arithmetic may be unable to settle.
type Verdict int8

const (
	Undecided Verdict = iota // nothing is claimed; the zero value
	Holds                    // proved to hold
	Fails                    // proved not to hold
)

var verdictNames = [...]string{Undecided: "undecided", Holds: "holds", Fails: "fails"}

// String returns "undecided", "holds" or "fails".
func (v Verdict) String() string {
	if v < 0 || int(v) >= len(verdictNames) {
		return fmt.Sprintf("Verdict(%d)", int8(v))
	}
	return verdictNames[v]
}

// MarshalText writes what String returns. The error is an [*ArgumentError] for a value that is
// none of the three.
func (v Verdict) MarshalText() ([]byte, error) {
	if v < 0 || int(v) >= len(verdictNames) {
		return nil, &ArgumentError{Call: "poly.Verdict.MarshalText", Argument: "v", Reason: v.String() + " is no verdict"}
	}
	return []byte(verdictNames[v]), nil
}

// UnmarshalText reads one of the three words. The error is a [*FormatError].
func (v *Verdict) UnmarshalText(text []byte) error {
	for i, name := range verdictNames {
		if string(text) == name {
			*v = Verdict(i)
			return nil
		}
	}
	return &FormatError{Place: "verdict", Reason: fmt.Sprintf("%q is none of undecided, holds, fails", text)}
}
