package exact

import "math"

// FilterLeftOf answers as [LeftOf] does if float64 can: coefficients by power, rounded if each may
// be wrong by half a place.
func FilterLeftOf(coefficients []float64, rounded bool, sigma float64) (Count, bool) {
	var f filtered
	if !f.fromFloats(coefficients, rounded) {
		return Count{}, false
	}
	return f.leftOf(bounded{sigma, 0})
}

// FilterInSector answers as [InSector] does if float64 can; see [FilterLeftOf].
func FilterInSector(coefficients []float64, rounded bool, zeta float64) (Count, bool) {
	var f filtered
	if !f.fromFloats(coefficients, rounded) {
		return Count{}, false
	}
	return f.inSector(bounded{zeta, 0})
}

// FilterInDisc answers as [InDisc] does if float64 can; see [FilterLeftOf].
func FilterInDisc(coefficients []float64, rounded bool, radius float64) (Count, bool) {
	var f filtered
	if !f.fromFloats(coefficients, rounded) {
		return Count{}, false
	}
	return f.inDisc(bounded{radius, 0})
}

// leftOf counts by the signs of the first column of Routh's table of p(s + sigma), and is ok only
// if all of them are certain: then no root is on the line, but those at 0 on the axis.
//
// Source: E. J. Routh, A Treatise on the Stability of a Given State of Motion, Macmillan 1877;
// in today's form Gantmacher, The Theory of Matrices, vol. 2, Chelsea 1959, ch. XV, § 3.
func (f *filtered) leftOf(sigma bounded) (Count, bool) {
	zeros := 0
	if sigma == (bounded{}) {
		zeros = f.stripZeros()
	}
	c := f.c
	n := len(c) - 1
	if sigma != (bounded{}) {
		shift := sigma.times2(-f.k)
		for i := 0; i < n; i++ {
			for j := n - 1; j >= i; j-- {
				c[j] = c[j].add(c[j+1].mul(shift))
			}
		}
	}
	// The rows of the table stand interleaved in c, from the highest power down: row i has the
	// entries i, i-2, …, and the next row the entries i-1, i-3, …; each step turns row i into
	// row i-2.
	right := 0
	last := c[n].sign()
	for i := n; i > 0; i-- {
		s := c[i-1].sign()
		if s == 0 || last == 0 {
			return Count{}, false
		}
		if s != last {
			right++
		}
		last = s
		if i > 1 {
			q := c[i].div(c[i-1])
			for j := i - 2; j > 0; j -= 2 {
				c[j] = c[j].sub(q.mul(c[j-1]))
			}
		}
	}
	return Count{Inside: n - right, Boundary: zeros, Outside: right}, true
}

// inDisc counts by the Schur–Cohn reduction, and is ok only if all its signs are certain: then no
// root is on the circle.
//
// With p* the reversal of p, |p| = |p*| on the unit circle, so that q = p(0)·p - p*(0)·p* has as
// many zeros inside as the one of p and p* that has the greater factor (Rouché), and p* has
// as many as p has outside. The degree of q is lower.
// Source: A. Cohn, Über die Anzahl der Wurzeln einer algebraischen Gleichung in einem Kreise,
// Math. Z. 14 (1922) 110–148; M. Marden, Geometry of Polynomials, 2nd ed., AMS 1966, § 42.
func (f *filtered) inDisc(radius bounded) (Count, bool) {
	c := f.c
	n := len(c) - 1
	r := radius.times2(-f.k)
	if r.v < minNormal || math.IsInf(r.v, 0) {
		return Count{}, false
	}
	power := bounded{1, 0}
	for i := 1; i <= n; i++ {
		power = power.mul(r)
		c[i] = c[i].mul(power)
	}
	// inside(p) = offset + direction·inside(c[:i+1])
	offset, direction := 0, 1
	for i := n; i > 0; i-- {
		a, b := c[0], c[i]
		// A scale by the greater of the two keeps numbers in range.
		scale := math.Ldexp(1, -math.Ilogb(max(math.Abs(a.v), math.Abs(b.v))))
		if scale == 0 || math.IsInf(scale, 0) {
			return Count{}, false
		}
		a, b = a.scaled(scale), b.scaled(scale)
		for j, m := 0, i; j <= m; j, m = j+1, m-1 {
			x, y := c[j], c[m]
			c[j] = a.mul(x).sub(b.mul(y))
			c[m] = a.mul(y).sub(b.mul(x))
		}
		switch c[0].sign() {
		case 0:
			return Count{}, false
		case -1:
			offset, direction = offset+direction*i, -direction
		}
	}
	return Count{Inside: offset, Outside: n - offset}, true
}

