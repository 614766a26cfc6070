package locus

import "math"

// Isolation of the positive roots of a polynomial in float64. Every coefficient c[i] comes with a
// bound e[i] on its error, and every conclusion holds for all polynomials within the bounds; where
// none holds the functions say so, and exact arithmetic decides.

// floatRoots is the highest number of roots that the stages in float64 work with.
const floatRoots = 2 * floatDegree

// A floatRoot is a simple root in [x - d, x + d].
type floatRoot struct {
	x, d   float64
	rising bool // the polynomial goes from negative to positive there
}

// An isolator finds roots of w(x) = Σ c[i]·xⁱ.
type isolator struct {
	c, e  []float64
	count int
	found [floatRoots]floatRoot
}

// signOf returns the sign of a number that is within e of v, 0 if it is not certain.
func signOf(v, e float64) int {
	switch {
	case v > e:
		return +1
	case -v > e:
		return -1
	}
	return 0
}

// variations returns bounds on the number of sign changes in the list.
func variations(c, e []float64) (least, most int) {
	last, open := 0, 0 // open: uncertain numbers since the last certain one
	for i, v := range c {
		s := signOf(v, e[i])
		switch {
		case s == 0:
			if e[i] != 0 || v != 0 {
				open++
			}
			continue
		case last == 0:
			most += open
		case s != last:
			least++
			// Changes between two of opposite sign are odd in number.
			most += 1 + open&^1
		default:
			most += (open + 1) &^ 1
		}
		last, open = s, 0
	}
	return least, most + open
}

// positive finds all positive roots, in ascending order, each simple. scale is a power of two
// about as large as they are.
func (s *isolator) positive(scale float64) bool {
	n := len(s.c) - 1
	if n < 1 {
		return true
	}
	if signOf(s.c[0], s.e[0]) == 0 || signOf(s.c[n], s.e[n]) == 0 {
		return false
	}
	least, most := variations(s.c, s.e)
	switch {
	case most == 0:
		return true
	case least == 1 && most == 1:
		return s.refine(0, math.Inf(1), scale)
	}
	// With x = scale·t/(1-t), (1-t)ⁿ·w(x) = Σ c[i]·scaleⁱ·tⁱ·(1-t)^(n-i): the coefficients in
	// Bernstein's basis on [0, 1] are c[i]·scaleⁱ/binomial(n, i).
	var room [2 * (floatRoots + 1)]float64
	b, e := room[:n+1], room[n+1:2*n+2]
	binomial, power := 1.0, 1.0
	for i := range b {
		f := power / binomial
		b[i] = s.c[i] * f
		e[i] = s.e[i]*f*(1+8*unitRoundoff) + (3*unitRoundoff)*math.Abs(b[i])
		// Exact up to 2⁵³, which binomials of the degrees allowed here exceed by roundings only.
		binomial = binomial * float64(n-i) / float64(i+1)
		e[i] += float64(2*i) * unitRoundoff * math.Abs(b[i])
		if s.c[i] != 0 || s.e[i] != 0 {
			e[i] += minNormal // for what underflows
		}
		power *= scale
	}
	return s.bernstein(b, e, 0, 1, scale, 0)
}

