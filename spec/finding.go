package spec

import (
	"fmt"
	"math"

	"github.com/polewright/polewright/poly"
)

// A Finding is what a requirement says of one closed loop. The zero value claims nothing.
type Finding struct {
	Verdict        poly.Verdict
	Quantity, Unit string  // what was measured, in words; the unit is empty for ratios and for units of the signal
	Reached        float64 // NaN if the quantity does not exist; ±Inf where it is unbounded
	Limit          float64
	// Slack is (Limit - Reached)/scale for a requirement of the kind "at most", the negative
	// of it for "at least"; the scale is |Limit|, or 1 unit if that is 0. It is ≥ 0 where the
	// requirement is met, -Inf where the quantity does not exist and would have to.
	Slack float64
	At    float64 // time in s or frequency in rad/s at which Reached is attained; NaN if there is no such place, or it is a pole
	// AtUnit is "s" or "rad/s" and tells what At is; empty where At is NaN.
	AtUnit string
	Pole   complex128 // the closed-loop pole that decides, in rad/s; NaN + NaN·i for requirements that no single pole decides
	Reason string     // why the requirement is not met, or met without a figure, in a sentence; empty where the numbers say it
}

// rounding is how far a figure may pass its limit, relative to it, and still count as met
// with equality: what rounding alone can do to a figure whose exact value is the limit.
const rounding = 1e-12

// limitKind tells on which side of its limit a quantity has to stay.
type limitKind int

const (
	atMost limitKind = iota
	atLeast
)

func (k limitKind) String() string {
	if k == atLeast {
		return "at least"
	}
	return "at most"
}

// settled reports whether a limit of 0 is met exactly. Such a requirement is decided by what
// the loop is made of, not by how large the gain is, so its slack of 0 is no nearness to a
// limit: where slacks are compared it stands aside.
func (f Finding) settled() bool { return f.Limit == 0 && f.Slack == 0 && f.Verdict == poly.Holds }

// slack returns the distance to the limit as Finding.Slack defines it.
func (k limitKind) slack(reached, limit float64) float64 {
	scale := math.Abs(limit)
	if scale == 0 {
		scale = 1
	}
	if math.IsNaN(reached) {
		return math.Inf(-1)
	}
	s := (limit - reached) / scale
	if k == atLeast {
		s = (reached - limit) / scale
	}
	if math.IsNaN(s) { // both infinite
		return 0
	}
	return s
}

// NewFinding returns the finding of a requirement that the quantity be at most the limit,
// with slack and verdict filled in: for requirements of one's own. A reached value of NaN
// does not meet it.
func NewFinding(quantity, unit string, reached, limit, at float64, atUnit string) Finding {
	return newFinding(atMost, quantity, unit, reached, limit, at, atUnit)
}

// NewFindingAtLeast is [NewFinding] for a quantity that has to be at least the limit.
func NewFindingAtLeast(quantity, unit string, reached, limit, at float64, atUnit string) Finding {
	return newFinding(atLeast, quantity, unit, reached, limit, at, atUnit)
}

func newFinding(k limitKind, quantity, unit string, reached, limit, at float64, atUnit string) Finding {
	f := Finding{
		Quantity: quantity, Unit: unit, Reached: reached, Limit: limit,
		Slack: k.slack(reached, limit), At: at, AtUnit: atUnit,
		Pole: complex(math.NaN(), math.NaN()), Verdict: poly.Fails,
	}
	if math.IsNaN(at) {
		f.AtUnit = ""
	}
	if f.Slack >= -rounding {
		f.Verdict = poly.Holds
	}
	return f
}

// String returns the finding in a line: what was reached, the limit, the slack, and where.
func (f Finding) String() string {
	s := f.Quantity + " " + figure(f.Reached, f.Unit)
	if !math.IsNaN(f.Limit) {
		s += ", limit " + figure(f.Limit, f.Unit)
	}
	switch {
	case math.IsInf(f.Slack, 0) || math.IsNaN(f.Slack):
	default:
		s += fmt.Sprintf(", slack %+.3g", f.Slack)
	}
	if !math.IsNaN(f.At) && f.AtUnit != "" {
		s += " at " + figure(f.At, f.AtUnit)
	}
	if p := f.Pole; !math.IsNaN(real(p)) && f.Verdict != poly.Undecided {
		s += " at pole " + formatPole(p)
	}
	if f.Reason != "" {
		s += ": " + f.Reason
	}
	return s
}

// figure writes a number for people, six digits.
func figure(x float64, unit string) string {
	switch {
	case math.IsNaN(x):
		return "none"
	case math.IsInf(x, 1):
		return "unbounded"
	case math.IsInf(x, -1):
		return "unbounded below"
	}
	return withUnit(fmt.Sprintf("%.6g", x), unit)
}

// formatPole writes one pole, or a conjugate pair by the member above the axis.
func formatPole(p complex128) string {
	if imag(p) == 0 {
		return fmt.Sprintf("%.6g", real(p))
	}
	return fmt.Sprintf("%.6g ± j%.6g", real(p), math.Abs(imag(p)))
}
