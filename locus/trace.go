package locus

// traceSettings are the adjustments of [Family.Trace].
type traceSettings struct{}

func (f Family) Trace(lo, hi float64, opt ...Option) (*Locus, error) { return nil, errSkeleton }

type Locus struct{ Branches []Branch }
