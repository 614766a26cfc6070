package poly

import (
	"math"
	"math/big"
)

// assemble rounds the locations of the upper half plane to float64, adds the conjugates and
// merges what float64 cannot part.
func assemble(call string, roots []Root, found []location) ([]Root, error) {
	for _, l := range found {
		r, err := l.round(call)
		if err != nil {
			return nil, err
		}
		roots = append(roots, r)
		if !l.real {
			r.Value = complex(real(r.Value), -imag(r.Value))
			roots = append(roots, r)
		}
	}
	for merged := true; merged; {
		merged = false
		for i := 0; i < len(roots); i++ {
			for j := 0; j < i; j++ {
				if meet(roots[i], roots[j]) {
					roots[j] = merge(roots[i], roots[j])
					roots[i] = roots[len(roots)-1]
					roots = roots[:len(roots)-1]
					merged = true
					i--
					break
				}
			}
		}
	}
	sortRoots(roots)
	return roots, nil
}

// round returns the root at the float64 nearest to the location.
func (l location) round(call string) (Root, error) {
	r := Root{Multiplicity: l.multiplicity * l.distinct, Distinct: l.distinct}
	re, im := l.re, l.im
	var x, y float64
	x, r.HalfRe = roundPart(re, l.radius)
	y, r.HalfIm = roundPart(im, l.radius)
	if l.real {
		y = 0
		if l.distinct == 1 {
			r.HalfIm = 0
		} else {
			r.HalfIm = upward(new(big.Float).Add(new(big.Float).Abs(im), l.radius))
		}
	}
	if l.imaginary {
		x = 0
		if l.distinct == 1 {
			r.HalfRe = 0
		} else {
			r.HalfRe = upward(new(big.Float).Add(new(big.Float).Abs(re), l.radius))
		}
	}
	if math.IsInf(x, 0) || math.IsInf(y, 0) || math.IsInf(math.Hypot(x, y), 0) {
		return r, &RangeError{Call: call, Reason: "a root is too large for float64: its modulus is about " + modulus(bigComplex{re, im}).Text('g', 6)}
	}
	if x == 0 && y == 0 {
		return r, &RangeError{Call: call, Reason: "a root is too small for float64 without being zero: its modulus is about " + modulus(bigComplex{re, im}).Text('g', 6)}
	}
	r.Value = complex(x, y)
	r.Radius = hypotUp(r.HalfRe, r.HalfIm)
	return r, nil
}

// roundPart returns the float64 nearest to x and a bound on its distance from anything
// within radius of x.
func roundPart(x, radius *big.Float) (float64, float64) {
	f, _ := x.Float64()
	if math.IsInf(f, 0) {
		return f, math.Inf(1)
	}
	miss := new(big.Float).SetPrec(x.Prec() + 1200).SetFloat64(f)
	miss.Sub(miss, x)
	miss.Abs(miss)
	return f + 0, upward(new(big.Float).SetPrec(miss.Prec()).Add(miss, radius))
}

// upward rounds x ≥ 0 up to a float64.
func upward(x *big.Float) float64 {
	f, accuracy := x.Float64()
	if accuracy == big.Below {
		return math.Nextafter(f, math.Inf(1))
	}
	return f
}

// hypotUp returns an upper bound of √(a²+b²); exact where one of them is 0.
func hypotUp(a, b float64) float64 {
	if a == 0 || b == 0 {
		return a + b
	}
	h := math.Hypot(a, b)
	return h + (h*0x1p-50 + 4*math.SmallestNonzeroFloat64)
}

// meet reports whether two discs may have a common point.
func meet(a, b Root) bool {
	dx, dy := math.Abs(real(a.Value)/4-real(b.Value)/4), math.Abs(imag(a.Value)/4-imag(b.Value)/4)
	if a.Value == b.Value {
		return true
	}
	gap := math.Hypot(dx, dy)
	reach := a.Radius/4 + b.Radius/4
	return gap-gap*0x1p-50 <= reach+8*math.SmallestNonzeroFloat64
}

// merge returns one disc that covers two.
func merge(a, b Root) Root {
	if b.Multiplicity > a.Multiplicity {
		a, b = b, a
	}
	// Two conjugates become a real value.
	v := a.Value
	if imag(a.Value) != 0 && imag(a.Value) == -imag(b.Value) && real(a.Value) == real(b.Value) {
		v = complex(real(v), 0)
	}
	r := Root{Value: v, Multiplicity: a.Multiplicity + b.Multiplicity, Distinct: a.Distinct + b.Distinct}
	for _, c := range [...]Root{a, b} {
		r.HalfRe = max(r.HalfRe, up(math.Abs(real(c.Value)-real(v)))+c.HalfRe)
		r.HalfIm = max(r.HalfIm, up(math.Abs(imag(c.Value)-imag(v)))+c.HalfIm)
		r.Radius = max(r.Radius, hypotUp(up(math.Abs(real(c.Value)-real(v))), up(math.Abs(imag(c.Value)-imag(v))))+c.Radius)
	}
	r.HalfRe, r.HalfIm, r.Radius = up(r.HalfRe), up(r.HalfIm), up(r.Radius)
	return r
}

// up returns something a little larger than x > 0.
func up(x float64) float64 {
	if x == 0 {
		return 0
	}
	return x + (x*0x1p-50 + math.SmallestNonzeroFloat64)
}
