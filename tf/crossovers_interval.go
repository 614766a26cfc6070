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

// A slab hands out the polynomials of one call from one piece of memory.
type slab struct{ free []float64 }

// take returns a zero polynomial with size coefficients.
func (m *slab) take(size int) intervalPoly {
	if len(m.free) < 2*size {
		m.free = make([]float64, 16*size)
	}
	p := intervalPoly{m.free[:size:size], m.free[size : 2*size : 2*size]}
	m.free = m.free[2*size:]
	return p
}

// takeZero returns a zero polynomial from memory that may have been used before.
func (m *slab) takeZero(size int) intervalPoly {
	p := m.take(size)
	clear(p.c)
	clear(p.e)
	return p
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
func (p intervalPoly) positiveRoots(memory slab) (found []bracket, ok bool) {
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
	type node struct {
		intervalPoly
		m mobius
	}
	var nodes [8]node
	stack := append(nodes[:0], node{p, mobius{1, 0, 0, 1}})
	var used [8]intervalPoly
	spare := used[:0]
	take := func() (q intervalPoly) {
		if k := len(spare); k > 0 {
			q, spare = spare[k-1], spare[:k-1]
			return q
		}
		return memory.take(n + 1)
	}
	for splits := 0; len(stack) > 0; {
		v := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		changes, balance, guess := v.variations()
		switch changes {
		case 0:
			if splits > 0 {
				spare = append(spare, v.intervalPoly)
			}
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
			if splits > 0 {
				spare = append(spare, v.intervalPoly)
			}
			continue
		}
		left, right := take(), take()
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
		if splits > 1 || v.m.c != 0 || v.m.b != 0 {
			spare = append(spare, v.intervalPoly)
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
	var before, second [2]int // powers on both sides of the last change but one, and of the last
	count, pending := 0, -1
	doubt := [2]int{-1, -1} // equal signs with a power between whose sign is not known
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
			before, second = second, [2]int{lastAt, i}
		} else if pending > lastAt && doubt[0] < 0 {
			doubt = [2]int{lastAt, i}
		}
		last, lastAt = s, i
	}
	switch {
	case count == 0 && doubt[0] < 0:
		return 0, 0, 0
	case count == 1 && doubt[0] < 0:
		return 1, 0, p.settle(math.Ldexp(1, int(p.balance(second))))
	case count >= 2:
		// The last two changes; deeper ones have their turn in the part below.
		return 2, math.Ldexp(1, int(math.Round((p.balance(before)+p.balance(second))/2))), 0
	}
	return 2, math.Ldexp(1, int(p.balance(doubt))), 0
}

// balance returns the binary logarithm of the point where the terms of two powers are equally
// large, to about a unit.
func (p intervalPoly) balance(powers [2]int) float64 {
	i, k := powers[0], powers[1]
	return float64(exponentOf(p.c[i])-exponentOf(p.c[k])) / float64(k-i)
}

// exponentOf returns the binary exponent of a normal number.
func exponentOf(x float64) int { return int(math.Float64bits(x) >> 52 & 0x7ff) }

// settle improves a guess y at the only positive root of a polynomial with one change of
// sign. With P and Q the sums of its terms of either sign, log(P/Q) is monotone in log y, and
// Newton's iteration on it comes near from any distance.
func (p intervalPoly) settle(y float64) float64 {
	for range 8 {
		var plus, minus, dPlus, dMinus float64
		power := 1.0
		for i, c := range p.c {
			t := c * power
			power *= y
			if c > 0 {
				plus += t
				dPlus += float64(i) * t
			} else {
				minus -= t
				dMinus -= float64(i) * t
			}
		}
		step := math.Log(plus/minus) / (dPlus/plus - dMinus/minus)
		if math.IsNaN(step) || math.IsInf(step, 0) {
			return y
		}
		y *= math.Exp(-step)
		if math.Abs(step) < 0.05 {
			break
		}
	}
	return y
}

// split writes the polynomials of the parts below and above y, in variables that run through
// (0, ∞) on each, and reports whether the sign at y is proven.
func (p intervalPoly) split(y float64, left, right intervalPoly) bool {
	n := len(p.c) - 1
	// Bernstein coefficients of the interval (0, ∞) with y in its middle.
	binomial := binomials(n)
	power := 1.0
	if y > 1 { // keep the largest power at 1
		power = math.Pow(y, -float64(n))
	}
	if !(power > 0x1p-900) {
		return false
	}
	pc, pe := p.c[:n+1], p.e[:n+1]
	c, e := right.c[:n+1], right.e[:n+1]
	lc, le := left.c[:n+1], left.e[:n+1]
	for i, x := range pc {
		f := power / binomial[i]
		x *= f
		// The powers of y, and three operations more; a common error of all does not matter.
		bound := pe[i]*f + float64(i+3)*unitRoundoff*math.Abs(x)
		if pc[i] != 0 || pe[i] != 0 {
			bound += minNormal
		}
		c[i], e[i] = x, bound
		power *= y
	}
	lc[0], le[0] = c[0], e[0]
	for r := n; r > 0; r-- {
		lastC, lastE := c[0], e[0]
		for i := 1; i <= r; i++ {
			nextC, nextE := c[i], e[i]
			m := 0.5 * (lastC + nextC)
			e[i-1] = 0.5*(lastE+nextE) + unitRoundoff*math.Abs(m)
			c[i-1] = m
			lastC, lastE = nextC, nextE
		}
		lc[n-r+1], le[n-r+1] = c[0], e[0]
	}
	// The factor pays for the rounding of the bounds, which had n+8 operations each.
	safety := 1 + float64(4*n+32)*unitRoundoff
	if sign(c[0], e[0]*safety) == 0 {
		return false
	}
	for i := range c {
		b := binomial[i]
		x := lc[i] * b
		lc[i], le[i] = x, (le[i]*b+unitRoundoff*math.Abs(x))*safety
		x = c[i] * b
		c[i], e[i] = x, (e[i]*b+unitRoundoff*math.Abs(x))*safety
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
