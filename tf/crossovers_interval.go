package tf

import "math"

// unitRoundoff is half the distance from 1 to the next float64.
const unitRoundoff = 1.0 / (1 << 53)

// minNormal is the smallest normal float64; it pays for products that underflow.
const minNormal = 0x1p-1022

// An interval polynomial has coefficients known to within bounds, by power: the true c[i] is
// within e[i] of the stored one. A coefficient with e[i] = 0 is exact.
type intervalPoly struct{ c, e []float64 }

func newIntervalPoly(size int) intervalPoly {
	return intervalPoly{make([]float64, size), make([]float64, size)}
}

// addProduct adds f·a·b·x^shift to p, f being ±1 or ±2. What rounding loses is collected in
// the bounds, so that sums of small integers stay exact and are known to be.
func (p intervalPoly) addProduct(f float64, a, b intervalPoly, shift int) {
	for i, x := range a.c {
		ex := a.e[i]
		if x == 0 && ex == 0 {
			continue
		}
		x *= f
		ex *= math.Abs(f)
		for j, y := range b.c {
			ey := b.e[j]
			z := x * y
			lost := math.Abs(math.FMA(x, y, -z))
			k := i + j + shift
			s := p.c[k] + z
			t := s - p.c[k]
			lost += math.Abs((p.c[k] - (s - t)) + (z - t))
			if ex != 0 || ey != 0 {
				lost += ex*(math.Abs(y)+ey) + math.Abs(x)*ey
			}
			p.c[k] = s
			if lost != 0 {
				// The factor pays for the rounding of the bound itself.
				p.e[k] = (p.e[k] + lost) * (1 + 8*unitRoundoff)
			}
		}
	}
}

// addWronskian adds a′b - ab′ to p, whose size is at least len(a)+len(b)-2: the numerator of
// the derivative of a/b. Terms that cancel identically are left out.
func (p intervalPoly) addWronskian(a, b intervalPoly) {
	for i, x := range a.c {
		ex := a.e[i]
		if x == 0 && ex == 0 {
			continue
		}
		for j, y := range b.c {
			if i == j {
				continue
			}
			ey := b.e[j]
			f := float64(i - j)
			z := x * y
			lost := math.Abs(math.FMA(x, y, -z)) + ex*(math.Abs(y)+ey) + math.Abs(x)*ey
			zf := f * z
			k := i + j - 1
			s := p.c[k] + zf
			if lost != 0 {
				lost = math.Abs(f)*lost + unitRoundoff*math.Abs(zf)
			}
			t := s - p.c[k]
			lost += math.Abs((p.c[k] - (s - t)) + (zf - t))
			p.c[k] = s
			if lost != 0 {
				p.e[k] = (p.e[k] + lost) * (1 + 8*unitRoundoff)
			}
		}
	}
}

// add adds f·a to p, f being ±1 or ±2.
func (p intervalPoly) add(f float64, a intervalPoly) {
	for i, x := range a.c {
		z := f * x
		s := p.c[i] + z
		t := s - p.c[i]
		lost := math.Abs((p.c[i]-(s-t))+(z-t)) + math.Abs(f)*a.e[i]
		p.c[i] = s
		if lost != 0 {
			p.e[i] = (p.e[i] + lost) * (1 + 8*unitRoundoff)
		}
	}
}

// trim drops leading coefficients that are exactly zero, and returns how many trailing ones
// are.
func (p intervalPoly) trim() (q intervalPoly, low int) {
	n := len(p.c)
	for n > 0 && p.c[n-1] == 0 && p.e[n-1] == 0 {
		n--
	}
	for low < n && p.c[low] == 0 && p.e[low] == 0 {
		low++
	}
	return intervalPoly{p.c[:n], p.e[:n]}, low
}

