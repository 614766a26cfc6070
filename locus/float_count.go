package locus

import "math"

// leftByRouth tells whether all roots of Σ c[i]·sⁱ, each coefficient within e[i], lie in Re s < 0,
// by the first column of Routh's table; it is not ok if a sign there is not certain. The lists
// are overwritten.
//
// Source: E. J. Routh, A Treatise on the Stability of a Given State of Motion, Macmillan 1877.
func leftByRouth(c, e []float64) (all, ok bool) {
	n := len(c) - 1
	first := signOf(c[n], e[n])
	if first == 0 {
		return false, false
	}
	for i := n; i > 0; i-- {
		s := signOf(c[i-1], e[i-1])
		switch {
		case s == 0:
			return false, false
		case s != first:
			// At least one change: at least one root on the right, if the rest is regular; and
			// if it is not, there are still roots that are not on the left.
			return false, true
		}
		if i > 1 {
			q := c[i] / c[i-1]
			eq := (e[i]+math.Abs(q)*e[i-1])/(math.Abs(c[i-1])-e[i-1])*(1+0x1p-45) + unitRoundoff*math.Abs(q)
			for j := i - 2; j > 0; j -= 2 {
				p := float64(q * c[j-1])
				e[j] = (e[j]+math.Abs(q)*e[j-1]+eq*(math.Abs(c[j-1])+e[j-1])+unitRoundoff*math.Abs(p))*(1+0x1p-45) + minNormal
				c[j] -= p
				e[j] += unitRoundoff * math.Abs(c[j]) * (1 + 0x1p-45)
			}
		}
	}
	return true, true
}

// leftOfRay tells whether all roots of a polynomial p of degree n lie left of the line through 0
// in a direction u, where p(x·u)/uⁿ = f(x) + j·r·g(x) with r > 0, deg f = n and deg g = n-1: if and
// only if the chain f, g, … of negative remainders is regular with leading coefficients of one
// sign, that of f taken with sign (Hermite and Biehler; Gantmacher, The Theory of Matrices,
// vol. 2, Chelsea 1959, ch. XV). The lists are overwritten.
func leftOfRay(f, ef, g, eg []float64) (all, ok bool) {
	n := len(f) - 1
	first := signOf(f[n], ef[n])
	if first == 0 {
		return false, false
	}
	for d := n - 1; ; d-- {
		switch signOf(g[d], eg[d]) {
		case 0:
			return false, false
		case -first:
			return false, true
		}
		if d == 0 {
			return true, true
		}
		// f has degree d+1, g degree d; f becomes (q₁x + q₀)·g - f.
		for i := 0; i < 2; i++ {
			q := f[d+1-i] / g[d]
			eq := (ef[d+1-i]+math.Abs(q)*eg[d])/(math.Abs(g[d])-eg[d])*(1+0x1p-45) + unitRoundoff*math.Abs(q)
			for j := 0; j < d; j++ {
				p := float64(q * g[j])
				k := j + 1 - i
				ef[k] = (ef[k]+math.Abs(q)*eg[j]+eq*(math.Abs(g[j])+eg[j])+unitRoundoff*math.Abs(p))*(1+0x1p-45) + minNormal
				f[k] -= p
				ef[k] += unitRoundoff * math.Abs(f[k]) * (1 + 0x1p-45)
			}
		}
		f, g, ef, eg = g, f[:d], eg, ef[:d]
		for j := range g {
			g[j] = -g[j]
		}
	}
}
