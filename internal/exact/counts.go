package exact

import (
	"math"
	"math/big"
)

// A Count tells how many roots of a polynomial, counted with multiplicity, lie inside a region,
// on its boundary and outside it.
type Count struct{ Inside, Boundary, Outside int }

// LeftOf counts the roots with Re s < sigma, on the line Re s = sigma and beyond it. The zero
// polynomial has no roots to count.
//
// Method: on the line, p(sigma + jω) = R(ω) + j·I(ω) with real polynomials R and I. The Cauchy
// index of their quotient is what Routh's table counts (Routh 1877; Gantmacher, The Theory of
// Matrices, vol. 2, Chelsea 1959, ch. XV, §§ 3–5). What R and I have in common are the roots that
// the line mirrors: those on it, and as many on one side as on the other.
func LeftOf(p Poly, sigma Dyadic) Count {
	n := p.Degree()
	if n < 1 {
		return Count{}
	}
	var f filtered
	if f.fromPoly(p) {
		if count, ok := f.leftOf(boundedOf(sigma)); ok {
			return count
		}
	}
	return leftOf(p, sigma)
}

// leftOf is the last stage of LeftOf.
func leftOf(p Poly, sigma Dyadic) Count {
	n := p.Degree()
	p, boundary := p.Shift(sigma).StripZero()
	m := p.Degree()
	even, odd := p.parity()
	g := GCD(even, odd)
	if _, mirrored := g.CountReal(Dyadic{}, Dyadic{inf: +1}, Open); mirrored > 0 {
		boundary += 2 * mirrored
	}
	// Each root to the left turns the argument of p along the line by +π, each one to the right
	// by -π: with I/R = tan arg p that is an index of -1 or +1, with R/I = cot the opposite. I is
	// odd in ω, so that the positive half of the line tells the other, and the factor ω counts
	// only for the pole at 0.
	var less int // left less right
	if m%2 == 0 {
		less = -2 * CauchyIndex(odd, even, Dyadic{}, Dyadic{inf: +1})
	} else {
		less = 2*CauchyIndex(even, odd, Dyadic{}, Dyadic{inf: +1}) +
			even.SignAt(Dyadic{})*odd.signBeside(Dyadic{}, +1)
	}
	left := (n - boundary + less) / 2
	return Count{left, boundary, n - boundary - left}
}

// parity returns the polynomials e and o with p(jω) = e(ω²) + jω·o(ω²).
func (p Poly) parity() (even, odd Poly) {
	var part [2][]*big.Int
	for i, x := range p.c {
		if i%4 >= 2 {
			x = new(big.Int).Neg(x)
		}
		part[i%2] = append(part[i%2], x)
	}
	return New(part[0], p.e), New(part[1], p.e)
}

// InSector counts the roots with |arg(-s)| < acos zeta, on the two rays that bound this sector
// (the origin is one of their points) and outside, for 0 < zeta < 1.
//
// Method: the argument principle. On the upper ray, s = -zeta·r + j·sqrt(1-zeta²)·r, r > 0,
//
//	Re p = Σ cᵢ·Tᵢ(-zeta)·rⁱ = U(r),  Im p = sqrt(1-zeta²)·Σ cᵢ·Uᵢ₋₁(-zeta)·rⁱ = sqrt(1-zeta²)·V(r),
//
// with Chebyshev's polynomials, so that U and V are exact. The change of arg p along the ray is
// known modulo π at its end, and the Cauchy index of U/V tells the rest.
func InSector(p Poly, zeta Dyadic) Count {
	n := p.Degree()
	if n < 1 {
		return Count{}
	}
	var f filtered
	if f.fromPoly(p) {
		if count, ok := f.inSector(boundedOf(zeta)); ok {
			return count
		}
	}
	return inSector(p, zeta)
}

// inSector is the last stage of InSector.
func inSector(p Poly, zeta Dyadic) Count {
	n := p.Degree()
	p, atOrigin := p.StripZero()
	m := p.Degree()
	u, v := p.onRay(zeta)
	infinity := Dyadic{inf: +1}
	if v.IsZero() {
		// Only for m = 0, and for a polynomial in s³ if zeta = 1/2: arg p never turns.
		_, onRay := u.CountReal(Dyadic{}, infinity, Open)
		inside, boundary := m/3-onRay, atOrigin+2*onRay
		return Count{inside, boundary, n - boundary - inside}
	}
	_, onRay := GCD(u, v).CountReal(Dyadic{}, infinity, Open)

	// Let φ = acos zeta. Along the ray, with the roots on it passed by, arg p starts at a
	// multiple of π, taken for 0, and enters (0, π) if U·V > 0 there, else (-π, 0); it ends
	// between branch·π and (branch+1)·π, at N·π - m·φ for a whole number N, which is the number
	// of roots inside plus those on the upper ray.
	branch := CauchyIndex(u, v, Dyadic{}, infinity)
	if u.signBeside(Dyadic{}, +1)*v.signBeside(Dyadic{}, +1) < 0 {
		branch--
	}
	inside := branch + ceilOfAngle(m, zeta, u.LeadSign()*v.LeadSign()) - onRay
	boundary := atOrigin + 2*onRay
	return Count{inside, boundary, n - boundary - inside}
}

