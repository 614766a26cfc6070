package exact

import "math"

// Nearest returns the float64 nearest to the root (ties to even, ±Inf beyond the range, 0 below
// it) and on which side of it the root lies: -1 below, 0 exactly there, +1 above.
func (r Isolated) Nearest() (value float64, side int) {
	if r.Exact() {
		value = r.Lo.Float64()
		return value, r.Lo.Cmp(Float(value))
	}
	if x, ok := r.guess(); ok {
		// Proven by the signs half a place below and above.
		below := Midpoint(finite(math.Nextafter(x, math.Inf(-1))), Float(x))
		above := Midpoint(Float(x), finite(math.Nextafter(x, math.Inf(1))))
		if r.against(below) > 0 && r.against(above) < 0 {
			return x, r.against(Float(x))
		}
	}
	if r.poly.Degree() > 1 {
		r = r.narrow(54)
	}
	if r.Exact() {
		value = r.Lo.Float64()
		return value, r.Lo.Cmp(Float(value))
	}
	// From here on, a is below the root or at most Lo, b above or at least Hi.
	a, b := floatBelow(r.Lo), floatAbove(r.Hi)
	for {
		m, ok := floatBetween(a, b)
		if !ok {
			break
		}
		switch r.against(Float(m)) {
		case 0:
			return m, 0
		case -1:
			b = m
		default:
			a = m
		}
	}
	middle := Midpoint(finite(a), finite(b))
	switch r.against(middle) {
	case -1:
		return a, +1
	case +1:
		return b, -1
	}
	value = middle.Float64()
	return value, middle.Cmp(Float(value))
}

// guess returns a float64 near the root, by Newton's iteration with bisection where that leaves
// the interval. Nothing is proven.
func (r Isolated) guess() (float64, bool) {
	var f filtered
	if !f.fromPoly(r.poly) {
		return 0, false
	}
	a, b := math.Ldexp(r.Lo.Float64(), -f.k), math.Ldexp(r.Hi.Float64(), -f.k)
	if !(a < b) || math.IsInf(a, 0) || math.IsInf(b, 0) {
		return 0, false
	}
	x := a + (b-a)/2
	for range 60 {
		var y, d float64
		for i := len(f.c) - 1; i >= 0; i-- {
			d = d*x + y
			y = y*x + f.c[i].v
		}
		switch {
		case y == 0 || math.IsNaN(y):
			x = math.Ldexp(x, f.k)
			return x, y == 0 && !math.IsInf(x, 0)
		case (y > 0) == (r.below > 0):
			b = x
		default:
			a = x
		}
		next := x - y/d
		if math.Abs(next-x) <= 0x1p-53*math.Abs(x) {
			x = math.Ldexp(next, f.k)
			return x, !math.IsInf(x, 0)
		}
		if !(next > a && next < b) {
			next = a + (b-a)/2
			if a > 0 && b > 4*a || b < 0 && a < 4*b { // ends of very different size
				next = math.Copysign(math.Sqrt(math.Abs(a))*math.Sqrt(math.Abs(b)), a)
			}
		}
		if next == x {
			x = math.Ldexp(next, f.k)
			return x, !math.IsInf(x, 0)
		}
		x = next
	}
	return 0, false
}

// finite stands in for infinity the power of two next above the range, for the sake of
// rounding to nearest.
func finite(x float64) Dyadic {
	if math.IsInf(x, 0) {
		d := PowerOfTwo(1024)
		if x < 0 {
			d = d.Neg()
		}
		return d
	}
	return Float(x)
}

// against returns the sign of root - x.
func (r Isolated) against(x Dyadic) int {
	switch {
	case x.Cmp(r.Lo) <= 0:
		return +1
	case x.Cmp(r.Hi) >= 0:
		return -1
	}
	s := r.poly.SignAt(x)
	switch {
	case s == 0:
		return 0
	case s == r.below:
		return -1
	}
	return +1
}

// Bisect returns the half of the interval that holds the root, or the root if it is the
// midpoint.
func (r Isolated) Bisect() Isolated {
	if r.Exact() {
		return r
	}
	return r.cut(Midpoint(r.Lo, r.Hi))
}

// cut returns the part of the interval on the root's side of x, which lies inside.
func (r Isolated) cut(x Dyadic) Isolated {
	switch r.against(x) {
	case -1:
		r.Hi = x
	case +1:
		r.Lo = x
	default:
		r.Lo, r.Hi = x, x
	}
	return r
}

