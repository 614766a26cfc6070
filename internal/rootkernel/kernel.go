// Package rootkernel finds the roots of a real polynomial without multiple roots in float64
// and proves discs about them. It is the fast stage of poly.Roots: it either proves its
// answer or says that it cannot.
//
// Letters: n the degree, c the coefficients by power, z = x + jy a point, p and d the values
// of the polynomial and its derivative there, u = 2⁻⁵³.
//
// The points are real ones and the upper ones of conjugate pairs. Two neighbouring real ones
// move together as one real quadratic, as does a conjugate pair: the sign of its
// discriminant turns one kind into the other.
package rootkernel

import "math"

// A Kernel owns the working storage of a solution. The zero value is ready for use; it is
// not for concurrent use.
type Kernel struct {
	n   int
	c   []float64 // coefficients by power
	lo  []float64 // what c lacks to the exact coefficients, to nearest; nil if nothing
	mag []float64 // |c|

	pairs    int // conjugate pairs
	x, y, yy []float64
	restless []float64 // which pairs still move: 1, else 0

	reals     int // real points, ascending
	r         []float64
	restlessR []float64
	shift     bool // whether the next sweep pairs the real points the other way

	logs []float64 // binary logarithms of mag, roughly

	floats []float64
}

// grow makes room for degree n.
func (k *Kernel) grow(n int) {
	m := n/2 + 1
	if need := 2*(n+1) + 4*m + 2*n; len(k.floats) < need {
		k.floats = make([]float64, need)
	}
	f := k.floats
	k.mag, f = f[:n+1], f[n+1:]
	k.logs, f = f[:n+1], f[n+1:]
	k.x, f = f[:m], f[m:]
	k.y, f = f[:m], f[m:]
	k.yy, f = f[:m], f[m:]
	k.restless, f = f[:m], f[m:]
	k.r, f = f[:n], f[n:]
	k.restlessR = f[:n]
	k.n = n
}

// Set takes a polynomial: coefficients by power, the first and the last not zero, and what
// they lack to the exact ones (nil if nothing). The kernel keeps the slices and never
// changes them.
func (k *Kernel) Set(c, lo []float64) {
	k.grow(len(c) - 1)
	k.c, k.lo = c, lo
	mag := k.mag[:len(c)]
	for i, x := range c {
		mag[i] = math.Abs(x)
	}
}

// addPair adds a conjugate pair.
func (k *Kernel) addPair(x, y float64) {
	i := k.pairs
	k.x[i], k.y[i], k.yy[i], k.restless[i] = x, y, y*y, 1
	k.pairs++
}

// removePair removes a conjugate pair; the last one takes its place.
func (k *Kernel) removePair(i int) {
	k.pairs--
	l := k.pairs
	k.x[i], k.y[i], k.yy[i], k.restless[i] = k.x[l], k.y[l], k.yy[l], k.restless[l]
}

// addReal adds a real point in its place.
func (k *Kernel) addReal(x, restless float64) {
	i := k.reals
	k.reals++
	for ; i > 0 && k.r[i-1] > x; i-- {
		k.r[i], k.restlessR[i] = k.r[i-1], k.restlessR[i-1]
	}
	k.r[i], k.restlessR[i] = x, restless
}

// removeReals removes the real points i and i+1.
func (k *Kernel) removeReals(i int) {
	copy(k.r[i:k.reals], k.r[i+2:k.reals])
	copy(k.restlessR[i:k.reals], k.restlessR[i+2:k.reals])
	k.reals -= 2
}