// ceilOfAngle returns N - branch for the N with branch·π ≤ N·π - m·acos zeta ≤ (branch+1)·π;
// where two values fit, the sign of u·v at infinity tells from which side the argument comes to
// its end.
func ceilOfAngle(m int, zeta Dyadic, endSign int) int {
	// Only for zeta = 1/2 is acos zeta (= π/3) a rational multiple of π (Niven).
	if zeta.Cmp(PowerOfTwo(-1)) == 0 {
		if m%3 != 0 {
			return m/3 + 1
		}
		// The argument ends at a multiple of π: from above, it is in the branch that begins
		// there, and cot > 0; from below, in the branch that ends there.
		if endSign > 0 {
			return m / 3
		}
		return m/3 + 1
	}
	x := float64(m) * math.Acos(zeta.Float64()) / math.Pi
	floor := math.Floor(x)
	if nearest := math.Round(x); math.Abs(x-nearest) < 1e-6 {
		// sin(m·φ) = sin φ·U_{m-1}(zeta) tells on which side of the nearest integer x is:
		// positive for x between an even number and the next odd one.
		even := math.Mod(nearest, 2) == 0
		if (chebyshevSecond(m-1, zeta).Sign() > 0) == even {
			floor = nearest
		} else {
			floor = nearest - 1
		}
	}
	return int(floor) + 1
}

// onRay returns U and V as [InSector] names them.
func (p Poly) onRay(zeta Dyadic) (u, v Poly) {
	// T_{i+1} = 2x·T_i - T_{i-1}, and so for U; U_{-1} = 0.
	x := zeta.Neg()
	twice := x.Mul(PowerOfTwo(1))
	t, tNext := PowerOfTwo(0), x
	w, wNext := Dyadic{}, PowerOfTwo(0)
	us, vs := make([]Dyadic, len(p.c)), make([]Dyadic, len(p.c))
	for i := range p.c {
		a := p.Coefficient(i)
		us[i], vs[i] = a.Mul(t), a.Mul(w)
		t, tNext = tNext, twice.Mul(tNext).Sub(t)
		w, wNext = wNext, twice.Mul(wNext).Sub(w)
	}
	return FromDyadics(us...), FromDyadics(vs...)
}

// chebyshevSecond returns U_k(x), k ≥ -1.
func chebyshevSecond(k int, x Dyadic) Dyadic {
	twice := x.Mul(PowerOfTwo(1))
	w, wNext := Dyadic{}, PowerOfTwo(0)
	for ; k >= 0; k-- {
		w, wNext = wNext, twice.Mul(wNext).Sub(w)
	}
	return w
}

// InDisc counts the roots with |s| < radius, on this circle and beyond it, for a finite radius
// above 0.
//
// Method: s = radius·(1+w)/(1-w) sends the disc to the left half-plane and the circle to the
// imaginary axis, but for -radius, which it sends to infinity.
func InDisc(p Poly, radius Dyadic) Count {
	n := p.Degree()
	if n < 1 {
		return Count{}
	}
	var f filtered
	if f.fromPoly(p) {
		if count, ok := f.inDisc(boundedOf(radius)); ok {
			return count
		}
	}
	return inDisc(p, radius)
}

// inDisc is the last stage of InDisc.
func inDisc(p Poly, radius Dyadic) Count {
	n := p.Degree()
	q := p.Stretch(radius).bilinear()
	lost := n - q.Degree() // roots at -radius
	count := leftOf(q, Dyadic{})
	count.Boundary += lost
	return count
}

// bilinear returns (1-w)ⁿ·p((1+w)/(1-w)).
func (p Poly) bilinear() Poly {
	n := len(p.c) - 1
	// With s = -1 + 2/(1-w): shift by -1, then 2/(1-w) for s: reversal, w to 1-w, scaled by 2.
	c := make([]*big.Int, n+1)
	for i, x := range p.c {
		c[i] = new(big.Int).Set(x)
	}
	shiftInteger(c, minusOne)
	// Σ c_i·2^i·(1-w)^(n-i)
	r := make([]*big.Int, n+1)
	for i, x := range c {
		r[n-i] = x.Lsh(x, uint(i))
	}
	return New(r, p.e).Affine(Int(minusOne, 0), PowerOfTwo(0))
}
