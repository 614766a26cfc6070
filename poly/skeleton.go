package poly

import "errors"

var errSkeleton = errors.New("poly: skeleton")

// RealRoots is a stub.
func (p Poly) RealRoots(lo, hi float64, opt ...Option) ([]Root, error) { return nil, errSkeleton }
