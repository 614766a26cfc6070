// Package locus follows one-parameter families of characteristic polynomials.
package locus

import "errors"

var errSkeleton = errors.New("locus: skeleton")

// Option adjusts a call of this package.
type Option func(*settings)
type settings struct{ trace traceSettings }
