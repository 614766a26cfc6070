package exact

import "math/big"

// PseudoDivide returns quotient, remainder and multiplier with
//
//	multiplier·p = quotient·q + remainder, deg remainder < deg q,
//
// where the multiplier is the leading integer of q to the power deg p - deg q + 1, or 1 if q
// has the higher degree. It panics if q is zero.
func (p Poly) PseudoDivide(q Poly) (quotient, remainder Poly, multiplier *big.Int) {
	if q.IsZero() {
		panic("exact: PseudoDivide by the zero polynomial")
	}
	quot, rem, multiplier := pseudoDivide(p.c, q.c)
	return New(quot, p.e-q.e), New(rem, p.e), multiplier
}

// pseudoDivide is PseudoDivide on the integers alone.
// Source: Knuth, The Art of Computer Programming, vol. 2, 3rd ed., 4.6.1, Algorithm R.
func pseudoDivide(p, q []*big.Int) (quotient, remainder []*big.Int, multiplier *big.Int) {
	m, n := len(p)-1, len(q)-1
	multiplier = big.NewInt(1)
	if m < n {
		return nil, p, multiplier
	}
	u := make([]*big.Int, m+1)
	for i, x := range p {
		u[i] = new(big.Int).Set(x)
	}
	lead := q[n]
	quotient = make([]*big.Int, m-n+1)
	var t big.Int
	for k := m - n; k >= 0; k-- {
		top := u[n+k]
		// What was found of the quotient so far is multiplied along.
		for i := k + 1; i <= m-n; i++ {
			quotient[i].Mul(quotient[i], lead)
		}
		quotient[k] = new(big.Int).Set(top)
		for j := 0; j < n+k; j++ {
			u[j].Mul(u[j], lead)
			if j >= k && top.Sign() != 0 {
				u[j].Sub(u[j], t.Mul(top, q[j-k]))
			}
		}
		multiplier.Mul(multiplier, lead)
	}
	return quotient, trim(u[:n]), multiplier
}

func trim(c []*big.Int) []*big.Int {
	n := len(c)
	for n > 0 && c[n-1].Sign() == 0 {
		n--
	}
	return c[:n]
}

// Divide returns p/q and true if q divides p and the quotient has dyadic coefficients,
// otherwise false. It panics if q is zero.
func (p Poly) Divide(q Poly) (Poly, bool) {
	if q.IsZero() {
		panic("exact: Divide by the zero polynomial")
	}
	if p.IsZero() {
		return Poly{}, true
	}
	// By Gauss's lemma the quotient by the primitive part has integer coefficients, so that
	// the division of the integers decides; the content of q follows.
	primitive := q.Primitive()
	quotient, ok := divideIntegers(p.c, primitive.c)
	if !ok {
		return Poly{}, false
	}
	n := len(q.c) - 1
	content := new(big.Int).Quo(q.c[n], primitive.c[n])
	twos := content.TrailingZeroBits()
	content.Rsh(content, twos)
	if !isOne(content) {
		var r big.Int
		for i, x := range quotient {
			quotient[i], _ = new(big.Int).QuoRem(x, content, &r)
			if r.Sign() != 0 {
				return Poly{}, false
			}
		}
	}
	return New(quotient, p.e-q.e-int(twos)), true
}

// divideIntegers returns p/q if q divides p with an integer quotient.
func divideIntegers(p, q []*big.Int) ([]*big.Int, bool) {
	m, n := len(p)-1, len(q)-1
	if m < n {
		return nil, false
	}
	u := make([]*big.Int, m+1)
	for i, x := range p {
		u[i] = new(big.Int).Set(x)
	}
	quotient := make([]*big.Int, m-n+1)
	var t, r big.Int
	for k := m - n; k >= 0; k-- {
		quotient[k] = new(big.Int)
		if u[n+k].Sign() == 0 {
			continue
		}
		quotient[k].QuoRem(u[n+k], q[n], &r)
		if r.Sign() != 0 {
			return nil, false
		}
		for j := 0; j < n; j++ {
			u[k+j].Sub(u[k+j], t.Mul(quotient[k], q[j]))
		}
	}
	for _, x := range u[:n] {
		if x.Sign() != 0 {
			return nil, false
		}
	}
	return quotient, true
}
