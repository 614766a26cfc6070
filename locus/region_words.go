package locus

import (
	"fmt"
	"strings"
)

func (r leftOf) String() string { return fmt.Sprintf("Re s < %g", r.sigma) }

func (r damped) String() string { return fmt.Sprintf("damping ratio > %g", r.zeta) }

func (r within) String() string {
	if r.outside {
		return fmt.Sprintf("|s| > %g", r.radius)
	}
	return fmt.Sprintf("|s| < %g", r.radius)
}

func (r slower) String() string { return fmt.Sprintf("|Im s| < %g", r.omega) }

func (r all) String() string {
	if len(r) == 0 {
		return "the whole plane"
	}
	words := make([]string, len(r))
	for i, one := range r {
		words[i] = fmt.Sprint(one)
	}
	return strings.Join(words, " and ")
}

func (r onSamples) String() string {
	return fmt.Sprintf("(%v) sampled every %g s", r.r, r.period)
}

// String returns the family as "(fixed) + k·(scaled)", in s or z, rounded to 6 digits.
func (f Family) String() string {
	if f.fixed.Degree() < 0 && f.scaled.Degree() < 0 {
		return "no family"
	}
	variable := "s"
	if f.period > 0 {
		variable = "z"
	}
	return fmt.Sprintf("(%s) + k·(%s)", f.fixed.Text(variable, 'g', 6), f.scaled.Text(variable, 'g', 6))
}
