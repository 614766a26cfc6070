package locus

import (
	"math/big"

	"github.com/polewright/polewright/internal/exact"
)

// exponential returns e^w with a relative error below 2^-bits.
//
// Method: w is halved until its modulus is below 2^-8, the series summed, the result squared
// back; each squaring doubles the relative error.
func exponential(w bigComplex, bits uint) bigComplex {
	halvings := max(0, max(exponent(w.re), exponent(w.im))+9)
	work := bits + uint(2*halvings) + 32
	scale := func(x *big.Float) *big.Float {
		return newFloat(work).SetMantExp(newFloat(work).Set(x), -halvings)
	}
	w = bigComplex{scale(w.re), scale(w.im)}
	sum := bigComplex{newFloat(work).SetInt64(1), newFloat(work)}
	term := sum
	for i := int64(1); max(exponent(term.re), exponent(term.im)) > -int(work); i++ {
		term = times(term, w, work)
		n := newFloat(64).SetInt64(i)
		term.re.Quo(term.re, n)
		term.im.Quo(term.im, n)
		sum = plus(sum, term, work)
	}
	for range halvings {
		sum = times(sum, sum, work)
	}
	return sum
}

func times(a, b bigComplex, bits uint) bigComplex {
	t, u := newFloat(bits).Mul(a.re, b.re), newFloat(bits).Mul(a.im, b.im)
	v, w := newFloat(bits).Mul(a.re, b.im), newFloat(bits).Mul(a.im, b.re)
	return bigComplex{t.Sub(t, u), v.Add(v, w)}
}

func plus(a, b bigComplex, bits uint) bigComplex {
	return bigComplex{newFloat(bits).Add(a.re, b.re), newFloat(bits).Add(a.im, b.im)}
}

func conjugate(a bigComplex) bigComplex {
	return bigComplex{a.re, new(big.Float).Neg(a.im)}
}

// pi returns π with an error below 2^-bits, by Machin's formula π/4 = 4·arctan 1/5 - arctan 1/239.
func pi(bits uint) *big.Float {
	work := bits + 32
	arctan := func(n int64) *big.Int {
		term := new(big.Int).Lsh(big.NewInt(1), work)
		term.Quo(term, big.NewInt(n))
		sum, t, square := new(big.Int).Set(term), new(big.Int), big.NewInt(n*n)
		for i := int64(3); term.Sign() != 0; i += 2 {
			term.Quo(term, square)
			t.Quo(term, big.NewInt(i))
			if i&2 != 0 {
				sum.Sub(sum, t)
			} else {
				sum.Add(sum, t)
			}
		}
		return sum
	}
	sum := arctan(5)
	sum.Lsh(sum, 2).Sub(sum, arctan(239)).Lsh(sum, 2)
	return round(exact.Int(sum, -int(work)), bits+2)
}

// realPart returns x as a complex number.
func realPart(x *big.Float, bits uint) bigComplex {
	return bigComplex{newFloat(bits).Set(x), newFloat(bits)}
}
