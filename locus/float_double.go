package locus

import "math"

// A double is the unevaluated sum h + l of two float64, |l| ≤ ulp(h)/2: about 106 bits.
//
// Source: T. J. Dekker, A floating-point technique for extending the available precision, Numer.
// Math. 18 (1971) 224–242; M. Joldes, J.-M. Muller, V. Popescu, Tight and rigorous error bounds for
// basic building blocks of double-word arithmetic, ACM Trans. Math. Softw. 44 (2017) 15.
type double struct{ h, l float64 }

// times returns x·y with a relative error below 2^-102.
func (x double) times(y double) double {
	p := float64(x.h * y.h)
	e := math.FMA(x.h, y.h, -p)
	e = math.FMA(x.h, y.l, e)
	e = math.FMA(x.l, y.h, e)
	h := p + e
	return double{h, e - (h - p)}
}

// plus returns x + y with an error below 2^-102·(|x| + |y|).
func (x double) plus(y double) double {
	s := x.h + y.h
	b := s - x.h
	t := (x.h - (s - b)) + (y.h - b)
	t += x.l + y.l
	h := s + t
	return double{h, t - (h - s)}
}

// plusFloat returns x + y with an error below 2^-102·(|x| + |y|).
func (x double) plusFloat(y float64) double {
	s := x.h + y
	b := s - x.h
	t := (x.h - (s - b)) + (y - b)
	t += x.l
	h := s + t
	return double{h, t - (h - s)}
}

func (x double) minus() double { return double{-x.h, -x.l} }

func (x double) float() float64 { return x.h + x.l }

// productOf returns x·y without rounding, unless it underflows.
func productOf(x, y float64) double {
	p := float64(x * y)
	return double{p, math.FMA(x, y, -p)}
}

// horner returns Σ c[i]·sⁱ at s = re + j·im with an error below 2^-98·(degree+1)·Σ |c[i]|·|s|ⁱ,
// s taken as known to a relative 2^-100.
func horner(c []float64, re, im double) (x, y double) {
	minus := im.minus()
	for i := len(c) - 1; i >= 0; i-- {
		x, y = x.times(re).plus(y.times(minus)).plusFloat(c[i]), x.times(im).plus(y.times(re))
	}
	return x, y
}

// hornerImaginary is horner at s = jω.
func hornerImaginary(c []float64, omega float64) (x, y double) {
	minus := productOf(-omega, omega)
	n := len(c) - 1
	for i := n &^ 1; i >= 0; i -= 2 {
		x = x.times(minus).plusFloat(c[i])
	}
	for i := n - 1 + n&1; i >= 1; i -= 2 {
		y = y.times(minus).plusFloat(c[i])
	}
	return x, y.times(double{omega, 0})
}
