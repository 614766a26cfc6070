package timeresp

import (
	"math"
	"math/big"
)

// long is a complex number of many bits, for the kernels whose modes cancel by more digits
// than wide arithmetic has. Operations write to the receiver, as math/big does; all
// numbers of one computation have the precision of its arithmetic.
type long struct{ re, im big.Float }

// A bench is the working storage of long arithmetic with one precision.
type bench struct {
	prec       uint
	a, b, c, d big.Float
}

func newBench(prec uint) *bench {
	w := &bench{prec: prec}
	for _, x := range []*big.Float{&w.a, &w.b, &w.c, &w.d} {
		x.SetPrec(prec)
	}
	return w
}

func (w *bench) number() *long {
	z := new(long)
	z.re.SetPrec(w.prec)
	z.im.SetPrec(w.prec)
	return z
}

func (w *bench) numbers(n int) []*long {
	z := make([]*long, n)
	for i := range z {
		z[i] = w.number()
	}
	return z
}

func (z *long) set(x *long) *long {
	z.re.Set(&x.re)
	z.im.Set(&x.im)
	return z
}

func (z *long) setWide(x wideComplex) *long {
	set := func(f *big.Float, x wide) {
		var t big.Float
		t.SetPrec(f.Prec())
		f.SetFloat64(x.hi)
		f.Add(f, t.SetFloat64(x.lo))
	}
	set(&z.re, x.re)
	set(&z.im, x.im)
	return z
}

func (z *long) add(x, y *long) *long {
	z.re.Add(&x.re, &y.re)
	z.im.Add(&x.im, &y.im)
	return z
}

func (z *long) sub(x, y *long) *long {
	z.re.Sub(&x.re, &y.re)
	z.im.Sub(&x.im, &y.im)
	return z
}

func (w *bench) mul(z, x, y *long) *long {
	if x.im.Sign() == 0 && y.im.Sign() == 0 {
		z.re.Mul(&x.re, &y.re)
		z.im.SetInt64(0)
		return z
	}
	w.a.Mul(&x.re, &y.re)
	w.b.Mul(&x.im, &y.im)
	w.c.Mul(&x.re, &y.im)
	w.d.Mul(&x.im, &y.re)
	z.re.Sub(&w.a, &w.b)
	z.im.Add(&w.c, &w.d)
	return z
}

func (w *bench) div(z, x, y *long) *long {
	if y.im.Sign() == 0 {
		w.a.Set(&y.re)
		z.re.Quo(&x.re, &w.a)
		z.im.Quo(&x.im, &w.a)
		return z
	}
	conjugate := w.number().set(y)
	conjugate.im.Neg(&conjugate.im)
	size := new(big.Float).SetPrec(w.prec)
	w.a.Mul(&y.re, &y.re)
	w.b.Mul(&y.im, &y.im)
	size.Add(&w.a, &w.b)
	w.mul(z, x, conjugate)
	z.re.Quo(&z.re, size)
	z.im.Quo(&z.im, size)
	return z
}

// scale multiplies by a real number.
func (z *long) scale(x *long, f *big.Float) *long {
	z.re.Mul(&x.re, f)
	z.im.Mul(&x.im, f)
	return z
}

func (z *long) isZero() bool { return z.re.Sign() == 0 && z.im.Sign() == 0 }

// exponent returns e with |z| < 2^e and |z| ≥ 2^(e-2); a very small number for zero.
func (z *long) exponent() int {
	e := math.MinInt32
	if z.re.Sign() != 0 {
		e = z.re.MantExp(nil)
	}
	if z.im.Sign() != 0 {
		e = max(e, z.im.MantExp(nil))
	}
	return e + 1
}

func (z *long) complex() complex128 {
	re, _ := z.re.Float64()
	im, _ := z.im.Float64()
	return complex(re, im)
}

func (z *long) wide() wideComplex {
	return wideComplex{wideFromFloat(&z.re), wideFromFloat(&z.im)}
}

func wideFromFloat(x *big.Float) wide {
	hi, _ := x.Float64()
	if math.IsInf(hi, 0) {
		return wide{hi, 0}
	}
	var rest big.Float
	rest.SetPrec(x.Prec()).SetFloat64(hi)
	rest.Sub(x, &rest)
	lo, _ := rest.Float64()
	return wide{hi, lo}
}

// exp sets z to e^x: the Taylor series of x/2^k with |x/2^k| < 2⁻⁸, squared k times; every
// squaring costs a bit, for which the working precision has room.
func (w *bench) exp(z, x *long) *long {
	if x.isZero() {
		z.re.SetInt64(1)
		z.im.SetInt64(0)
		return z
	}
	k := max(0, x.exponent()+8)
	deep := newBench(w.prec + uint(k) + 32)
	y := deep.number()
	y.re.SetMantExp(&x.re, -k)
	y.im.SetMantExp(&x.im, -k)
	sum, term, inverse := deep.number(), deep.number(), new(big.Float).SetPrec(deep.prec)
	sum.re.SetInt64(1)
	term.re.SetInt64(1)
	for i := int64(1); ; i++ {
		deep.mul(term, term, y)
		inverse.SetInt64(i)
		term.re.Quo(&term.re, inverse)
		term.im.Quo(&term.im, inverse)
		if term.isZero() || term.exponent() < -int(deep.prec) {
			break
		}
		sum.add(sum, term)
	}
	for range k {
		deep.mul(sum, sum, sum)
	}
	z.re.Set(&sum.re)
	z.im.Set(&sum.im)
	return z
}
