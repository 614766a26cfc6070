package tf

import (
	"math"
	"math/big"
	"math/cmplx"

	"github.com/polewright/polewright/poly"
)

// PartialFractions is a function as a sum,
//
//	Direct + Σ Residue/(s - Pole)^Power, all of it times exp(-s·DeadTime),
//
// or the same in z.
type PartialFractions struct {
	Direct   poly.Poly // zero for a strictly proper function
	Terms    []PartialFraction
	DeadTime float64 // s
}

// PartialFraction is one term. Terms of a pair of poles are conjugate.
type PartialFraction struct {
	Pole    complex128
	Power   int // 1 to the multiplicity of the pole
	Residue complex128
}

// At returns the value of the sum at s. Near nearly repeated poles terms cancel that the
// function itself does not know of.
func (f PartialFractions) At(s complex128) complex128 {
	y := f.Direct.AtComplex(s)
	for _, t := range f.Terms {
		d := s - t.Pole
		term := t.Residue
		for range t.Power {
			term /= d
		}
		y += term
	}
	if f.DeadTime > 0 {
		y *= delayOf(f.DeadTime).factor(s)
	}
	return y
}

// PartialFractions returns the function as a sum over its poles, in the order of
// [Function.Poles], powers ascending. Multiplicities are proven, and residues have float64
// accuracy however close two poles are: they are worked out in as many digits as it takes. A
// pole that a zero cancels has residue 0 (and no more digits than that where the cancellation
// is not exact). The dead time of a function of z counts as poles at 0.
//
// The error is an [*UnsupportedError] where different poles are closer together than float64
// can part, a [*poly.RangeError] for a residue beyond its range, or that of [Function.Poles].
func (g Function) PartialFractions() (PartialFractions, error) {
	const call = "tf.Function.PartialFractions"
	if g.err != nil {
		return PartialFractions{}, g.err
	}
	result := PartialFractions{DeadTime: g.delay.near}
	g, err := g.atNoDelay()
	if err != nil {
		return PartialFractions{}, err
	}
	poles, err := g.denominator.Roots()
	if err != nil {
		return PartialFractions{}, err
	}
	for precision := uint(256); ; precision *= 2 {
		first, direct, err := g.residues(call, precision)
		if err != nil {
			return PartialFractions{}, err
		}
		second, _, err := g.residues(call, 2*precision)
		if err != nil {
			return PartialFractions{}, err
		}
		if !residuesAgree(first, second) && precision < 1<<13 {
			continue
		}
		result.Direct = direct
		for _, p := range poles {
			upper := complex(real(p.Value), math.Abs(imag(p.Value)))
			for i, r := range second[upper] {
				re, _ := r.re.Float64()
				im, _ := r.im.Float64()
				residue := complex(re+0, im+0)
				if cmplx.IsInf(residue) {
					return PartialFractions{}, &poly.RangeError{Call: call, Reason: "a residue is beyond the range of float64"}
				}
				if imag(p.Value) < 0 {
					residue = cmplx.Conj(residue)
				}
				result.Terms = append(result.Terms, PartialFraction{Pole: p.Value, Power: i + 1, Residue: residue})
			}
		}
		return result, nil
	}
}

// residuesAgree compares to a little more than float64 shows. A residue that is zero, in one
// computation or below all digits of the largest one, agrees with one that is.
func residuesAgree(first, second map[complex128][]bigComplex) bool {
	for pole, list := range second {
		largest := math.MinInt
		for _, r := range list {
			largest = max(largest, r.exponent())
		}
		for i, r := range list {
			before := first[pole][i]
			miss := bigComplex{new(big.Float).Sub(r.re, before.re), new(big.Float).Sub(r.im, before.im)}
			if !miss.isZero() && miss.exponent() > r.exponent()-60 && r.exponent() > largest-1000 {
				return false
			}
		}
	}
	return true
}

// residues returns those of every pole that is real or the upper one of a pair, by power, and
// what the division leaves before them.
func (g Function) residues(call string, precision uint) (map[complex128][]bigComplex, poly.Poly, error) {
	var direct poly.Poly
	if g.numerator.Degree() >= g.denominator.Degree() {
		d, err := g.numerator.Divide(g.denominator)
		if err != nil {
			return nil, direct, err
		}
		direct = d.Quotient
	}
	result := map[complex128][]bigComplex{}
	if g.denominator.Degree() == 0 {
		return result, direct, nil
	}
	roots, ok, err := preciseRoots(g.denominator, precision)
	if err != nil {
		return nil, direct, err
	}
	if !ok {
		return nil, direct, &UnsupportedError{Call: call, What: "different poles that are closer together than float64 can part"}
	}
	n, d := bigCoefficients(g.numerator, precision), bigCoefficients(g.denominator, precision)
	found, err := g.denominator.Roots()
	if err != nil {
		return nil, direct, err
	}
	next := 0
	for _, p := range found {
		if imag(p.Value) < 0 {
			continue
		}
		r := roots[next] // preciseRoots keeps the order
		next++
		m := r.multiplicity
		at := bigComplex{r.re, r.im}
		if r.im == nil {
			at.im = bigNumber(precision)
		}
		// N/(D/(s-p)^m) as a series in s-p; the coefficient of power i belongs to (s-p)^(i-m).
		top, bottom := at.taylor(n, m, precision), at.taylor(d, 2*m, precision)[m:]
		list := make([]bigComplex, m)
		for i := range m {
			y := top[i]
			for j := range i {
				t := bottom[i-j].times(list[m-1-j], precision)
				y = bigComplex{bigNumber(precision).Sub(y.re, t.re), bigNumber(precision).Sub(y.im, t.im)}
			}
			q, ok := y.over(bottom[0], precision)
			if !ok {
				return nil, direct, &UnsupportedError{Call: call, What: "poles that are closer together than they can be computed"}
			}
			list[m-1-i] = q
		}
		if r.im == nil {
			for i := range list {
				list[i].im = bigNumber(precision)
			}
		}
		result[p.Value] = list
	}
	return result, direct, nil
}

// taylor returns the first n coefficients of the polynomial about x, by power, zeros beyond
// its degree; c are its coefficients by power.
func (x bigComplex) taylor(c []*big.Float, n int, work uint) []bigComplex {
	rest := make([]bigComplex, len(c))
	for i, a := range c {
		rest[i] = bigComplex{a, bigNumber(work)}
	}
	result := make([]bigComplex, n)
	for k := range result {
		if k >= len(rest) {
			result[k] = bigComplex{bigNumber(work), bigNumber(work)}
			continue
		}
		// Horner's rule; what it passes through is the quotient by s - x.
		for i := len(rest) - 2; i >= k; i-- {
			t := rest[i+1].times(x, work)
			rest[i] = bigComplex{t.re.Add(t.re, rest[i].re), t.im.Add(t.im, rest[i].im)}
		}
		result[k] = rest[k]
	}
	return result
}
