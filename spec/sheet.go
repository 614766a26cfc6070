package spec

import (
	"context"
	"fmt"
	"strings"
)

// A Sheet is a list of requirements that a closed loop has to meet, all of them. The empty
// sheet asks for internal stability alone, which every requirement includes.
//
// A Sheet is read and written as text ([Sheet.String], [ParseSheet]) and as JSON, in words
// of the trade; a [Vocabulary] adds words for requirements of one's own.
type Sheet []Requirement

// A Requirement is one line of a [Sheet]. The constructors of this package cover the usual
// ones; other types may implement it.
//
// Judge measures the closed loop that the evidence holds. It returns an error only where
// nothing can be said: the loop is invalid, the context has ended, the combination is not
// supported. A quantity that does not exist is a Finding that says so. Judge must depend on
// the evidence alone, so that the same loop always gets the same finding, and must be safe
// for concurrent use with different evidence.
//
// Four optional methods make a requirement a better citizen: Validate() error, called by
// [Sheet.Validate]; String() string, the line of the sheet as text; Entry() (Entry, error),
// what is written as text and JSON; and the two of [WindowFinder].
type Requirement interface {
	Name() string
	Judge(ctx context.Context, e *Evidence) (Finding, error)
}

// A SheetError reports the first requirement of a sheet that is invalid or cannot be read.
type SheetError struct {
	Index int    // of the requirement in the sheet, from 0; -1 where the sheet itself is at fault
	Place string // where in the text or JSON, such as "line 3" or "[2].band"; empty where no text is at hand
	Name  string // of the requirement; empty if not known
	Err   error  // the reason
}

func (e *SheetError) Error() string {
	var b strings.Builder
	b.WriteString("spec: ")
	if e.Index >= 0 {
		fmt.Fprintf(&b, "requirement %d", e.Index)
	} else {
		b.WriteString("sheet")
	}
	if e.Name != "" {
		fmt.Fprintf(&b, " (%s)", e.Name)
	}
	if e.Place != "" {
		fmt.Fprintf(&b, " at %s", e.Place)
	}
	fmt.Fprintf(&b, ": %v", e.Err)
	return b.String()
}

func (e *SheetError) Unwrap() error { return e.Err }

// Validate returns nil if every requirement of the sheet is there and has limits that make
// sense, else one error for all that have not, each a *[SheetError] found by errors.As;
// Unwrap of the result lists them when there are several.
func (s Sheet) Validate() error {
	var all []error
	for i, r := range s {
		if err := validate(r); err != nil {
			name := ""
			if r != nil {
				name = r.Name()
			}
			all = append(all, &SheetError{Index: i, Name: name, Err: err})
		}
	}
	switch len(all) {
	case 0:
		return nil
	case 1:
		return all[0]
	}
	return invalidSheet(all)
}

type invalidSheet []error

func (e invalidSheet) Error() string {
	lines := make([]string, len(e))
	for i, err := range e {
		lines[i] = err.Error()
	}
	return strings.Join(lines, "\n")
}

func (e invalidSheet) Unwrap() []error { return e }

func validate(r Requirement) error {
	if r == nil {
		return errNoRequirement
	}
	if v, ok := r.(interface{ Validate() error }); ok {
		return v.Validate()
	}
	return nil
}

// describe returns the line of the sheet for r.
func describe(r Requirement) string {
	if s, ok := r.(fmt.Stringer); ok {
		return s.String()
	}
	return r.Name()
}