// at returns p(x) for x ≥ 0 with a bound on the whole error: that of the coefficients and,
// as in Higham, Accuracy and Stability of Numerical Algorithms, 2nd ed., SIAM 2002, Algorithm
// 5.1, that of Horner's rule. Fused multiply-adds round less.
func (p intervalPoly) at(x float64) (y, bound float64) {
	var m float64
	for i := len(p.c) - 1; i >= 0; i-- {
		y = float64(y*x) + p.c[i]
		bound = float64(bound*x) + p.e[i]
		m = float64(m*x) + math.Abs(y) + minNormal
	}
	return y, (bound + 3*unitRoundoff*m) * (1 + float64(4*len(p.c))*unitRoundoff)
}

// sign returns the proven sign of a number known to within e, or 0.
func sign(c, e float64) int {
	switch {
	case c > e:
		return +1
	case c < -e:
		return -1
	}
	return 0
}

// A bracket holds exactly one root of a polynomial, of odd multiplicity as far as signs go.
type bracket struct {
	lo, hi float64 // 0 ≤ lo < hi ≤ +Inf
	guess  float64 // between them
	below  int     // the sign of the polynomial between lo and the root
}

// mobius maps y in (0, ∞) to x = (a·y + b)/(c·y + d).
type mobius struct{ a, b, c, d float64 }

func (m mobius) at(y float64) float64 { return (m.a*y + m.b) / (m.c*y + m.d) }

// maxSplits bounds the work of positiveRoots.
const maxSplits = 96

// positiveRoots isolates the positive roots of p and is ok only if they are proven simple and
// complete. Ends of the brackets are rounded; between the exact ends stands exactly one root.
//
// Method: Descartes' rule of signs in the Bernstein basis, an interval being split by de
// Casteljau's scheme as long as the rule is not sharp (J. M. Lane and R. F. Riesenfeld, Bounds
// on a polynomial, BIT 21 (1981) 112–117). A bound on the error of every coefficient is
// carried along, and a sign counts only if it is beyond the bound. An interval is split where
// the terms of two neighbouring changes of sign balance, so that roots of all scales are
// parted equally fast.
func (p intervalPoly) positiveRoots() (found []bracket, ok bool) {
	p, low := p.trim()
	p = intervalPoly{p.c[low:], p.e[low:]}
	n := len(p.c) - 1
	if n < 1 {
		return nil, n == 0 && sign(p.c[0], p.e[0]) != 0
	}
	if n > maxFastDegree {
		return nil, false
	}
	if sign(p.c[0], p.e[0]) == 0 || sign(p.c[n], p.e[n]) == 0 {
		return nil, false
	}
	work := make([]float64, 0, 8*(n+1))
	type node struct {
		intervalPoly
		m mobius
	}
	cut := func() intervalPoly {
		if len(work)+2*(n+1) > cap(work) {
			work = make([]float64, 0, 16*(n+1))
		}
		k := len(work)
		work = work[:k+2*(n+1)]
		return intervalPoly{work[k : k+n+1 : k+n+1], work[k+n+1 : k+2*(n+1) : k+2*(n+1)]}
	}
	stack := make([]node, 1, 8)
	stack[0] = node{p, mobius{1, 0, 0, 1}}
	for splits := 0; len(stack) > 0; {
		v := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		changes, balance, guess := v.variations()
		switch changes {
		case 0:
			continue
		case 1:
			b := bracket{lo: v.m.b / v.m.d, hi: v.m.a / v.m.c, guess: v.m.at(guess), below: sign(v.c[0], v.e[0])}
			if v.m.c == 0 {
				b.hi = math.Inf(1)
			}
			if !(b.lo < b.hi) || math.IsNaN(b.guess) {
				return nil, false
			}
			found = append(found, b)
			continue
		}
		left, right := cut(), cut()
		done := false
		for try := 0; try < 6 && splits < maxSplits; try++ {
			splits++
			if v.split(balance, left, right) {
				done = true
				break
			}
			balance *= 1.4375 // the point was too near to a root
		}
		if !done {
			return nil, false
		}
		// y = balance·y′/(2 + y′) on the left, balance·(1 + 2y′) on the right.
		m := v.m
		m.a *= balance
		m.c *= balance
		stack = append(stack,
			node{right, mobius{2 * m.a, m.a + m.b, 2 * m.c, m.c + m.d}},
			node{left, mobius{m.a + m.b, 2 * m.b, m.c + m.d, 2 * m.d}})
	}
	return found, true
}