// inSector counts by the argument principle, as [InSector] does (the letters are explained
// there), with the signs of a chain of remainders in place of the Cauchy index. It is ok only if
// all of them are certain: then no root but 0 is on the boundary.
//
// The argument is taken of p·e^(-jα), with an α for which both ends of the ray, and so the first
// and the last coefficients of real and imaginary part, are far from the axes.
func (f *filtered) inSector(zeta bounded) (Count, bool) {
	if zeta.e != 0 {
		return Count{}, false // its arc cosine would need a bound
	}
	zeros := f.stripZeros()
	c := f.c
	m := len(c) - 1
	if m == 0 {
		return Count{Boundary: zeros}, true
	}
	phi := math.Acos(zeta.v)
	// Where both ends of the ray lie in the same direction or in opposite ones, the first
	// remainder nearly loses its constant. A further root inside, at -1, turns one end by φ.
	added := 0
	if end := math.Mod(float64(m)*phi, math.Pi); (end < 0.3 || end > math.Pi-0.3) && phi > 0.3 && m < filterDegree {
		c = append(c, bounded{})
		for i := m; i >= 0; i-- {
			c[i+1] = c[i+1].add(c[i])
		}
		m, added = m+1, 1
	}
	beta := math.Mod(float64(m)*phi, math.Pi/2)
	alpha := math.Pi/4 - beta/2
	if beta > math.Pi/4 {
		alpha = math.Pi/2 - beta/2
	}
	// The α meant is the one that has exactly these two for its direction.
	cosine, sine := bounded{math.Cos(alpha), 0}, bounded{math.Sin(alpha), 0}

	// a = V, b = U, both turned by α
	var room [2][filterDegree + 1]bounded
	a, b := room[0][:m+1], room[1][:m+1]
	one := bounded{1, 0}
	across := one.sub(zeta).mul(one.add(zeta)).sqrt()
	x := bounded{-zeta.v, 0}
	twice := x.scaled(2)
	t, tNext := one, x
	w, wNext := bounded{}, one
	for i := range c {
		cos, sin := t, across.mul(w)
		a[i] = c[i].mul(sin.mul(cosine).sub(cos.mul(sine)))
		b[i] = c[i].mul(cos.mul(cosine).add(sin.mul(sine)))
		t, tNext = tNext, twice.mul(tNext).sub(t)
		w, wNext = wNext, twice.mul(wNext).sub(w)
	}

	// Sign changes of the chain at 0 less those at infinity.
	index := 0
	lastZero, lastInfinity := a[0].sign(), a[m].sign()
	next := func() bool { // joins b to the chain
		s, h := b[0].sign(), b[len(b)-1].sign()
		if s*h*lastZero*lastInfinity == 0 {
			return false
		}
		if s != lastZero {
			index++
		}
		if h != lastInfinity {
			index--
		}
		lastZero, lastInfinity = s, h
		return true
	}
	if !next() {
		return Count{}, false
	}
	q := a[m].div(b[m])
	for i := range m {
		a[i] = q.mul(b[i]).sub(a[i])
	}
	a, b = b, a[:m]
	if !next() {
		return Count{}, false
	}
	for d := m - 1; d > 0; d-- {
		// a has degree d+1, b degree d; a becomes -rem(a, b).
		q := a[d+1].div(b[d])
		for i := 1; i <= d; i++ {
			a[i] = a[i].sub(q.mul(b[i-1]))
		}
		q = a[d].div(b[d])
		for i := 0; i < d; i++ {
			a[i] = q.mul(b[i]).sub(a[i])
		}
		a, b = b, a[:d]
		if !next() {
			return Count{}, false
		}
	}
	// The turned argument starts at -α, in (-π, 0), and ends at N·π - m·φ - α, at least π/8 from
	// a multiple of π.
	inside := index + int(math.Floor((float64(m)*phi+alpha)/math.Pi))
	return Count{Inside: inside - added, Boundary: zeros, Outside: m - inside}, true
}
