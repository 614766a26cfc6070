package locus

import (
	"math"
	"math/big"

	"github.com/polewright/polewright/internal/exact"
	"github.com/polewright/polewright/poly"
)

// sideBits is how much of the size of its terms an expression must keep for its sign to count.
const sideBits = 160

// exactly returns s as a bigComplex with room for what follows.
func exactly(s complex128) bigComplex {
	return bigComplex{newFloat(53).SetFloat64(real(s)), newFloat(53).SetFloat64(imag(s))}
}

// sumSign returns the sign of the sum of exact terms, 0 where it is too close to 0 to tell from
// points that are rounded.
func sumSign(s bigComplex, terms ...exact.Dyadic) int {
	sum, size := zero, zero
	for _, t := range terms {
		sum = sum.Add(t)
		if t.Sign() < 0 {
			t = t.Neg()
		}
		size = size.Add(t)
	}
	if s.re.Prec() > 64 || s.im.Prec() > 64 {
		bound := size.Mul(exact.PowerOfTwo(-sideBits))
		if sum.Cmp(bound) <= 0 && sum.Neg().Cmp(bound) <= 0 {
			return 0
		}
	}
	return sum.Sign()
}

func (r halfPlane) side(s bigComplex) int {
	return sumSign(s, r.sigma, dyadic(s.re).Neg())
}

func (r sector) side(s bigComplex) int {
	if s.re.Sign() >= 0 {
		if s.re.Sign() == 0 && s.im.Sign() == 0 {
			return 0
		}
		return -1
	}
	x, y := dyadic(s.re), dyadic(s.im)
	c := r.zeta.Mul(r.zeta)
	return sumSign(s, x.Mul(x).Mul(one.Sub(c)), y.Mul(y).Mul(c).Neg())
}

func (r disc) side(s bigComplex) int {
	x, y := dyadic(s.re), dyadic(s.im)
	sign := sumSign(s, r.radius.Mul(r.radius), x.Mul(x).Neg(), y.Mul(y).Neg())
	if r.outside {
		return -sign
	}
	return sign
}

func (r strip) side(s bigComplex) int {
	y := dyadic(newFloat(s.im.Prec()).Abs(s.im))
	return sumSign(s, r.omega, y.Neg())
}

// around for the exact sets compares the distance from the boundary with the radius of the disc.

func (r halfPlane) around(root poly.Root) int {
	x := newFloat(200).SetFloat64(real(root.Value))
	return aroundBy(root, r.side, x.Sub(round(r.sigma, 200), x))
}

func (r sector) around(root poly.Root) int {
	if root.Value == 0 && root.Radius == 0 {
		return 0
	}
	// Signed distance from the line of the ray above: -x·√(1-ζ²) - |y|·ζ.
	sine := round(one.Sub(r.zeta.Mul(r.zeta)), 200)
	d := newFloat(200).Mul(sine.Sqrt(sine), newFloat(53).SetFloat64(-real(root.Value)))
	d.Sub(d, newFloat(200).Mul(round(r.zeta, 200), newFloat(53).SetFloat64(math.Abs(imag(root.Value)))))
	return aroundBy(root, r.side, d)
}

func (r disc) around(root poly.Root) int {
	x, y := newFloat(200).SetFloat64(real(root.Value)), newFloat(200).SetFloat64(imag(root.Value))
	x.Mul(x, x)
	x.Add(x, y.Mul(y, y))
	x.Sqrt(x)
	return aroundBy(root, r.side, x.Sub(round(r.radius, 200), x))
}

func (r strip) around(root poly.Root) int {
	y := newFloat(200).SetFloat64(math.Abs(imag(root.Value)))
	return aroundBy(root, r.side, y.Sub(round(r.omega, 200), y))
}

// aroundBy returns the side of the disc's center if the distance from the boundary, but for
// its sign, exceeds the radius.
func aroundBy(root poly.Root, side func(bigComplex) int, distance *big.Float) int {
	if root.Radius > 0 && distance.Abs(distance).Cmp(newFloat(64).SetFloat64(root.Radius*(1+0x1p-40))) <= 0 {
		return 0
	}
	return side(exactly(root.Value))
}
