package locus

import "math"

// A twofold is the unevaluated sum hi + lo of two float64, |lo| ≤ u·|hi|: about 32 digits.
// One operation has a relative error below 2⁻¹⁰⁰.
//
// Source: T. J. Dekker, A floating-point technique for extending the available precision,
// Numer. Math. 18 (1971) 224–242.
type twofold struct{ hi, lo float64 }

// twofoldRoundoff bounds the relative error of one operation, generously.
const twofoldRoundoff = 0x1p-100

func quickSum(a, b float64) twofold {
	s := a + b
	return twofold{s, b - (s - a)}
}

func exactSum(a, b float64) twofold {
	s := a + b
	t := s - a
	return twofold{s, (a - (s - t)) + (b - t)}
}

func exactProduct(a, b float64) twofold {
	p := a * b
	return twofold{p, math.FMA(a, b, -p)}
}

func (x twofold) plus(y twofold) twofold {
	s, t := exactSum(x.hi, y.hi), exactSum(x.lo, y.lo)
	s = quickSum(s.hi, s.lo+t.hi)
	return quickSum(s.hi, s.lo+t.lo)
}

func (x twofold) neg() twofold { return twofold{-x.hi, -x.lo} }

func (x twofold) times(y twofold) twofold {
	p := exactProduct(x.hi, y.hi)
	return quickSum(p.hi, p.lo+(float64(x.hi*y.lo)+float64(x.lo*y.hi)))
}

func (x twofold) timesFloat(y float64) twofold {
	p := exactProduct(x.hi, y)
	return quickSum(p.hi, p.lo+float64(x.lo*y))
}

func (x twofold) over(y twofold) twofold {
	q := x.hi / y.hi
	r := x.plus(y.timesFloat(q).neg())
	q2 := r.hi / y.hi
	r = r.plus(y.timesFloat(q2).neg())
	return quickSum(q, q2).plus(twofold{r.hi / y.hi, 0})
}

// A complexTwofold is a complex number of two twofold parts.
type complexTwofold struct{ re, im twofold }

func (z complexTwofold) plus(w complexTwofold) complexTwofold {
	return complexTwofold{z.re.plus(w.re), z.im.plus(w.im)}
}

func (z complexTwofold) times(w complexTwofold) complexTwofold {
	return complexTwofold{
		z.re.times(w.re).plus(z.im.times(w.im).neg()),
		z.re.times(w.im).plus(z.im.times(w.re)),
	}
}

// timesReal multiplies by a real number.
func (z complexTwofold) timesReal(k twofold) complexTwofold {
	return complexTwofold{z.re.times(k), z.im.times(k)}
}

// timesFloat multiplies by x + jy.
func (z complexTwofold) timesFloat(x, y float64) complexTwofold {
	if y == 0 {
		return complexTwofold{z.re.timesFloat(x), z.im.timesFloat(x)}
	}
	return complexTwofold{
		z.re.timesFloat(x).plus(z.im.timesFloat(-y)),
		z.re.timesFloat(y).plus(z.im.timesFloat(x)),
	}
}

func (z complexTwofold) value() complex128 { return complex(z.re.hi, z.im.hi) }

// coefficient returns c[i] with what its rounding cut off.
func coefficient(c, tail []float64, i int) twofold {
	if tail == nil {
		return twofold{c[i], 0}
	}
	return quickSum(c[i], tail[i])
}

// precise evaluates the polynomial with coefficients c + tail at x + jy. Its error is less
// than 10·n·twofoldRoundoff·Σ|cᵢ||x|ⁱ.
func precise(c, tail []float64, x, y float64) complexTwofold {
	var z complexTwofold
	for i := len(c) - 1; i >= 0; i-- {
		z = z.timesFloat(x, y)
		z.re = z.re.plus(coefficient(c, tail, i))
	}
	return z
}

// preciseGain returns Re(-a/b) at x + jy, the gain of a point of the locus.
func (p *plane) preciseGain(x, y float64) twofold {
	a, b := precise(p.a, p.tailA, x, y), precise(p.b, p.tailB, x, y)
	if y == 0 {
		return a.re.over(b.re).neg()
	}
	norm := b.re.times(b.re).plus(b.im.times(b.im))
	return a.re.times(b.re).plus(a.im.times(b.im)).over(norm).neg()
}

// precisely replaces F and dF/dx of a value at x + jy by what twice the precision gives.
func (p *plane) precisely(x, y, κ float64, v *value) {
	var f, d complexTwofold
	for i := p.n; i >= 0; i-- {
		d = d.timesFloat(x, y).plus(f)
		f = f.timesFloat(x, y)
		f.re = f.re.plus(coefficient(p.b, p.tailB, i).timesFloat(κ).plus(coefficient(p.a, p.tailA, i)))
	}
	v.re, v.im, v.dRe, v.dIm = f.re.hi, f.im.hi, d.re.hi, d.im.hi
	v.errF = 20*float64(p.n+1)*twofoldRoundoff*v.modulusMax + 2*unitRoundoff*(math.Abs(v.re)+math.Abs(v.im)) + minNormal
}

// preciseTaylor computes the coefficients of a + κ·b and of b about x, rounded at the end.
func (p *plane) preciseTaylor(x complex128, κ twofold, f, b []complex128) {
	n := p.n
	cf, cb := make([]complexTwofold, n+1), make([]complexTwofold, n+1)
	for i := range cf {
		cb[i].re = coefficient(p.b, p.tailB, i)
		cf[i].re = coefficient(p.a, p.tailA, i).plus(cb[i].re.times(κ))
	}
	for i := range n {
		for j := n - 1; j >= i; j-- {
			cf[j] = cf[j].plus(cf[j+1].timesFloat(real(x), imag(x)))
			cb[j] = cb[j].plus(cb[j+1].timesFloat(real(x), imag(x)))
		}
	}
	for i := range cf {
		f[i], b[i] = cf[i].value(), cb[i].value()
	}
}
