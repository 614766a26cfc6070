package locus

import (
	"math"
	"math/big"
)

// A Sign chooses the half of the locus. Of other values the sign counts, and 0 is [Positive].
type Sign int

const (
	Positive Sign = +1 // gains k > 0
	Negative Sign = -1 // gains k < 0
)

// String returns "k > 0" or "k < 0".
func (s Sign) String() string {
	if s < 0 {
		return "k < 0"
	}
	return "k > 0"
}

// Asymptotes describes how branches go to infinity.
type Asymptotes struct {
	Centroid float64   // where the asymptotes meet on the real axis, rad/s; NaN if there are none
	Angles   []float64 // rad in (-π, π], ascending; nil if there are none
}

// Asymptotes returns the asymptotes for gains of the given sign: as |k| grows, if fixed has the
// higher degree, and as k tends to 0 if scaled has. Of equal degrees there are none. The signs
// of the leading coefficients count.
func (f Family) Asymptotes(sign Sign) Asymptotes {
	a, b := exactOf(f.fixed), exactOf(f.scaled)
	n, m := a.Degree(), b.Degree()
	if n == m || n < 0 || m < 0 {
		return Asymptotes{Centroid: math.NaN()}
	}
	// The sum of the roots of each is minus its second coefficient over its first.
	sum := func(p [2]*big.Rat) *big.Rat { return new(big.Rat).Quo(p[1], p[0]) }
	sa := sum([2]*big.Rat{a.Coefficient(n).Rat(), a.Coefficient(n - 1).Rat()})
	sb := sum([2]*big.Rat{b.Coefficient(m).Rat(), b.Coefficient(m - 1).Rat()})
	c := sb.Sub(sb, sa)
	c.Quo(c, new(big.Rat).SetInt64(int64(n-m)))
	centroid, _ := c.Float64()
	// s^(n-m) = -k·b/a, or its inverse, both of which have the sign of -k·a·b.
	negative := a.LeadSign()*b.LeadSign()*int(sign) > 0
	count := n - m
	if count < 0 {
		count = -count
	}
	return Asymptotes{Centroid: centroid, Angles: realRootAngles(negative, count)}
}

// realRootAngles returns the arguments of the n-th roots of a positive or a negative number, in
// (-π, π], ascending.
func realRootAngles(negative bool, n int) []float64 {
	odd := 0
	if negative {
		odd = 1
	}
	angles := make([]float64, 0, n)
	for turns := -n + 1; turns <= n; turns++ { // of π/n
		if turns&1 == odd {
			angles = append(angles, math.Pi*float64(turns)/float64(n))
		}
	}
	return angles
}

// rootAngles returns the arguments of the n-th roots of a number with the given argument.
func rootAngles(argument float64, n int) []float64 {
	angles := make([]float64, 0, n)
	for i := -n; i <= n; i++ {
		if a := (argument + 2*math.Pi*float64(i)) / float64(n); a > -math.Pi && a <= math.Pi && len(angles) < n {
			angles = append(angles, a)
		}
	}
	return angles
}

// mirror returns the angle of the conjugate vector, in (-π, π].
func mirror(angle float64) float64 {
	if angle == math.Pi {
		return angle
	}
	return -angle
}
