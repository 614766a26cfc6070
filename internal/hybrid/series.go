package hybrid

import "math"

// terms is the number of coefficients kept of a Taylor series. A segment of a linear system
// with matrix A can then be about 2/‖A‖ long: 2²⁶/26! = 1.7e-19.
const terms = 26

// A series is a Taylor polynomial in the time since the start of its segment.
type series [terms]float64

func (s *series) at(tau float64) float64 {
	v := 0.0
	for i := terms - 1; i >= 0; i-- {
		v = v*tau + s[i]
	}
	return v
}

// slopeAt returns the derivative.
func (s *series) slopeAt(tau float64) float64 {
	v := 0.0
	for i := terms - 1; i >= 1; i-- {
		v = v*tau + float64(i)*s[i]
	}
	return v
}

// shifted writes the series about offset into out.
func (s *series) shifted(offset float64, out *series) {
	*out = *s
	if offset == 0 {
		return
	}
	for i := 0; i < terms-1; i++ {
		for j := terms - 2; j >= i; j-- {
			out[j] += offset * out[j+1]
		}
	}
}

// derivative returns the derivative as a series.
func (s *series) derivative() series {
	var d series
	for i := 1; i < terms; i++ {
		d[i-1] = float64(i) * s[i]
	}
	return d
}

// size returns a bound on |s| over [0, h].
func (s *series) size(h float64) float64 {
	v := 0.0
	for i := terms - 1; i >= 0; i-- {
		v = v*h + math.Abs(s[i])
	}
	return v
}

// binomials holds C(i, j) for the change to the Bernstein basis.
var binomials = func() (c [terms][terms]float64) {
	for i := range c {
		c[i][0] = 1
		for j := 1; j <= i; j++ {
			c[i][j] = c[i-1][j-1]
			if j < i {
				c[i][j] += c[i-1][j]
			}
		}
	}
	return c
}()

// bernstein holds the coefficients of a polynomial of degree terms-1 on an interval.
type bernstein [terms]float64

func (s *series) bernstein(h float64) bernstein {
	const n = terms - 1
	var scaled, b bernstein
	power := 1.0
	for i := range scaled {
		scaled[i] = s[i] * power / binomials[n][i]
		power *= h
	}
	for j := range b {
		for i := 0; i <= j; i++ {
			b[j] += binomials[j][i] * scaled[i]
		}
	}
	return b
}

// halves splits by de Casteljau's rule.
func (b *bernstein) halves() (left, right bernstein) {
	work := *b
	for i := range work {
		left[i] = work[0]
		right[terms-1-i] = work[terms-1-i]
		for j := 0; j < terms-1-i; j++ {
			work[j] = (work[j] + work[j+1]) / 2
		}
	}
	return left, right
}

// changes counts the sign changes of the coefficients; those within noise of zero count as 0.
func (b *bernstein) changes(noise float64) int {
	n, last := 0, 0
	for _, v := range b {
		sign := 0
		if v > noise {
			sign = 1
		} else if v < -noise {
			sign = -1
		}
		if sign != 0 && last != 0 && sign != last {
			n++
		}
		if sign != 0 {
			last = sign
		}
	}
	return n
}

// roots appends the places in (0, h) where the series changes its sign, ascending, by
// Descartes' rule in the Bernstein basis (Lane and Riesenfeld, Bounds on a polynomial, BIT 21
// (1981) 112–117): no sign change, no root; one, exactly one; else the interval is halved.
// Values below noise count as zero: touches and double roots closer than that are none.
func (s *series) roots(h, noise float64, found []float64) []float64 {
	b := s.bernstein(h)
	return splitRoots(s, &b, 0, h, noise, 0, found)
}

const deepest = 48

func splitRoots(s *series, b *bernstein, lo, hi, noise float64, depth int, found []float64) []float64 {
	switch n := b.changes(noise); {
	case n == 0:
		return found
	case n == 1:
		return append(found, narrow(s, lo, hi))
	case depth == deepest:
		if (b[0] > 0) != (b[terms-1] > 0) {
			return append(found, lo+(hi-lo)/2)
		}
		return found
	}
	left, right := b.halves()
	mid := lo + (hi-lo)/2
	found = splitRoots(s, &left, lo, mid, noise, depth+1, found)
	// A root on the middle itself shows as a change between the halves only.
	if v := left[terms-1]; math.Abs(v) <= noise {
		before, after := firstSign(&left, noise, true), firstSign(&right, noise, false)
		if before*after < 0 && left.changes(noise) == 0 && right.changes(noise) == 0 {
			found = append(found, mid)
		}
	}
	return splitRoots(s, &right, mid, hi, noise, depth+1, found)
}

// firstSign returns the sign of the coefficient beyond noise that is nearest to an end.
func firstSign(b *bernstein, noise float64, fromEnd bool) int {
	for i := range b {
		v := b[i]
		if fromEnd {
			v = b[terms-1-i]
		}
		if v > noise {
			return 1
		}
		if v < -noise {
			return -1
		}
	}
	return 0
}

// narrow finds the one root in (lo, hi) by Newton steps kept inside a bracket.
func narrow(s *series, lo, hi float64) float64 {
	rising := s.at(hi) > s.at(lo)
	x := lo + (hi-lo)/2
	for i := 0; i < 200; i++ {
		v := s.at(x)
		if v == 0 {
			return x
		}
		if (v > 0) == rising {
			hi = x
		} else {
			lo = x
		}
		next := x - v/s.slopeAt(x)
		if !(lo < next && next < hi) {
			next = lo + (hi-lo)/2
		}
		if next == x || next == lo || next == hi || math.Abs(next-x) <= 0x1p-52*math.Abs(x) {
			return next
		}
		x = next
	}
	return x
}