// maxFastDegree is the largest degree that the float64 stages take; up to there every binomial
// coefficient is a float64.
const maxFastDegree = 56

// variations returns 0 or 1 if that is the proven number of positive roots, and guess is then
// a point near the root; otherwise 2, and balance is a point at which to split.
func (p intervalPoly) variations() (changes int, balance, guess float64) {
	last, lastAt := sign(p.c[0], p.e[0]), 0
	doubt := -1 // power whose sign is not known, between equal signs
	pending := -1
	var first, second, count = 0.0, 0.0, 0
	for i := 1; i < len(p.c); i++ {
		s := sign(p.c[i], p.e[i])
		if s == 0 {
			if p.c[i] != 0 || p.e[i] != 0 {
				pending = i
			}
			continue
		}
		if s != last {
			count++
			first, second = second, math.Pow(math.Abs(p.c[lastAt]/p.c[i]), 1/float64(i-lastAt))
		} else if pending > lastAt && doubt < 0 {
			doubt = i
			balance = math.Pow(math.Abs(p.c[lastAt]/p.c[i]), 1/float64(i-lastAt))
		}
		last, lastAt = s, i
	}
	switch {
	case count == 0 && doubt < 0:
		return 0, 0, 0
	case count == 1 && doubt < 0:
		return 1, 0, second
	case count >= 2:
		// The last two changes; deeper ones have their turn in the part below.
		balance = math.Sqrt(first) * math.Sqrt(second)
	}
	return 2, balance, 0
}

// split writes the polynomials of the parts below and above y, in variables that run through
// (0, ∞) on each, and reports whether the sign at y is proven.
func (p intervalPoly) split(y float64, left, right intervalPoly) bool {
	n := len(p.c) - 1
	// Bernstein coefficients of the interval (0, ∞) with y in its middle.
	power := 1.0
	binomial := binomials(n)
	scale := 1.0
	if y > 1 { // keep the largest power at 1
		scale = math.Pow(y, -float64(n))
	}
	if !(scale > 0x1p-900) {
		return false
	}
	for i := range p.c {
		f := power * scale / binomial[i]
		right.c[i] = p.c[i] * f
		right.e[i] = p.e[i] * f
		if right.c[i] != 0 || right.e[i] != 0 || p.c[i] != 0 {
			// Relative error of power: (i-1)u, and four operations more. A common error of
			// scale does not matter.
			right.e[i] = (right.e[i] + float64(i+6)*unitRoundoff*math.Abs(right.c[i]) + minNormal) * (1 + 4*unitRoundoff)
		}
		power *= y
	}
	left.c[0], left.e[0] = right.c[0], right.e[0]
	for r := 1; r <= n; r++ {
		for i := 0; i <= n-r; i++ {
			m := 0.5 * (right.c[i] + right.c[i+1])
			right.e[i] = (0.5*(right.e[i]+right.e[i+1]) + unitRoundoff*math.Abs(m)) * (1 + 4*unitRoundoff)
			right.c[i] = m
		}
		left.c[r], left.e[r] = right.c[0], right.e[0]
	}
	if sign(right.c[0], right.e[0]) == 0 {
		return false
	}
	for i, b := range binomial[:n+1] {
		left.c[i] *= b
		left.e[i] = (left.e[i]*b + 2*unitRoundoff*math.Abs(left.c[i])) * (1 + 4*unitRoundoff)
		right.c[i] *= b
		right.e[i] = (right.e[i]*b + 2*unitRoundoff*math.Abs(right.c[i])) * (1 + 4*unitRoundoff)
	}
	return true
}

// pascal holds the binomial coefficients of every degree up to maxFastDegree, exactly.
var pascal = func() (rows [maxFastDegree + 1][maxFastDegree + 1]float64) {
	for n := range rows {
		rows[n][0] = 1
		for k := 1; k <= n; k++ {
			rows[n][k] = rows[n-1][k-1] + rows[n-1][k]
		}
	}
	return rows
}()

func binomials(n int) *[maxFastDegree + 1]float64 { return &pascal[n] }