// bernstein finds the roots for t in (t0, t1), where the polynomial has the given coefficients in
// Bernstein's basis: it has as many roots there as these have sign changes, or fewer by an even
// number (Descartes' rule in the form of Pólya and Schoenberg). The interval is halved by de
// Casteljau's algorithm until they are none or one.
func (s *isolator) bernstein(b, e []float64, t0, t1, scale float64, depth int) bool {
	least, most := variations(b, e)
	if most == 0 {
		return true
	}
	n := len(b) - 1
	if least == 1 && most == 1 && signOf(b[0], e[0]) != 0 && signOf(b[n], e[n]) != 0 {
		// Where the control polygon crosses the axis is a first guess.
		i := 0
		for signOf(b[i+1], e[i+1]) == signOf(b[0], e[0]) || signOf(b[i+1], e[i+1]) == 0 {
			i++
		}
		t := t0 + (t1-t0)*(float64(i)+b[i]/(b[i]-b[i+1]))/float64(n)
		// The ends are dyadic numbers of few bits, so that 1-t is exact.
		return s.refineFrom(scale*(t0/(1-t0))*(1-4*unitRoundoff), scale*(t1/(1-t1))*(1+4*unitRoundoff), scale*(t/(1-t)), b[0] > 0)
	}
	if depth > 40 {
		return false
	}
	var room, trial [2 * (floatRoots + 1)]float64
	lb, le := room[:n+1], room[n+1:2*n+2]
	tb, te := trial[:n+1], trial[n+1:2*n+2]
	for _, share := range [...]float64{0.5, 0.4375, 0.59375} {
		rest := 1 - share
		// The left part gets the first column of the scheme, the right part stays in b.
		copyB, copyE := lb, le
		copyB[0], copyE[0] = b[0], e[0]
		copy(tb, b)
		copy(te, e)
		if share == 0.5 {
			for k := 1; k <= n; k++ {
				for i := 0; i <= n-k; i++ {
					v := 0.5 * (tb[i] + tb[i+1])
					te[i] = 0.5*(te[i]+te[i+1]) + unitRoundoff*math.Abs(v)
					tb[i] = v
				}
				copyB[k], copyE[k] = tb[0], te[0]
			}
		} else {
			for k := 1; k <= n; k++ {
				for i := 0; i <= n-k; i++ {
					x, y := float64(rest*tb[i]), float64(share*tb[i+1])
					te[i] = rest*te[i] + share*te[i+1] + (2*unitRoundoff)*(math.Abs(x)+math.Abs(y))
					tb[i] = x + y
				}
				copyB[k], copyE[k] = tb[0], te[0]
			}
		}
		// What the bounds themselves were rounded.
		slack := 1 + float64(4*n)*unitRoundoff
		for i := range te {
			te[i] = te[i]*slack + minNormal
			copyE[i] = copyE[i]*slack + minNormal
		}
		if signOf(lb[n], le[n]) == 0 {
			continue // a root beside the cut
		}
		middle := t0 + share*(t1-t0)
		return s.bernstein(lb, le, t0, middle, scale, depth+1) && s.bernstein(tb, te, middle, t1, scale, depth+1)
	}
	return false
}

// refine is refineFrom without a guess.
func (s *isolator) refine(lo, hi, guess float64) bool {
	return s.refineFrom(lo, hi, guess, s.c[0] > 0)
}

// refineFrom narrows the only root in (lo, hi), before which w is positive or not, and proves by
// signs that it is in an interval of a few last places. hi may be infinite.
func (s *isolator) refineFrom(lo, hi, x float64, positive bool) bool {
	n := len(s.c) - 1
	lo0, hi0 := lo, hi
	if !(x > lo && x < hi) {
		x = inner(lo, hi)
	}
	var y, slope float64
	for range 60 {
		y, slope = s.c[n], 0
		for i := n - 1; i >= 0; i-- {
			slope = float64(slope*x) + y
			y = float64(y*x) + s.c[i]
		}
		if (y > 0) == positive {
			lo = x
		} else {
			hi = x
		}
		next := x - y/slope
		if !(next > lo && next < hi) {
			if math.Abs(next-x) <= 8*unitRoundoff*x {
				break
			}
			next = inner(lo, hi)
		}
		done := math.Abs(next-x) <= 0x1p-40*x
		x = next
		if done {
			// Newton's method squares what is left.
			break
		}
	}
	// A bound on the error of w near x, evaluated beyond it.
	far := x * (1 + 0x1p-30)
	var size, given float64
	for i := n; i >= 0; i-- {
		size = size*far + math.Abs(s.c[i])
		given = given*far + s.e[i]
	}
	bound := (float64(2*n+2)*unitRoundoff*size+given)*(1+0x1p-40) + minNormal
	d := 2.5*bound/math.Abs(slope) + 4*unitRoundoff*x
	if !(d < 0x1p-31*x) {
		return false
	}
	low, high := x-d, x+d
	if !(s.at(low) > bound && s.at(high) < -bound) && !(s.at(low) < -bound && s.at(high) > bound) {
		// The slope was taken one step earlier; once more with room.
		d *= 16
		low, high = x-d, x+d
		if !(d < 0x1p-31*x) || !(s.at(low) > bound && s.at(high) < -bound) && !(s.at(low) < -bound && s.at(high) > bound) {
			return false
		}
	}
	// A sign change within (lo0, hi0) is the root; one that sticks out might be a neighbour's.
	if low <= lo0 && lo0 > 0 || high >= hi0 {
		return false
	}
	if s.count == len(s.found) {
		return false
	}
	s.found[s.count] = floatRoot{x, d, !positive}
	s.count++
	return true
}

func (s *isolator) at(x float64) float64 {
	var y float64
	for i := len(s.c) - 1; i >= 0; i-- {
		y = float64(y*x) + s.c[i]
	}
	return y
}

// inner returns a point between lo ≥ 0 and hi, which may be infinite.
func inner(lo, hi float64) float64 {
	switch {
	case math.IsInf(hi, 1) && lo == 0:
		return 1
	case math.IsInf(hi, 1):
		return 4 * lo
	case lo == 0:
		return hi / 4
	case hi > 4*lo:
		return math.Sqrt(lo) * math.Sqrt(hi)
	}
	return lo + (hi-lo)/2
}
