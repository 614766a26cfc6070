package spec

import (
	"context"
	"fmt"
	"math"

	"github.com/polewright/polewright/poly"
	"github.com/polewright/polewright/tf"
)

// Check judges every requirement of the sheet on the closed loop. The empty sheet is met by
// an internally stable loop.
//
// The error is a *[SheetError] for an invalid sheet, and otherwise whatever keeps a
// requirement from being judged, an invalid loop for one; a requirement that is not met is
// no error.
func (s Sheet) Check(ctx context.Context, l tf.Loop, opt ...Option) (Report, error) {
	if err := s.Validate(); err != nil {
		return Report{}, err
	}
	return s.check(ctx, l)
}

func (s Sheet) check(ctx context.Context, l tf.Loop) (Report, error) {
	m, err := newModel("spec.Sheet.Check", l, &settings{})
	if err != nil {
		return Report{}, err
	}
	e := &Evidence{loop: l, m: m}
	defer func() { e.quickSignal.release(); e.quickSignal = nil }()
	r := Report{Sheet: s, Binding: -1}
	if r.Stable, err = e.Stable(); err != nil {
		return Report{}, err
	}
	r.Poles = e.poles
	r.Verdict = r.Stable
	r.Findings = make([]Finding, len(s))
	least := math.Inf(1)
	for i, q := range s {
		f, err := q.Judge(ctx, e)
		if err != nil {
			return Report{}, fmt.Errorf("requirement %d (%s): %w", i, q.Name(), err)
		}
		r.Findings[i] = f
		switch {
		case f.Verdict == poly.Fails:
			r.Verdict = poly.Fails
		case f.Verdict == poly.Undecided && r.Verdict == poly.Holds:
			r.Verdict = poly.Undecided
		}
		slack := f.Slack
		if f.settled() {
			slack = inf
		}
		if slack < least || r.Binding < 0 && !math.IsNaN(slack) {
			least, r.Binding = slack, i
		}
	}
	return r, nil
}
