package locus

import (
	"math"
	"sort"

	"github.com/polewright/polewright/tf"
)

// A Branch is the way of one root of a family while the gain grows, as a polyline whose points
// carry their gains, and as a function of the gain. The zero value has no points.
//
// A Branch never changes; goroutines may share one.
type Branch struct {
	points []point
	parts  []stretch
	plane  *plane
	period float64
}

// A point of a polyline.
type point struct {
	gain float64
	s    complex128
}

// A stretch is a chain that a branch runs along.
type stretch struct {
	*chain
	mirror bool
}

// Len returns the number of points.
func (b Branch) Len() int { return len(b.points) }

// XY returns point i: its real and imaginary part, always finite; rad/s in the s-plane.
// Together with [Branch.Len] this is what plotting packages ask of a line. It panics if i
// is not in [0, Len).
func (b Branch) XY(i int) (re, im float64) {
	s := b.points[i].s
	return real(s), imag(s)
}

// GainAt returns the gain of point i; gains never decrease along a branch. It is ±Inf only at
// a zero that the branch reaches for an infinite gain. It panics if i is not in [0, Len).
func (b Branch) GainAt(i int) float64 { return b.points[i].gain }

// DampingRatioAt returns the damping ratio of point i, dimensionless; in the z-plane that of
// its logarithm, the principal one. NaN at the origin of the s-plane. It panics if i is not
// in [0, Len).
func (b Branch) DampingRatioAt(i int) float64 { return tf.DampingRatio(b.continuous(i)) }

// NaturalFrequencyAt returns the natural frequency (characteristic angular frequency) of point
// i in rad/s; in the z-plane that of its logarithm, the principal one, over the period.
// It panics if i is not in [0, Len).
func (b Branch) NaturalFrequencyAt(i int) float64 { return tf.NaturalFrequency(b.continuous(i)) }

// before is the order of branches in a Locus.
func (b *Branch) before(c *Branch) bool {
	for i := 0; i < len(b.points) && i < len(c.points); i++ {
		p, q := b.points[i], c.points[i]
		switch {
		case i == 0 && p.gain != q.gain:
			return p.gain < q.gain
		case real(p.s) != real(q.s):
			return real(p.s) < real(q.s)
		case imag(p.s) != imag(q.s):
			return imag(p.s) < imag(q.s)
		}
	}
	return len(b.points) < len(c.points)
}

// At returns where the branch is at gain k, and false if it is nowhere at that gain: before it
// begins, after it ends, or at infinity. The value is computed for this gain, not
// interpolated, to about the accuracy of float64, and belongs to this branch also between its
// points, however near others are. At the gain of a break point it is the break point.
func (b Branch) At(k float64) (complex128, bool) {
	if b.plane == nil || math.IsNaN(k) {
		return 0, false
	}
	for _, part := range b.parts {
		if s, ok := part.vertexAtGain(k); ok {
			if part.mirror {
				s = complex(real(s), -imag(s))
			}
			return s, true
		}
	}
	i := sort.Search(len(b.parts), func(i int) bool { return b.parts[i].upto >= b.parts[i].plane.toK(k) })
	if i == len(b.parts) {
		return 0, false
	}
	κ := b.parts[i].plane.toK(k)
	if b.parts[i].from > κ {
		return 0, false
	}
	x, ok := b.parts[i].at(b.parts[i].plane, κ)
	if !ok {
		return 0, false
	}
	s := b.plane.fromX(x)
	if b.parts[i].mirror {
		s = complex(real(s), -imag(s))
	}
	if math.IsInf(real(s), 0) || math.IsInf(imag(s), 0) {
		return 0, false
	}
	return s, true
}
