package locus

import "github.com/polewright/polewright/poly"

// A Crossing is a point at which a branch meets the boundary of a region.
type Crossing struct {
	S     complex128
	Gain  float64
	Touch poly.Verdict // Holds: tangent, on the same side before and after; Fails: it crosses
}