// narrow shrinks the interval around the zero of the secant as long as that pays: until its
// width is about 2^-precision times the greater end.
//
// Method: quadratic interval refinement (J. Abbott, Quadratic interval refinement for real
// roots, ACM Commun. Comput. Algebra 48 (2014) 3–12): the interval is cut into N parts, the
// root is looked for in the one that the secant names, and N is squared on success.
func (r Isolated) narrow(precision int) Isolated {
	bits := 1 // N = 2^bits
	// Each failure halves the interval at least, so that the bound is never met before the
	// width is; it keeps intervals with ends of very different size from being cut in vain.
	for range 200 + 2*precision {
		if r.Exact() {
			return r
		}
		width := r.Hi.Sub(r.Lo)
		size := max(r.Lo.magnitudeOrLowest(), r.Hi.magnitudeOrLowest())
		if width.magnitude() < size-precision {
			return r
		}
		if size-width.magnitude() < 2 {
			r = r.Bisect()
			continue
		}
		lo, hi := r.poly.At(r.Lo), r.poly.At(r.Hi)
		if lo.Sign() == 0 || hi.Sign() == 0 {
			r = r.Bisect()
			continue
		}
		bits = min(bits, 60)
		n := math.Ldexp(1, bits)
		k := math.Floor(n * secantShare(lo, hi))
		step := width
		step.e -= bits
		left := r.Lo.Add(step.Mul(Float(k)))
		inner := r
		if k > 0 {
			inner = inner.cut(left)
		}
		if !inner.Exact() && inner.Lo.Cmp(left) == 0 && k+1 < n {
			inner = inner.cut(left.Add(step))
		}
		success := inner.Exact() || !(step.Cmp(inner.Hi.Sub(inner.Lo)) < 0)
		r = inner
		switch {
		case success:
			bits *= 2
		case bits == 1:
		default:
			bits /= 2
			r = r.Bisect()
		}
	}
	return r
}

// magnitudeOrLowest is magnitude, with a value below all others for 0.
func (x Dyadic) magnitudeOrLowest() int {
	if x.Sign() == 0 {
		return math.MinInt32
	}
	return x.magnitude()
}

// secantShare returns about where between the two points the secant is zero, as a share of
// their distance, in [0, 1): lo and hi have opposite signs.
func secantShare(lo, hi Dyadic) float64 {
	e := max(lo.magnitude(), hi.magnitude())
	lo.e -= e
	hi.e -= e
	a, b := math.Abs(lo.Float64()), math.Abs(hi.Float64())
	return min(a/(a+b), 1-1.0/(1<<53))
}

// floatBelow returns the greatest float64 ≤ x, floatAbove the least ≥ x.
func floatBelow(x Dyadic) float64 {
	f := x.Float64()
	if Float(f).Cmp(x) > 0 {
		f = math.Nextafter(f, math.Inf(-1))
	}
	return f
}

func floatAbove(x Dyadic) float64 {
	f := x.Float64()
	if Float(f).Cmp(x) < 0 {
		f = math.Nextafter(f, math.Inf(1))
	}
	return f
}

// floatBetween returns a float64 strictly between a and b, as many above it as below, if there
// is one; a and b are not of opposite signs.
func floatBetween(a, b float64) (float64, bool) {
	if a < 0 || b < 0 {
		m, ok := floatBetween(-b, -a)
		return -m, ok
	}
	x, y := math.Float64bits(math.Abs(a)), math.Float64bits(b)
	if x > y || y-x < 2 {
		return 0, false
	}
	return math.Float64frombits(x + (y-x)/2), true
}

// A RealRoot is a distinct real root with its multiplicity.
type RealRoot struct {
	Isolated
	Multiplicity int
}

// RealRoots returns the distinct real roots of p between lo and hi, as [Poly.Isolate] does, with
// their multiplicities.
func (p Poly) RealRoots(lo, hi Dyadic, ends Ends) []RealRoot {
	factors := p.SquareFree()
	if len(factors) == 0 {
		return nil
	}
	all := factors[0].Poly
	for _, f := range factors[1:] {
		all = all.Mul(f.Poly)
	}
	isolated := all.isolate(lo, hi, ends)
	roots := make([]RealRoot, 0, len(isolated))
	for _, r := range isolated {
		roots = append(roots, RealRoot{r, multiplicity(factors, r)})
	}
	return roots
}

// multiplicity finds the factor that a root of their product belongs to.
func multiplicity(factors []Factor, r Isolated) int {
	if len(factors) == 1 {
		return factors[0].Multiplicity
	}
	for _, f := range factors {
		if r.Exact() {
			if f.Poly.SignAt(r.Lo) == 0 {
				return f.Multiplicity
			}
		} else if f.Poly.signBeside(r.Lo, +1) != f.Poly.signBeside(r.Hi, -1) {
			// The product has one root inside, so that no factor has two.
			return f.Multiplicity
		}
	}
	panic("exact: a root of a product that no factor has")
}

// CountReal returns how many real roots p has between lo and hi, distinct ones and counted with
// multiplicity.
func (p Poly) CountReal(lo, hi Dyadic, ends Ends) (distinct, counted int) {
	for _, f := range p.SquareFree() {
		n := len(f.Poly.isolate(lo, hi, ends))
		distinct += n
		counted += n * f.Multiplicity
	}
	return distinct, counted
}
