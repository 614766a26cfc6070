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
//
// Every product that enters a sum is rounded explicitly, so that no processor fuses the two: the
// answer has the same bits everywhere.
package rootkernel

// A Kernel owns the working storage of a solution. The zero value is ready for use; it is
// not for concurrent use.
type Kernel struct {
	n  int
	c  []float64 // coefficients by power
	lo []float64 // what c lacks to the exact coefficients, to nearest; nil if nothing

	// Mirrored says that the roots are symmetric about the imaginary axis. The caller sets
	// it, for one polynomial.
	Mirrored bool
	// Left is what the last Certify did not prove.
	Left []Point

	careful   bool
	exponents []int // of the coefficients; nil if all are 0
	frame     frame

	pairCount int  // conjugate pairs
	realCount int  // real points, ascending
	shift     bool // whether the next sweep pairs the real points the other way

	// The points stand in the small arrays if they fit, so that a Kernel may live on the
	// stack.
	smallPairs [smallDegree/2 + 1]pair
	smallReals [smallDegree]real
	largePairs []pair
	largeReals []real
}

const smallDegree = 24

// A pair is the upper one of two conjugate points.
type pair struct {
	x, y, yy float64 // yy is y²
	restless bool    // it still moves
}

// A real is a real point.
type real struct {
	x        float64
	restless bool
}

// Set takes a polynomial: coefficients by power, the first and the last not zero, and what
// they lack to the exact ones (nil if nothing). The kernel keeps the slices and never
// changes them.
func (k *Kernel) Set(c, lo []float64) {
	k.n = len(c) - 1
	if k.n > smallDegree && len(k.largeReals) < k.n {
		k.largePairs = make([]pair, k.n/2+1)
		k.largeReals = make([]real, k.n)
	}
	k.c, k.lo = c, lo
	k.careful, k.exponents, k.Mirrored = false, nil, false
}

// room returns the storage of all points.
func (k *Kernel) room() ([]pair, []real) {
	if k.n > smallDegree {
		return k.largePairs, k.largeReals
	}
	return k.smallPairs[:], k.smallReals[:]
}

// pairs returns the conjugate pairs.
func (k *Kernel) pairs() []pair {
	if k.n > smallDegree {
		return k.largePairs[:k.pairCount]
	}
	return k.smallPairs[:k.pairCount]
}

// reals returns the real points.
func (k *Kernel) reals() []real {
	if k.n > smallDegree {
		return k.largeReals[:k.realCount]
	}
	return k.smallReals[:k.realCount]
}

// addPair adds a conjugate pair.
func (k *Kernel) addPair(x, y float64) {
	pairs, _ := k.room()
	pairs[k.pairCount] = pair{x, y, y * y, true}
	k.pairCount++
}

// removePair removes a conjugate pair; the last one takes its place.
func (k *Kernel) removePair(i int) {
	pairs, _ := k.room()
	k.pairCount--
	pairs[i] = pairs[k.pairCount]
}

// addReal adds a real point in its place.
func (k *Kernel) addReal(x float64) {
	_, reals := k.room()
	i := k.realCount
	k.realCount++
	for ; i > 0 && reals[i-1].x > x; i-- {
		reals[i] = reals[i-1]
	}
	reals[i] = real{x, true}
}

// removeReals removes the real points i < j.
func (k *Kernel) removeReals(i, j int) {
	reals := k.reals()
	copy(reals[j:], reals[j+1:])
	copy(reals[i:], reals[i+1:])
	k.realCount -= 2
}

// Points returns all points, the upper one of each pair.
func (k *Kernel) Points() []Point {
	points := make([]Point, 0, k.n)
	for _, q := range k.pairs() {
		points = append(points, Point{q.x, q.y})
	}
	for _, q := range k.reals() {
		points = append(points, Point{q.x, 0})
	}
	return points
}
