package locus

import "math"

// doubleRoundoff bounds the error of one operation on [double], in relation to the sum of the
// moduli of what it adds, or to the product or quotient.
const doubleRoundoff = 0x1p-100

func (x double) timesFloat(y float64) double {
	p := productOf(x.h, y)
	e := math.FMA(x.l, y, p.l)
	h := p.h + e
	return double{h, e - (h - p.h)}
}

func (x double) over(y double) double {
	q := x.h / y.h
	r := x.plus(y.timesFloat(-q))
	q2 := r.h / y.h
	r = r.plus(y.timesFloat(-q2))
	return double{q2, r.h / y.h}.plusFloat(q)
}

// A complexDouble is a complex number of two such parts.
type complexDouble struct{ re, im double }

func (z complexDouble) plus(w complexDouble) complexDouble {
	return complexDouble{z.re.plus(w.re), z.im.plus(w.im)}
}

// timesReal multiplies by a real number.
func (z complexDouble) timesReal(k double) complexDouble {
	return complexDouble{z.re.times(k), z.im.times(k)}
}

// timesFloat multiplies by x + jy.
func (z complexDouble) timesFloat(x, y float64) complexDouble {
	if y == 0 {
		return complexDouble{z.re.timesFloat(x), z.im.timesFloat(x)}
	}
	return complexDouble{
		z.re.timesFloat(x).plus(z.im.timesFloat(-y)),
		z.re.timesFloat(y).plus(z.im.timesFloat(x)),
	}
}

func (z complexDouble) value() complex128 { return complex(z.re.h, z.im.h) }

// coefficient returns c[i] with what its rounding cut off.
func coefficient(c, tail []float64, i int) double {
	if tail == nil {
		return double{c[i], 0}
	}
	return double{c[i], tail[i]}
}

// precise evaluates the polynomial with coefficients c + tail at x + jy. Its error is less
// than 10·n·doubleRoundoff·Σ|cᵢ||x|ⁱ.
func precise(c, tail []float64, x, y float64) complexDouble {
	var z complexDouble
	for i := len(c) - 1; i >= 0; i-- {
		z = z.timesFloat(x, y)
		z.re = z.re.plus(coefficient(c, tail, i))
	}
	return z
}

// preciseGain returns Re(-a/b) at x + jy, the gain of a point of the locus.
func (p *plane) preciseGain(x, y float64) double {
	a, b := precise(p.a, p.tailA, x, y), precise(p.b, p.tailB, x, y)
	if y == 0 {
		return a.re.over(b.re).minus()
	}
	norm := b.re.times(b.re).plus(b.im.times(b.im))
	return a.re.times(b.re).plus(a.im.times(b.im)).over(norm).minus()
}

// precisely replaces what a value holds at x + jy by what twice the precision gives.
func (p *plane) precisely(x, y, κ float64, v *value) {
	var f, d, b complexDouble
	r := math.Hypot(x, y) * (1 + 4*unitRoundoff)
	scale, scaleB := 0.0, 0.0
	for i := p.n; i >= 0; i-- {
		c := coefficient(p.b, p.tailB, i)
		d = d.timesFloat(x, y).plus(f)
		f = f.timesFloat(x, y)
		f.re = f.re.plus(c.timesFloat(κ).plus(coefficient(p.a, p.tailA, i)))
		b = b.timesFloat(x, y)
		b.re = b.re.plus(c)
		size := math.Abs(c.h)
		scaleB = scaleB*r + size
		size = math.Abs(p.a[i]) + math.Abs(κ)*size
		if p.major != nil {
			size += p.major[i]
		}
		scale = scale*r + size
	}
	err := 20 * float64(p.n+1) * doubleRoundoff
	v.re, v.im, v.dRe, v.dIm = f.re.h, f.im.h, d.re.h, d.im.h
	v.errF = err*scale + 2*unitRoundoff*(math.Abs(v.re)+math.Abs(v.im)) + minNormal
	v.bRe, v.bIm = b.re.h, b.im.h
	v.modulusB = modulus(v.bRe, v.bIm)*(1+8*unitRoundoff) + err*scaleB + minNormal
}

// preciseTaylor computes the coefficients of a + κ·b and of b about x, rounded at the end.
func (p *plane) preciseTaylor(x complex128, κ double, f, b []complex128) {
	n := p.n
	cf, cb := make([]complexDouble, n+1), make([]complexDouble, n+1)
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

// preciseCritical improves a real x near a simple root of a′b - ab′ to the last digit or two,
// moving it by less than size.
func (p *plane) preciseCritical(x, size float64) (float64, bool) {
	start := x
	for range 6 {
		κ := p.preciseGain(x, 0)
		var y1, y, z double // derivative and value of a + κ·b, value of b
		var y2, z1 float64  // half the second derivative, derivative of b
		for i := p.n; i >= 0; i-- {
			y2 = float64(y2*x) + y1.h
			y1 = y1.timesFloat(x).plus(y)
			b := coefficient(p.b, p.tailB, i)
			y = y.timesFloat(x).plus(b.times(κ)).plus(coefficient(p.a, p.tailA, i))
			z1 = float64(z1*x) + z.h
			z = z.timesFloat(x).plus(b)
		}
		// y vanishes, but for rounding.
		step := -(y1.h - y.h*z1/z.h) / (2 * y2)
		if !(math.Abs(x+step-start) < size) {
			return x, false
		}
		x += step
		if math.Abs(step) <= 2*unitRoundoff*math.Abs(x) {
			return x, true
		}
	}
	return x, false
}
